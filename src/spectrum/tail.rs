//! Corner functions made K-orthogonal to the splines: K′ = diag(K, 1), only M couples.
//!
//! With X = K⁻¹k: S′ = S − kᵀX, scaled to unit diagonal, directions below a threshold dropped.
//! Raw functions raise the condition number from 1e5 to 1e11 and cost digits.

use crate::eigen::{EigenError, symmetric_eigen};
use crate::operators::{Border, Pair};

/// Directions of the scaled S′ with eigenvalues below this are within rounding of the splines.
const DROP: f64 = 1e-9;

/// The orthogonalised corner functions.
#[derive(Clone, Debug, Default)]
pub struct Tail {
    /// Mass against the splines: one vector of their number per function.
    pub mass: Vec<Vec<f64>>,
    /// Mass among the functions, row-major.
    pub own_mass: Vec<f64>,
    /// What each function takes off the splines: one vector per function.
    pub splines: Vec<Vec<f64>>,
    /// Each function in terms of the raw ones: `[raw * len + function]`.
    pub raw: Vec<f64>,
}

impl Tail {
    /// Number of functions kept.
    pub fn len(&self) -> usize {
        self.mass.len()
    }

    /// Orthogonalises; `solve` overwrites right-hand sides with K⁻¹ of them.
    ///
    /// # Errors
    /// What `solve` and the small eigenproblem report.
    pub fn new(
        pair: &Pair,
        border: &Border,
        mut solve: impl FnMut(&mut [Vec<f64>]) -> Result<(), EigenError>,
    ) -> Result<Self, EigenError> {
        let q = border.len();
        if q == 0 {
            return Ok(Self::default());
        }
        let n = pair.len();
        let d: Vec<f64> = (0..q)
            .map(|i| 1.0 / border.own_stiffness[i * q + i].abs().sqrt().max(1e-300))
            .collect();
        let scaled = |v: &[Vec<f64>]| -> Vec<Vec<f64>> {
            v.iter()
                .zip(&d)
                .map(|(v, d)| v.iter().map(|x| x * d).collect())
                .collect()
        };
        let (k, m) = (scaled(&border.stiffness), scaled(&border.mass));
        let mut x = k.clone();
        solve(&mut x)?;
        // one step of refinement: X is subtracted from numbers it nearly equals
        let mut r: Vec<Vec<f64>> = Vec::with_capacity(q);
        for (x, k) in x.iter().zip(&k) {
            let kx = times(pair, &pair.stiffness, x);
            r.push(k.iter().zip(&kx).map(|(a, b)| a - b).collect());
        }
        solve(&mut r)?;
        for (x, r) in x.iter_mut().zip(&r) {
            for (x, r) in x.iter_mut().zip(r) {
                *x += r;
            }
        }
        let mut s = vec![0.0; q * q];
        for i in 0..q {
            for j in 0..q {
                let a = border.own_stiffness[i * q + j] * d[i] * d[j] - dot(&k[i], &x[j]);
                s[i * q + j] += 0.5 * a;
                s[j * q + i] += 0.5 * a;
            }
        }
        let (values, vectors) = symmetric_eigen(&s, q)?;
        let keep: Vec<usize> = (0..q).filter(|&i| values[i] > DROP).collect();
        let w = keep.len();
        // T: raw (scaled) function i in kept direction f
        let t = |i: usize, f: usize| vectors[keep[f] * q + i] / values[keep[f]].sqrt();
        let mx: Vec<Vec<f64>> = x.iter().map(|x| times(pair, &pair.mass, x)).collect();
        let combine = |v: &dyn Fn(usize, usize) -> f64| -> Vec<Vec<f64>> {
            (0..w)
                .map(|f| {
                    let mut out = vec![0.0; n];
                    for i in 0..q {
                        let c = t(i, f);
                        for (u, o) in out.iter_mut().enumerate() {
                            *o += c * v(i, u);
                        }
                    }
                    out
                })
                .collect()
        };
        let mass = combine(&|i, u| m[i][u] - mx[i][u]);
        let splines = combine(&|i, u| x[i][u]);
        let mut g = vec![0.0; q * q];
        for i in 0..q {
            for j in 0..q {
                g[i * q + j] = border.own_mass[i * q + j] * d[i] * d[j]
                    - dot(&x[i], &m[j])
                    - dot(&m[i], &x[j])
                    + dot(&x[i], &mx[j]);
            }
        }
        let mut own_mass = vec![0.0; w * w];
        for a in 0..w {
            let ga: Vec<f64> = (0..q)
                .map(|j| (0..q).map(|i| t(i, a) * g[i * q + j]).sum())
                .collect();
            for b in 0..w {
                let v: f64 = (0..q).map(|j| ga[j] * t(j, b)).sum();
                own_mass[a * w + b] += 0.5 * v;
                own_mass[b * w + a] += 0.5 * v;
            }
        }
        let raw = (0..q * w).map(|k| d[k / w] * t(k / w, k % w)).collect();
        Ok(Self {
            mass,
            own_mass,
            splines,
            raw,
        })
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

fn times(pair: &Pair, values: &[f64], x: &[f64]) -> Vec<f64> {
    (0..pair.len())
        .map(|i| {
            let e = pair.starts[i]..pair.starts[i + 1];
            dot_sparse(&values[e.clone()], &pair.columns[e], x)
        })
        .collect()
}

fn dot_sparse(values: &[f64], columns: &[usize], x: &[f64]) -> f64 {
    values.iter().zip(columns).map(|(v, &c)| v * x[c]).sum()
}
