//! What corner functions add to stiffness and mass.
//!
//! With every wall term kept (the ball of a corner may cross other walls):
//! k_B = −∫BΔψ − ∮ψ∂ₙB + (β/h)∮Bψ, S_ij = −∫ψ_iΔψ_j − ∮ψ_j∂ₙψ_i + (β/h)∮ψ_iψ_j.
//! Faces between regions add nothing, since ψ has no jump there.

use super::assemble::expand;
use super::corner::{Terms, probe, terms};
use crate::lattice::{Cloud, CornerSpace, Lattice, clouds};
use crate::progress::shared;

/// Couplings of the corner functions, in reduced units.
#[derive(Clone, Debug, Default)]
pub struct Border {
    /// Corners and their functions.
    pub corners: Vec<CornerSpace>,
    /// Stiffness against the unknowns: one vector of their number per function.
    pub stiffness: Vec<Vec<f64>>,
    /// Mass against the unknowns.
    pub mass: Vec<Vec<f64>>,
    /// Stiffness among the functions, row-major.
    pub own_stiffness: Vec<f64>,
    /// Mass among the functions.
    pub own_mass: Vec<f64>,
    /// Asymmetry of S along two fixed vectors, relative: zero but for quadrature; the proof that all terms are right.
    pub asymmetry: f64,
    /// cᵀSd and dᵀSc for two fixed vectors.
    probed: [f64; 2],
}

impl Border {
    /// Number of functions.
    pub fn len(&self) -> usize {
        self.stiffness.len()
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.stiffness.is_empty()
    }
}

/// First function of each corner, and the number of all.
fn offsets(corners: &[CornerSpace]) -> Vec<usize> {
    let mut at = vec![0];
    for c in corners {
        at.push(at[at.len() - 1] + c.functions.len());
    }
    at
}

/// Integrates the corner functions against the splines and each other.
pub fn border(lattice: &Lattice, corners: Vec<CornerSpace>) -> Border {
    let first = offsets(&corners);
    let q = first[corners.len()];
    if q == 0 {
        return Border::default();
    }
    let mut out = Border {
        stiffness: vec![vec![0.0; lattice.unknowns]; q],
        mass: vec![vec![0.0; lattice.unknowns]; q],
        own_stiffness: vec![0.0; q * q],
        own_mass: vec![0.0; q * q],
        asymmetry: 0.0,
        probed: [0.0; 2],
        corners,
    };
    let list = clouds(
        &lattice.trace,
        &lattice.regions,
        &out.corners,
        lattice.degree,
    );
    for (cloud, terms) in list.iter().zip(shared(&list, 1, |clouds| {
        terms(lattice, &out.corners, &first, &clouds[0])
    })) {
        out.add(lattice, cloud, &terms);
    }
    out.symmetrise();
    out
}

impl Border {
    /// Adds what one cell gives.
    fn add(&mut self, lattice: &Lattice, cloud: &Cloud, t: &Terms) {
        scatter(lattice, cloud, t, &t.stiffness, &mut self.stiffness);
        scatter(lattice, cloud, t, &t.mass, &mut self.mass);
        let (q, nf) = (self.len(), t.functions.len());
        for (a, &f) in t.functions.iter().enumerate() {
            for (c, &g) in t.functions.iter().enumerate().skip(a) {
                let to = f as usize * q + g as usize;
                self.own_stiffness[to] += t.own_stiffness[a * nf + c];
                self.own_mass[to] += t.own_mass[a * nf + c];
            }
        }
        for (to, x) in self.probed.iter_mut().zip(t.probed) {
            *to += x;
        }
    }

    /// Fills the lower triangles, and compares cᵀSd with dᵀSc.
    fn symmetrise(&mut self) {
        let q = self.len();
        let mut size = 0.0;
        for i in 0..q {
            for j in 0..q {
                if j < i {
                    self.own_stiffness[i * q + j] = self.own_stiffness[j * q + i];
                    self.own_mass[i * q + j] = self.own_mass[j * q + i];
                }
                let [c, d] = [probe(i as u32)[0], probe(j as u32)[1]];
                size += (c * d * self.own_stiffness[i * q + j]).powi(2);
            }
        }
        self.asymmetry = (self.probed[0] - self.probed[1]).abs() / f64::sqrt(size).max(1e-300);
    }
}

/// Adds a cell's block [spline][function] to the vectors of its functions.
fn scatter(lattice: &Lattice, cloud: &Cloud, t: &Terms, block: &[f64], to: &mut [Vec<f64>]) {
    let (n, i, j) = cloud.cell;
    let space = &lattice.spaces[n];
    let (m, nf) = (lattice.degree + 1, t.functions.len());
    let first = space.first_spline(i, j);
    for c in 0..m * m {
        for (u, x) in expand(space, first + (c / m) * space.size[1] + c % m) {
            for (f, v) in t.functions.iter().zip(&block[c * nf..][..nf]) {
                to[*f as usize][u as usize] += x * v;
            }
        }
    }
}
