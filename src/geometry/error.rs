//! What can be wrong with an outline.

use super::point::Point;
use thiserror::Error;

/// A reason why a shape cannot be made. Lengths are in the units of the shape.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum GeometryError {
    /// A size that is negative, zero or not a number.
    #[error("{what} is {value}; it must be a positive number")]
    NotPositive {
        /// Which size.
        what: &'static str,
        /// What was given.
        value: f64,
    },
    /// A coordinate or angle that is not a number.
    #[error("{what} is not a finite number")]
    NotFinite {
        /// Which quantity.
        what: String,
    },
    /// Sizes that contradict each other.
    #[error("{0}")]
    Sizes(String),
    /// Too few points for a closed line.
    #[error("{given} points make no outline; at least {needed} different ones are needed")]
    TooFewPoints {
        /// How many there are.
        given: usize,
        /// How many would do.
        needed: usize,
    },
    /// Two neighbouring vertices in the same place.
    #[error("points {first} and {second} lie in the same place, ({}, {})", at.x, at.y)]
    DuplicatePoints {
        /// Number of the first, counted from 1.
        first: usize,
        /// Number of the second.
        second: usize,
        /// Where.
        at: Point,
    },
    /// Two edges of a polygon cross.
    #[error(
        "the edge from point {first} to the next crosses the edge from point {second} to the next near ({:.6}, {:.6}); order the points along the edge of the shape",
        at.x, at.y
    )]
    EdgesCross {
        /// Number of the point where the first edge starts, counted from 1.
        first: usize,
        /// The same of the second edge.
        second: usize,
        /// Where they cross.
        at: Point,
    },
    /// A boundary that crosses itself.
    #[error("the boundary crosses itself near ({:.6}, {:.6})", at.x, at.y)]
    CrossesItself {
        /// Where.
        at: Point,
    },
    /// A boundary that is not closed.
    #[error("the boundary is open: it ends at ({:.6}, {:.6}) and goes on from ({:.6}, {:.6})", from.x, from.y, to.x, to.y)]
    Open {
        /// Where a piece ends.
        from: Point,
        /// Where the next one starts.
        to: Point,
    },
    /// Nothing is enclosed.
    #[error("the outline encloses no area")]
    NoArea,
    /// A step left nothing over.
    #[error("{step} leaves nothing: {reason}")]
    NothingLeft {
        /// Which step.
        step: &'static str,
        /// Why.
        reason: String,
    },
    /// A part too thin to be meant.
    #[error("the outline is only {width:.3e} wide near ({:.6}, {:.6}), a sliver", at.x, at.y)]
    Sliver {
        /// Width there.
        width: f64,
        /// Where.
        at: Point,
    },
    /// A fillet that has no room.
    #[error(
        "the corner at ({:.6}, {:.6}) has no room for a radius of {radius}; the largest that fits is {largest:.6}",
        at.x, at.y
    )]
    NoRoomToRound {
        /// The corner.
        at: Point,
        /// The radius asked for.
        radius: f64,
        /// The largest radius with which every corner fits.
        largest: f64,
    },
    /// The overlay could not be resolved.
    #[error("the boundaries near ({:.6}, {:.6}) lie too close to tell apart; move one of them a little", at.x, at.y)]
    Unresolved {
        /// Where.
        at: Point,
    },
}

/// Something a step did that its author may not have meant.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Remark {
    /// A cut that met no material.
    CutMissed,
    /// An addition that lies wholly inside what was there.
    AddedInside,
    /// An addition that touches nothing that was there: the shape has one part more.
    AddedApart,
    /// A keep that removed nothing.
    KeptAll,
}

impl std::fmt::Display for Remark {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(match self {
            Self::CutMissed => "the cut lies outside the outline and changes nothing",
            Self::AddedInside => "the added part lies inside the outline and changes nothing",
            Self::AddedApart => "the added part does not touch the rest",
            Self::KeptAll => "the part kept holds the whole outline and changes nothing",
        })
    }
}
