//! The sparse factorisation of K − σM: symbolic once, numeric at any shift, and its inertia.
//!
//! The only file that talks to the sparse factorisation library. K and M come in elimination
//! order, so the library is told to keep the order and its lower triangle is ours, conjugated.

use super::EigenError;
use super::field::Field;
use super::panel::Panel;
use super::pencil::{Noise, Pattern, Pencil};
use super::triangular::{self, Layout};
use crate::units::Scalar;
use faer::dyn_stack::{MemBuffer, MemStack};
use faer::linalg::cholesky::ldlt::factor::LdltRegularization;
use faer::sparse::linalg::SupernodalThreshold;
use faer::sparse::linalg::cholesky::supernodal::{
    SupernodalIntranodeLbltRef, SymbolicSupernodalCholesky,
    factorize_supernodal_numeric_intranode_lblt,
    factorize_supernodal_numeric_intranode_lblt_scratch, factorize_supernodal_numeric_ldlt,
    factorize_supernodal_numeric_ldlt_scratch,
};
use faer::sparse::linalg::cholesky::{
    CholeskySymbolicParams, SymbolicCholesky, SymbolicCholeskyRaw, SymmetricOrdering,
    factorize_symbolic_cholesky,
};
use faer::sparse::{SparseColMatRef, SymbolicSparseColMatRef};
use faer::{Conj, MatMut, Par, Side};

/// What the factorisation library asks of a scalar.
pub trait Factorable: faer::traits::ComplexField {}
impl<T: faer::traits::ComplexField> Factorable for T {}

/// Largest backward error of a test solve that lets an inertia count.
const GATE: f64 = 1e-11;

/// When neighbouring supernodes are merged: (columns together, share of zeros allowed). A little
/// wider than the library's own, as splines couple densely; not tuned.
const RELAX: &[(usize, f64)] = &[(8, 1.0), (24, 0.6), (64, 0.15), (usize::MAX, 0.05)];

/// The symbolic factor of a [`Pattern`].
#[derive(Debug)]
pub(super) struct Symbolic {
    whole: SymbolicCholesky<u32>,
}

impl Symbolic {
    /// Analyses a pattern.
    pub fn new(pattern: &Pattern) -> Result<Self, EigenError> {
        let n = pattern.size();
        // The analysis reads the upper triangle by columns: the transpose of ours.
        let mut start = vec![0u32; n + 1];
        for &j in &pattern.columns {
            start[j as usize + 1] += 1;
        }
        for j in 0..n {
            start[j + 1] += start[j];
        }
        let mut next = start.clone();
        let mut rows = vec![0u32; pattern.columns.len()];
        for i in 0..n {
            for e in pattern.start[i]..pattern.start[i + 1] {
                let slot = &mut next[pattern.columns[e as usize] as usize];
                rows[*slot as usize] = i as u32;
                *slot += 1;
            }
        }
        let upper = SymbolicSparseColMatRef::new_checked(n, n, &start, None, &rows);
        let params = CholeskySymbolicParams {
            supernodal_flop_ratio_threshold: SupernodalThreshold::FORCE_SUPERNODAL,
            supernodal_params: faer::sparse::linalg::SymbolicSupernodalParams {
                relax: Some(RELAX),
            },
            ..Default::default()
        };
        let whole =
            factorize_symbolic_cholesky(upper, Side::Upper, SymmetricOrdering::Identity, params)
                .map_err(|_| EigenError::TooLarge {
                    needed: u64::MAX,
                    limit: u64::from(u32::MAX) * 4,
                })?;
        Ok(Self { whole })
    }

    /// The supernodal structure.
    fn nodes(&self) -> &SymbolicSupernodalCholesky<u32> {
        match self.whole.raw() {
            SymbolicCholeskyRaw::Supernodal(s) => s,
            SymbolicCholeskyRaw::Simplicial(_) => {
                unreachable!("a threshold of zero always chooses the supernodal form")
            }
        }
    }

    /// Numbers in the factor.
    pub fn length(&self) -> usize {
        self.nodes().len_val()
    }
}

/// What holds the pivots.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Kind {
    /// L D Lᴴ without pivoting.
    Plain,
    /// L B Lᴴ, pivoted inside supernodes.
    Pivoted,
}

