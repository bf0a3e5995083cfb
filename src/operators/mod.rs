//! Stiffness and mass: −Δ with hard walls on a lattice, in reduced units.
//!
//! Enters: a lattice. Leaves: sparse symmetric K and M, and what is needed to evaluate and judge
//! the functions behind a vector. This room knows no factorisations.

mod assemble;
mod band;
mod border;
mod cell;
mod corner;
mod cross;
mod glue;
mod residual;
mod rows;
mod tables;
mod wall;

pub use assemble::{Pair, assemble};
pub use border::{Border, border};
pub use residual::{Functions, Residual, residual};
pub use tables::Tables;
pub use wall::{Traces, WallPoint, beta, points as wall_points};
