//! A smooth outline from a traced one: straight stretches become lines, curved ones cubic Bézier
//! curves that meet without a bend, true corners stay corners.
//!
//! The corners are found first, then the straight runs between them; what is left is fitted after
//! P. J. Schneider, "An Algorithm for Automatically Fitting Digitized Curves", Graphics Gems
//! (1990), with two changes: tangents at the joints come from local parabolas rather than from
//! neighbouring points, and a stretch is split where it has turned half its way rather than where
//! it errs most as long as it turns by more than a third of a circle.

mod bezier;
mod corners;
mod knots;
mod runs;
mod samples;

use crate::geometry::{Loop, Piece, Point};
use knots::Knot;
use samples::Samples;

/// What is known about a trace, all in its unit of length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Trace {
    /// How far the outline may keep from the trace.
    pub(super) tolerance: f64,
    /// Distance from a corner within which the trace is blurred.
    pub(super) blur: f64,
    /// Length on each side of a place over which its tangents are judged.
    pub(super) window: f64,
    /// Least bend of a corner, radians.
    pub(super) bend: f64,
    /// Least length of a straight run.
    pub(super) run: f64,
    /// Least length of a straight run between two curves.
    pub(super) flat: f64,
}

impl Trace {
    /// A mask whose edge pixels carry grey levels, traced in pixels. The tangents of such traces
    /// are good to about 0.05 (measured on discs and polygons), a seventh of the least bend.
    pub(super) const GREY: Self = Self {
        tolerance: 0.1,
        blur: 2.0,
        window: 5.0,
        bend: 0.35,
        run: 8.0,
        flat: 24.0,
    };

    /// A mask of black and white only, traced in pixels: the edge wavers by a third of a pixel,
    /// and where a large arc runs along an axis it is flat for some thirty pixels.
    pub(super) const STEPS: Self = Self {
        tolerance: 0.9,
        blur: 2.0,
        window: 16.0,
        bend: 0.5,
        run: 30.0,
        flat: 30.0,
    };

    /// Points that waver by `tolerance` about a smooth edge.
    pub(super) fn points(tolerance: f64) -> Self {
        Self {
            tolerance,
            blur: tolerance,
            window: 20.0 * tolerance,
            bend: 0.5,
            run: 40.0 * tolerance,
            flat: 120.0 * tolerance,
        }
    }

    /// The same with another tolerance, where that is larger.
    pub(super) fn loosened(self, tolerance: f64) -> Self {
        let factor = tolerance / self.tolerance;
        if factor <= 1.0 {
            return Self { tolerance, ..self };
        }
        let stretch = factor.sqrt();
        Self {
            tolerance,
            window: self.window * stretch,
            run: self.run * stretch,
            flat: self.flat * stretch,
            ..self
        }
    }

    /// The same for a loop so short that the windows of both sides would meet at its back.
    fn shrunk(self, length: f64) -> Self {
        let factor = (length / (5.0 * (self.window + self.blur))).min(1.0);
        Self {
            window: self.window * factor,
            blur: self.blur * factor,
            run: self.run * factor,
            flat: self.flat * factor,
            ..self
        }
    }
}

/// A closed trace as a loop of lines and Bézier curves within the tolerance of `trace`, run
/// through in the same direction. Traces too short to judge stay polygons.
pub(super) fn fit(points: &[Point], trace: &Trace) -> Option<Loop> {
    let samples = Samples::new(points, trace.window / 12.0)?;
    let trace = &trace.shrunk(samples.length());
    let corners = corners::find(&samples, trace);
    let knots = knots::place(&samples, &corners, trace);
    let mut pieces = Vec::new();
    for k in 0..knots.len() {
        let (from, to) = (&knots[k], &knots[(k + 1) % knots.len()]);
        if from.straight {
            pieces.push(Piece::Line {
                from: from.at,
                to: to.at,
            });
        } else {
            curve(&samples, from, to, trace, &mut pieces);
        }
    }
    (pieces.len() >= 2).then_some(Loop { pieces })
}

/// Bézier curves from one knot to the next.
fn curve(samples: &Samples, from: &Knot, to: &Knot, trace: &Trace, out: &mut Vec<Piece>) {
    // A loop with a single knot comes back to it a whole lap later.
    let count = (to.first - from.last).rem_euclid(samples.len() as i64);
    let points = samples.between(from.last, from.last + count);
    let ends = bezier::Ends {
        from: from.at,
        leaving: from.leaving,
        to: to.at,
        arriving: to.arriving,
    };
    bezier::fit(&points, ends, trace, 0, &mut |b| {
        out.push(Piece::Bezier { points: b })
    });
}