/// A numeric factor; its memory is reused from shift to shift.
pub(super) struct Factor<'a, T> {
    symbolic: &'a Symbolic,
    values: Vec<T>,
    lower: Vec<T>,
    subdiagonal: Vec<T>,
    forward: Vec<u32>,
    inverse: Vec<u32>,
    scratch: MemBuffer,
    kind: Kind,
    /// The shift factorised last.
    pub shift: f64,
    /// Eigenvalues of the pencil below the shift.
    pub below: usize,
    /// Backward error of the test solve.
    pub backward: f64,
    /// Factorisations made so far.
    pub count: usize,
}

impl<'a, T: Field> Factor<'a, T> {
    /// Memory for the factors of a pattern.
    pub fn new(symbolic: &'a Symbolic) -> Self {
        let nodes = symbolic.nodes();
        let need = factorize_supernodal_numeric_ldlt_scratch::<u32, T>(
            nodes,
            Par::Seq,
            Default::default(),
        );
        Self {
            values: vec![T::default(); nodes.len_val()],
            lower: Vec::new(),
            subdiagonal: Vec::new(),
            forward: Vec::new(),
            inverse: Vec::new(),
            scratch: MemBuffer::new(need),
            kind: Kind::Plain,
            shift: f64::NAN,
            below: 0,
            backward: f64::INFINITY,
            count: 0,
            symbolic,
        }
    }

    /// Factorises at `shift`, or as near above or below it as a stable factorisation exists.
    ///
    /// # Errors
    /// [`EigenError::Unstable`] when nothing near passes the test solve.
    pub fn at(&mut self, pencil: &Pencil<'_, T>, shift: f64) -> Result<(), EigenError> {
        let step = 1e-9 * shift.abs().max(1e-3 * scale(pencil));
        let mut best = f64::INFINITY;
        for nudge in [0.0, 1.0, -3.0] {
            let sigma = shift + nudge * step;
            for kind in [Kind::Plain, Kind::Pivoted] {
                if self.numeric(pencil, sigma, kind) {
                    self.backward = self.test(pencil);
                    best = best.min(self.backward);
                    if self.backward <= GATE {
                        self.below = self.negative();
                        return Ok(());
                    }
                }
            }
        }
        Err(EigenError::Unstable {
            shift,
            residual: best,
        })
    }

    fn numeric(&mut self, pencil: &Pencil<'_, T>, shift: f64, kind: Kind) -> bool {
        self.count += 1;
        self.shift = shift;
        self.kind = kind;
        self.lower.clear();
        self.lower.extend(
            pencil
                .k
                .iter()
                .zip(&pencil.m)
                .map(|(&k, &m)| (k - m.scale(shift)).conj()),
        );
        let n = pencil.pattern.size();
        let shape = SymbolicSparseColMatRef::new_unsorted_checked(
            n,
            n,
            &pencil.pattern.start,
            None,
            &pencil.pattern.columns,
        );
        let lower = SparseColMatRef::new(shape, &self.lower);
        let nodes = self.symbolic.nodes();
        match kind {
            Kind::Plain => factorize_supernodal_numeric_ldlt(
                &mut self.values,
                lower,
                LdltRegularization::default(),
                nodes,
                Par::Seq,
                MemStack::new(&mut self.scratch),
                Default::default(),
            )
            .is_ok(),
            Kind::Pivoted => {
                self.subdiagonal.resize(n, T::default());
                self.forward.resize(n, 0);
                self.inverse.resize(n, 0);
                let need = factorize_supernodal_numeric_intranode_lblt_scratch::<u32, T>(
                    nodes,
                    Par::Seq,
                    Default::default(),
                );
                factorize_supernodal_numeric_intranode_lblt(
                    &mut self.values,
                    &mut self.subdiagonal,
                    &mut self.forward,
                    &mut self.inverse,
                    lower,
                    nodes,
                    Par::Seq,
                    MemStack::new(&mut MemBuffer::new(need)),
                    Default::default(),
                );
                true
            }
        }
    }

