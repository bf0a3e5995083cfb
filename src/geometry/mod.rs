//! Outlines in the plane: analytic boundary pieces, booleans, offset, rounding, measures.
//!
//! Enters: curves. Leaves: an [`Outline`] of closed loops with the material on the left. The
//! boundaries stay what they are, lines, arcs, ellipses, Bézier curves and parallels of these,
//! through every step; polylines are made only for those who ask for them.
//! This room knows no physics.

mod arrange;
mod bezier;
mod boolean;
mod check;
mod error;
mod fillet;
mod grow;
mod measure;
mod meet;
mod narrow;
mod outline;
mod overlay;
mod piece;
mod piece_cut;
mod piece_measure;
mod point;
mod polygon;
mod polylines;
mod primitives;
mod similarity;
mod spline;
mod symmetry;
mod tidy;
mod wedges;

pub use boolean::Operation;
pub use error::{GeometryError, Remark};
pub use narrow::{Gap, Narrowest};
pub use outline::{Corner, Loop, Outline};
pub use piece::Piece;
pub use point::{Box2, Point, pt};
pub use similarity::Similarity;
pub use symmetry::Symmetry;
