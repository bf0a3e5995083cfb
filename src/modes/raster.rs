//! Modes on pixel grids.

use super::Modes;
use crate::geometry::{Point, pt};
use crate::lattice::{Value, spline};

/// A rectangular raster of sample points: column i, row j sits at
/// `origin + (i step.x, j step.y)`; row 0 is the lowest.
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

impl Raster {
    /// The sample point of a column and row.
    pub fn at(&self, i: usize, j: usize) -> Point {
        pt(
            self.origin.x + self.step.x * i as f64,
            self.origin.y + self.step.y * j as f64,
        )
    }
}

impl Modes {
    /// ψ of one mode on a raster, row by row from the lowest; 0 outside the outline.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn sample(&self, mode: usize, raster: &Raster) -> Vec<f64> {
        assert!(mode < self.len(), "mode {mode} of {}", self.len());
        let mut out = vec![0.0; raster.width * raster.height];
        let lattice = self.lattice();
        let p = lattice.degree;
        let count = self.len();
        let all = self.functions();
        let splines: Vec<Vec<f64>> = all
            .splines
            .iter()
            .map(|c| c.iter().skip(mode).step_by(count).copied().collect())
            .collect();
        let singular: Vec<f64> = all
            .corners
            .iter()
            .skip(mode)
            .step_by(count)
            .copied()
            .collect();
        let mut values = vec![Value::default(); singular.len()];
        let mut line = vec![0.0; p + 1];
        for i in 0..raster.width {
            let x = raster.at(i, 0).x;
            let lane = lattice.trace.grid.cell(0, 0, x);
            let crossings = lattice.trace.crossings(0, lane, x);
            let mut held = None;
            let (mut bx, mut by) = ([0.0; 8], [0.0; 8]);
            for span in crossings.chunks_exact(2) {
                let j0 = ((span[0] - raster.origin.y) / raster.step.y)
                    .ceil()
                    .max(0.0);
                let j1 = ((span[1] - raster.origin.y) / raster.step.y).floor();
                if j1 < 0.0 {
                    continue;
                }
                for j in j0 as usize..=(j1 as usize).min(raster.height.saturating_sub(1)) {
                    let at = raster.at(i, j);
                    let Some((n, ci, cj)) = self.locate(at) else {
                        continue;
                    };
                    let (r, space) = (&lattice.regions[n], &lattice.spaces[n]);
                    let low = r.low(ci, cj);
                    if held != Some((n, ci, cj)) {
                        // the splines of a column of the cell, contracted along x once per cell
                        spline::eval(p, (x - low[0]) / r.h, 0, &mut bx[..=p]);
                        line.fill(0.0);
                        for (a, b) in bx[..=p].iter().enumerate() {
                            let row = space.first_spline(ci, cj) + a * space.size[1];
                            for (l, c) in line.iter_mut().zip(&splines[n][row..]) {
                                *l += b * c;
                            }
                        }
                        held = Some((n, ci, cj));
                    }
                    spline::eval(p, (at.y - low[1]) / r.h, 0, &mut by[..=p]);
                    let mut v: f64 = by[..=p].iter().zip(&line).map(|(b, l)| b * l).sum();
                    let mut k = 0;
                    for c in self.corners() {
                        let m = c.functions.len();
                        if c.distance(at) < c.radius {
                            c.eval(at, &mut values[k..k + m]);
                            v += values[k..k + m]
                                .iter()
                                .zip(&singular[k..])
                                .map(|(v, y)| v.value * y)
                                .sum::<f64>();
                        }
                        k += m;
                    }
                    out[j * raster.width + i] = v;
                }
            }
        }
        out
    }
}
