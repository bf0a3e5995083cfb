//! K and M together: one pattern, one order, upper triangles, ready for products and factors.

use super::EigenError;
use super::field::Field;
use super::matvec::multiply;
use super::order::dissection;
use super::panel::Panel;
use sprs::CsMat;

/// Marks an entry that one of the matrices does not have.
const NONE: u32 = u32::MAX;

/// The common pattern of K and M in elimination order. Reusable while both patterns stay.
#[derive(Debug)]
pub(super) struct Pattern {
    /// Position → unknown.
    pub order: Vec<u32>,
    /// Start of each row of the upper triangle.
    pub start: Vec<u32>,
    /// Columns, the diagonal first in each row.
    pub columns: Vec<u32>,
    from_k: Vec<u32>,
    from_m: Vec<u32>,
    print: [u64; 2],
    tail: usize,
}

/// A fingerprint of a sparsity pattern (FNV-1a over its numbers).
fn fingerprint<T>(a: &CsMat<T>) -> u64 {
    let mut h = 0xcbf2_9ce4_8422_2325_u64 ^ a.rows() as u64;
    let mut eat = |x: usize| h = (h ^ x as u64).wrapping_mul(0x0100_0000_01b3);
    a.indptr().raw_storage().iter().for_each(|&x| eat(x));
    a.indices().iter().for_each(|&x| eat(x));
    h
}

impl Pattern {
    /// Analyses the patterns of K and M; see [`super::Problem`] for `places` and `tail`.
    pub fn new<T: Field>(
        k: &CsMat<T>,
        m: &CsMat<T>,
        places: &[[f64; 2]],
        tail: usize,
    ) -> Result<Self, EigenError> {
        let n = check_shapes(k, m, places, tail)?;
        let (kp, mp) = (k.indptr(), m.indptr());
        let (kp, mp) = (kp.raw_storage(), mp.raw_storage());
        let same = kp == mp && k.indices() == m.indices();
        let krow = |i: usize| &k.indices()[kp[i]..kp[i + 1]];
        let mrow = |i: usize| {
            if same {
                &[][..]
            } else {
                &m.indices()[mp[i]..mp[i + 1]]
            }
        };
        let order = dissection(places, tail, |i| krow(i).iter().chain(mrow(i)));
        let mut rank = vec![0u32; n];
        for (p, &i) in order.iter().enumerate() {
            rank[i as usize] = p as u32;
        }
        let half = k.nnz() / 2 + n;
        let mut start = Vec::with_capacity(n + 1);
        start.push(0);
        let mut columns = Vec::with_capacity(half);
        let mut from_k = Vec::with_capacity(half);
        let mut from_m = Vec::with_capacity(half);
        for (p, &i) in order.iter().enumerate() {
            let (p, i) = (p as u32, i as usize);
            // The diagonal leads, present or not.
            let first = columns.len();
            columns.push(p);
            from_k.push(NONE);
            from_m.push(NONE);
            let mut entry = |column: u32, ik: u32, im: u32| {
                if column == p {
                    from_k[first] = ik;
                    from_m[first] = im;
                } else if column > p {
                    columns.push(column);
                    from_k.push(ik);
                    from_m.push(im);
                }
            };
            let (mut a, a_end) = (kp[i], kp[i + 1]);
            if same {
                for e in a..a_end {
                    entry(rank[k.indices()[e]], e as u32, e as u32);
                }
            } else {
                let (mut b, b_end) = (mp[i], mp[i + 1]);
                while a < a_end || b < b_end {
                    let ja = if a < a_end {
                        k.indices()[a]
                    } else {
                        usize::MAX
                    };
                    let jb = if b < b_end {
                        m.indices()[b]
                    } else {
                        usize::MAX
                    };
                    let ik = if ja <= jb { a as u32 } else { NONE };
                    let im = if jb <= ja { b as u32 } else { NONE };
                    entry(rank[ja.min(jb)], ik, im);
                    a += usize::from(ja <= jb);
                    b += usize::from(jb <= ja);
                }
            }
            start.push(columns.len() as u32);
        }
        Ok(Self {
            order,
            start,
            columns,
            from_k,
            from_m,
            print: [fingerprint(k), fingerprint(m)],
            tail,
        })
    }

    /// Whether this pattern serves these matrices too.
    pub fn fits<T: Field>(&self, k: &CsMat<T>, m: &CsMat<T>, tail: usize) -> bool {
        self.tail == tail && self.print == [fingerprint(k), fingerprint(m)]
    }

    /// Order of the matrices.
    pub fn size(&self) -> usize {
        self.order.len()
    }
}

fn check_shapes<T>(
    k: &CsMat<T>,
    m: &CsMat<T>,
    places: &[[f64; 2]],
    tail: usize,
) -> Result<usize, EigenError> {
    let n = k.rows();
    let shape = |text: String| Err(EigenError::Shape(text));
    if n == 0 {
        return shape("the matrices are empty".into());
    }
    if k.cols() != n || m.rows() != n || m.cols() != n {
        return shape(format!(
            "stiffness is {n}×{}, mass {}×{}; both must be square and of one size",
            k.cols(),
            m.rows(),
            m.cols()
        ));
    }
    if !k.is_csr() || !m.is_csr() {
        return shape("matrices must be stored by rows (CSR)".into());
    }
    if places.len() != n {
        return shape(format!("{} places for {n} unknowns", places.len()));
    }
    if tail > n {
        return shape(format!("a tail of {tail} among {n} unknowns"));
    }
    if let Some(i) = places
        .iter()
        .position(|p| !p[0].is_finite() || !p[1].is_finite())
    {
        return shape(format!("the place of unknown {i} is not finite"));
    }
    if k.nnz().max(m.nnz()) >= NONE as usize || k.nnz() + m.nnz() >= NONE as usize {
        return shape("more than 4 thousand million entries".into());
    }
    Ok(n)
}

