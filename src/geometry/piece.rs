//! Smooth pieces of a boundary, each a curve over t in [0, 1].

use super::bezier;
use super::point::{Box2, Point, exact_polar, pt};
use std::f64::consts::{FRAC_PI_2, PI};

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
    /// A cubic Bézier curve.
    Bezier {
        /// End point, two control points, end point.
        points: [Point; 4],
    },
    /// The parallel curve of `base`, to its left by `by` (to its right if negative).
    Offset {
        /// The curve it runs along, neither line nor arc nor itself an offset.
        base: Box<Piece>,
        /// Distance to the left of the base.
        by: f64,
    },
}

impl Piece {
    /// A straight edge.
    pub fn line(from: Point, to: Point) -> Self {
        Self::Line { from, to }
    }

    /// A circular arc; angles in radians.
    pub fn arc(centre: Point, radius: f64, start: f64, sweep: f64) -> Self {
        Self::Arc {
            centre,
            radius,
            start,
            sweep,
        }
    }

    /// The point at t.
    pub fn at(&self, t: f64) -> Point {
        match self {
            Self::Line { from, to } => {
                if t <= 0.5 {
                    *from + (*to - *from) * t
                } else {
                    *to + (*from - *to) * (1.0 - t)
                }
            }
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => *centre + Point::polar(start + t * sweep) * *radius,
            Self::Ellipse {
                centre,
                half_axes,
                turn,
                start,
                sweep,
            } => {
                let e = Point::polar(start + t * sweep);
                *centre + pt(half_axes.x * e.x, half_axes.y * e.y).turned(exact_polar(*turn))
            }
            Self::Bezier { points } => bezier::at(points, t),
            Self::Offset { base, by } => base.at(t) + base.tangent(t).left() * *by,
        }
    }

