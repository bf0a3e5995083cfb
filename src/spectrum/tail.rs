//! Corner functions made K-orthogonal to the splines: K′ = diag(K, 1), only M couples.
//!
//! With X = K⁻¹k: S′ = S − kᵀX, scaled to unit diagonal, directions below a threshold dropped.
//! Raw functions raise the condition number from 1e5 to 1e11 and cost digits.

use crate::eigen::{EigenError, combine, project, symmetric_eigen};
use crate::operators::{Border, Pair};
use crate::progress::shared;

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
    /// Number of raw functions.
    pub raw_count: usize,
}

impl Tail {
    /// Number of functions kept.
    pub fn len(&self) -> usize {
        self.mass.len()
    }

    /// Orthogonalises; `solve` overwrites that many right-hand
    /// sides, one after the other, with K⁻¹ of them.
    ///
    /// # Errors
    /// What `solve` and the small eigenproblem report.
    pub fn new(
        pair: &Pair,
        border: &Border,
        mut solve: impl FnMut(&mut [f64], usize) -> Result<(), EigenError>,
    ) -> Result<Self, EigenError> {
        let q = border.len();
        if q == 0 {
            return Ok(Self::default());
        }
        let n = pair.len();
        let d: Vec<f64> = (0..q)
            .map(|i| 1.0 / border.own_stiffness[i * q + i].abs().sqrt().max(1e-300))
            .collect();
        let scaled = |v: &[Vec<f64>]| -> Vec<f64> {
            v.iter()
                .zip(&d)
                .flat_map(|(v, d)| v.iter().map(move |x| x * d))
                .collect()
        };
        let (k, m) = (scaled(&border.stiffness), scaled(&border.mass));
        let mut x = k.clone();
        solve(&mut x, q)?;
        // one step of refinement: X is subtracted from numbers it nearly equals
        let mut r = k.clone();
        subtract(pair, &pair.stiffness, &x, &mut r);
        solve(&mut r, q)?;
        for (x, r) in x.iter_mut().zip(&r) {
            *x += r;
        }
        let kx = project(&k, q, &x, q, n);
        let s: Vec<f64> = (0..q * q)
            .map(|e| {
                let (i, j) = (e % q, e / q);
                border.own_stiffness[e] * d[i] * d[j] - 0.5 * (kx[j * q + i] + kx[i * q + j])
            })
            .collect();
        let (values, vectors) = symmetric_eigen(&s, q)?;
        // m − MX, and Xᵀ of it and of m
        let mut rest = m.clone();
        subtract(pair, &pair.mass, &x, &mut rest);
        let (xr, xm) = (project(&x, q, &rest, q, n), project(&x, q, &m, q, n));
        // own mass: MS − Xᵀm − mᵀX + XᵀMX = MS − Xᵀ(m − MX) − (Xᵀm)ᵀ
        let g: Vec<f64> = (0..q * q)
            .map(|e| {
                let (i, j) = (e % q, e / q);
                border.own_mass[e] * d[i] * d[j]
                    - 0.5 * (xr[j * q + i] + xr[i * q + j])
                    - 0.5 * (xm[j * q + i] + xm[i * q + j])
            })
            .collect();
        // directions that quadrature errors could fake are dropped: the mass divides by their size
        let mut drop = DROP.max(1e3 * border.asymmetry);
        loop {
            let keep: Vec<usize> = (0..q).filter(|&i| values[i] > drop).collect();
            let w = keep.len();
            // T: kept direction f in terms of the scaled raw functions
            let mut t = Vec::with_capacity(q * w);
            for &f in &keep {
                let c = 1.0 / values[f].sqrt();
                t.extend(vectors[f * q..(f + 1) * q].iter().map(|v| c * v));
            }
            let times = |a: &[f64], rows: usize| {
                let mut out = vec![0.0; rows * w];
                combine(&mut out, w, a, q, &t, rows, 1.0);
                out
            };
            let own = project(&t, w, &times(&g, q), w, q);
            let own_mass: Vec<f64> = (0..w * w)
                .map(|e| 0.5 * (own[e] + own[(e % w) * w + e / w]))
                .collect();
            let (spread, _) = symmetric_eigen(&own_mass, w)?;
            if spread.first().is_some_and(|e| *e <= 0.0) && drop < 1e-2 {
                drop *= 30.0;
                continue;
            }
            let split = |v: Vec<f64>| v.chunks_exact(n).map(<[f64]>::to_vec).collect();
            return Ok(Self {
                mass: split(times(&rest, n)),
                own_mass,
                splines: split(times(&x, n)),
                raw: (0..q * w)
                    .map(|e| d[e / w] * t[(e % w) * q + e / w])
                    .collect(),
                raw_count: q,
            });
        }
    }
}

/// Vectors multiplied together: a row of them is one cache line.
const TOGETHER: usize = 8;

/// r ← r − A x for several vectors, one after the other, A on the pair's pattern.
fn subtract(pair: &Pair, values: &[f64], x: &[f64], r: &mut [f64]) {
    let n = pair.len();
    let groups: Vec<&[f64]> = x.chunks(TOGETHER * n).collect();
    let products = shared(&groups, 1, |group| product(pair, values, group[0]));
    for (r, ax) in r.iter_mut().zip(products.iter().flatten()) {
        *r -= ax;
    }
}

/// A x for up to [`TOGETHER`] vectors.
fn product(pair: &Pair, values: &[f64], x: &[f64]) -> Vec<f64> {
    let n = pair.len();
    let mut rows = vec![[0.0; TOGETHER]; n];
    for (k, x) in x.chunks_exact(n).enumerate() {
        for (row, x) in rows.iter_mut().zip(x) {
            row[k] = *x;
        }
    }
    let mut out = vec![0.0; x.len()];
    pulp::Arch::new().dispatch(|| {
        for i in 0..n {
            let e = pair.starts[i]..pair.starts[i + 1];
            let mut sum = [0.0; TOGETHER];
            for (v, &c) in values[e.clone()].iter().zip(&pair.columns[e]) {
                for (s, x) in sum.iter_mut().zip(&rows[c]) {
                    *s += v * x;
                }
            }
            for (k, out) in out.chunks_exact_mut(n).enumerate() {
                out[i] = sum[k];
            }
        }
    });
    out
}
