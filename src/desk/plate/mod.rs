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

use crate::geometry::{Loop, Outline, Piece, Point};

/// An outline as closed polylines, fine enough for any screen: a curve as large as the whole
/// outline strays from its chords by less than a thousandth of it, smaller ones by less.
pub fn flatten(outline: &Outline) -> Vec<Vec<Point>> {
    let whole = outline.bounds().diagonal();
    let line = |l: &Loop| -> Vec<Point> {
        let mut out = Vec::new();
        for piece in &l.pieces {
            let part = piece.bounds().diagonal() / whole;
            let steps = match piece {
                Piece::Line { .. } => 1,
                // the chord's error goes with the square of its length
                _ => (96.0 * part.min(1.0).sqrt()).ceil().max(3.0) as usize,
            };
            out.extend((0..steps).map(|k| piece.at(k as f64 / steps as f64)));
        }
        out
    };
    let lines = outline.loops.iter().map(line);
    lines.filter(|l| l.len() > 2).collect()
}
