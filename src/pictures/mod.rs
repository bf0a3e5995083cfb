//! Pictures of modes, fit for a report: PNG maps and contact sheets.
//!
//! Enters: [`Modes`], levels, a caption. Leaves: a [`Picture`] that can be written.
//! This room knows no screens and no documents.
//!
//! [`Modes`]: crate::modes::Modes

mod encode;
mod field;
mod furniture;
mod map;
mod nodes;
mod oklab;
mod place;
mod scale;
mod sheet;
mod text;
mod theme;
mod ticks;

pub use encode::Picture;
pub(crate) use encode::write_whole;
pub use map::map;
pub use sheet::sheet;
pub use theme::Theme;

use crate::geometry::{Box2, Outline};
use std::io;
use std::path::PathBuf;
use tiny_skia::{Color, Pixmap};

/// The quantity shown.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Show {
    /// |ψ|².
    #[default]
    Density,
    /// ψ with its sign.
    Wave,
}

impl Show {
    /// The name on the command line and in files.
    pub fn name(self) -> &'static str {
        match self {
            Self::Density => "density",
            Self::Wave => "wave",
        }
    }
}

/// Whether nodal lines are drawn.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Nodes {
    /// Thin lines where ψ changes sign.
    #[default]
    Drawn,
    /// None.
    Left,
}

/// How a picture is to look.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    /// Width in pixels, within [`Look::WIDTHS`].
    pub width: u32,
    /// Light or dark.
    pub theme: Theme,
    /// Density or wave.
    pub show: Show,
    /// Nodal lines or not.
    pub nodes: Nodes,
}

impl Look {
    /// The widths that make a picture: below, nothing is legible; above, a page takes gigabytes.
    pub const WIDTHS: std::ops::RangeInclusive<u32> = 200..=12_000;
}

impl Default for Look {
    fn default() -> Self {
        Self {
            width: 1200,
            theme: Theme::default(),
            show: Show::default(),
            nodes: Nodes::default(),
        }
    }
}

/// Names of the units, empty for pure numbers.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Units {
    /// Of energies.
    pub energy: String,
    /// Of lengths.
    pub length: String,
}

/// What is written around a picture.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Caption {
    /// The shape's title.
    pub title: String,
    /// Units.
    pub units: Units,
    /// What was modelled, in a few words: "one electron, hard wall, m = 0.067".
    pub model: String,
}

/// Why there is no picture.
#[derive(Debug, thiserror::Error)]
pub enum PictureError {
    /// The spectrum has no such mode.
    #[error("there is no mode {mode}: {count} were found, so take one from 1 to {count}")]
    NoSuchMode {
        /// Counted from 1.
        mode: usize,
        /// How many there are.
        count: usize,
    },
    /// The width is out of range.
    #[error("a picture {0} pixels wide cannot be drawn: take a width from 200 to 12000")]
    Width(u32),
    /// The outline has no width or height.
    #[error("the outline has no extent, so there is nothing to draw")]
    Empty,
    /// The encoder failed.
    #[error("the picture cannot be encoded")]
    Encode(#[from] png::EncodingError),
    /// The disk refused.
    #[error("{}: cannot be written: {cause}", path.display())]
    Write {
        /// Where to.
        path: PathBuf,
        /// What the system said.
        cause: io::Error,
    },
}

/// An opaque page.
fn new_canvas(width: u32, height: f64, colour: [u8; 3]) -> Result<Pixmap, PictureError> {
    let refuse = || PictureError::Width(width);
    if !Look::WIDTHS.contains(&width) || !(1.0..=60_000.0).contains(&height) {
        return Err(refuse());
    }
    let mut page = Pixmap::new(width, height as u32).ok_or_else(refuse)?;
    page.fill(Color::from_rgba8(colour[0], colour[1], colour[2], 255));
    Ok(page)
}

/// The box of an outline that can be drawn.
fn extent(outline: &Outline) -> Result<Box2, PictureError> {
    let bounds = outline.bounds();
    let size = bounds.size();
    let drawable = |side: f64| side.is_finite() && side > 0.0;
    if drawable(size.x) && drawable(size.y) {
        Ok(bounds)
    } else {
        Err(PictureError::Empty)
    }
}

/// The texts every file carries.
fn standing_text(caption: &Caption) -> Vec<(&'static str, String)> {
    let mut all = vec![
        ("Title", caption.title.clone()),
        (
            "Software",
            concat!("dotwright ", env!("CARGO_PKG_VERSION")).to_owned(),
        ),
    ];
    if !caption.model.is_empty() {
        all.push(("Comment", caption.model.clone()));
    }
    all
}

#[cfg(test)]
mod example {
    //! The modes of a box, for the tests of this room.
    use crate::geometry::{Outline, Point};
    use crate::modes::Modes;
    use crate::progress::Watch;
    use crate::spectrum::{Model, Wanted, solve};

    /// The lowest four modes of a box 3 by 2 with a corner at (1, 1): by half waves along x and y
    /// they are 11, 21, 12, 31.
    pub fn box_modes() -> Modes {
        let p = |x, y| Point { x, y };
        let outline =
            Outline::polygon(&[p(1., 1.), p(4., 1.), p(4., 3.), p(1., 3.)]).expect("a box");
        let wanted = Wanted {
            count: 4,
            ..Wanted::default()
        };
        let solved = solve(&Model::hard(outline.clone(), 1.0), &wanted, &Watch::quiet());
        solved.expect("a box can be solved").modes
    }
}
