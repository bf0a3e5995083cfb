//! The plate: one mode to scale inside its outline, drawn with characters.
//!
//! [`Sight`] lays the plane on cells of two by four dots; [`Strokes`] are the lines on it,
//! [`Exposure`] is one mode sampled on its dots; [`develop`] draws them.

mod develop;
mod exposure;
mod legend;
mod sight;
mod strokes;

pub use develop::{Look, develop, outline_only};
pub use exposure::{Exposure, inside};
pub use legend::{legend, scale_bar};
pub use sight::Sight;
pub use strokes::{Strokes, bit, braille};

use crate::geometry::{Outline, Point};

/// An outline as closed polylines, fine enough for any screen: on one of 1000 dots a line strays
/// by less than half a dot.
pub fn flatten(outline: &Outline) -> Vec<Vec<Point>> {
    let tolerance = 5e-4 * outline.bounds().diagonal();
    if !(tolerance.is_finite() && tolerance > 0.0) {
        return Vec::new();
    }
    outline.polylines(tolerance)
}
