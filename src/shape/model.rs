//! A document in numbers: what remains when names, units and expressions are gone.

use crate::geometry::Point;
use crate::intake::Reading;
use std::ops::Range;
use std::path::PathBuf;

/// The units of a document.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Scale {
    /// nm, meV, T, electron masses.
    Lab,
    /// Lengths are pure numbers, −Δu = E u.
    Reduced,
}

/// The host of a shape in lab units.
#[derive(Clone, Debug, PartialEq)]
pub struct Host {
    /// Name in the built-in table, if it was given.
    pub name: Option<String>,
    /// Effective mass, electron masses.
    pub mass: f64,
    /// Effective g factor.
    pub g: Option<f64>,
    /// Relative permittivity.
    pub permittivity: Option<f64>,
}

/// What a step does with the outline made so far.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Operation {
    /// Union.
    Add,
    /// Difference.
    Cut,
    /// Intersection.
    Keep,
}

impl Operation {
    /// The key of a step that asks for it.
    pub const fn key(self) -> &'static str {
        match self {
            Self::Add => "add",
            Self::Cut => "cut",
            Self::Keep => "keep",
        }
    }
}

/// One step of an outline.
#[derive(Clone, Debug, PartialEq)]
pub struct Step {
    /// What is done.
    pub operation: Operation,
    /// With which figure.
    pub figure: Figure,
    /// Where the figure is put.
    pub placement: Placement,
    /// The bytes of the word that names the kind.
    pub span: Range<usize>,
}

/// A figure before it is placed. Lengths in nm or pure numbers, angles in degrees.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs)]
pub enum Figure {
    Disc {
        centre: Point,
        radius: f64,
    },
    Ellipse {
        centre: Point,
        half_axes: Point,
    },
    Rectangle {
        corner: Point,
        size: Point,
    },
    Polygon {
        points: Vec<Point>,
    },
    Sector {
        centre: Point,
        radius: f64,
        from: f64,
        to: f64,
    },
    Ring {
        centre: Point,
        inner: f64,
        outer: f64,
    },
    Stadium {
        centre: Point,
        radius: f64,
        straight: f64,
    },
    Track {
        points: Vec<Point>,
        width: f64,
    },
    Picture {
        file: PathBuf,
        reading: Reading,
    },
    Points {
        file: PathBuf,
        smooth: Option<f64>,
    },
}

impl Figure {
    /// The word of the document for it.
    pub const fn word(&self) -> &'static str {
        match self {
            Self::Disc { .. } => "disc",
            Self::Ellipse { .. } => "ellipse",
            Self::Rectangle { .. } => "rectangle",
            Self::Polygon { .. } => "polygon",
            Self::Sector { .. } => "sector",
            Self::Ring { .. } => "ring",
            Self::Stadium { .. } => "stadium",
            Self::Track { .. } => "track",
            Self::Picture { .. } => "picture",
            Self::Points { .. } => "points",
        }
    }
}

/// How a figure is put into the plane: mirrored, then turned, then moved, then repeated.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Placement {
    /// Angle in degrees of the line to mirror at; the line runs through `about`, or the origin.
    pub mirror: Option<f64>,
    /// Degrees counter-clockwise, about `about`, or the middle of the figure.
    pub turn: f64,
    /// The fixed point of `turn` and `mirror`.
    pub about: Option<Point>,
    /// Shift.
    pub shift: Point,
    /// Copies.
    pub repeat: Option<Repeat>,
}

/// Copies of a figure: copy k = 0 … count − 1 is turned by k·turn about `about`, then moved by
/// k·shift.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Repeat {
    /// Number of copies, the first included.
    pub count: usize,
    /// Degrees from copy to copy.
    pub turn: f64,
    /// The fixed point of the turn; the origin unless given.
    pub about: Point,
    /// Shift from copy to copy.
    pub shift: Point,
}

/// What is done to the edge of the whole outline: rounding first, as the mask is drawn, then
/// growing, as the process prints it. A printed corner has the radius `round + grow` outside and
/// `round − grow` inside.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Finish {
    /// Radius given to every corner, outer and inner; 0 leaves them sharp.
    pub round: f64,
    /// How far the edge moves outwards; negative inwards.
    pub grow: f64,
}

/// What is asked of the solver.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Solve {
    /// Number of levels.
    pub modes: usize,
    /// Relative accuracy of a level.
    pub accuracy: f64,
    /// Cell size, where the user insists.
    pub cell: Option<f64>,
    /// Spline degree, where the user insists.
    pub degree: Option<usize>,
}

impl Default for Solve {
    fn default() -> Self {
        Self {
            modes: 20,
            accuracy: 1e-6,
            cell: None,
            degree: None,
        }
    }
}