    /// Derivative of the point by t.
    pub fn velocity(&self, t: f64) -> Point {
        match self {
            Self::Line { from, to } => *to - *from,
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
                pt(-half_axes.x * e.y, half_axes.y * e.x).turned(exact_polar(*turn)) * *sweep
            }
            Self::Bezier { points } => bezier::velocity(points, t),
            Self::Offset { base, by } => base.velocity(t) * (1.0 - by * base.curvature(t)),
        }
    }

    /// Unit vector of the direction of travel at t; for an offset that of its base.
    ///
    /// It exists also where the velocity of a Bézier curve vanishes at an end.
    pub fn tangent(&self, t: f64) -> Point {
        match self {
            Self::Bezier { points } => bezier::tangent(points, t),
            Self::Offset { base, .. } => base.tangent(t),
            Self::Arc { start, sweep, .. } => {
                Point::polar(start + t * sweep).left() * sweep.signum()
            }
            _ => self.velocity(t).unit(),
        }
    }

    /// The values of t strictly between 0 and 1 where the coordinate `axis` is stationary,
    /// ascending: between them the coordinate is monotone.
    pub fn turning_points(&self, axis: usize) -> Vec<f64> {
        match self {
            Self::Line { .. } => Vec::new(),
            Self::Arc { start, sweep, .. } => {
                let extreme = if axis == 0 { 0.0 } else { FRAC_PI_2 };
                periodic_hits(extreme, PI, *start, *sweep)
            }
            Self::Ellipse {
                half_axes: h,
                turn,
                start,
                sweep,
                ..
            } => {
                let e = exact_polar(*turn);
                let extreme = if axis == 0 {
                    (-h.y * e.y).atan2(h.x * e.x)
                } else {
                    (h.y * e.x).atan2(h.x * e.y)
                };
                periodic_hits(extreme, PI, *start, *sweep)
            }
            Self::Bezier { points } => bezier::turning_points(points, axis),
            Self::Offset { base, by } => {
                let mut out = base.turning_points(axis);
                let folds = base.folds(*by);
                if !folds.is_empty() {
                    out.extend(folds);
                    out.sort_by(f64::total_cmp);
                    out.dedup_by(|a, b| (*a - *b).abs() < 1e-12);
                }
                out
            }
        }
    }

    /// Where the curve parallel to this one, `by` to the left, turns back: the t in (0, 1) at
    /// which 1 − `by`·curvature changes its sign, ascending.
    pub fn folds(&self, by: f64) -> Vec<f64> {
        if matches!(self, Self::Line { .. } | Self::Arc { .. }) || by == 0.0 {
            return Vec::new();
        }
        let speed = |t: f64| 1.0 - by * self.curvature(t);
        let mut grid: Vec<f64> = (0..=48).map(|i| f64::from(i) / 48.0).collect();
        if let Self::Ellipse { start, sweep, .. } = self {
            // The curvature of an ellipse is monotone between the ends of its axes.
            grid.extend(periodic_hits(0.0, FRAC_PI_2, *start, *sweep));
            grid.sort_by(f64::total_cmp);
        }
        let mut out = Vec::new();
        for w in grid.windows(2) {
            let (mut a, mut b) = (w[0], w[1]);
            let rising = speed(b) > 0.0;
            if (speed(a) > 0.0) == rising {
                continue;
            }
            for _ in 0..60 {
                let m = 0.5 * (a + b);
                if (speed(m) > 0.0) == rising {
                    b = m;
                } else {
                    a = m;
                }
            }
            out.push(0.5 * (a + b));
        }
        out.retain(|t| *t > 1e-12 && *t < 1.0 - 1e-12);
        out
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
        match self {
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
            Self::Bezier { points } => bezier::curvature(points, t),
            Self::Offset { base, by } => {
                let k = base.curvature(t);
                k / (1.0 - by * k).abs()
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

/// Parameters t in (0, 1) at which `start + t sweep` equals `value` modulo `period`, ascending.
pub(super) fn periodic_hits(value: f64, period: f64, start: f64, sweep: f64) -> Vec<f64> {
    let lo = start.min(start + sweep);
    let first = ((lo - value) / period).floor();
    // A piece never runs round more than a few times; the bound also ends the loop on NaN.
    let count = (sweep.abs() / period).min(64.0) as usize + 2;
    let mut out: Vec<f64> = (0..count)
        .map(|k| (value + (first + k as f64) * period - start) / sweep)
        .filter(|t| *t > 1e-12 && *t < 1.0 - 1e-12)
        .collect();
    out.sort_by(f64::total_cmp);
    out
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    /// One of every kind, none of them symmetric.
    pub fn zoo() -> Vec<Piece> {
        let bezier = Piece::Bezier {
            points: [pt(0., 0.), pt(1., 2.), pt(3., -1.), pt(4., 1.)],
        };
        let ellipse = Piece::Ellipse {
            centre: pt(1., 2.),
            half_axes: pt(3., 1.),
            turn: 0.4,
            start: -1.0,
            sweep: 4.5,
        };
        vec![
            Piece::line(pt(0.3, -1.), pt(2., 4.)),
            Piece::arc(pt(1., 1.), 2.5, 0.3, -4.0),
            Piece::Offset {
                base: Box::new(bezier.clone()),
                by: -0.15,
            },
            Piece::Offset {
                base: Box::new(ellipse.clone()),
                by: 0.2,
            },
            bezier,
            ellipse,
        ]
    }

    #[test]
    fn velocity_and_curvature_are_the_derivatives() {
        // Central differences with step h err by h² and by roundoff / h.
        let h = 1e-5;
        for p in zoo() {
            for k in 1..10 {
                let t = f64::from(k) / 10.0;
                let v = (p.at(t + h) - p.at(t - h)) * (0.5 / h);
                assert!((v - p.velocity(t)).norm() < 1e-7 * v.norm(), "{p:?} at {t}");
                let (a, b) = (p.velocity(t - h), p.velocity(t + h));
                let turn = a.cross(b).atan2(a.dot(b));
                let k = turn / (2.0 * h * v.norm());
                assert!((k - p.curvature(t)).abs() < 1e-6, "{p:?} at {t}");
            }
        }
    }

    #[test]
    fn the_box_holds_the_curve_and_touches_it() {
        for p in zoo() {
            let b = p.bounds();
            let mut seen = Box2::EMPTY;
            for k in 0..=10_000 {
                seen.include(p.at(f64::from(k) / 1e4));
            }
            // 10⁴ samples miss an extreme by at most (speed/2·10⁻⁴)² × curvature.
            for (x, y) in [
                (b.lo.x, seen.lo.x),
                (b.lo.y, seen.lo.y),
                (b.hi.x, seen.hi.x),
                (b.hi.y, seen.hi.y),
            ] {
                assert!((x - y).abs() < 1e-6, "{p:?}");
            }
        }
    }
}
