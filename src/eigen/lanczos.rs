//! Block Lanczos on (K − σM)⁻¹M in the M inner product, with full orthogonalisation and thick
//! restart (Wu & Simon 2000; block form after Golub & Underwood 1977).

use super::blocks::{combine, project, symmetric_eigen};
use super::factor::Factor;
use super::matvec::multiply;
use super::{EigenError, Number};
use crate::progress::Watch;
use crate::units::Scalar;
use sprs::CsMat;

/// Ritz pairs of one run: λ = σ + 1/θ.
pub struct Ritz {
    /// Values of λ.
    pub value: f64,
    /// Relative residual |OP x − θx| / |θ|.
    pub residual: f64,
    /// Column in the small eigenvectors.
    column: usize,
}

/// The Krylov space and its projected operator.
pub struct Lanczos<'a, T> {
    mass: &'a CsMat<T>,
    shift: f64,
    n: usize,
    b: usize,
    /// Basis and M times it, vector after vector.
    v: Vec<T>,
    mv: Vec<T>,
    /// Vectors whose images are known.
    done: usize,
    /// Projected operator, `cap` × `cap` by columns.
    t: Vec<T>,
    cap: usize,
    /// Coupling of the last block to the one to come.
    tail: Vec<T>,
    random: u64,
    small: Vec<T>,
    /// Right-hand sides solved.
    pub solves: usize,
}

impl<'a, T: Number> Lanczos<'a, T> {
    /// Starts with blocks of `b` vectors from `start` and noise; room for `cap` vectors.
    pub fn new(
        mass: &'a CsMat<T>,
        shift: f64,
        b: usize,
        cap: usize,
        start: &[Vec<T>],
    ) -> Result<Self, EigenError> {
        let n = mass.rows();
        let cap = cap.min(n);
        let b = b.min(cap);
        let mut out = Self {
            mass,
            shift,
            n,
            b,
            v: Vec::new(),
            mv: Vec::new(),
            done: 0,
            t: vec![T::default(); cap * cap],
            cap,
            tail: Vec::new(),
            random: 0x5eed_0f_10ca1,
            small: Vec::new(),
            solves: 0,
        };
        let mut block = vec![T::default(); n * b];
        for (k, s) in start.iter().enumerate() {
            // old modes are summed into the block, so that each is present in some vector
            let to = &mut block[(k % b) * n..][..n];
            for (t, s) in to.iter_mut().zip(s) {
                *t += *s;
            }
        }
        let level = if start.is_empty() { 1.0 } else { 1e-3 };
        for x in &mut block {
            *x += <T as Scalar>::from_re(level * out.noise());
        }
        out.append(block)?;
        Ok(out)
    }

    fn noise(&mut self) -> f64 {
        // xorshift64* (Vigna 2016), fixed seed
        self.random ^= self.random >> 12;
        self.random ^= self.random << 25;
        self.random ^= self.random >> 27;
        (self.random.wrapping_mul(0x2545_f491_4f6c_dd1d) >> 11) as f64 / (1u64 << 52) as f64 - 1.0
    }

    /// Size of the basis.
    pub fn len(&self) -> usize {
        self.v.len() / self.n
    }

    /// Whether another block fits.
    pub fn has_room(&self) -> bool {
        self.len() + self.b <= self.cap
    }

    /// Orthogonalises a block against the basis, orthonormalises it and appends it;
    /// returns its coefficients on the basis and the factor R of the rest.
    fn append(&mut self, mut w: Vec<T>) -> Result<(Vec<T>, Vec<T>), EigenError> {
        let (n, b, m) = (self.n, w.len() / self.n, self.len());
        let mut coefficients = vec![T::default(); m * b];
        for _ in 0..2 {
            let c = project(&self.mv, m, &w, b, n);
            combine(&mut w, b, &self.v, m, &c, n, -1.0);
            for (s, c) in coefficients.iter_mut().zip(&c) {
                *s += *c;
            }
        }
        let r = match self.cholesky_qr(&mut w, b) {
            Some(r) => r,
            None => self.gram_schmidt(&mut w, b)?,
        };
        Ok((coefficients, r))
    }

    /// Orthonormalises a block by the Cholesky factor of its Gram matrix and appends it; `None`,
    /// with nothing appended, when its vectors are too nearly dependent for that.
    fn cholesky_qr(&mut self, w: &mut [T], b: usize) -> Option<Vec<T>> {
        let n = self.n;
        let mut mw = vec![T::default(); n * b];
        multiply(self.mass, w, &mut mw, b);
        let g = project(&mw, b, w, b, n);
        let r = upper_cholesky(&g, b)?;
        let inverse = upper_inverse(&r, b);
        for x in [(&*w, &mut self.v), (&mw, &mut self.mv)] {
            let at = x.1.len();
            x.1.resize(at + n * b, T::default());
            combine(&mut x.1[at..], b, x.0, b, &inverse, n, 1.0);
        }
        Some(r)
    }

