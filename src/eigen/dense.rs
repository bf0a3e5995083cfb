//! Small problems, solved whole: M x = μ K x with μ = 1/λ, so that the lowest levels are the
//! largest μ and keep all their digits.

use super::blocks::symmetric_eigen;
use super::{EigenError, Found, Number, Problem, Window};
use crate::units::Scalar;
use faer::linalg::triangular_solve::{
    solve_lower_triangular_in_place, solve_upper_triangular_in_place,
};
use faer::{Mat, Par, Side};
use std::time::Instant;

/// Below this many unknowns the dense way is the faster one.
pub const SMALL: usize = 120;

/// All levels, the window picked from them.
pub fn solve<T: Number>(p: &Problem<'_, T>, window: Window) -> Result<Found<T>, EigenError> {
    let clock = Instant::now();
    let n = p.stiffness.rows();
    let whole = |a: &sprs::CsMat<T>| {
        let mut m = Mat::<T>::zeros(n, n);
        for (v, (i, j)) in a.iter() {
            m[(i, j)] = *v;
        }
        m
    };
    let k = whole(p.stiffness);
    let llt = k
        .llt(Side::Lower)
        .map_err(|_| EigenError::IllPosed("the stiffness is not positive definite".into()))?;
    let l = llt.L().to_owned();
    let mut a = whole(p.mass);
    solve_lower_triangular_in_place(l.as_ref(), a.as_mut(), Par::Seq);
    let mut a = a.adjoint().to_owned();
    solve_lower_triangular_in_place(l.as_ref(), a.as_mut(), Par::Seq);
    let flat: Vec<T> = (0..n * n).map(|e| a[(e % n, e / n)]).collect();
    let (mu, vectors) = symmetric_eigen(&flat, n)?;
    if mu.first().is_some_and(|m| *m <= 0.0) {
        return Err(EigenError::IllPosed(
            "the mass is not positive definite".into(),
        ));
    }
    // ascending in λ
    let values: Vec<f64> = mu.iter().rev().map(|m| 1.0 / m).collect();
    let (first, count) = match window {
        Window::Lowest(c) => (0, c),
        Window::From { value, count } => (values.partition_point(|v| *v < value), count),
    };
    if first + count > n {
        return Err(EigenError::TooMany {
            asked: first + count,
            unknowns: n,
        });
    }
    let last = first + count;
    let mut out = Found {
        values: values[first..last].to_vec(),
        residuals: vec![0.0; count],
        first_index: first + 1,
        beyond: values[last..(last + 8).min(n)].to_vec(),
        complete: true,
        ..Found::default()
    };
    let gap = (last..n).find(|&g| values[g] - values[g - 1] > 1e-6 * values[g]);
    out.below = gap.unwrap_or(n);
    out.found = out.below;
    out.shift = gap.map_or(values[n - 1] * 1.01, |g| 0.5 * (values[g] + values[g - 1]));
    for c in first..last {
        let col = n - 1 - c;
        let scale = 1.0 / mu[col].sqrt();
        let mut x = Mat::<T>::from_fn(n, 1, |i, _| Scalar::scale(vectors[col * n + i], scale));
        solve_upper_triangular_in_place(l.adjoint(), x.as_mut(), Par::Seq);
        out.vectors.push((0..n).map(|i| x[(i, 0)]).collect());
    }
    out.solve_ms = clock.elapsed().as_secs_f64() * 1e3;
    Ok(out)
}
