//! What several tests use.
#![allow(dead_code)]

use dotwright::geometry::{Outline, Piece, Point, pt};
use dotwright::operators::Pair;
use faer::{Mat, Side};

/// A column of a table in `tests/reference`.
pub fn column(file: &str, name: &str) -> Vec<f64> {
    let path = format!("{}/tests/reference/{file}", env!("CARGO_MANIFEST_DIR"));
    let text = std::fs::read_to_string(path).expect("the table is in the repository");
    let mut lines = text.lines().filter(|l| !l.starts_with('#'));
    let head = lines.next().expect("a header");
    let k = head.split(',').position(|h| h == name).expect("the column");
    lines
        .map(|l| {
            l.split(',')
                .nth(k)
                .expect("a field")
                .parse()
                .expect("a number")
        })
        .collect()
}

/// The lowest eigenvalues of a pair by dense algebra.
pub fn dense(pair: &Pair, count: usize) -> Vec<f64> {
    let n = pair.len();
    let (mut k, mut m) = (Mat::<f64>::zeros(n, n), Mat::<f64>::zeros(n, n));
    for i in 0..n {
        for e in pair.starts[i]..pair.starts[i + 1] {
            k[(i, pair.columns[e])] = pair.stiffness[e];
            m[(i, pair.columns[e])] = pair.mass[e];
        }
    }
    // scaled to unit diagonal of K, so that the reduction by M loses little
    let d: Vec<f64> = (0..n).map(|i| 1.0 / k[(i, i)].sqrt()).collect();
    for i in 0..n {
        for j in 0..n {
            k[(i, j)] *= d[i] * d[j];
            m[(i, j)] *= d[i] * d[j];
        }
    }
    // the largest 1/λ of M x = (1/λ) K x
    let l = k.llt(Side::Lower).expect("K is positive definite");
    let l = l.L().to_owned();
    let mut a = m;
    faer::linalg::triangular_solve::solve_lower_triangular_in_place(
        l.as_ref(),
        a.as_mut(),
        faer::Par::Seq,
    );
    let mut a = a.transpose().to_owned();
    faer::linalg::triangular_solve::solve_lower_triangular_in_place(
        l.as_ref(),
        a.as_mut(),
        faer::Par::Seq,
    );
    let e = a.self_adjoint_eigenvalues(Side::Lower).expect("converges");
    e.iter().rev().take(count).map(|x| 1.0 / x).collect()
}

/// A repeatable stream of numbers in [0, 1): splitmix64 (Steele, Lea & Flood 2014).
pub struct Stream(pub u64);

impl Stream {
    pub fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1u64 << 53) as f64
    }
    pub fn within(&mut self, lo: f64, hi: f64) -> f64 {
        lo + (hi - lo) * self.next()
    }
}

/// A polygon turned by `angle` and moved by `by`.
pub fn placed(vertices: &[(f64, f64)], angle: f64, by: (f64, f64)) -> Outline {
    let (s, c) = angle.sin_cos();
    let v: Vec<Point> = vertices
        .iter()
        .map(|&(x, y)| pt(c * x - s * y + by.0, s * x + c * y + by.1))
        .collect();
    Outline::polygon(&v).expect("a simple polygon")
}

/// A piece that is not straight, for tests that care.
pub fn curved(p: &Piece) -> bool {
    !matches!(p, Piece::Line { .. })
}
