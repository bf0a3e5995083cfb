//! The lowest levels of K x = λ M x, and the proof that none is missing.
//!
//! Enters: sparse K and M on one pattern, coordinates of the unknowns, a window. Leaves: levels,
//! vectors, residuals and a count by inertia. This room does not know what they mean.

mod blocks;
mod dense;
mod factor;
mod lanczos;
mod matvec;
mod order;
mod slices;

pub use blocks::{combine, project, symmetric_eigen};
pub use factor::{Factor, Plan};
pub use slices::solve;

use crate::progress::Cancelled;
use sprs::CsMat;

/// A scalar the solver works with: a real or complex double.
pub trait Number: crate::units::Scalar + faer::traits::ComplexField {}
impl Number for f64 {}
impl Number for num_complex::Complex64 {}

/// Why there are no levels.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum EigenError {
    /// Called off.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
    /// Shapes, patterns or numbers that cannot be.
    #[error("the eigenvalue problem is not well posed: {0}")]
    IllPosed(String),
    /// More levels than the problem has.
    #[error("{asked} levels were asked of a problem with {unknowns} unknowns")]
    TooMany {
        /// Levels asked for.
        asked: usize,
        /// Unknowns.
        unknowns: usize,
    },
    /// The factor would not fit.
    #[error(
        "the factor of {unknowns} unknowns needs {gigabytes:.1} GB, more than the limit of {limit:.1} GB"
    )]
    TooLarge {
        /// Unknowns.
        unknowns: usize,
        /// Size of the factor.
        gigabytes: f64,
        /// The limit.
        limit: f64,
    },
    /// The machine's fault.
    #[error("the eigensolver failed: {0}")]
    Failed(String),
}

/// K x = λ M x; both Hermitian with all entries stored, rows ascending, on one pattern.
#[derive(Clone, Copy, Debug)]
pub struct Problem<'a, T> {
    /// K.
    pub stiffness: &'a CsMat<T>,
    /// M, positive definite.
    pub mass: &'a CsMat<T>,
    /// Coordinates of each unknown, for the elimination order.
    pub places: &'a [[f64; 2]],
    /// This many unknowns at the end couple with all others and are eliminated last.
    pub tail: usize,
}

/// Which levels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Window {
    /// The lowest ones.
    Lowest(usize),
    /// The first `count` from a value upwards.
    From {
        /// The value.
        value: f64,
        /// How many.
        count: usize,
    },
}

/// How to solve.
#[derive(Clone, Copy, Debug)]
pub struct Settings<'a, T> {
    /// Which levels.
    pub window: Window,
    /// Relative residual to reach.
    pub tolerance: f64,
    /// Vectors to start from: modes of a similar problem.
    pub start: Option<&'a [Vec<T>]>,
    /// Expected value of the last level wanted.
    pub guess: Option<f64>,
    /// Largest factor, in bytes.
    pub memory: f64,
}

/// Levels and their proof.
#[derive(Clone, Debug, Default)]
pub struct Found<T> {
    /// Ascending.
    pub values: Vec<f64>,
    /// M-normalised.
    pub vectors: Vec<Vec<T>>,
    /// Relative residuals.
    pub residuals: Vec<f64>,
    /// Number of the first level, counted from the bottom, from 1.
    pub first_index: usize,
    /// Where was counted.
    pub shift: f64,
    /// Levels below the shift, by inertia.
    pub below: usize,
    /// Levels below the shift that are known.
    pub found: usize,
    /// Whether both agree.
    pub complete: bool,
    /// Values found beyond the window.
    pub beyond: Vec<f64>,
    /// Right-hand sides solved.
    pub solves: usize,
    /// Factorisations.
    pub factorisations: usize,
    /// Milliseconds in factorisations.
    pub factor_ms: f64,
    /// Milliseconds in the rest.
    pub solve_ms: f64,
}
