//! Round numbers for axes and scale bars: 1, 2 or 5 times a power of ten.

/// The largest round number not above `x`; `x` positive.
pub fn round_below(x: f64) -> f64 {
    let decade = 10f64.powf(x.log10().floor());
    let lead = x / decade;
    let step = if lead >= 5.0 {
        5.0
    } else if lead >= 2.0 {
        2.0
    } else {
        1.0
    };
    step * decade
}

/// Multiples of a round step within `lo..=hi`, at most `most` of them, with the decimals that
/// write them apart.
pub fn ticks(lo: f64, hi: f64, most: usize) -> (Vec<f64>, usize) {
    let span = hi - lo;
    if !span.is_finite() || span <= 0.0 || most == 0 {
        return (Vec::new(), 0);
    }
    let mut step = round_below(span / most as f64);
    // one step of the 1-2-5 ladder is at most a factor 2.5, so this ends soon
    while (hi / step).floor() - (lo / step).ceil() + 1.0 > most as f64 {
        step = round_below(step * 2.5001);
    }
    let (first, last) = ((lo / step).ceil() as i64, (hi / step).floor() as i64);
    let decimals = (-step.log10().floor()).max(0.0) as usize;
    let all = (first..=last).map(|k| k as f64 * step).collect();
    (all, decimals)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_numbers() {
        assert_eq!(round_below(7.3), 5.0);
        assert_eq!(round_below(0.0034), 0.002);
        let (t, d) = ticks(0.0, 12.3, 5);
        assert_eq!((t, d), (vec![0.0, 5.0, 10.0], 0));
        let (t, _) = ticks(0.91, 0.97, 4);
        assert!(t.len() <= 4 && t.len() >= 2, "{t:?}");
    }
}
