//! Block thick-restart Lanczos for (K − σM)⁻¹M in the inner product of M.
//!
//! Wu & Simon 2000 (SIAM J. Matrix Anal. Appl. 22, 602) for the restart; Ericsson & Ruhe 1980
//! (Math. Comp. 35, 1251) for the shifted inverse and the free inverse step on Ritz vectors.
//! Panels of B vectors, M-orthonormal to rounding: each new one is cleared of its two
//! predecessors, then of everything.

use super::EigenError;
use super::dense::{Eigen, hermitian};
use super::factor::Factor;
use super::field::Field;
use super::panel::{
    Panel, Square, accumulate, cholesky, gram, inverse, negative, product, square, times, update,
};
use super::pencil::{Noise, Pencil};

/// Vectors kept away from, and their products with M.
#[derive(Default)]
pub(super) struct Locked<T: Field, const B: usize> {
    pub v: Vec<Panel<T, B>>,
    pub mv: Vec<Panel<T, B>>,
}

/// A Ritz pair's value and how good it is.
#[derive(Debug, Clone, Copy)]
pub(super) struct Estimate {
    /// The level.
    pub value: f64,
    /// Bound on the distance to the nearest level: ‖residual‖_M of the shifted inverse, over θ².
    pub error: f64,
    /// Which column of the Ritz vectors.
    pub column: usize,
}

/// A running Lanczos process. The last panel of `v` is not expanded yet.
pub(super) struct Lanczos<'a, T: Field, const B: usize> {
    pencil: &'a Pencil<'a, T>,
    factor: &'a Factor<'a, T>,
    locked: &'a Locked<T, B>,
    v: Vec<Panel<T, B>>,
    mv: Vec<Panel<T, B>>,
    /// Column j of the projected operator: blocks 0..=j.
    t: Vec<Vec<Square<T, B>>>,
    /// Coupling of the last panel to the one before.
    r: Square<T, B>,
    /// Panels kept at the last restart.
    kept: usize,
    noise: Noise,
    work: Panel<T, B>,
    /// Right-hand sides solved for.
    pub solves: usize,
    /// The space is exhausted: nothing new can be added.
    pub spent: bool,
    /// The largest factor by which the operator has stretched a vector: at most one over the
    /// distance from the shift to the nearest level.
    pub stretch: f64,
}

impl<'a, T: Field, const B: usize> Lanczos<'a, T, B> {
    /// Starts from a block, or from a pseudo-random one.
    pub fn start(
        pencil: &'a Pencil<'a, T>,
        factor: &'a Factor<'a, T>,
        locked: &'a Locked<T, B>,
        block: Option<Panel<T, B>>,
        seed: u64,
    ) -> Result<Self, EigenError> {
        let n = pencil.pattern.size();
        let mut noise = Noise::new(seed);
        let mut lanczos = Self {
            pencil,
            factor,
            locked,
            v: Vec::new(),
            mv: Vec::new(),
            t: Vec::new(),
            r: square::<T, B>(),
            kept: 0,
            work: Vec::new(),
            solves: 0,
            spent: false,
            stretch: 0.0,
            noise: Noise::new(seed + 1),
        };
        let given = block.is_some();
        let block = block.unwrap_or_else(|| noise.panel::<T, B>(n));
        // Random vectors are rough; M⁻¹-free smoothing comes with the first solve. Given ones are
        // taken as they are.
        let mut w = block;
        if !given {
            let mut mw = Vec::new();
            pencil.mass(&w, &mut mw);
            lanczos.factor.solve(&mut mw, &mut lanczos.work);
            lanczos.solves += B;
            w = mw;
        }
        lanczos.clear(&mut w, None);
        let (w, mw, _) = lanczos.normalise(w, 0.0)?;
        lanczos.v.push(w);
        lanczos.mv.push(mw);
        Ok(lanczos)
    }

    /// Expanded columns.
    pub fn columns(&self) -> usize {
        self.t.len() * B
    }

    /// Clears `w` of every locked and basis vector; adds the coefficients to `column`.
    fn clear(&self, w: &mut Panel<T, B>, column: Option<&mut Vec<Square<T, B>>>) {
        let mv: Vec<_> = self.locked.mv.iter().chain(&self.mv).collect();
        let v: Vec<_> = self.locked.v.iter().chain(&self.v).collect();
        if v.is_empty() {
            return;
        }
        let h = gram::<T, B>(&mv, w);
        let minus: Vec<_> = h.iter().map(negative::<T, B>).collect();
        update::<T, B>(w, &v, &minus);
        if let Some(column) = column {
            for (sum, h) in column.iter_mut().zip(&h[self.locked.v.len()..]) {
                accumulate::<T, B>(sum, h);
            }
        }
    }

