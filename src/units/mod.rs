//! Numbers of the trade: constants with their sources, quantities in text, values with an error.
//!
//! Enters: text and numbers. Leaves: canonical units (nm, meV, T, electron masses, degrees).
//! This room knows no shapes.

mod concise;
pub mod constants;
mod display;
mod quantity;
mod scalar;

pub use concise::{concise, parse_concise};
pub use display::{EnergyUnit, duration, energy};
pub use quantity::{Dimension, Quantity, UnitError, unit, unit_names};
pub use scalar::Scalar;
