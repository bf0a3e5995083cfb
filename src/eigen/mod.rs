//! Certified levels of K x = λ M x.
//!
//! Enters: sparse Hermitian K and positive definite M with a coordinate for every unknown, and a
//! window. Leaves: levels and vectors with residuals, and a count that proves that none is
//! missing. This room does not know what the levels mean.
//!
//! The way through: `order` and `pencil` put both matrices into elimination order, `factor`
//! factorises K − σM with σ from `window`, `lanczos` finds the levels around σ, and
//! `certificate` compares them with the inertia above the last; `slice` holds these together,
//! `solve` cuts long windows into slices.

mod blocks;
mod certificate;
mod dense;
mod draft;
mod error;
mod factor;
mod field;
mod inverse;
mod judge;
mod lanczos;
mod levels;
mod matvec;
mod order;
mod panel;
mod pencil;
mod request;
mod room;
mod slice;
mod small;
mod solve;
mod triangular;
mod window;

pub use blocks::{combine, project, symmetric_eigen};
pub use draft::{Drafted, draft};
pub use error::EigenError;
pub use field::Field;
pub use inverse::with_inverse;
pub use request::{Count, Effort, Found, Problem, Settings, Window, machine_memory};
pub use solve::{Plan, count_below, solve, solve_with};