    /// One step: solves for the last panel and adds the next.
    pub fn expand(&mut self) -> Result<(), EigenError> {
        let j = self.v.len() - 1;
        let mut w = self.mv[j].clone();
        self.factor.solve(&mut w, &mut self.work);
        self.solves += B;
        let mut column = vec![square::<T, B>(); j + 1];
        let near = if j > self.kept { j - 1 } else { 0 };
        let mv: Vec<_> = self.mv[near..].iter().collect();
        let h = gram::<T, B>(&mv, &w);
        let minus: Vec<_> = h.iter().map(negative::<T, B>).collect();
        let whole = squared_norms::<T, B>(&h);
        self.stretch = self.stretch.max(whole.sqrt());
        update::<T, B>(&mut w, &self.v[near..].iter().collect::<Vec<_>>(), &minus);
        column[near..].copy_from_slice(&h);
        self.clear(&mut w, Some(&mut column));
        let (w, mw, r) = self.normalise(w, whole)?;
        self.t.push(column);
        self.r = r;
        self.v.push(w);
        self.mv.push(mw);
        Ok(())
    }

    /// Splits `w` into an M-orthonormal panel and R with w = q R. Columns that carry nothing new
    /// beyond rounding (squared norm `whole` before clearing) are replaced by random ones, with
    /// zeros in R. Gives q, M q and R.
    #[allow(clippy::type_complexity)]
    fn normalise(
        &mut self,
        mut w: Panel<T, B>,
        whole: f64,
    ) -> Result<(Panel<T, B>, Panel<T, B>, Square<T, B>), EigenError> {
        let n = w.len();
        let mut total = square::<T, B>();
        for (c, row) in total.iter_mut().enumerate() {
            T::put(row, c, T::from_re(1.0));
        }
        let mut mw = Vec::new();
        for attempt in 0..4 + 2 * B {
            self.pencil.mass(&w, &mut mw);
            let g = gram::<T, B>(&[&mw], &w)[0];
            for (c, g) in g.iter().enumerate() {
                // A negative M-norm beyond rounding proves that M is not positive.
                let d = T::at(g, c).re();
                if d < 0.0 || d.is_nan() {
                    let place = "the norm of an iterated vector".into();
                    return Err(EigenError::MassNotPositive { place });
                }
            }
            // Rounding leaves 1e-16 of the whole; what is below 1e-13 of it is noise.
            let noise = (0..B).find(|&c| T::at(&g[c], c).re() <= 1e-26 * whole);
            let (column, r) = match (noise, cholesky::<T, B>(&g, 1e-16)) {
                (None, Ok(r)) => {
                    let ratio = (0..B)
                        .map(|c| T::at(&r[c], c).abs2() / T::at(&g[c], c).re())
                        .fold(1.0, f64::min);
                    let back = inverse::<T, B>(&r);
                    times::<T, B>(&mut w, &back);
                    total = product::<T, B>(&r, &total);
                    if ratio > 1e-4 {
                        times::<T, B>(&mut mw, &back);
                        return Ok((w, mw, total));
                    }
                    // Nearly dependent columns were blown up: clear and normalise once more.
                    self.clear(&mut w, None);
                    continue;
                }
                (Some(c), _) => (c, None),
                (None, Err(c)) => (c, Some(partial::<T, B>(&g, c))),
            };
            if attempt > 2 * B {
                self.spent = true;
                return Ok((w, mw, square::<T, B>()));
            }
            self.replace(&mut w, column, n);
            let mut s = square::<T, B>();
            for (c, row) in s.iter_mut().enumerate() {
                T::put(row, c, T::from_re(if c == column { 0.0 } else { 1.0 }));
                if let Some(coefficients) = &r {
                    T::put(row, column, coefficients[c]);
                }
            }
            total = product::<T, B>(&s, &total);
        }
        self.spent = true;
        Ok((w, mw, square::<T, B>()))
    }

    /// Puts a random vector, cleared of everything and of M-norm about one, into a column.
    fn replace(&mut self, w: &mut Panel<T, B>, column: usize, n: usize) {
        let mut fresh: Panel<T, B> = self.noise.panel::<T, B>(n);
        self.clear(&mut fresh, None);
        self.clear(&mut fresh, None);
        for (w, f) in w.iter_mut().zip(&fresh) {
            T::put(w, column, T::at(f, column));
        }
    }

    /// The eigenpairs of the projected operator.
    pub fn ritz(&self) -> Result<(Eigen<T>, Vec<Estimate>), EigenError> {
        let m = self.columns();
        let mut a = vec![T::default(); m * m];
        for (j, column) in self.t.iter().enumerate() {
            for (k, block) in column.iter().enumerate() {
                for (p, row) in block.iter().enumerate() {
                    for (q, mirror) in block.iter().enumerate() {
                        let x = T::at(row, q);
                        let (i, c) = (k * B + p, j * B + q);
                        if k == j {
                            // Hermitian up to rounding; make it so.
                            let half = (x + T::at(mirror, p).conj()).scale(0.5);
                            a[c * m + i] = half;
                        } else {
                            a[c * m + i] = x;
                            a[i * m + c] = x.conj();
                        }
                    }
                }
            }
        }
        let eigen = hermitian(&a, m)?;
        let mut estimates = Vec::with_capacity(m);
        for column in 0..m {
            let theta = eigen.values[column];
            if theta == 0.0 {
                continue;
            }
            let rho = self
                .coupling(&eigen, column)
                .iter()
                .map(|x| x.abs2())
                .sum::<f64>()
                .sqrt();
            estimates.push(Estimate {
                value: self.factor.shift + 1.0 / theta,
                error: rho / (theta * theta),
                column,
            });
        }
        estimates.sort_by(|a, b| a.value.total_cmp(&b.value));
        Ok((eigen, estimates))
    }

