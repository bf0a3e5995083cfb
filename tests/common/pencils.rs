//! Pairs of matrices with known levels, for tests and benches of the eigenvalue solver.
#![allow(dead_code, clippy::unwrap_used)]

use num_complex::Complex64;
use sprs::{CsMat, TriMat};

/// A problem that owns its matrices.
pub struct Pencil<T> {
    pub stiffness: CsMat<T>,
    pub mass: CsMat<T>,
    pub places: Vec<[f64; 2]>,
}

impl<T> Pencil<T> {
    pub fn problem(&self) -> dotwright::eigen::Problem<'_, T> {
        dotwright::eigen::Problem {
            stiffness: &self.stiffness,
            mass: &self.mass,
            places: &self.places,
            tail: 0,
        }
    }
}

/// Values and derivatives of all B-splines of degree p that live in cell `cell` at `x`
/// (de Boor's recursion on open uniform knots over [0, 1]).
fn splines(p: usize, cells: usize, cell: usize, x: f64) -> (Vec<f64>, Vec<f64>) {
    let knot = |i: isize| (i as f64 / cells as f64).clamp(0.0, 1.0);
    let ratio = |a: f64, b: f64| if b > 0.0 { a / b } else { 0.0 };
    let c = cell as isize;
    let mut values = vec![1.0];
    let mut slopes = Vec::new();
    for d in 1..=p as isize {
        let mut next = vec![0.0; d as usize + 1];
        let mut slope = vec![0.0; d as usize + 1];
        for (r, &v) in values.iter().enumerate() {
            // Spline number r of degree d−1 starts at knot c − (d−1) + r.
            let a = knot(c - d + 1 + r as isize);
            let b = knot(c + 1 + r as isize);
            let t = ratio(x - a, b - a);
            next[r] += (1.0 - t) * v;
            next[r + 1] += t * v;
            slope[r] -= d as f64 * ratio(v, b - a);
            slope[r + 1] += d as f64 * ratio(v, b - a);
        }
        values = next;
        slopes = slope;
    }
    (values, slopes)
}

/// Gauss–Legendre nodes and weights on [0, 1], by Newton's iteration.
fn gauss(n: usize) -> Vec<(f64, f64)> {
    (0..n)
        .map(|i| {
            let mut x = (std::f64::consts::PI * (i as f64 + 0.75) / (n as f64 + 0.5)).cos();
            let mut slope = 1.0;
            for _ in 0..100 {
                let (mut a, mut b) = (1.0, x);
                for k in 2..=n {
                    (a, b) = (
                        b,
                        ((2 * k - 1) as f64 * x * b - (k - 1) as f64 * a) / k as f64,
                    );
                }
                slope = n as f64 * (x * b - a) / (x * x - 1.0);
                x -= b / slope;
            }
            (0.5 * (1.0 - x), 1.0 / ((1.0 - x * x) * slope * slope))
        })
        .collect()
}

/// One-dimensional stiffness and mass, end splines dropped, as dense rows; and the places.
fn line(p: usize, cells: usize) -> (Vec<Vec<f64>>, Vec<Vec<f64>>, Vec<f64>) {
    let all = cells + p;
    let mut k = vec![vec![0.0; all]; all];
    let mut m = k.clone();
    let rule = gauss(p + 1);
    for cell in 0..cells {
        for &(t, w) in &rule {
            let (v, s) = splines(p, cells, cell, (cell as f64 + t) / cells as f64);
            let w = w / cells as f64;
            for i in 0..=p {
                for j in 0..=p {
                    k[cell + i][cell + j] += w * s[i] * s[j];
                    m[cell + i][cell + j] += w * v[i] * v[j];
                }
            }
        }
    }
    let cut = |a: Vec<Vec<f64>>| -> Vec<Vec<f64>> {
        a[1..all - 1]
            .iter()
            .map(|r| r[1..all - 1].to_vec())
            .collect()
    };
    let greville = |i: usize| {
        (1..=p)
            .map(|r| ((i + r) as f64 - p as f64).clamp(0.0, cells as f64))
            .sum::<f64>()
            / (p * cells) as f64
    };
    (cut(k), cut(m), (1..all - 1).map(greville).collect())
}

/// −Δu = λu on the unit square, tensor splines of degree p on cells², scaled to unit diagonal of
/// K. Levels π²(i² + j²). Unknowns: (cells + p − 2)².
pub fn square(p: usize, cells: usize) -> Pencil<f64> {
    let (k1, m1, x) = line(p, cells);
    let n1 = x.len();
    let id = |i: usize, j: usize| i * n1 + j;
    let scale = |i: usize, j: usize| (k1[i][i] * m1[j][j] + m1[i][i] * k1[j][j]).sqrt().recip();
    let n = n1 * n1;
    let (mut indptr, mut indices) = (vec![0], Vec::new());
    let (mut kd, mut md) = (Vec::new(), Vec::new());
    for a in 0..n1 {
        for b in 0..n1 {
            for c in a.saturating_sub(p)..(a + p + 1).min(n1) {
                for d in b.saturating_sub(p)..(b + p + 1).min(n1) {
                    let s = scale(a, b) * scale(c, d);
                    indices.push(id(c, d));
                    kd.push(s * (k1[a][c] * m1[b][d] + m1[a][c] * k1[b][d]));
                    md.push(s * m1[a][c] * m1[b][d]);
                }
            }
            indptr.push(indices.len());
        }
    }
    Pencil {
        stiffness: CsMat::new((n, n), indptr.clone(), indices.clone(), kd),
        mass: CsMat::new((n, n), indptr, indices, md),
        places: x
            .iter()
            .flat_map(|&a| x.iter().map(move |&b| [a, b]))
            .collect(),
    }
}

