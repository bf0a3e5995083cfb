//! The lattice chosen before anything is solved: from the accuracy asked for, the highest level
//! wanted, and the features of the outline.

use super::feature::{Spot, split_for, spots};
use super::singular::{CornerSpace, is_singular};
use super::trace::Grid;
use super::tree::Splits;
use crate::geometry::{Corner, Outline, Point};
use std::f64::consts::PI;

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
    /// Cells smaller than the first guess by this factor, features included.
    pub finer: f64,
    /// Attempts before this one: each makes the corner functions reach farther.
    pub round: usize,
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
        let h = h.min(size.x.min(size.y) / 3.0) * demand.finer;
        let grid = Grid::over(outline, h);
        let mut splits = Splits::default();
        let mut list = spots(outline, h / demand.finer);
        for spot in &mut list {
            spot.cell *= demand.finer;
        }
        let mut corners = Vec::new();
        let lengths = chords(outline);
        for (corner, edges) in worthwhile(outline, demand, h) {
            let cells = cells_per_radius(
                bend(&corner),
                demand.accuracy / 5f64.powi(demand.round as i32),
            );
            let free = free_radius(outline, &corner, cells * h);
            // two corners in one cell cannot both be integrated well
            let short = edges
                .map(|k| lengths[k as usize])
                .into_iter()
                .fold(f64::INFINITY, f64::min);
            if short < PER_EDGE * h {
                list.push(Spot {
                    at: corner.at,
                    cell: short / PER_EDGE,
                    reach: 0.5 * short,
                });
            }
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

/// Cells along an edge between two corners with functions.
const PER_EDGE: f64 = 1.6;

/// Distance of the ends of each piece.
fn chords(outline: &Outline) -> Vec<f64> {
    outline
        .pieces()
        .map(|p| (p.end() - p.start()).norm())
        .collect()
}

/// How far a corner is from straight, radians.
fn bend(corner: &Corner) -> f64 {
    (PI - corner.angle).abs()
}

/// How far a corner is from the nearest angle π/k, which needs no functions, radians.
fn departure(corner: &Corner) -> f64 {
    (PI / (PI / corner.angle).round().max(1.0) - corner.angle).abs()
}

/// Radius of a corner's functions in cells. Measured on the L (bend π/2) at p = 5, h = 0.06: errors
/// of 2e-5, 2e-7, 2e-9 at 4, 8, 12; the singular part, and so the error, goes with the bend squared.
fn cells_per_radius(bend: f64, accuracy: f64) -> f64 {
    let weight = (bend / std::f64::consts::FRAC_PI_2).min(1.0).powi(2);
    (2.0 * (2e-3 * weight / (0.04 * accuracy)).log10()).clamp(4.0, 12.5)
}

/// The corners that need functions: the weakest are left out as long as all of them together change
/// the levels by less than a tenth of the accuracy.
///
/// A bend δ (or departure from another angle that needs none) whose fluctuation reaches ℓ (a cell, or the next corner) costs about
/// 0.015 δ²ℓ² (∂ₙu)², and (∂ₙu)² is λ/A on average (Rellich 1940); polygons of N chords on a circle
/// give 0.015 against the exact 4ζ(3)/N³.
fn worthwhile(outline: &Outline, demand: &Demand, h: f64) -> Vec<(Corner, [u32; 2])> {
    let area = outline.area();
    let lengths = chords(outline);
    let mut all: Vec<(f64, (Corner, [u32; 2]))> = singular_corners(outline)
        .into_iter()
        // so sharp that the wave dies out smoothly in it
        .filter(|(c, _)| PI / c.angle <= p_most(demand.degree))
        .map(|(c, e)| {
            let reach = e.map(|k| lengths[k as usize]).into_iter().fold(h, f64::min);
            (0.015 * (departure(&c) * reach).powi(2) / area, (c, e))
        })
        .collect();
    all.sort_by(|a, b| a.0.total_cmp(&b.0));
    let mut left_out = 0.0;
    all.retain(|(cost, _)| {
        left_out += cost;
        left_out > 0.1 * demand.accuracy
    });
    all.into_iter().map(|(_, c)| c).collect()
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
