//! Round numbers: ticks of an axis, lengths of a scale bar, powers of ten pulled out of a label.

/// The largest of 1, 2, 5 times a power of ten not above `x`; 0 when there is none.
pub fn round_below(x: f64) -> f64 {
    if !(x.is_finite() && x > 0.0) {
        return 0.0;
    }
    let decade = 10f64.powi(x.log10().floor() as i32);
    // a hair of slack: 0.3/0.1 is not quite 3, and log10 of a power of ten may fall short
    [10.0, 5.0, 2.0, 1.0]
        .into_iter()
        .map(|m| m * decade)
        .find(|&v| v <= x * (1.0 + 1e-12))
        .unwrap_or(0.5 * decade)
}

/// Multiples of a round step inside `lo..=hi`, at least two where there is room, at most `most`,
/// each with its text.
pub fn ticks(lo: f64, hi: f64, most: usize) -> Vec<(f64, String)> {
    let span = hi - lo;
    if !(span.is_finite() && span > 0.0) {
        return Vec::new();
    }
    let mut step = round_below(span / most.max(2) as f64);
    let count = |step: f64| (hi / step + 1e-9).floor() - (lo / step - 1e-9).ceil() + 1.0;
    while count(step) > most as f64 {
        // the next of 1, 2, 5: at most 2.5 times larger
        step = round_below(step * 2.500_001);
    }
    if step <= 0.0 {
        return Vec::new();
    }
    let decimals = (-(step.log10() + 1e-9).floor()).max(0.0) as usize;
    let first = (lo / step - 1e-9).ceil() as i64;
    let last = (hi / step + 1e-9).floor() as i64;
    (first..=last)
        .map(|k| {
            let v = k as f64 * step;
            (v, minus(&format!("{v:.decimals$}")))
        })
        .collect()
}

/// The power of ten to write before a unit so that values up to `peak` need no zeros: 0 where they
/// are comfortable as they are.
pub fn decade(peak: f64) -> i32 {
    if !(peak.is_finite() && peak > 0.0) {
        return 0;
    }
    let k = peak.log10().floor() as i32;
    if (-1..3).contains(&k) { 0 } else { k }
}

/// An integer in superscript: −4 becomes ⁻⁴.
pub fn superscript(n: i32) -> String {
    const DIGITS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    n.to_string()
        .chars()
        .map(|c| c.to_digit(10).map_or('⁻', |d| DIGITS[d as usize]))
        .collect()
}

/// A number's text with a true minus sign.
pub fn minus(text: &str) -> String {
    text.replace('-', "−")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_numbers() {
        for (x, r) in [
            (7.3, 5.0),
            (0.0034, 0.002),
            (10.0, 10.0),
            (0.999, 0.5),
            (1e-7, 1e-7),
        ] {
            assert!(
                (round_below(x) / r - 1.0).abs() < 1e-12,
                "{x}: {}",
                round_below(x)
            );
        }
        assert_eq!(round_below(f64::NAN), 0.0);
        assert_eq!(round_below(-1.0), 0.0);
    }

    #[test]
    fn ticks_are_few_and_round() {
        let text = |lo, hi| {
            let t = ticks(lo, hi, 5);
            t.into_iter().map(|t| t.1).collect::<Vec<_>>().join(" ")
        };
        assert_eq!(text(0.0, 4.37), "0 1 2 3 4");
        assert_eq!(text(0.0, 1.0), "0.0 0.5 1.0");
        assert_eq!(text(-7.1, 7.1), "−5 0 5");
        assert_eq!(text(1.0, 1.0), "");
        for k in 1..2000 {
            let n = ticks(0.0, k as f64 * 0.0137, 5).len();
            assert!(
                (2..=5).contains(&n),
                "{n} ticks up to {}",
                k as f64 * 0.0137
            );
        }
    }

    #[test]
    fn powers_of_ten() {
        assert_eq!(
            (decade(4.2e-4), decade(7.0), decade(0.0), decade(0.12)),
            (-4, 0, 0, 0)
        );
        assert_eq!(superscript(-14), "⁻¹⁴");
    }
}
