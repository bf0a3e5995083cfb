//! Gauss–Legendre rules, and Legendre polynomials, on [−1, 1] (Abramowitz & Stegun 1964, 25.4.29).

use std::f64::consts::PI;
use std::sync::OnceLock;

/// Largest number of points a rule is kept for.
pub const MOST_POINTS: usize = 40;

/// A rule of `n` points: exact for polynomials of degree 2n − 1.
#[derive(Clone, Debug)]
pub struct Rule {
    /// Points, ascending.
    pub x: Vec<f64>,
    /// Weights; they sum to 2.
    pub w: Vec<f64>,
}

/// The rule with `n` points, 1 ≤ n ≤ [`MOST_POINTS`]; computed once.
pub fn rule(n: usize) -> &'static Rule {
    static RULES: OnceLock<Vec<OnceLock<Rule>>> = OnceLock::new();
    let n = n.clamp(1, MOST_POINTS);
    let rules = RULES.get_or_init(|| (0..=MOST_POINTS).map(|_| OnceLock::new()).collect());
    rules[n].get_or_init(|| compute(n))
}

fn compute(n: usize) -> Rule {
    let mut x = vec![0.0; n];
    let mut w = vec![0.0; n];
    for i in 0..n {
        // Newton from the asymptotic root; quadratic, five steps reach the last digit.
        let mut z = -(PI * (i as f64 + 0.75) / (n as f64 + 0.5)).cos();
        let mut slope = 1.0;
        for _ in 0..8 {
            let (p, q) = value_and_slope(n, z);
            slope = q;
            z -= p / q;
        }
        x[i] = z;
        w[i] = 2.0 / ((1.0 - z * z) * slope * slope);
    }
    Rule { x, w }
}

fn value_and_slope(n: usize, z: f64) -> (f64, f64) {
    let (mut a, mut b) = (1.0, z);
    for k in 1..n {
        let k = k as f64;
        (a, b) = (b, ((2.0 * k + 1.0) * z * b - k * a) / (k + 1.0));
    }
    (b, n as f64 * (z * b - a) / (z * z - 1.0))
}

/// P_0 … P_{out.len()−1} at `x`.
#[inline]
pub fn legendre(x: f64, out: &mut [f64]) {
    let n = out.len();
    out[0] = 1.0;
    if n > 1 {
        out[1] = x;
    }
    for k in 1..n.saturating_sub(1) {
        let f = k as f64;
        out[k + 1] = ((2.0 * f + 1.0) * x * out[k] - f * out[k - 1]) / (f + 1.0);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rules_integrate_powers_exactly() {
        for n in 1..=MOST_POINTS {
            let r = rule(n);
            for d in (0..2 * n).step_by(2) {
                let s: f64 =
                    r.x.iter()
                        .zip(&r.w)
                        .map(|(x, w)| w * x.powi(d as i32))
                        .sum();
                assert!(
                    (s - 2.0 / (d as f64 + 1.0)).abs() < 1e-14,
                    "n {n} degree {d}"
                );
            }
        }
    }
}
