//! From an outline to certified levels: chooses the lattice, assembles, solves, judges the error,
//! and refines until the accuracy asked for is reached.
//!
//! Enters: a [`Model`] and what is wanted. Leaves: a [`Spectrum`].
//! This room knows no units of measure, no screens.

mod attempt;
pub mod bars;
mod level;
mod model;
mod refine;
mod solve;
mod system;
mod tail;
pub mod weyl;

pub use level::{Certificate, LatticeInfo, Level, Spectrum, Timings, Wanted};
pub use model::Model;
pub use solve::{SpectrumError, draft, solve};
