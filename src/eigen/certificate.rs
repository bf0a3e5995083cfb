//! Whether what was found is all there is.

/// Levels below a shift, by inertia.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Bound {
    /// The shift; −∞ for the bottom of the spectrum.
    pub value: f64,
    /// Levels below it.
    pub below: usize,
}

/// The bottom of every spectrum.
pub(super) const BOTTOM: Bound = Bound {
    value: f64::NEG_INFINITY,
    below: 0,
};

/// The verdict on a slice between two shifts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Verdict {
    /// As many found as counted.
    Whole,
    /// So many are missing.
    Missing(usize),
    /// So many more were found than there are: a copy, or a count gone wrong.
    Surplus(usize),
}

/// Compares the levels found strictly between two shifts with the count.
pub(super) fn compare(
    lower: Bound,
    upper: Bound,
    values: impl IntoIterator<Item = f64>,
) -> Verdict {
    let found = values
        .into_iter()
        .filter(|&x| x > lower.value && x < upper.value)
        .count();
    let there = upper.below.saturating_sub(lower.below);
    match there.cmp(&found) {
        std::cmp::Ordering::Equal => Verdict::Whole,
        std::cmp::Ordering::Greater => Verdict::Missing(there - found),
        std::cmp::Ordering::Less => Verdict::Surplus(found - there),
    }
}

/// Where to end a window of `want` levels: the first gap at or after it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct End {
    /// Levels below the gap.
    pub keep: usize,
    /// The shift in it.
    pub shift: f64,
    /// The level above it, as far as it is known.
    pub next: f64,
}

/// Longest group a window is stretched for before the widest gap seen is taken.
const STRETCH: usize = 96;

/// Finds the end of a window among ascending levels; `next` is a lower estimate of the one after
/// them. None: the levels known do not reach a gap yet.
pub(super) fn end(levels: &[f64], next: Option<f64>, want: usize, cluster: f64) -> Option<End> {
    let mut widest: Option<(f64, End)> = None;
    for keep in want..=levels.len() {
        let last = levels[keep - 1];
        let Some(after) = levels.get(keep).copied().or(next) else {
            break;
        };
        let size = last.abs().max(after.abs());
        let gap = after - last;
        // Close above the last level, so that one not seen yet does not fall below by chance.
        let shift = last + (0.5 * gap).min(5.0 * cluster * size.max(f64::MIN_POSITIVE));
        if shift > last && shift < after {
            if gap > cluster * size {
                return Some(End {
                    keep,
                    shift,
                    next: after,
                });
            }
            if widest.is_none_or(|(g, _)| gap / size > g) {
                widest = Some((
                    gap / size,
                    End {
                        keep,
                        shift,
                        next: after,
                    },
                ));
            }
        }
        if keep >= want + STRETCH {
            return widest.map(|(_, end)| end);
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_window_ends_in_a_gap_and_never_inside_a_group() {
        let levels = [1.0, 2.0, 2.0 + 1e-9, 3.0];
        let end_2 = end(&levels, Some(4.0), 2, 1e-5).expect("there is a gap after the pair");
        assert_eq!(end_2.keep, 3);
        assert!(end_2.shift > levels[2] && end_2.shift < 3.0);
        assert_eq!(end(&levels, None, 4, 1e-5), None);
        assert_eq!(end(&levels, Some(3.0), 4, 1e-5), None);
        assert_eq!(end(&levels[..2], Some(2.0), 2, 1e-5), None);
    }

    #[test]
    fn an_endless_group_is_cut_at_its_widest_gap() {
        let mut levels: Vec<f64> = (0..200).map(|i| 1.0 + 1e-12 * f64::from(i)).collect();
        for x in &mut levels[60..] {
            *x += 1e-9;
        }
        assert_eq!(end(&levels, None, 10, 1e-5).map(|e| e.keep), Some(60));
    }

    #[test]
    fn misses_and_copies_are_told_apart() {
        let (lower, upper) = (
            BOTTOM,
            Bound {
                value: 10.0,
                below: 3,
            },
        );
        assert_eq!(compare(lower, upper, [1.0, 2.0, 3.0, 11.0]), Verdict::Whole);
        assert_eq!(compare(lower, upper, [1.0, 2.0]), Verdict::Missing(1));
        assert_eq!(
            compare(lower, upper, [1.0, 2.0, 2.0, 3.0]),
            Verdict::Surplus(1)
        );
    }
}
