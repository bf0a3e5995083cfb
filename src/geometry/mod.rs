//! Outlines in the plane: analytic boundary pieces, booleans, offset, rounding, measures.
//!
//! Enters: curves. Leaves: an [`Outline`] of closed loops with the material on the left.
//! This room knows no physics.

mod outline;
mod piece;
mod point;

pub use outline::{Corner, Loop, Outline};
pub use piece::Piece;
pub use point::{Box2, Point, pt};
