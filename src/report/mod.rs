//! Levels as tables: text for people, CSV for spreadsheets, JSON for programs.
//!
//! Enters: an [`Account`]. Leaves: text. This room knows no files and no screens.

mod csv;
mod json;
mod text;

pub use self::csv::csv;
pub use json::json;
pub use text::{certificate, text};

use crate::spectrum::Spectrum;

/// What the model leaves out; stands under every table.
pub const CAUTION: &str = "levels of one particle in an ideal outline; left out: interaction \
between particles, strain, disorder, and the real potential profile at the wall";

/// A spectrum and what is needed to write about it.
#[derive(Clone, Copy, Debug)]
pub struct Account<'a> {
    /// The shape's title.
    pub title: &'a str,
    /// What was modelled, in a few words.
    pub model: &'a str,
    /// Unit of energies; empty for pure numbers.
    pub energy: &'a str,
    /// Unit of lengths; empty for pure numbers.
    pub length: &'a str,
    /// Levels, lattice, certificate.
    pub spectrum: &'a Spectrum,
    /// Remarks beside those of the spectrum.
    pub notes: &'a [String],
}

impl Account<'_> {
    /// All remarks: the shape's, then the solver's.
    fn remarks(&self) -> impl Iterator<Item = &str> {
        let own = self.notes.iter();
        own.chain(&self.spectrum.notes).map(String::as_str)
    }
}

#[cfg(test)]
mod example {
    //! A spectrum with a degenerate pair, for the tests of this room.
    use crate::geometry::{Outline, Point};
    use crate::progress::Watch;
    use crate::spectrum::{Model, Spectrum, Wanted, solve};

    pub fn spectrum(count: usize) -> Spectrum {
        let p = |x, y| Point { x, y };
        let square = Outline::polygon(&[p(0., 0.), p(60., 0.), p(60., 60.), p(0., 60.)]);
        let square = square.expect("a square");
        let wanted = Wanted {
            count,
            ..Wanted::default()
        };
        let mut s =
            solve(&Model::hard(square, 568.65), &wanted, &Watch::quiet()).expect("a square");
        s.notes = vec!["drawn by hand".into()];
        s
    }
}
