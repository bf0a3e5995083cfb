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

/// An outline as closed polylines, fine enough for any screen (a chord strays by less than a
/// thousandth of the box).
pub fn flatten(outline: &Outline) -> Vec<Vec<Point>> {
    outline
        .loops
        .iter()
        .map(|l| {
            let mut line = Vec::new();
            for piece in &l.pieces {
                let steps = match piece {
                    crate::geometry::Piece::Line { .. } => 1,
                    _ => 96,
                };
                line.extend((0..steps).map(|k| piece.at(k as f64 / steps as f64)));
            }
            line
        })
        .filter(|l: &Vec<Point>| l.len() > 1)
        .collect()
}
