//! The quick answer after an edit: old modes, one inverse step, Rayleigh and Ritz.

use super::factor::Factor;
use super::field::Field;
use super::levels::gather;
use super::panel::{Panel, gram};
use super::pencil::Pencil;
use super::request::Problem;
use super::solve::Plan;
use super::{EigenError, dense};
use crate::progress::Watch;

/// Levels without proof.
#[derive(Debug, Clone)]
pub struct Drafted<T> {
    /// Upper bounds of the levels, ascending.
    pub values: Vec<f64>,
    /// Their vectors, xᴴMx = 1.
    pub vectors: Vec<Vec<T>>,
}

/// Width of the panels of a draft.
const B: usize = 4;

/// Levels of `problem` from the modes `old` (with `levels`) of a similar one with the same
/// unknowns: one block inverse step at a shift among the old levels, then Rayleigh–Ritz.
///
/// After an edit of 1 % the values are right to about 1e-6, relative; nothing is certified.
///
/// # Errors
/// See [`EigenError`].
pub fn draft<T: Field>(
    plan: &mut Plan,
    problem: &Problem<'_, T>,
    old: &[Vec<T>],
    levels: &[f64],
    watch: &Watch,
) -> Result<Drafted<T>, EigenError> {
    let n = problem.stiffness.rows();
    if old.is_empty() {
        return Err(EigenError::NothingAsked);
    }
    if old.len() > n || old.len() != levels.len() || old.iter().any(|x| x.len() != n) {
        let text = format!(
            "{} old modes with {} levels for {n} unknowns",
            old.len(),
            levels.len()
        );
        return Err(EigenError::Shape(text));
    }
    watch.step(0, old.len(), "draft levels")?;
    let (pattern, symbolic) = plan.ready(problem)?;
    let pencil = Pencil::new(pattern, problem.stiffness, problem.mass)?;
    let mut factor = Factor::<T>::new(symbolic);
    factor.at(&pencil, shift(levels))?;
    let inward: Vec<Vec<T>> = old.iter().map(|x| pencil.inward(x)).collect();
    let (mut y, mut my, mut ky) = (Vec::new(), Vec::new(), Vec::new());
    let mut work = Vec::new();
    for group in inward.chunks(B) {
        watch.step(y.len() * B, old.len(), "draft levels")?;
        let x: Panel<T, B> = gather(n, group.iter().map(Vec::as_slice));
        let mut step = Vec::new();
        pencil.mass(&x, &mut step);
        factor.solve(&mut step, &mut work);
        let (mut m, mut k) = (Vec::new(), Vec::new());
        pencil.mass(&step, &mut m);
        pencil.stiffness(&step, &mut k);
        y.push(step);
        my.push(m);
        ky.push(k);
    }
    let count = old.len();
    let project = |b: &[Panel<T, B>]| -> Vec<T> {
        let mut a = vec![T::default(); count * count];
        let all: Vec<_> = y.iter().collect();
        for (j, b) in b.iter().enumerate() {
            for (i, block) in gram::<T, B>(&all, b).iter().enumerate() {
                for (p, row) in block.iter().enumerate() {
                    for q in 0..B {
                        if i * B + p < count && j * B + q < count {
                            a[(j * B + q) * count + i * B + p] = T::at(row, q);
                        }
                    }
                }
            }
        }
        a
    };
    let (mut k, mut m) = (project(&ky), project(&my));
    // Unit diagonal of M: the inverse step stretches modes by very different factors.
    let norms: Vec<f64> = (0..count)
        .map(|i| m[i * count + i].re().max(0.0).sqrt().recip())
        .collect();
    if norms.iter().any(|x| !x.is_finite()) {
        return Err(EigenError::MassNotPositive {
            place: "the norm of an old mode".into(),
        });
    }
    for j in 0..count {
        for i in 0..count {
            for a in [&mut k, &mut m] {
                a[j * count + i] = a[j * count + i].scale(norms[i] * norms[j]);
            }
        }
    }
    let eigen = dense::generalised(&k, &m, count)?;
    let vectors = eigen
        .vectors
        .chunks(count)
        .map(|s| {
            let mut x = vec![T::default(); n];
            for (i, &s) in s.iter().enumerate() {
                let s = s.scale(norms[i]);
                for (x, row) in x.iter_mut().zip(&y[i / B]) {
                    *x += T::at(row, i % B) * s;
                }
            }
            pencil.outward(&x)
        })
        .collect();
    Ok(Drafted {
        values: eigen.values,
        vectors,
    })
}

/// The middle of the widest gap among the middle half of the levels.
fn shift(levels: &[f64]) -> f64 {
    let mut sorted = levels.to_vec();
    sorted.sort_by(f64::total_cmp);
    let n = sorted.len();
    if n < 4 {
        return 0.9 * sorted[0];
    }
    let (mut best, mut widest) = (sorted[n / 2], 0.0);
    for pair in sorted[n / 4..=n - n / 4 - 1].windows(2) {
        if pair[1] - pair[0] > widest {
            widest = pair[1] - pair[0];
            best = 0.5 * (pair[0] + pair[1]);
        }
    }
    best
}