/// The lowest `count` of π²(i² + j²).
pub fn square_levels(count: usize) -> Vec<f64> {
    let mut all: Vec<usize> = (1..=count)
        .flat_map(|i| (1..=count / i + 1).map(move |j| i * i + j * j))
        .collect();
    // Enough of them: extend to a full square in i and j.
    let side = 2 + (2.0 * (count as f64).sqrt()) as usize + 8;
    all.clear();
    all.extend((1..=side).flat_map(|i| (1..=side).map(move |j| i * i + j * j)));
    all.sort_unstable();
    let pi2 = std::f64::consts::PI.powi(2);
    all[..count].iter().map(|&s| pi2 * s as f64).collect()
}

/// The five-point Laplacian on a grid of a×b points with zero walls, scaled to unit diagonal:
/// levels (4 sin²(iπ/2(a+1)) + 4 sin²(jπ/2(b+1))) / 4 with mass one.
pub fn five_point(a: usize, b: usize) -> Pencil<f64> {
    let n = a * b;
    let (mut indptr, mut indices, mut data) = (vec![0], Vec::new(), Vec::new());
    for i in 0..a {
        for j in 0..b {
            let mut put = |id: usize, x: f64| {
                indices.push(id);
                data.push(x);
            };
            let id = i * b + j;
            if i > 0 {
                put(id - b, -0.25);
            }
            if j > 0 {
                put(id - 1, -0.25);
            }
            put(id, 1.0);
            if j + 1 < b {
                put(id + 1, -0.25);
            }
            if i + 1 < a {
                put(id + b, -0.25);
            }
            indptr.push(indices.len());
        }
    }
    Pencil {
        stiffness: CsMat::new((n, n), indptr, indices, data),
        mass: CsMat::eye(n),
        places: (0..n)
            .map(|id| [(id / b) as f64, (id % b) as f64])
            .collect(),
    }
}

/// Hofstadter's lattice on an a×b torus: hopping −1/4 with Peierls phases, `flux` quanta through
/// the whole torus; mass one. Every level is (at least) `flux`/gcd-fold degenerate by magnetic
/// translations.
pub fn torus(a: usize, b: usize, flux: usize) -> Pencil<Complex64> {
    let n = a * b;
    let alpha = std::f64::consts::TAU * flux as f64 / n as f64;
    let mut k = TriMat::new((n, n));
    for x in 0..a {
        for y in 0..b {
            let id = x * b + y;
            k.add_triplet(id, id, Complex64::new(1.0, 0.0));
            let right = ((x + 1) % a) * b + y;
            // Landau gauge; the seam carries what makes the flux through every cell the same.
            let seam = if x + 1 == a {
                -alpha * (a * y) as f64
            } else {
                0.0
            };
            let up = x * b + (y + 1) % b;
            for (to, phase) in [(right, seam), (up, alpha * x as f64)] {
                let hop = Complex64::from_polar(-0.25, phase);
                k.add_triplet(to, id, hop);
                k.add_triplet(id, to, hop.conj());
            }
        }
    }
    Pencil {
        stiffness: k.to_csr(),
        mass: CsMat::eye(n),
        places: (0..n)
            .map(|id| [(id / b) as f64, (id % b) as f64])
            .collect(),
    }
}

/// Reproducible pseudo-random numbers in (−1, 1).
pub struct Dice(pub u64);

impl Dice {
    pub fn roll(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1u64 << 52) as f64 - 1.0
    }
}

/// A random sparse pair: symmetric K (definite or not), diagonally dominant M with a pattern of
/// its own, random places.
pub fn random(n: usize, neighbours: usize, definite: bool, seed: u64) -> Pencil<f64> {
    let mut dice = Dice(seed);
    let mut build = |diagonal: f64, swing: f64| {
        let mut a = TriMat::new((n, n));
        for i in 0..n {
            a.add_triplet(i, i, diagonal + swing * dice.roll());
            for _ in 0..neighbours {
                let j = ((dice.roll() + 1.0) / 2.0 * n as f64) as usize;
                if j < n && j != i {
                    let x = dice.roll() / (2.0 * neighbours as f64);
                    a.add_triplet(i, j, x);
                    a.add_triplet(j, i, x);
                }
            }
        }
        a.to_csr()
    };
    let stiffness: CsMat<f64> = if definite {
        build(3.0, 1.5)
    } else {
        build(0.0, 2.0)
    };
    let mass = build(2.0, 0.5);
    let places = (0..n).map(|_| [dice.roll(), dice.roll()]).collect();
    Pencil {
        stiffness,
        mass,
        places,
    }
}
