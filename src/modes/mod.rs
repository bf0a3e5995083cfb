//! Modes as functions: ψ and ∇ψ at any point, on pixel grids; symmetry and nodal domains.
//!
//! Enters: the lattice and vectors. Leaves: values of normalised functions. Knows no pictures.

mod nodes;
mod raster;
mod settle;

pub use raster::Raster;

use crate::geometry::{Outline, Point};
use crate::lattice::{Cell, CornerSpace, Key, Lattice, Value, spline};
use crate::operators::{Functions, beta};
use std::sync::Arc;

/// The modes of one spectrum, each normalised to ∫|ψ|² = 1 (ψ in 1/length).
#[derive(Clone, Debug)]
pub struct Modes {
    outline: Arc<Outline>,
    lattice: Arc<Lattice>,
    corners: Arc<Vec<CornerSpace>>,
    functions: Arc<Functions>,
}

/// ψ and ∇ψ at a point.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Psi {
    /// ψ.
    pub value: f64,
    /// ∇ψ.
    pub gradient: Point,
}

impl Modes {
    /// Modes from coefficients on a lattice; `functions` holds them normalised.
    pub fn new(
        outline: Outline,
        lattice: Arc<Lattice>,
        corners: Arc<Vec<CornerSpace>>,
        functions: Functions,
    ) -> Self {
        Self {
            outline: Arc::new(outline),
            lattice,
            corners,
            functions: Arc::new(functions),
        }
    }

    /// Number of modes.
    pub fn len(&self) -> usize {
        self.functions.count
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The outline the modes live in.
    pub fn outline(&self) -> &Outline {
        &self.outline
    }

    /// The lattice under the modes.
    pub fn lattice(&self) -> &Lattice {
        &self.lattice
    }

    /// The corners with functions of their own.
    pub fn corners(&self) -> &[CornerSpace] {
        &self.corners
    }

    /// The coefficients.
    pub fn functions(&self) -> &Functions {
        &self.functions
    }

    /// ψ of mode `mode` (from 0) at `at`; 0 outside the outline.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn value(&self, mode: usize, at: Point) -> f64 {
        self.psi(mode, at).value
    }