/// The values of K and M on a [`Pattern`].
#[derive(Debug)]
pub(super) struct Pencil<'a, T> {
    /// Where the values lie.
    pub pattern: &'a Pattern,
    /// K, upper triangle.
    pub k: Vec<T>,
    /// M, upper triangle.
    pub m: Vec<T>,
    /// Real diagonal of M.
    pub mass: Vec<f64>,
}

impl<'a, T: Field> Pencil<'a, T> {
    /// Gathers the values; checks that they are finite, Hermitian, and that M may be positive.
    pub fn new(pattern: &'a Pattern, k: &CsMat<T>, m: &CsMat<T>) -> Result<Self, EigenError> {
        let gather = |from: &[u32], data: &[T]| -> Vec<T> {
            from.iter()
                .map(|&e| {
                    if e == NONE {
                        T::default()
                    } else {
                        data[e as usize]
                    }
                })
                .collect()
        };
        let mut pencil = Self {
            pattern,
            k: gather(&pattern.from_k, k.data()),
            m: gather(&pattern.from_m, m.data()),
            mass: Vec::new(),
        };
        pencil.check(k, "stiffness", &pencil.k)?;
        pencil.check(m, "mass", &pencil.m)?;
        pencil.mass = (0..pattern.size())
            .map(|i| pencil.m[pattern.start[i] as usize].re())
            .collect();
        if let Some(p) = pencil.mass.iter().position(|&d| d <= 0.0) {
            let unknown = pattern.order[p];
            let place = format!(
                "the diagonal entry of unknown {unknown}, {:e}",
                pencil.mass[p]
            );
            return Err(EigenError::MassNotPositive { place });
        }
        Ok(pencil)
    }

    /// Compares the product with the whole matrix and with the stored triangle on one fixed
    /// pseudo-random vector: a NaN or a difference of the triangles cannot hide.
    fn check(&self, a: &CsMat<T>, name: &'static str, values: &[T]) -> Result<(), EigenError> {
        let n = self.pattern.size();
        let mut noise = Noise::new(7);
        let x: Panel<T, 1> = noise.panel::<T, 1>(n);
        let mut y: Panel<T, 1> = Vec::new();
        self.times(values, &x, &mut y);
        let mut plain = vec![T::default(); n];
        for (p, &i) in self.pattern.order.iter().enumerate() {
            plain[i as usize] = T::at(&x[p], 0);
        }
        let indptr = a.indptr();
        let indptr = indptr.raw_storage();
        let (mut off, mut whole) = (0.0, 0.0);
        for (p, &i) in self.pattern.order.iter().enumerate() {
            let i = i as usize;
            let (mut sum, mut size) = (T::default(), 0.0);
            for e in indptr[i]..indptr[i + 1] {
                let term = a.data()[e] * plain[a.indices()[e]];
                sum += term;
                size += term.abs2();
            }
            if !size.is_finite() {
                return Err(EigenError::NotFinite {
                    matrix: name,
                    row: i,
                });
            }
            off += (sum - T::at(&y[p], 0)).abs2();
            whole += size;
        }
        let relative = if whole > 0.0 {
            (off / whole).sqrt()
        } else {
            0.0
        };
        // Assembly in two orders differs by rounding, 1e-14 or so; a wrong entry by far more.
        if relative > 1e-9 {
            return Err(EigenError::NotHermitian {
                matrix: name,
                relative,
            });
        }
        Ok(())
    }

    fn times<const B: usize>(&self, values: &[T], x: &Panel<T, B>, y: &mut Panel<T, B>) {
        multiply::<T, B>(&self.pattern.start, &self.pattern.columns, values, x, y);
    }

    /// `y = K x`.
    pub fn stiffness<const B: usize>(&self, x: &Panel<T, B>, y: &mut Panel<T, B>) {
        self.times(&self.k, x, y);
    }

    /// `y = M x`.
    pub fn mass<const B: usize>(&self, x: &Panel<T, B>, y: &mut Panel<T, B>) {
        self.times(&self.m, x, y);
    }

    /// A vector of the caller in elimination order, and back.
    pub fn inward(&self, x: &[T]) -> Vec<T> {
        self.pattern.order.iter().map(|&i| x[i as usize]).collect()
    }

    /// A vector in elimination order in the caller's order.
    pub fn outward(&self, x: &[T]) -> Vec<T> {
        let mut y = vec![T::default(); x.len()];
        for (&i, &x) in self.pattern.order.iter().zip(x) {
            y[i as usize] = x;
        }
        y
    }
}

/// Reproducible pseudo-random numbers (xorshift64*, Vigna 2016).
pub(super) struct Noise(u64);

impl Noise {
    /// A stream of its own for every seed.
    pub fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15) | 1)
    }

    /// Uniform in (−1, 1).
    pub fn next(&mut self) -> f64 {
        self.0 ^= self.0 >> 12;
        self.0 ^= self.0 << 25;
        self.0 ^= self.0 >> 27;
        let bits = self.0.wrapping_mul(0x2545_f491_4f6c_dd1d) >> 11;
        bits as f64 / (1u64 << 52) as f64 - 1.0
    }

    /// A block of random vectors.
    pub fn panel<T: Field, const B: usize>(&mut self, n: usize) -> Panel<T, B> {
        (0..n)
            .map(|_| {
                let mut row = T::zeros::<B>();
                for c in 0..B {
                    let x = T::from_parts(self.next(), self.next());
                    T::put(&mut row, c, x);
                }
                row
            })
            .collect()
    }
}
