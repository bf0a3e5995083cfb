//! The lattice chosen before anything is solved: from the accuracy asked for, the highest level
//! wanted, and the features of the outline.

use super::feature::{Spot, split_for, spots};
use super::singular::{CornerSpace, is_singular};
use super::trace::Grid;
use super::tree::Splits;
use crate::geometry::{Corner, Outline, Point};

/// What the lattice is chosen from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Demand {
    /// Wave number √λ of the highest level wanted.
    pub wave_number: f64,
    /// Relative accuracy of the levels.
    pub accuracy: f64,
    /// Cell size, where the user insists.
    pub cell: Option<f64>,
    /// Spline degree.
    pub degree: usize,
}

/// A lattice to build.
#[derive(Clone, Debug)]
pub struct Plan {
    /// Lines of the coarsest cells.
    pub grid: Grid,
    /// Degree.
    pub degree: usize,
    /// Cells to split.
    pub splits: Splits,
    /// Corners with functions of their own.
    pub corners: Vec<CornerSpace>,
}

/// Error bar of a level over λ(h√λ)^2p, degrees 0…7: the worst of ordinary placements measured on
/// the outlines of the reference tables.
const GROWTH: [f64; 8] = [1.0, 1e-1, 4e-3, 2e-4, 6e-6, 2e-7, 1e-8, 6e-10];

impl Plan {
    /// Chooses cell size, refinement and corner functions.
    pub fn new(outline: &Outline, demand: &Demand) -> Self {
        let p = demand.degree;
        let scaled = (demand.accuracy / GROWTH[p.min(7)]).powf(0.5 / p as f64);
        let h = demand.cell.unwrap_or(0.95 * scaled / demand.wave_number);
        // no coarser than a handful of cells over the outline
        let size = outline.bounds().size();
        let h = h.min(size.x.min(size.y) / 3.0);
        Self::with_cell(outline, demand, h)
    }

    /// As [`Plan::new`] with the cell size given.
    pub fn with_cell(outline: &Outline, demand: &Demand, h: f64) -> Self {
        let grid = Grid::over(outline, h);
        let mut splits = Splits::default();
        let mut list = spots(outline, h);
        let cells = cells_per_radius(demand.accuracy);
        let mut corners = Vec::new();
        for (corner, edges) in singular_corners(outline) {
            let free = free_radius(outline, &corner, cells * h);
            if free < cells * h {
                list.push(Spot {
                    at: corner.at,
                    cell: free / (0.8 * cells),
                    reach: free,
                });
            }
            corners.push(CornerSpace::new(
                &corner,
                free,
                p_most(demand.degree),
                edges,
            ));
        }
        split_for(&grid, &list, &mut splits);
        Self {
            grid,
            degree: demand.degree,
            splits,
            corners,
        }
    }
}

/// Highest exponent of a corner function: above it splines of the degree do as well.
fn p_most(degree: usize) -> f64 {
    degree as f64 + 0.01
}

/// Radius of a corner's functions in cells. Measured on the L at p = 5, h = 0.06: errors of 2e-5,
/// 2e-7, 2e-9, 6e-10 at 4, 8, 12, 16.
fn cells_per_radius(accuracy: f64) -> f64 {
    if accuracy < 3e-7 {
        12.0
    } else if accuracy < 3e-6 {
        9.5
    } else if accuracy < 3e-5 {
        7.5
    } else {
        6.0
    }
}

/// Corners that need functions, with the numbers of the pieces that start and end there.
fn singular_corners(outline: &Outline) -> Vec<(Corner, [u32; 2])> {
    let counts: Vec<usize> = outline.loops.iter().map(|l| l.pieces.len()).collect();
    outline
        .corners(1e-7)
        .into_iter()
        .filter(|c| is_singular(c.angle))
        .map(|c| {
            let first: usize = counts[..c.place.0].iter().sum();
            let n = counts[c.place.0];
            let before = (c.place.1 + n - 1) % n;
            (c, [(first + c.place.1) as u32, (first + before) as u32])
        })
        .collect()
}

/// How far the exterior bisector of a corner stays outside the outline, at most `most`.
fn free_radius(outline: &Outline, corner: &Corner, most: f64) -> f64 {
    let d = Point::polar(corner.direction - 0.5 * (std::f64::consts::TAU - corner.angle));
    let mut free = most / 0.93;
    for (l, lp) in outline.loops.iter().enumerate() {
        let n = lp.pieces.len();
        for (k, piece) in lp.pieces.iter().enumerate() {
            let own =
                l == corner.place.0 && (k == corner.place.1 || k == (corner.place.1 + n - 1) % n);
            let m = match piece {
                crate::geometry::Piece::Line { .. } => 1,
                _ => 64,
            };
            for s in 0..m {
                let a = piece.at(f64::from(s) / f64::from(m)) - corner.at;
                let b = piece.at(f64::from(s + 1) / f64::from(m)) - corner.at;
                let (ca, cb) = (d.cross(a), d.cross(b));
                if (ca < 0.0) == (cb < 0.0) {
                    continue;
                }
                let t = ca / (ca - cb);
                let r = d.dot(a + (b - a) * t);
                if r > if own { 1e-3 * most } else { 0.0 } {
                    free = free.min(r);
                }
            }
        }
    }
    0.93 * free
}