    /// ψ and ∇ψ of one mode at a point; 0 outside the outline.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn psi(&self, mode: usize, at: Point) -> Psi {
        assert!(mode < self.len(), "mode {mode} of {}", self.len());
        if self.inside(at) {
            self.psi_unclipped(mode, at)
        } else {
            Psi::default()
        }
    }

    /// As [`Modes::psi`] without asking whether the point is inside: the value on the wall itself,
    /// and the smooth continuation a little beyond it.
    pub fn psi_unclipped(&self, mode: usize, at: Point) -> Psi {
        let Some((n, i, j)) = self.locate(at) else {
            return Psi::default();
        };
        let mut out = self.spline_part(mode, at, (n, i, j));
        let mut k = 0;
        for c in self.corners.iter() {
            let m = c.functions.len();
            if c.distance(at) < c.radius {
                let mut v = vec![Value::default(); m];
                c.eval(at, &mut v);
                for (f, v) in v.iter().enumerate() {
                    let y = self.functions.corners[(k + f) * self.len() + mode];
                    out.value += y * v.value;
                    out.gradient.x += y * v.gradient[0];
                    out.gradient.y += y * v.gradient[1];
                }
            }
            k += m;
        }
        out
    }

    /// ∂ₙψ at a point of the wall with outward unit normal `normal`, as the flux of the weak form,
    /// ∂ₙψ − (β/h)ψ: on the disc, of degree 5, a hundred to a thousand times closer to the true
    /// slope than the gradient alone.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn wall_slope(&self, mode: usize, at: Point, normal: Point) -> f64 {
        assert!(mode < self.len(), "mode {mode} of {}", self.len());
        let psi = self.psi_unclipped(mode, at);
        let slope = psi.gradient.dot(normal);
        match self.locate(at) {
            Some((n, _, _)) => slope - beta(&self.lattice) / self.lattice.regions[n].h * psi.value,
            None => slope,
        }
    }

    fn spline_part(&self, mode: usize, at: Point, (n, i, j): (usize, usize, usize)) -> Psi {
        let p = self.lattice.degree;
        let (r, space) = (&self.lattice.regions[n], &self.lattice.spaces[n]);
        let low = r.low(i, j);
        let (u, v) = ((at.x - low[0]) / r.h, (at.y - low[1]) / r.h);
        let mut b = [[0.0; 8]; 4];
        spline::eval(p, u, 0, &mut b[0][..=p]);
        spline::eval(p, u, 1, &mut b[1][..=p]);
        spline::eval(p, v, 0, &mut b[2][..=p]);
        spline::eval(p, v, 1, &mut b[3][..=p]);
        let (count, c) = (self.len(), &self.functions.splines[n]);
        let mut out = Psi::default();
        for a in 0..=p {
            let row = space.first_spline(i, j) + a * space.size[1];
            let (mut s, mut d) = (0.0, 0.0);
            for e in 0..=p {
                let x = c[(row + e) * count + mode];
                s += x * b[2][e];
                d += x * b[3][e];
            }
            out.value += b[0][a] * s;
            out.gradient.x += b[1][a] * s / r.h;
            out.gradient.y += b[0][a] * d / r.h;
        }
        out
    }

    /// All modes at one point of the lattice, without asking whether it is inside.
    fn all_at(&self, at: Point, out: &mut [f64]) {
        out.fill(0.0);
        let Some((n, i, j)) = self.locate(at) else {
            return;
        };
        let p = self.lattice.degree;
        let (r, space) = (&self.lattice.regions[n], &self.lattice.spaces[n]);
        let low = r.low(i, j);
        let mut b = [[0.0; 8]; 2];
        spline::eval(p, (at.x - low[0]) / r.h, 0, &mut b[0][..=p]);
        spline::eval(p, (at.y - low[1]) / r.h, 0, &mut b[1][..=p]);
        let count = self.len();
        let mut add = |f: f64, row: &[f64]| {
            for (o, c) in out.iter_mut().zip(row) {
                *o += f * c;
            }
        };
        for a in 0..=p {
            for e in 0..=p {
                let k = space.first_spline(i, j) + a * space.size[1] + e;
                add(b[0][a] * b[1][e], &self.functions.splines[n][k * count..]);
            }
        }
        let mut k = 0;
        for c in self.corners.iter() {
            let m = c.functions.len();
            if c.distance(at) < c.radius {
                let mut v = vec![Value::default(); m];
                c.eval(at, &mut v);
                for (f, v) in v.iter().enumerate() {
                    add(v.value, &self.functions.corners[(k + f) * count..]);
                }
            }
            k += m;
        }
    }

    /// Whether a point lies inside the outline.
    pub fn inside(&self, at: Point) -> bool {
        let lane = self.lattice.trace.grid.cell(0, 0, at.x);
        let below = self.lattice.trace.crossings(0, lane, at.x);
        below.iter().filter(|&&y| y < at.y).count() % 2 == 1
    }

    /// Region and cell of a point, when its cell belongs to the lattice.
    pub(crate) fn locate(&self, at: Point) -> Option<(usize, usize, usize)> {
        let grid = &self.lattice.trace.grid;
        let mut key = Key {
            level: 0,
            i: grid.cell(0, 0, at.x),
            j: grid.cell(0, 1, at.y),
        };
        while self.lattice.splits.has(key) {
            let level = key.level + 1;
            key = Key {
                level,
                i: grid.cell(level, 0, at.x),
                j: grid.cell(level, 1, at.y),
            };
        }
        self.lattice.regions.iter().enumerate().find_map(|(n, r)| {
            if r.level != key.level {
                return None;
            }
            let (i, j) = r.local(key);
            (r.cell(i, j) != Cell::Out).then_some((n, i as usize, j as usize))
        })
    }
}
