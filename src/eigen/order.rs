//! The order of elimination: nested dissection along the coordinates of the unknowns.
//!
//! George 1973 (SIAM J. Numer. Anal. 10, 345) for the idea; here the cut follows the coordinates
//! and the separator follows the real graph: an unknown belongs to it when one of its neighbours
//! lies beyond the cut. How far each unknown reaches is found once, so that a cut costs one pass
//! over the unknowns and never looks at the graph again.

/// What an unknown is to the dissection.
#[derive(Clone, Copy)]
struct Unknown {
    /// Its number.
    id: u32,
    /// Its place, then the farthest place of its neighbours, both ways.
    at: [f64; 2],
    low: [f64; 2],
    high: [f64; 2],
}

/// The order of elimination: position → unknown. `neighbours(i)` lists the neighbours of unknown
/// i (in either matrix); the last `tail` unknowns (dense rows) stay last, in their order.
pub(super) fn dissection<'a, I>(
    places: &[[f64; 2]],
    tail: usize,
    mut neighbours: impl FnMut(usize) -> I,
) -> Vec<u32>
where
    I: Iterator<Item = &'a usize>,
{
    let n = places.len();
    let inner = n - tail.min(n);
    let mut entries = 0;
    let mut all: Vec<Unknown> = Vec::with_capacity(inner);
    for (i, &at) in places[..inner].iter().enumerate() {
        let (mut low, mut high) = (at, at);
        for &j in neighbours(i) {
            if j < inner {
                entries += 1;
                for d in 0..2 {
                    low[d] = low[d].min(places[j][d]);
                    high[d] = high[d].max(places[j][d]);
                }
            }
        }
        all.push(Unknown {
            id: i as u32,
            at,
            low,
            high,
        });
    }
    // A set no larger than a typical neighbourhood fills up whatever the order.
    let leaf = (entries / inner.max(1)).clamp(8, 128);
    let mut order = Vec::with_capacity(n);
    split(&mut all, leaf, 0, &mut order);
    order.extend(inner as u32..n as u32);
    order
}

/// A way to cut a set in two: the unknowns at or below `at` along `axis`, the rest, and the
/// separator taken from the low or the high side.
#[derive(Clone, Copy)]
struct Cut {
    axis: usize,
    at: f64,
    from_low: bool,
    cost: f64,
}

fn split(set: &mut [Unknown], leaf: usize, depth: usize, order: &mut Vec<u32>) {
    let cut = if set.len() <= leaf || depth > 60 {
        None
    } else {
        best_cut(set)
    };
    let Some(cut) = cut else {
        order.extend(set.iter().map(|u| u.id));
        return;
    };
    let part = |u: &Unknown| -> u8 {
        let low = u.at[cut.axis] <= cut.at;
        let across = if low {
            u.high[cut.axis] > cut.at
        } else {
            u.low[cut.axis] <= cut.at
        };
        if across && low == cut.from_low {
            2
        } else {
            u8::from(!low)
        }
    };
    set.sort_by_key(part);
    let low = set.partition_point(|u| part(u) == 0);
    let high = set.partition_point(|u| part(u) <= 1);
    split(&mut set[..low], leaf, depth + 1, order);
    split(&mut set[low..high], leaf, depth + 1, order);
    // Along the separator, so that its own fill stays a band where it can.
    let along = 1 - cut.axis;
    set[high..].sort_by(|a, b| a.at[along].total_cmp(&b.at[along]));
    order.extend(set[high..].iter().map(|u| u.id));
}

/// The cheapest of a few cuts near the middle, or none when every one leaves a side empty.
fn best_cut(set: &mut [Unknown]) -> Option<Cut> {
    let mut best: Option<Cut> = None;
    let n = set.len();
    for axis in 0..2 {
        // Quantiles of a sample are exact enough: the cut is judged on the whole set anyway.
        let stride = (n / 256).max(1);
        let mut sample: Vec<f64> = set.iter().step_by(stride).map(|u| u.at[axis]).collect();
        sample.sort_by(f64::total_cmp);
        let mut last = f64::NAN;
        for tenths in [38, 44, 50, 56, 62] {
            let at = sample[(sample.len() - 1) * tenths / 100];
            if at == last {
                continue;
            }
            last = at;
            let (mut low, mut from_low, mut from_high) = (0usize, 0usize, 0usize);
            for u in set.iter() {
                if u.at[axis] <= at {
                    low += 1;
                    from_low += usize::from(u.high[axis] > at);
                } else {
                    from_high += usize::from(u.low[axis] <= at);
                }
            }
            for (side, separator) in [(true, from_low), (false, from_high)] {
                let a = if side { low - separator } else { low };
                let b = n - separator - a;
                if a == 0 || b == 0 {
                    continue;
                }
                // The work of the two halves and of the separator: n^1.5 and s³, in units that
                // make a balanced cut of a square cost about as much on either count.
                let s = separator as f64;
                let cost = (a as f64).powf(1.5) + (b as f64).powf(1.5) + s * s * s / 6.0;
                if best.is_none_or(|c| cost < c.cost) {
                    best = Some(Cut {
                        axis,
                        at,
                        from_low: side,
                        cost,
                    });
                }
            }
        }
    }
    best
}