    fn layout(&self) -> Layout<'_> {
        let nodes = self.symbolic.nodes();
        Layout {
            end: nodes.supernode_end(),
            pattern: nodes.col_ptr_for_row_idx(),
            rows: nodes.row_idx(),
            value: nodes.col_ptr_for_val(),
        }
    }

    /// x ← (K − σM)⁻¹ x; `work` keeps its memory between calls.
    pub fn solve<const B: usize>(&self, x: &mut Panel<T, B>, work: &mut Panel<T, B>) {
        match self.kind {
            Kind::Plain => triangular::solve::<T, B>(self.layout(), &self.values, x, work),
            Kind::Pivoted => self.solve_pivoted(x),
        }
    }

    /// The rare way: through the library, column by column.
    fn solve_pivoted<const B: usize>(&self, x: &mut Panel<T, B>) {
        let (nodes, n) = (self.symbolic.nodes(), x.len());
        let perm = faer::perm::PermRef::new_checked(&self.forward, &self.inverse, n);
        let mut plain = vec![T::default(); n * B];
        for (i, &from) in self.forward.iter().enumerate() {
            for c in 0..B {
                plain[c * n + i] = T::at(&x[from as usize], c);
            }
        }
        let need = nodes.solve_in_place_scratch::<T>(B, Par::Seq);
        SupernodalIntranodeLbltRef::new(nodes, &self.values, &self.subdiagonal, perm)
            .solve_in_place_no_numeric_permute_with_conj(
                Conj::No,
                MatMut::from_column_major_slice_mut(&mut plain, n, B),
                Par::Seq,
                MemStack::new(&mut MemBuffer::new(need)),
            );
        for (i, &to) in self.forward.iter().enumerate() {
            for c in 0..B {
                T::put(&mut x[to as usize], c, plain[c * n + i]);
            }
        }
    }

    /// Backward error ‖b − Ax‖ / (‖A‖‖x‖ + ‖b‖) of one solve with a fixed pseudo-random b.
    fn test(&self, pencil: &Pencil<'_, T>) -> f64 {
        let b: Panel<T, 1> = Noise::new(11).panel::<T, 1>(pencil.pattern.size());
        let (mut x, mut kx, mut mx) = (b.clone(), Vec::new(), Vec::new());
        self.solve(&mut x, &mut Vec::new());
        pencil.stiffness(&x, &mut kx);
        pencil.mass(&x, &mut mx);
        let (mut r, mut size, mut rhs) = (0.0, 0.0, 0.0);
        for i in 0..b.len() {
            let (bi, xi) = (T::at(&b[i], 0), T::at(&x[i], 0));
            let ax = T::at(&kx[i], 0) - T::at(&mx[i], 0).scale(self.shift);
            r += (bi - ax).abs2();
            size += xi.abs2();
            rhs += bi.abs2();
        }
        let largest = self
            .lower
            .iter()
            .map(|a| Scalar::abs2(*a))
            .fold(0.0, f64::max)
            .sqrt();
        let error = r.sqrt() / (largest * size.sqrt() + rhs.sqrt());
        if error.is_finite() {
            error
        } else {
            f64::INFINITY
        }
    }

    /// Negative eigenvalues of the matrix, from the pivots (Sylvester's law of inertia).
    fn negative(&self) -> usize {
        let l = self.layout();
        let mut count = 0;
        for s in 0..l.end.len() {
            let (a, b) = l.columns(s);
            let high = b - a + (l.pattern[s + 1] - l.pattern[s]) as usize;
            let block = &self.values[l.value[s] as usize..];
            let mut j = 0;
            while j < b - a {
                let pair = self.kind == Kind::Pivoted && self.subdiagonal[a + j] != T::default();
                if !pair {
                    count += usize::from(block[j * high + j].re() < 0.0);
                    j += 1;
                    continue;
                }
                // A 2×2 pivot is indefinite unless its determinant is positive.
                let (p, q) = (block[j * high + j].re(), block[(j + 1) * high + j + 1].re());
                let det = p * q - Scalar::abs2(self.subdiagonal[a + j]);
                count += if det < 0.0 {
                    1
                } else {
                    2 * usize::from(p < 0.0)
                };
                j += 2;
            }
        }
        count
    }
}

/// A typical eigenvalue scale: the largest diagonal ratio is the top of the spectrum, so the
/// smallest stands for its bottom.
fn scale<T: Field>(pencil: &Pencil<'_, T>) -> f64 {
    let p = pencil.pattern;
    (0..p.size())
        .map(|i| Scalar::abs(pencil.k[p.start[i] as usize]) / pencil.mass[i])
        .fold(f64::INFINITY, f64::min)
}
