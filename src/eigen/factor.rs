//! Sparse LDLᴴ by faer: one symbolic analysis for all shifts; the only file that knows its sparse
//! types.

use super::matvec::multiply;
use super::order::dissect;
use super::{EigenError, Number};
use crate::units::Scalar;
use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::cholesky::ldlt::factor::LdltRegularization;
use faer::perm::PermRef;
use faer::sparse::linalg::SupernodalThreshold;
use faer::sparse::linalg::cholesky::{
    CholeskySymbolicParams, LdltRef, SymbolicCholesky, SymbolicCholeskyRaw, SymmetricOrdering,
    factorize_symbolic_cholesky, supernodal::SupernodalLdltRef,
};
use faer::sparse::{SparseColMatRef, SymbolicSparseColMatRef};
use faer::{Conj, MatMut, Par, Side};
use sprs::CsMat;

/// The symbolic analysis of a pattern.
#[derive(Debug)]
pub struct Plan {
    symbolic: SymbolicCholesky<usize>,
}

impl Plan {
    /// Analyses the pattern of a Hermitian matrix.
    ///
    /// # Errors
    /// [`EigenError::TooLarge`] when the factor would take more than `memory` bytes.
    pub fn new<T: Number>(
        a: &CsMat<T>,
        places: &[[f64; 2]],
        tail: usize,
        memory: f64,
    ) -> Result<Self, EigenError> {
        let n = a.rows();
        let starts = a.indptr();
        let starts = starts.raw_storage();
        let columns = a.indices();
        let order = dissect(places, tail, |i| &columns[starts[i]..starts[i + 1]]);
        let mut inverse = vec![0; n];
        for (k, &i) in order.iter().enumerate() {
            inverse[i] = k;
        }
        let perm = PermRef::new_checked(&order, &inverse, n);
        let pattern = SymbolicSparseColMatRef::new_checked(n, n, starts, None, columns);
        let params = CholeskySymbolicParams {
            supernodal_flop_ratio_threshold: SupernodalThreshold::FORCE_SUPERNODAL,
            ..Default::default()
        };
        let symbolic = factorize_symbolic_cholesky(
            pattern,
            Side::Upper,
            SymmetricOrdering::Custom(perm),
            params,
        )
        .map_err(|e| EigenError::Failed(format!("symbolic factorisation: {e:?}")))?;
        let bytes = symbolic.len_val() as f64 * size_of::<T>() as f64;
        if bytes > memory {
            return Err(EigenError::TooLarge {
                unknowns: n,
                gigabytes: bytes / 1e9,
                limit: memory / 1e9,
            });
        }
        Ok(Self { symbolic })
    }
}

/// K − σM = L D Lᴴ.
pub struct Factor<'a, T> {
    plan: &'a Plan,
    values: Vec<T>,
    memory: MemBuffer,
    n: usize,
    /// Negative entries of D: eigenvalues below the shift (Sylvester's law of inertia).
    pub negative: usize,
    /// Relative residual of a test solve.
    pub trust: f64,
}

/// A factor whose test solve leaves more than this is not used.
pub const TRUSTED: f64 = 1e-10;

impl<'a, T: Number> Factor<'a, T> {
    /// Factorises `a − shift·b`, `b` on the same pattern.
    ///
    /// # Errors
    /// [`EigenError::Failed`] on a zero pivot.
    pub fn new(
        plan: &'a Plan,
        a: &CsMat<T>,
        b: Option<(&CsMat<T>, f64)>,
    ) -> Result<Self, EigenError> {
        let n = a.rows();
        let shifted: Vec<T> = match b {
            None => a.data().to_vec(),
            Some((b, s)) => a
                .data()
                .iter()
                .zip(b.data())
                .map(|(k, m)| *k - Scalar::scale(*m, s))
                .collect(),
        };
        // rows of a Hermitian matrix read as columns are its conjugate
        let values: Vec<T> = if T::COMPLEX {
            shifted.iter().map(|v| Scalar::conj(*v)).collect()
        } else {
            shifted.clone()
        };
        let starts = a.indptr();
        let pattern =
            SymbolicSparseColMatRef::new_checked(n, n, starts.raw_storage(), None, a.indices());
        let matrix = SparseColMatRef::new(pattern, &values);
        let s = &plan.symbolic;
        let mut l = vec![T::default(); s.len_val()];
        let mut scratch =
            MemBuffer::new(s.factorize_numeric_ldlt_scratch::<T>(Par::Seq, Default::default()));
        s.factorize_numeric_ldlt(
            &mut l,
            matrix,
            Side::Upper,
            LdltRegularization::default(),
            Par::Seq,
            MemStack::new(&mut scratch),
            Default::default(),
        )
        .map_err(|e| EigenError::Failed(format!("factorisation: {e:?}")))?;
        let negative = negatives(s, &l);
        let mut out = Self {
            plan,
            values: l,
            memory: MemBuffer::new(s.solve_in_place_scratch::<T>(16, Par::Seq)),
            n,
            negative,
            trust: f64::INFINITY,
        };
        out.trust = out.test(a, &shifted);
        Ok(out)
    }

    /// Solves for `b` right-hand sides stored one after the other.
    pub fn solve(&mut self, x: &mut [T], b: usize) {
        let f = LdltRef::new(&self.plan.symbolic, &self.values);
        for part in x.chunks_mut(16 * self.n).take(b.div_ceil(16)) {
            let columns = part.len() / self.n;
            f.solve_in_place_with_conj(
                Conj::No,
                MatMut::from_column_major_slice_mut(part, self.n, columns),
                Par::Seq,
                MemStack::new(&mut self.memory),
            );
        }
    }

    /// Residual of a solve with a known, rough right-hand side.
    fn test(&mut self, a: &CsMat<T>, shifted: &[T]) -> f64 {
        let n = self.n;
        let b: Vec<T> = (0..n)
            .map(|i| Scalar::from_re(((i * 7919 + 13) % 101) as f64 / 50.0 - 1.0))
            .collect();
        let mut x = b.clone();
        self.solve(&mut x, 1);
        let shifted = CsMat::new(
            (n, n),
            a.indptr().raw_storage().to_vec(),
            a.indices().to_vec(),
            shifted.to_vec(),
        );
        let mut r = vec![T::default(); n];
        multiply(&shifted, &x, &mut r, 1);
        let largest = shifted
            .data()
            .iter()
            .map(|v| Scalar::abs2(*v))
            .fold(0.0, f64::max)
            .sqrt();
        let norm = |v: &[T]| v.iter().map(|v| Scalar::abs2(*v)).sum::<f64>().sqrt();
        for (r, b) in r.iter_mut().zip(&b) {
            *r -= *b;
        }
        let e = norm(&r) / (largest * norm(&x) + norm(&b));
        if e.is_finite() { e } else { f64::INFINITY }
    }
}

/// Negative pivots.
fn negatives<T: Number>(s: &SymbolicCholesky<usize>, values: &[T]) -> usize {
    match s.raw() {
        SymbolicCholeskyRaw::Supernodal(raw) => {
            let f = SupernodalLdltRef::<usize, T>::new(raw, values);
            (0..raw.n_supernodes())
                .map(|k| {
                    let m = f.supernode(k).val();
                    (0..m.ncols())
                        .filter(|&j| Scalar::re(m[(j, j)]) < 0.0)
                        .count()
                })
                .sum()
        }
        SymbolicCholeskyRaw::Simplicial(raw) => {
            let starts = raw.col_ptr();
            (0..raw.ncols())
                .filter(|&j| Scalar::re(values[starts[j]]) < 0.0)
                .count()
        }
    }
}
