//! Small dense eigenvalue problems, on the calling thread alone.

use super::EigenError;
use super::field::Field;
use faer::diag::Diag;
use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::cholesky::llt;
use faer::linalg::evd::{ComputeEigenvectors, self_adjoint_evd, self_adjoint_evd_scratch};
use faer::linalg::triangular_solve::{
    solve_lower_triangular_in_place, solve_upper_triangular_in_place,
};
use faer::{Mat, MatMut, MatRef, Par};

/// Eigenvalues, ascending, and eigenvectors, column by column.
pub(super) struct Eigen<T> {
    pub values: Vec<f64>,
    pub vectors: Vec<T>,
}

/// All eigenpairs of the Hermitian m×m matrix `a` (column by column; the lower triangle is read).
///
/// # Errors
/// [`EigenError::Dense`] when the iteration fails, which needs numbers that are not finite.
pub(super) fn hermitian<T: Field>(a: &[T], m: usize) -> Result<Eigen<T>, EigenError> {
    let mut vectors = vec![T::default(); m * m];
    let mut values = Diag::<T>::zeros(m);
    let need =
        self_adjoint_evd_scratch::<T>(m, ComputeEigenvectors::Yes, Par::Seq, Default::default());
    self_adjoint_evd(
        MatRef::from_column_major_slice(a, m, m),
        values.as_mut(),
        Some(MatMut::from_column_major_slice_mut(&mut vectors, m, m)),
        Par::Seq,
        MemStack::new(&mut MemBuffer::new(need)),
        Default::default(),
    )
    .map_err(|_| EigenError::Dense("the iteration for eigenvalues did not end"))?;
    let values = values.column_vector().iter().map(|x| x.re()).collect();
    Ok(Eigen { values, vectors })
}

/// All eigenpairs of `k x = λ m x`, both n×n, Hermitian and column by column; vectors have
/// xᴴ m x = 1.
///
/// # Errors
/// [`EigenError::MassNotPositive`] when `m` is not positive definite.
pub(super) fn generalised<T: Field>(k: &[T], m: &[T], n: usize) -> Result<Eigen<T>, EigenError> {
    let seq = Par::Seq;
    let mut l: Mat<T> = MatRef::from_column_major_slice(m, n, n).to_owned();
    let need = llt::factor::cholesky_in_place_scratch::<T>(n, seq, Default::default());
    llt::factor::cholesky_in_place(
        l.as_mut(),
        Default::default(),
        seq,
        MemStack::new(&mut MemBuffer::new(need)),
        Default::default(),
    )
    .map_err(|_| EigenError::MassNotPositive {
        place: "its Cholesky factor".into(),
    })?;
    // C = L⁻¹ K L⁻ᴴ, in two solves from the left: C = L⁻¹ (L⁻¹ K)ᴴ.
    let mut c: Mat<T> = MatRef::from_column_major_slice(k, n, n).to_owned();
    solve_lower_triangular_in_place(l.as_ref(), c.as_mut(), seq);
    let mut c = c.adjoint().to_owned();
    solve_lower_triangular_in_place(l.as_ref(), c.as_mut(), seq);
    let flat: Vec<T> = (0..n)
        .flat_map(|j| (0..n).map(move |i| (i, j)))
        .map(|at| c[at])
        .collect();
    let mut eigen = hermitian(&flat, n)?;
    solve_upper_triangular_in_place(
        l.adjoint(),
        MatMut::from_column_major_slice_mut(&mut eigen.vectors, n, n).as_dyn_stride_mut(),
        seq,
    );
    Ok(eigen)
}
