//! What is asked of a solve, and what comes back.

use crate::modes::Modes;
use crate::shape::Document;

/// What is wanted of a spectrum.
#[derive(Clone, Debug, PartialEq)]
pub struct Wanted {
    /// Number of levels.
    pub count: usize,
    /// The first energy of interest; absent: the lowest levels.
    pub from: Option<f64>,
    /// Relative accuracy of each level, in (1e-10, 1e-1).
    pub accuracy: f64,
    /// Cell size, where the user insists; length units of the outline.
    pub cell: Option<f64>,
    /// Spline degree 2…5, where the user insists.
    pub degree: Option<usize>,
}

impl Default for Wanted {
    fn default() -> Self {
        Self {
            count: 20,
            from: None,
            accuracy: 1e-6,
            cell: None,
            degree: None,
        }
    }
}

impl Wanted {
    /// What a shape document asks for.
    pub fn of(document: &Document) -> Self {
        let asked = document.solve();
        Self {
            count: asked.modes,
            from: None,
            accuracy: asked.accuracy,
            cell: asked.cell,
            degree: asked.degree,
        }
    }
}

/// One level; degenerate levels are listed once per copy.
#[derive(Clone, Debug, PartialEq)]
pub struct Level {
    /// Number counted from the lowest level of the outline, from 1.
    pub index: usize,
    /// Energy, in the units of the kinetic constant over length squared.
    pub energy: f64,
    /// The true energy lies within ± this of `energy`.
    pub error: f64,
    /// Size of the group of levels that coincide with this one within their errors.
    pub multiplicity: usize,
    /// Relative algebraic residual ‖Kx − λMx‖ in the M⁻¹ norm, over λ.
    pub residual: f64,
    /// Symmetry label ("m=1", "x even, y odd"), where the outline has one.
    pub label: Option<String>,
}

/// The lattice behind a spectrum.
#[derive(Clone, Debug, PartialEq)]
pub struct LatticeInfo {
    /// Cell size of the coarsest region.
    pub cell: f64,
    /// Cell size of the finest region.
    pub finest: f64,
    /// Spline degree.
    pub degree: usize,
    /// Unknowns of the eigenvalue problem.
    pub unknowns: usize,
    /// Cells inside, all regions.
    pub inside: usize,
    /// Cut cells, all regions.
    pub cut: usize,
}

/// Proof that no level is missing: the count of eigenvalues below a shift, by Sylvester's inertia.
#[derive(Clone, Debug, PartialEq)]
pub struct Certificate {
    /// The energy at which was counted.
    pub shift: f64,
    /// Levels below the shift, counted by inertia.
    pub below: usize,
    /// Levels below the shift that were found.
    pub found: usize,
    /// True when both agree and the factorisation passed its test solve.
    pub complete: bool,
}

/// Milliseconds spent, by room.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Timings {
    /// Masks, cut cells, wall rules.
    pub lattice: f64,
    /// Assembly of K and M.
    pub operators: f64,
    /// Factorisations.
    pub factor: f64,
    /// Lanczos, residuals and error bars.
    pub solve: f64,
}

/// Levels, their modes, and how they were made.
#[derive(Clone, Debug)]
pub struct Spectrum {
    /// Ascending.
    pub levels: Vec<Level>,
    /// The mode of each level, in the same order.
    pub modes: Modes,
    /// The lattice.
    pub lattice: LatticeInfo,
    /// The count.
    pub certificate: Certificate,
    /// Where the time went.
    pub timings: Timings,
    /// Remarks for the reader: what was given up, what to be careful with.
    pub notes: Vec<String>,
}
