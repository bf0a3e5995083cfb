//! The eigenvalue problem as the solver sees it: splines and corner functions on one pattern,
//! scaled to unit diagonal of the stiffness.

use super::tail::Tail;
use crate::lattice::{Lattice, Role};
use crate::operators::{Functions, Pair};
use sprs::CsMat;

/// K and M with the corner functions last.
#[derive(Clone, Debug)]
pub struct System {
    /// Stiffness.
    pub stiffness: CsMat<f64>,
    /// Mass.
    pub mass: CsMat<f64>,
    /// Coordinate of each unknown.
    pub places: Vec<[f64; 2]>,
    /// Unknowns at the end that couple with all.
    pub tail: usize,
    /// Scaling of the spline unknowns.
    scale: Vec<f64>,
}

impl System {
    /// Puts the blocks together.
    #[allow(clippy::needless_range_loop)] // rows of several arrays in step
    pub fn new(pair: Pair, tail: &Tail, mut places: Vec<[f64; 2]>) -> Self {
        let (n, q) = (pair.len(), tail.len());
        let scale = diagonal_scale(&pair);
        places.resize(n + q, [0.0; 2]);
        let nnz = pair.columns.len() + 2 * n * q + q * q;
        let mut starts = Vec::with_capacity(n + q + 1);
        let mut columns = Vec::with_capacity(nnz);
        let mut k = Vec::with_capacity(nnz);
        let mut m = Vec::with_capacity(nnz);
        starts.push(0);
        for i in 0..n {
            for e in pair.starts[i]..pair.starts[i + 1] {
                let c = pair.columns[e];
                let f = scale[i] * scale[c];
                columns.push(c);
                k.push(f * pair.stiffness[e]);
                m.push(f * pair.mass[e]);
            }
            for f in 0..q {
                columns.push(n + f);
                k.push(0.0);
                m.push(scale[i] * tail.mass[f][i]);
            }
            starts.push(columns.len());
        }
        for f in 0..q {
            for i in 0..n {
                columns.push(i);
                k.push(0.0);
                m.push(scale[i] * tail.mass[f][i]);
            }
            for g in 0..q {
                columns.push(n + g);
                k.push(if f == g { 1.0 } else { 0.0 });
                m.push(tail.own_mass[f * q + g]);
            }
            starts.push(columns.len());
        }
        let shape = (n + q, n + q);
        Self {
            stiffness: CsMat::new(shape, starts.clone(), columns.clone(), k),
            mass: CsMat::new(shape, starts, columns, m),
            places,
            tail: q,
            scale,
        }
    }

    /// The functions behind eigenvectors.
    pub fn functions(&self, lattice: &Lattice, tail: &Tail, vectors: &[Vec<f64>]) -> Functions {
        let (n, q, count) = (self.scale.len(), self.tail, vectors.len());
        let raw = tail.raw_count;
        let mut corners = vec![0.0; raw * count];
        let mut unknowns = vec![0.0; n * count];
        for (l, y) in vectors.iter().enumerate() {
            let mut x: Vec<f64> = y[..n].iter().zip(&self.scale).map(|(y, s)| y * s).collect();
            for f in 0..q {
                let c = y[n + f];
                for (x, s) in x.iter_mut().zip(&tail.splines[f]) {
                    *x -= c * s;
                }
                for r in 0..raw {
                    corners[r * count + l] += c * tail.raw[r * q + f];
                }
            }
            for (i, x) in x.into_iter().enumerate() {
                unknowns[i * count + l] = x;
            }
        }
        Functions {
            count,
            splines: spread(lattice, &unknowns, count),
            corners,
        }
    }
}

/// Coefficients of every spline from those of the unknowns, functions contiguous.
fn spread(lattice: &Lattice, unknowns: &[f64], count: usize) -> Vec<Vec<f64>> {
    lattice
        .spaces
        .iter()
        .map(|space| {
            let mut out = vec![0.0; space.roles.len() * count];
            for (k, role) in space.roles.iter().enumerate() {
                let to = &mut out[k * count..(k + 1) * count];
                match *role {
                    Role::Dead => {}
                    Role::Inner(u) => {
                        to.copy_from_slice(&unknowns[u as usize * count..][..count]);
                    }
                    Role::Outer(t) => {
                        for &(u, c) in &space.ties[t as usize].terms {
                            let from = &unknowns[u as usize * count..][..count];
                            for (t, f) in to.iter_mut().zip(from) {
                                *t += c * f;
                            }
                        }
                    }
                }
            }
            out
        })
        .collect()
}

fn diagonal_scale(pair: &Pair) -> Vec<f64> {
    (0..pair.len())
        .map(|i| {
            let e = pair.starts[i]..pair.starts[i + 1];
            let d = pair.columns[e.clone()]
                .iter()
                .position(|&c| c == i)
                .map_or(1.0, |k| pair.stiffness[e.start + k]);
            1.0 / d.abs().sqrt().max(1e-300)
        })
        .collect()
}
