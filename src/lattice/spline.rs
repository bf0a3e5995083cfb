//! Cardinal B-splines, cell by cell.
//!
//! On a cell p + 1 splines are alive; local number m = 0…p belongs to the spline whose support
//! starts p − m cells before this one.

use std::sync::OnceLock;

/// Highest degree the tables are made for.
pub const MOST_DEGREE: usize = 7;

/// Coefficients of the pieces of one degree: `[m][power]` in the local coordinate u ∈ [0, 1].
type Pieces = Vec<[f64; MOST_DEGREE + 1]>;

/// The polynomial pieces of degree `p`, in local order.
fn pieces(p: usize) -> &'static Pieces {
    static TABLE: OnceLock<Vec<Pieces>> = OnceLock::new();
    &TABLE.get_or_init(|| (0..=MOST_DEGREE).map(build).collect())[p]
}

/// Cox–de Boor recursion on [k, k+1] in u = x − k (de Boor 1972, eq. 6.3 for uniform knots).
fn build(p: usize) -> Pieces {
    let mut q: Pieces = vec![[0.0; MOST_DEGREE + 1]];
    q[0][0] = 1.0;
    for d in 1..=p {
        let scale = 1.0 / d as f64;
        let mut next = vec![[0.0; MOST_DEGREE + 1]; d + 1];
        for (k, piece) in next.iter_mut().enumerate() {
            if k < d {
                add_product(piece, [k as f64 * scale, scale], &q[k]);
            }
            if k > 0 {
                add_product(piece, [(d + 1 - k) as f64 * scale, -scale], &q[k - 1]);
            }
        }
        q = next;
    }
    q.reverse();
    q
}

fn add_product(to: &mut [f64], linear: [f64; 2], poly: &[f64]) {
    for (i, c) in poly.iter().enumerate() {
        to[i] += linear[0] * c;
        if i + 1 < to.len() {
            to[i + 1] += linear[1] * c;
        }
    }
}

/// Values of the p + 1 splines alive at u ∈ [0, 1] of a cell, or of a derivative by u.
/// `out.len()` is p + 1.
#[inline]
pub fn eval(p: usize, u: f64, derivative: usize, out: &mut [f64]) {
    for (o, c) in out.iter_mut().zip(pieces(p)) {
        let mut v = 0.0;
        for k in (derivative..=p).rev() {
            let mut f = c[k];
            for d in 0..derivative {
                f *= (k - d) as f64;
            }
            v = v * u + f;
        }
        *o = v;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn splines_sum_to_one_and_derivatives_to_zero() {
        let mut b = [0.0; 8];
        for p in 1..=MOST_DEGREE {
            for u in [0.0, 0.3, 1.0] {
                eval(p, u, 0, &mut b[..=p]);
                assert!((b[..=p].iter().sum::<f64>() - 1.0).abs() < 1e-14);
                eval(p, u, 1, &mut b[..=p]);
                assert!(b[..=p].iter().sum::<f64>().abs() < 1e-13);
            }
        }
    }

    #[test]
    fn cubic_values_at_a_knot() {
        // de Boor 1978: 1/6, 2/3, 1/6.
        let mut b = [0.0; 4];
        eval(3, 0.0, 0, &mut b);
        let want = [1.0 / 6.0, 2.0 / 3.0, 1.0 / 6.0, 0.0];
        assert!(b.iter().zip(want).all(|(a, w)| (a - w).abs() < 1e-15));
    }
}
