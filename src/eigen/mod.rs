//! stand-in: dense
use crate::progress::{Cancelled, Watch};
use faer::{Mat, Side, prelude::*};
use sprs::CsMat;
#[derive(Debug, thiserror::Error)]
pub enum EigenError {
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
    #[error("{0}")]
    Failed(String),
}
pub struct Problem<'a> {
    pub stiffness: &'a CsMat<f64>,
    pub mass: &'a CsMat<f64>,
    pub places: &'a [[f64; 2]],
    pub tail: usize,
}
#[derive(Clone, Copy, Debug)]
pub enum Window {
    Lowest(usize),
    From { value: f64, count: usize },
}
pub struct Settings<'a> {
    pub window: Window,
    pub tolerance: f64,
    pub start: Option<&'a [Vec<f64>]>,
    pub guess: Option<f64>,
}
pub struct Found {
    pub values: Vec<f64>,
    pub vectors: Vec<Vec<f64>>,
    pub residuals: Vec<f64>,
    pub first_index: usize,
    pub shift: f64,
    pub below: usize,
    pub found: usize,
    pub complete: bool,
    pub beyond: Vec<f64>,
    pub factor_ms: f64,
    pub solve_ms: f64,
}
fn dense(a: &CsMat<f64>) -> Mat<f64> {
    let mut m = Mat::zeros(a.rows(), a.cols());
    for (v, (i, j)) in a.iter() {
        m[(i, j)] = *v;
    }
    m
}
pub fn symmetric_eigen(a: &[f64], n: usize) -> Result<(Vec<f64>, Vec<f64>), EigenError> {
    let m = Mat::from_fn(n, n, |i, j| a[i * n + j]);
    let e = m
        .self_adjoint_eigen(Side::Lower)
        .map_err(|_| EigenError::Failed("dense".into()))?;
    let v = e.S().column_vector().iter().copied().collect();
    let mut u = vec![0.0; n * n];
    for k in 0..n {
        for i in 0..n {
            u[k * n + i] = e.U()[(i, k)];
        }
    }
    Ok((v, u))
}
pub struct Factor {
    l: faer::linalg::solvers::Llt<f64>,
}
impl Factor {
    pub fn new(a: &CsMat<f64>, _places: &[[f64; 2]]) -> Result<Self, EigenError> {
        Ok(Self {
            l: dense(a)
                .llt(Side::Lower)
                .map_err(|_| EigenError::Failed("not positive".into()))?,
        })
    }
    pub fn solve(&self, b: &mut [Vec<f64>]) {
        let n = b[0].len();
        let m = Mat::from_fn(n, b.len(), |i, j| b[j][i]);
        let x = self.l.solve(&m);
        for (j, b) in b.iter_mut().enumerate() {
            for (i, b) in b.iter_mut().enumerate() {
                *b = x[(i, j)];
            }
        }
    }
}
pub fn solve(p: &Problem<'_>, s: &Settings<'_>, _w: &Watch) -> Result<Found, EigenError> {
    let count = match s.window {
        Window::Lowest(n) => n,
        Window::From { count, .. } => count,
    };
    let (k, mut a) = (dense(p.stiffness), dense(p.mass));
    let l = k
        .llt(Side::Lower)
        .map_err(|_| EigenError::Failed("not positive".into()))?;
    let l = l.L().to_owned();
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
    let e = a
        .self_adjoint_eigen(Side::Lower)
        .map_err(|_| EigenError::Failed("dense".into()))?;
    let n = l.nrows();
    let mut f = Found {
        values: vec![],
        vectors: vec![],
        residuals: vec![0.0; count],
        first_index: 1,
        shift: 0.0,
        below: count,
        found: count,
        complete: true,
        beyond: vec![],
        factor_ms: 0.0,
        solve_ms: 0.0,
    };
    for c in 0..(count + 1).min(n) {
        let mu = e.S().column_vector()[n - 1 - c];
        if c == count {
            f.beyond.push(1.0 / mu);
            break;
        }
        f.values.push(1.0 / mu);
        let mut x = Mat::from_fn(n, 1, |i, _| e.U()[(i, n - 1 - c)] / mu.sqrt());
        faer::linalg::triangular_solve::solve_upper_triangular_in_place(
            l.transpose(),
            x.as_mut(),
            faer::Par::Seq,
        );
        f.vectors.push((0..n).map(|i| x[(i, 0)]).collect());
    }
    Ok(f)
}
