//! Why there are no levels.

use crate::progress::Cancelled;

/// Why an eigenvalue problem was not solved.
#[derive(Debug, thiserror::Error)]
pub enum EigenError {
    /// Called off.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
    /// The parts of the problem do not fit together.
    #[error("the problem does not fit together: {0}")]
    Shape(String),
    /// A matrix holds NaN or infinity.
    #[error(
        "the {matrix} matrix holds a number that is not finite (row {row}); check the assembly"
    )]
    NotFinite {
        /// "stiffness" or "mass".
        matrix: &'static str,
        /// First row with such a number.
        row: usize,
    },
    /// A matrix is not Hermitian.
    #[error(
        "the {matrix} matrix is not Hermitian (relative difference of the triangles {relative:.1e}); \
         both triangles must be stored and agree"
    )]
    NotHermitian {
        /// "stiffness" or "mass".
        matrix: &'static str,
        /// Relative difference of products with the matrix and with its adjoint.
        relative: f64,
    },
    /// The mass matrix is not positive definite.
    #[error(
        "the mass matrix is not positive definite (seen at {place}); a norm cannot be made of it"
    )]
    MassNotPositive {
        /// Where it was noticed.
        place: String,
    },
    /// No level was asked for.
    #[error("no level was asked for; ask for at least one")]
    NothingAsked,
    /// More levels were asked for than there are.
    #[error("{asked} levels were asked for, and the problem has {available} of them")]
    TooMany {
        /// Levels asked for.
        asked: usize,
        /// Levels there are in the window.
        available: usize,
    },
    /// A number of the settings makes no sense.
    #[error("{name} = {value} makes no sense: {right}")]
    Setting {
        /// Which one.
        name: &'static str,
        /// Its value.
        value: f64,
        /// What would be right.
        right: &'static str,
    },
    /// The solve would not fit in memory.
    #[error(
        "the solve needs about {} MB of memory, and {} MB are allowed; ask for fewer levels or a coarser lattice",
        needed / 1_000_000, limit / 1_000_000
    )]
    TooLarge {
        /// Bytes needed.
        needed: u64,
        /// Bytes allowed.
        limit: u64,
    },
    /// No usable factorisation near a shift.
    #[error(
        "no stable factorisation of K − σM near σ = {shift:e}: the test solve leaves {residual:.1e}"
    )]
    Unstable {
        /// The shift.
        shift: f64,
        /// Backward error of the best test solve.
        residual: f64,
    },
    /// The iteration did not reach the tolerance.
    #[error("{converged} of {wanted} levels converged after {solves} solves; loosen the tolerance")]
    NotConverged {
        /// Levels that did.
        converged: usize,
        /// Levels wanted.
        wanted: usize,
        /// Solves spent.
        solves: usize,
    },
    /// A dense factorisation failed.
    #[error("a small dense eigenvalue problem failed: {0}")]
    Dense(&'static str),
}
