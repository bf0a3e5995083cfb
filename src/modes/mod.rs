//! Modes as functions: ψ and ∇ψ at any point, on pixel grids; symmetry and nodal domains.
//!
//! Enters: the lattice and vectors. Leaves: values of normalised functions. Knows no pictures.

use crate::geometry::{Outline, Point};

/// A rectangular raster of sample points: column i, row j sits at
/// `origin + step (i, j)`; row 0 is the lowest.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Raster {
    /// The lower left sample point.
    pub origin: Point,
    /// Distance of neighbouring points along x and y.
    pub step: Point,
    /// Columns.
    pub width: usize,
    /// Rows.
    pub height: usize,
}

/// The modes of one spectrum, each normalised to ∫|ψ|² = 1 (ψ in 1/length).
#[derive(Clone, Debug)]
pub struct Modes {
    outline: Outline,
    numbers: Vec<(usize, usize)>,
}

impl Modes {
    /// Placeholder: box modes on the bounding box.
    pub fn placeholder(outline: Outline, numbers: Vec<(usize, usize)>) -> Self {
        Self { outline, numbers }
    }

    /// Number of modes.
    pub fn len(&self) -> usize {
        self.numbers.len()
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.numbers.is_empty()
    }

    /// The outline the modes live in.
    pub fn outline(&self) -> &Outline {
        &self.outline
    }

    /// ψ of mode `mode` (from 0) at `at`; 0 outside the outline.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn value(&self, mode: usize, at: Point) -> f64 {
        let (i, j) = self.numbers[mode];
        let (b, pi) = (self.outline.bounds(), std::f64::consts::PI);
        let (u, v) = (at.x - b.lo.x, at.y - b.lo.y);
        let s = b.size();
        if u < 0.0 || v < 0.0 || u > s.x || v > s.y {
            return 0.0;
        }
        2.0 / (s.x * s.y).sqrt() * (pi * i as f64 * u / s.x).sin() * (pi * j as f64 * v / s.y).sin()
    }

    /// ψ of one mode on a raster, row by row from the lowest; 0 outside the outline.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn sample(&self, mode: usize, raster: &Raster) -> Vec<f64> {
        let mut out = Vec::with_capacity(raster.width * raster.height);
        for j in 0..raster.height {
            for i in 0..raster.width {
                let p = Point {
                    x: raster.origin.x + raster.step.x * i as f64,
                    y: raster.origin.y + raster.step.y * j as f64,
                };
                out.push(self.value(mode, p));
            }
        }
        out
    }
}
