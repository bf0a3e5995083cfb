//! From an outline to something integrals can be taken on: cells, cut-cell rules, spline spaces.
//!
//! Enters: an outline, a cell size, a degree, the cells to split. Leaves: a [`Lattice`] of regions
//! (connected cells of one size), each with its own spline space, and the faces between them.
//! This room knows no energies.

pub mod gauss;
pub mod spline;

mod cloud;
mod cutcell;
mod face;
mod feature;
mod plan;
mod region;
mod singular;
mod space;
mod trace;
mod tree;

pub use cloud::{Cloud, clouds};
pub use face::Face;
pub use plan::{Demand, Plan};
pub use region::{Cell, Cut, Region};
pub use singular::{CornerSpace, Singular, Value, is_singular};
pub use space::{Role, Space, Tie};
pub use trace::{Grid, Part, Trace};
pub use tree::{DEEPEST, Key, Splits};

use crate::geometry::{Outline, Point};
use tree::Columns;

/// The regions that fill an outline, and how they meet.
#[derive(Clone, Debug)]
pub struct Lattice {
    /// Spline degree, the same in all regions.
    pub degree: usize,
    /// The boundary on the lattice.
    pub trace: Trace,
    /// The regions, coarsest first.
    pub regions: Vec<Region>,
    /// Their spline spaces.
    pub spaces: Vec<Space>,
    /// Where regions meet.
    pub faces: Vec<Face>,
    /// Unknowns of all spaces.
    pub unknowns: usize,
    /// The cells that are split.
    pub splits: Splits,
    /// Factor on the penalty of walls and faces; above 1 where the form was not coercive.
    pub stiffening: f64,
    /// Cut cells left without functions of their own: thin ends below the deepest lattice.
    pub dropped: usize,
}

/// Why there is no lattice.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum LatticeError {
    /// Nothing inside.
    #[error("the outline holds no whole cell of size {0:.3e}")]
    Empty(f64),
}

/// Where lattice lines fall on the outline: a fixed irrational share of a cell off its lower left
/// corner, so that round coordinates do not sit on lines.
const OFFSET: Point = Point {
    x: 0.414_213_562_373_095,
    y: 0.618_033_988_749_894,
};

impl Grid {
    /// The lattice of cell size `h` over an outline.
    pub fn over(outline: &Outline, h: f64) -> Self {
        Self {
            origin: outline.bounds().lo - OFFSET * h,
            h,
        }
    }
}

impl Lattice {
    /// Lays the lattice: splines of degree `p`, the given cells split, and whatever else must be
    /// split for every cut cell to have inner splines near.
    ///
    /// # Errors
    /// [`LatticeError::Empty`] when no cell lies inside even after splitting.
    pub fn new(
        outline: &Outline,
        grid: Grid,
        p: usize,
        splits: &Splits,
    ) -> Result<Self, LatticeError> {
        let trace = Trace::new(outline, grid);
        let mut splits = splits.clone();
        let mut last = false;
        loop {
            let mut columns = Columns::new(&trace);
            let leaves = tree::leaves(&trace, &splits, &mut columns);
            let mut regions = Vec::new();
            let mut spaces: Vec<Space> = Vec::new();
            let (mut unknowns, mut dropped, mut again) = (0, 0, false);
            for group in region::regions(leaves) {
                let region = region::build(group, &mut columns, &trace, 2 * p + 1);
                let (space, stranded) = Space::new(&region, p, unknowns);
                for (i, j) in stranded {
                    let key = Key {
                        level: region.level,
                        i: region.corner[0] + i as i32,
                        j: region.corner[1] + j as i32,
                    };
                    if last || !splits.split(key) {
                        dropped += 1;
                    } else {
                        again = true;
                    }
                }
                unknowns = space.unknowns[1];
                regions.push(region);
                spaces.push(space);
            }
            if again {
                last = splits.len() > 20_000;
                continue;
            }
            if unknowns == 0 {
                return Err(LatticeError::Empty(grid.h));
            }
            let faces = face::faces(&trace, &regions);
            return Ok(Self {
                degree: p,
                trace,
                regions,
                spaces,
                faces,
                unknowns,
                splits,
                dropped,
                stiffening: 1.0,
            });
        }
    }

    /// Area of the outline, as the rules integrate it.
    pub fn area(&self) -> f64 {
        self.regions.iter().map(Region::area).sum()
    }

    /// Centre of the spline behind each unknown.
    pub fn places(&self) -> Vec<[f64; 2]> {
        let shift = 0.5 * (self.degree as f64 + 1.0) - self.degree as f64;
        let mut out = Vec::with_capacity(self.unknowns);
        for (r, s) in self.regions.iter().zip(&self.spaces) {
            for &k in &s.splines {
                let (i, j) = (k as usize / s.size[1], k as usize % s.size[1]);
                out.push([
                    r.origin[0] + (i as f64 + shift) * r.h,
                    r.origin[1] + (j as f64 + shift) * r.h,
                ]);
            }
        }
        out
    }

    /// Size of the smallest cells.
    pub fn finest(&self) -> f64 {
        self.regions
            .iter()
            .map(|r| r.h)
            .fold(f64::INFINITY, f64::min)
    }
}