    /// Orthonormalises and appends vector by vector, twice each; a direction that vanishes is
    /// replaced by noise and gets a zero in R.
    fn gram_schmidt(&mut self, w: &mut [T], b: usize) -> Result<Vec<T>, EigenError> {
        let n = self.n;
        let m = self.len();
        let mut r = vec![T::default(); b * b];
        for (i, diagonal) in (0..b).map(|i| (i, i * b + i)) {
            let mut replaced = false;
            let mut tries = 0;
            let first = loop {
                let first = self.norm(&w[i * n..(i + 1) * n]);
                let size = first.0;
                for pass in 0..2 {
                    let mut x = w[i * n..(i + 1) * n].to_vec();
                    if pass == 1 || replaced {
                        let c = project(&self.mv[..m * n], m, &x, 1, n);
                        combine(&mut x, 1, &self.v[..m * n], m, &c, n, -1.0);
                    }
                    let c = project(&self.mv[m * n..], i, &x, 1, n);
                    combine(&mut x, 1, &self.v[m * n..], i, &c, n, -1.0);
                    if !replaced {
                        for (k, c) in c.iter().enumerate() {
                            r[i * b + k] += *c;
                        }
                    }
                    w[i * n..(i + 1) * n].copy_from_slice(&x);
                }
                let (left, mx) = self.norm(&w[i * n..(i + 1) * n]);
                if left > 1e-10 * size && left > 1e-250 {
                    break (left, mx);
                }
                replaced = true;
                tries += 1;
                if tries > 8 {
                    return Err(EigenError::IllPosed(
                        "the mass is not positive definite".into(),
                    ));
                }
                for k in 0..n {
                    w[i * n + k] = Scalar::from_re(self.noise());
                }
            };
            let (left, mx) = first;
            r[diagonal] = if replaced {
                T::default()
            } else {
                Scalar::from_re(left)
            };
            let inv = 1.0 / left;
            self.v
                .extend(w[i * n..(i + 1) * n].iter().map(|x| Scalar::scale(*x, inv)));
            self.mv
                .extend(mx.into_iter().map(|x| Scalar::scale(x, inv)));
        }
        Ok(r)
    }

    /// M-norm of a vector, and M times it.
    fn norm(&self, x: &[T]) -> (f64, Vec<T>) {
        let mut mx = vec![T::default(); self.n];
        multiply(self.mass, x, &mut mx, 1);
        let s: f64 = x
            .iter()
            .zip(&mx)
            .map(|(a, b)| Scalar::re(Scalar::conj(*a) * *b))
            .sum();
        (s.max(0.0).sqrt(), mx)
    }

    /// One block step.
    pub fn step(&mut self, factor: &mut Factor<'_, T>) -> Result<(), EigenError> {
        let (n, from) = (self.n, self.done);
        let b = self.len() - from;
        let mut w = self.mv[from * n..].to_vec();
        factor.solve(&mut w, b);
        self.solves += b;
        let m = self.len();
        let (c, r) = self.append(w)?;
        for j in 0..b {
            for i in 0..m {
                self.t[(from + j) * self.cap + i] = c[j * m + i];
                self.t[i * self.cap + from + j] = Scalar::conj(c[j * m + i]);
            }
        }
        self.done = m;
        self.tail = r;
        Ok(())
    }

    /// Ritz values, and their residuals.
    pub fn ritz(&mut self) -> Result<Vec<Ritz>, EigenError> {
        let m = self.done;
        let mut t = vec![T::default(); m * m];
        for j in 0..m {
            for i in 0..m {
                let (a, b) = (self.t[j * self.cap + i], self.t[i * self.cap + j]);
                t[j * m + i] = Scalar::scale(a + Scalar::conj(b), 0.5);
            }
        }
        let (theta, vectors) = symmetric_eigen(&t, m)?;
        let b = self.len() - m;
        let out = theta
            .iter()
            .enumerate()
            .filter(|(_, th)| th.abs() > 1e-300)
            .map(|(k, th)| {
                // R times the last block of the vector
                let y = &vectors[k * m..(k + 1) * m];
                let mut s = 0.0;
                for i in 0..b {
                    let x: T = (0..b).map(|j| self.tail[j * b + i] * y[m - b + j]).sum();
                    s += Scalar::abs2(x);
                }
                Ritz {
                    value: self.shift + 1.0 / th,
                    residual: s.sqrt() / th.abs(),
                    column: k,
                }
            })
            .collect();
        self.small = vectors;
        Ok(out)
    }