    /// R times the last rows of a Ritz vector: its residual, in the last panel.
    fn coupling(&self, eigen: &Eigen<T>, column: usize) -> [T; B] {
        let m = self.columns();
        let last = &eigen.vectors[column * m + m - B..column * m + m];
        std::array::from_fn(|p| {
            let mut sum = T::default();
            for (q, &s) in last.iter().enumerate() {
                sum += T::at(&self.r[p], q) * s;
            }
            sum
        })
    }

    /// Panels of combinations of the basis: the chosen Ritz vectors, or with `improve` those
    /// after one more (free) inverse step, normalised. Empty columns are zero.
    fn combine(
        &self,
        eigen: &Eigen<T>,
        chosen: &[usize],
        improve: bool,
        basis: &[Panel<T, B>],
    ) -> Vec<Panel<T, B>> {
        let m = self.columns();
        let n = basis[0].len();
        chosen
            .chunks(B)
            .map(|group| {
                let mut squares = vec![square::<T, B>(); self.v.len()];
                for (c, &column) in group.iter().enumerate() {
                    let s = &eigen.vectors[column * m..(column + 1) * m];
                    for (i, &s) in s.iter().enumerate() {
                        T::put(&mut squares[i / B][i % B], c, s);
                    }
                    if improve {
                        let theta = eigen.values[column];
                        let tail = self.coupling(eigen, column).map(|x| x.scale(1.0 / theta));
                        let norm = (1.0 + tail.iter().map(|x| x.abs2()).sum::<f64>())
                            .sqrt()
                            .recip();
                        for (p, &x) in tail.iter().enumerate() {
                            T::put(&mut squares[self.v.len() - 1][p], c, x);
                        }
                        for square in &mut squares {
                            for row in square {
                                let x = T::at(row, c).scale(norm);
                                T::put(row, c, x);
                            }
                        }
                    }
                }
                let mut x = vec![T::zeros::<B>(); n];
                update::<T, B>(&mut x, &basis.iter().collect::<Vec<_>>(), &squares);
                x
            })
            .collect()
    }

    /// The chosen Ritz vectors, improved by a free inverse step, and their products with M.
    pub fn vectors(&self, eigen: &Eigen<T>, chosen: &[usize]) -> Locked<T, B> {
        Locked {
            v: self.combine(eigen, chosen, true, &self.v),
            mv: self.combine(eigen, chosen, true, &self.mv),
        }
    }

    /// Thick restart: keeps the chosen Ritz vectors (a multiple of B of them) and the last panel.
    pub fn restart(&mut self, eigen: &Eigen<T>, chosen: &[usize]) {
        let v = self.combine(eigen, chosen, false, &self.v);
        let mv = self.combine(eigen, chosen, false, &self.mv);
        let (last_v, last_mv) = (self.v.pop(), self.mv.pop());
        self.kept = v.len();
        self.v = v.into_iter().chain(last_v).collect();
        self.mv = mv.into_iter().chain(last_mv).collect();
        self.t = (0..self.kept)
            .map(|j| {
                let mut column = vec![square::<T, B>(); j + 1];
                for (c, row) in column[j].iter_mut().enumerate() {
                    T::put(row, c, T::from_re(eigen.values[chosen[j * B + c]]));
                }
                column
            })
            .collect();
    }
}

/// The largest squared norm of the columns a set of coefficients stands for.
fn squared_norms<T: Field, const B: usize>(h: &[Square<T, B>]) -> f64 {
    (0..B)
        .map(|c| {
            h.iter()
                .flatten()
                .map(|row| T::at(row, c).abs2())
                .sum::<f64>()
        })
        .fold(0.0, f64::max)
}

/// Coefficients of column `c` over the columns before it, by Gram matrix `g`; zero elsewhere.
fn partial<T: Field, const B: usize>(g: &Square<T, B>, c: usize) -> [T; B] {
    let mut x = [T::default(); B];
    // Gauss–Seidel on the leading block: it is well conditioned, or an earlier column would
    // have failed first; a few sweeps leave less than the noise that is thrown away anyway.
    for _ in 0..200 {
        for i in 0..c {
            let mut sum = T::at(&g[i], c);
            for (k, &x) in x.iter().enumerate().take(c) {
                if k != i {
                    sum -= T::at(&g[i], k) * x;
                }
            }
            x[i] = sum.scale(1.0 / T::at(&g[i], i).re());
        }
    }
    x
}
