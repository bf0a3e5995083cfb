//! From an outline to certified levels: chooses the lattice, assembles, solves, judges the error,
//! and refines until the accuracy asked for is reached.
//!
//! Enters: an [`Outline`](crate::geometry::Outline), the kinetic constant and what is wanted. Leaves: a [`Spectrum`].
//! This room knows no files, no units of measure, no screens.

mod attempt;
pub mod bars;
mod level;
mod refine;
mod solve;
mod system;
mod tail;
pub mod weyl;

pub use level::{Certificate, LatticeInfo, Level, Spectrum, Timings, Wanted};
pub use solve::{SpectrumError, solve};
