//! From residuals to values with an error bar, and to groups of levels that coincide.

/// The reported value is λ − SHIFT·η²: computed levels lie above the true ones.
pub const SHIFT: f64 = 0.035;
/// The error bar is SPREAD·η² around the reported value.
pub const SPREAD: f64 = 0.055;
/// Relative floor of the bar: rounding in assembly and factorisation.
pub const FLOOR: f64 = 2e-11;

/// Value and error of a level from its computed value, η² and relative algebraic residual.
pub fn bar(lambda: f64, eta2: f64, residual: f64) -> (f64, f64) {
    // the algebraic error is of second order in the residual; 100: a gap of a hundredth
    let floor = (FLOOR + 100.0 * residual * residual) * lambda.abs();
    (lambda - SHIFT * eta2, SPREAD * eta2 + floor)
}

/// Size of the group each level belongs to: neighbours whose intervals touch.
///
/// `beyond`: values above the last one, taken to be as uncertain as the last.
pub fn multiplicities(values: &[(f64, f64)], beyond: &[f64]) -> Vec<usize> {
    let last = values.last().map_or(0.0, |v| v.1);
    let all: Vec<(f64, f64)> = values
        .iter()
        .copied()
        .chain(beyond.iter().map(|&b| (b, last)))
        .collect();
    let mut out = vec![1; all.len()];
    let mut start = 0;
    for k in 1..=all.len() {
        let joined = k < all.len() && (all[k].0 - all[k - 1].0).abs() <= all[k].1 + all[k - 1].1;
        if !joined {
            out[start..k].fill(k - start);
            start = k;
        }
    }
    out.truncate(values.len());
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn groups_reach_beyond_the_window() {
        let v = [(1.0, 0.01), (2.0, 0.01), (2.005, 0.01)];
        assert_eq!(multiplicities(&v, &[2.01, 3.0]), [1, 3, 3]);
        assert_eq!(multiplicities(&v, &[]), [1, 2, 2]);
    }
}
