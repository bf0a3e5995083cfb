//! Spline values at the points of a tensor Gauss rule, and their products pair by pair.

use crate::lattice::{gauss, spline};

/// Tables for degree `p` and `n` points a side.
#[derive(Clone, Debug)]
pub struct Tables {
    /// Degree.
    pub p: usize,
    /// Points a side.
    pub n: usize,
    /// Points in [0, 1].
    pub u: Vec<f64>,
    /// Weights on [0, 1].
    pub w: Vec<f64>,
    /// Values of derivative d at the points: `at[d][q * (p + 1) + m]`, by u.
    pub at: [Vec<f64>; 3],
    /// Pairs (i, k), i ≤ k, of splines alive on a cell.
    pub pairs: Vec<(usize, usize)>,
    /// Products of values, `[q * pairs + pair]`.
    pub values: Vec<f64>,
    /// Products of first derivatives, same layout.
    pub slopes: Vec<f64>,
}

impl Tables {
    /// Computes the tables.
    pub fn new(p: usize, n: usize) -> Self {
        let rule = gauss::rule(n);
        let u: Vec<f64> = rule.x.iter().map(|x| 0.5 * (x + 1.0)).collect();
        let w = rule.w.iter().map(|w| 0.5 * w).collect();
        let at = [0, 1, 2].map(|d| {
            let mut v = vec![0.0; n * (p + 1)];
            for (q, &u) in u.iter().enumerate() {
                spline::eval(p, u, d, &mut v[q * (p + 1)..(q + 1) * (p + 1)]);
            }
            v
        });
        let pairs: Vec<_> = (0..=p).flat_map(|i| (i..=p).map(move |k| (i, k))).collect();
        let product = |v: &[f64]| {
            (0..n)
                .flat_map(|q| {
                    let row = &v[q * (p + 1)..(q + 1) * (p + 1)];
                    pairs.iter().map(|&(i, k)| row[i] * row[k])
                })
                .collect()
        };
        let (values, slopes) = (product(&at[0]), product(&at[1]));
        Self {
            p,
            n,
            u,
            w,
            at,
            pairs,
            values,
            slopes,
        }
    }
}
