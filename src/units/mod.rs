//! Numbers of the trade: constants with their sources, quantities in text, values with an error.
//!
//! Enters: text and numbers. Leaves: canonical units (nm, meV, T, electron masses).
//! This room knows no shapes.

mod scalar;

pub use scalar::Scalar;