    /// Vectors of the given Ritz pairs, M-normalised, one after the other.
    pub fn vectors(&self, pairs: &[&Ritz]) -> Vec<T> {
        let (n, m, k) = (self.n, self.done, pairs.len());
        let mut c = Vec::with_capacity(m * k);
        for p in pairs {
            c.extend_from_slice(&self.small[p.column * m..(p.column + 1) * m]);
        }
        let mut out = vec![T::default(); n * k];
        combine(&mut out, k, &self.v[..m * n], m, &c, n, 1.0);
        out
    }

    /// Keeps the given Ritz pairs and the block to come.
    pub fn restart(&mut self, keep: &[&Ritz]) {
        let (n, m, k) = (self.n, self.done, keep.len());
        let b = self.len() - m;
        let mut v = self.vectors(keep);
        let mut mv = vec![T::default(); n * k];
        multiply(self.mass, &v, &mut mv, k);
        v.extend_from_slice(&self.v[m * n..]);
        mv.extend_from_slice(&self.mv[m * n..]);
        self.t.fill(T::default());
        for (j, p) in keep.iter().enumerate() {
            self.t[j * self.cap + j] = Scalar::from_re(1.0 / (p.value - self.shift));
            let y = &self.small[p.column * m..(p.column + 1) * m];
            for i in 0..b {
                let x: T = (0..b).map(|l| self.tail[l * b + i] * y[m - b + l]).sum();
                self.t[j * self.cap + k + i] = x;
                self.t[(k + i) * self.cap + j] = Scalar::conj(x);
            }
        }
        self.v = v;
        self.mv = mv;
        self.done = k;
        self.tail = vec![T::default(); b * b];
    }

    /// Runs until the pairs asked for have converged.
    ///
    /// `satisfied` looks at the Ritz pairs and says how many of the wanted are there, of how many.
    pub fn run(
        &mut self,
        factor: &mut Factor<'_, T>,
        keep: usize,
        watch: &Watch,
        mut satisfied: impl FnMut(&[Ritz]) -> (usize, usize),
    ) -> Result<Vec<Ritz>, EigenError> {
        let mut next_look = keep + keep / 2 + 2 * self.b;
        for _ in 0..100_000 {
            self.step(factor)?;
            if self.done < next_look && self.has_room() {
                continue;
            }
            let pairs = self.ritz()?;
            let (have, want) = satisfied(&pairs);
            watch.step(have, want, "levels")?;
            let full = self.done + self.b >= self.n;
            if have >= want || full {
                return Ok(pairs);
            }
            // converged pairs tell how far it is
            let missing = (want - have).max(self.b);
            next_look = self.done + (missing / 3).clamp(self.b, 8 * self.b);
            if !self.has_room() {
                let mut best: Vec<&Ritz> = pairs.iter().collect();
                best.sort_by(|a, b| {
                    (a.value - self.shift)
                        .abs()
                        .total_cmp(&(b.value - self.shift).abs())
                });
                best.truncate((keep + keep / 4 + 4).min(self.cap - 3 * self.b));
                self.restart(&best);
                next_look = self.len() + (self.cap - self.len()) / 2;
            }
        }
        Err(EigenError::Failed("no convergence".into()))
    }
}

/// R of G = RᴴR, by columns; `None` when a pivot is below a millionth of its diagonal entry.
fn upper_cholesky<T: Number>(g: &[T], b: usize) -> Option<Vec<T>> {
    let mut r = vec![T::default(); b * b];
    for j in 0..b {
        for i in 0..=j {
            let s: T = (0..i)
                .map(|k| Scalar::conj(r[i * b + k]) * r[j * b + k])
                .sum();
            let v = g[j * b + i] - s;
            if i < j {
                r[j * b + i] = v / r[i * b + i];
            } else {
                let (left, whole) = (Scalar::re(v), Scalar::re(g[j * b + j]));
                if !(left > 1e-6 * whole && whole > 1e-280) {
                    return None;
                }
                r[j * b + j] = Scalar::from_re(left.sqrt());
            }
        }
    }
    Some(r)
}

/// R⁻¹ of an upper triangle, by columns.
fn upper_inverse<T: Number>(r: &[T], b: usize) -> Vec<T> {
    let mut x = vec![T::default(); b * b];
    for j in 0..b {
        for i in (0..=j).rev() {
            let one = if i == j { 1.0 } else { 0.0 };
            let s: T = (i + 1..=j).map(|k| r[k * b + i] * x[j * b + k]).sum();
            x[j * b + i] = (<T as Scalar>::from_re(one) - s) / r[i * b + i];
        }
    }
    x
}
