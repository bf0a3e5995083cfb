//! Smooth pieces of a boundary, each a curve over t in [0, 1].

use super::point::{Box2, Point, pt};
use std::f64::consts::{PI, TAU};

/// A smooth, regular piece of a boundary, run through by t from 0 to 1.
#[derive(Clone, Debug, PartialEq)]
pub enum Piece {
    /// A straight edge.
    Line {
        /// Start.
        from: Point,
        /// End.
        to: Point,
    },
    /// A circular arc; `sweep` in radians, positive counter-clockwise.
    Arc {
        /// Centre of the circle.
        centre: Point,
        /// Radius, positive.
        radius: f64,
        /// Angle of the start, radians.
        start: f64,
        /// Signed angle run through.
        sweep: f64,
    },
    /// An arc of an ellipse: centre + R(turn) (a cos φ, b sin φ), φ from `start` over `sweep`.
    Ellipse {
        /// Centre.
        centre: Point,
        /// Half axes a, b, both positive.
        half_axes: Point,
        /// Angle of the first axis, radians.
        turn: f64,
        /// Parameter of the start, radians.
        start: f64,
        /// Signed parameter range.
        sweep: f64,
    },
}

impl Piece {
    /// The point at t.
    pub fn at(&self, t: f64) -> Point {
        match *self {
            Self::Line { from, to } => {
                if t <= 0.5 {
                    from + (to - from) * t
                } else {
                    to + (from - to) * (1.0 - t)
                }
            }
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => centre + Point::polar(start + t * sweep) * radius,
            Self::Ellipse {
                centre,
                half_axes,
                turn,
                start,
                sweep,
            } => {
                let e = Point::polar(start + t * sweep);
                centre + rotate(pt(half_axes.x * e.x, half_axes.y * e.y), turn)
            }
        }
    }

    /// Derivative of the point by t.
    pub fn velocity(&self, t: f64) -> Point {
        match *self {
            Self::Line { from, to } => to - from,
            Self::Arc {
                radius,
                start,
                sweep,
                ..
            } => Point::polar(start + t * sweep).left() * (radius * sweep),
            Self::Ellipse {
                half_axes,
                turn,
                start,
                sweep,
                ..
            } => {
                let e = Point::polar(start + t * sweep);
                rotate(pt(-half_axes.x * e.y, half_axes.y * e.x), turn) * sweep
            }
        }
    }

    /// The values of t strictly between 0 and 1 where the coordinate `axis` is stationary,
    /// ascending: between them the coordinate is monotone.
    pub fn turning_points(&self, axis: usize) -> Vec<f64> {
        match *self {
            Self::Line { .. } => Vec::new(),
            Self::Arc { start, sweep, .. } => {
                let extreme = if axis == 0 { 0.0 } else { PI / 2.0 };
                periodic_hits(extreme, PI, start, sweep)
            }
            Self::Ellipse {
                half_axes: h,
                turn,
                start,
                sweep,
                ..
            } => {
                let (s, c) = turn.sin_cos();
                let extreme = if axis == 0 {
                    (-h.y * s).atan2(h.x * c)
                } else {
                    (h.y * c).atan2(h.x * s)
                };
                periodic_hits(extreme, PI, start, sweep)
            }
        }
    }

    /// Start of the piece.
    pub fn start(&self) -> Point {
        self.at(0.0)
    }
    /// End of the piece.
    pub fn end(&self) -> Point {
        self.at(1.0)
    }

    /// Signed curvature at t, positive where the piece turns left.
    pub fn curvature(&self, t: f64) -> f64 {
        match *self {
            Self::Line { .. } => 0.0,
            Self::Arc { radius, sweep, .. } => sweep.signum() / radius,
            Self::Ellipse {
                half_axes: h,
                start,
                sweep,
                ..
            } => {
                let e = Point::polar(start + t * sweep);
                sweep.signum() * h.x * h.y / (h.x * e.y).hypot(h.y * e.x).powi(3)
            }
        }
    }

    /// Box around the piece.
    pub fn bounds(&self) -> Box2 {
        let mut b = Box2::EMPTY;
        b.include(self.start());
        b.include(self.end());
        for axis in 0..2 {
            for t in self.turning_points(axis) {
                b.include(self.at(t));
            }
        }
        b
    }
}

fn rotate(p: Point, angle: f64) -> Point {
    let (s, c) = angle.sin_cos();
    pt(c * p.x - s * p.y, s * p.x + c * p.y)
}

/// Parameters t in (0, 1) at which `start + t sweep` equals `value` modulo `period`.
fn periodic_hits(value: f64, period: f64, start: f64, sweep: f64) -> Vec<f64> {
    let (lo, hi) = if sweep > 0.0 {
        (start, start + sweep)
    } else {
        (start + sweep, start)
    };
    let mut k = ((lo - value) / period).floor();
    let mut out = Vec::new();
    while value + k * period <= hi {
        let t = (value + k * period - start) / sweep;
        if t > 1e-12 && t < 1.0 - 1e-12 {
            out.push(t);
        }
        k += 1.0;
    }
    out.sort_by(f64::total_cmp);
    debug_assert!(out.len() as f64 <= sweep.abs() / period + TAU);
    out
}
