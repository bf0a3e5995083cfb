//! Outlines from files: PNG masks and point lists.
//!
//! Enters: a path and how to read it. Leaves: an outline and remarks. This room knows no shape
//! documents; lengths are those of the file (points) or follow from the size of a pixel.

mod crossing;
mod error;
mod fit;
mod grey;
mod loops;
mod picture;
mod points;
mod trace;

pub use crossing::{Crossing, crossing};
pub use error::IntakeError;
pub use grey::MOST_PIXELS;
pub use picture::{Inside, Reading, picture};
pub use points::{MOST_VERTICES, points};

use crate::geometry::Outline;

/// An outline from a file, and what should be said about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Taken {
    /// The outline, material to the left of every loop.
    pub outline: Outline,
    /// Remarks for the reader.
    pub notes: Vec<String>,
}
