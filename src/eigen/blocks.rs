//! Dense blocks: products of tall matrices and small Hermitian eigenproblems.
//!
//! A block of `k` vectors of length `n` is one slice, vector after vector.

use super::dense::{Eigen, hermitian};
use super::{EigenError, Field};
use faer::linalg::matmul::matmul;
use faer::{Accum, MatMut, MatRef, Par};

/// c = xᴴ y: `c[j * kx + i] = x_i · y_j`.
pub fn project<T: Field>(x: &[T], kx: usize, y: &[T], ky: usize, n: usize) -> Vec<T> {
    let mut c = vec![T::default(); kx * ky];
    if kx > 0 && ky > 0 {
        let a = MatRef::from_column_major_slice(x, n, kx);
        let b = MatRef::from_column_major_slice(y, n, ky);
        let to = MatMut::from_column_major_slice_mut(&mut c, kx, ky);
        matmul(to, Accum::Replace, a.adjoint(), b, one::<T>(), Par::Seq);
    }
    c
}

/// y ← y + factor · x c, with x of `kx` vectors, c kx × ky column-major.
pub fn combine<T: Field>(
    y: &mut [T],
    ky: usize,
    x: &[T],
    kx: usize,
    c: &[T],
    n: usize,
    factor: f64,
) {
    if kx == 0 || ky == 0 {
        return;
    }
    let a = MatRef::from_column_major_slice(x, n, kx);
    let b = MatRef::from_column_major_slice(c, kx, ky);
    let to = MatMut::from_column_major_slice_mut(y, n, ky);
    matmul(
        to,
        Accum::Add,
        a,
        b,
        crate::units::Scalar::from_re(factor),
        Par::Seq,
    );
}

fn one<T: Field>() -> T {
    crate::units::Scalar::from_re(1.0)
}

/// Eigenvalues, ascending, and eigenvectors of a Hermitian `n` × `n` matrix stored by columns;
/// vector k at `[k * n..]`.
///
/// # Errors
/// [`EigenError::Dense`] when the iteration does not converge.
pub fn symmetric_eigen<T: Field>(a: &[T], n: usize) -> Result<(Vec<f64>, Vec<T>), EigenError> {
    if n == 0 {
        return Ok((Vec::new(), Vec::new()));
    }
    if a.iter()
        .any(|v| !crate::units::Scalar::abs2(*v).is_finite())
    {
        return Err(EigenError::Dense("it holds numbers that are not finite"));
    }
    let Eigen { values, vectors } = hermitian(a, n)?;
    Ok((values, vectors))
}
