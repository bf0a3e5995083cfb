//! Moves, turns, mirrors and scalings.

use super::piece::Piece;
use super::point::{Point, exact_polar, pt};

/// A similarity of the plane: z ↦ f·z + d, or f·z̄ + d with a mirror (complex notation).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Similarity {
    /// Whether it mirrors.
    pub mirror: bool,
    /// Scale and turn, as a complex number.
    pub factor: Point,
    /// Shift, applied last.
    pub shift: Point,
}

impl Similarity {
    /// Leaves everything in place.
    pub const IDENTITY: Self = Self {
        mirror: false,
        factor: pt(1.0, 0.0),
        shift: pt(0.0, 0.0),
    };

    /// Moves by a vector.
    pub fn moved(by: Point) -> Self {
        Self {
            shift: by,
            ..Self::IDENTITY
        }
    }

    /// Turns about `centre` by `angle` radians, counter-clockwise.
    pub fn turned(centre: Point, angle: f64) -> Self {
        Self::about(centre, exact_polar(angle), false)
    }

    /// Mirrors in the line through `point` at `angle` radians from the x axis.
    pub fn mirrored(point: Point, angle: f64) -> Self {
        Self::about(point, exact_polar(2.0 * angle), true)
    }

    /// Scales about `centre` by a positive factor.
    pub fn scaled(centre: Point, factor: f64) -> Self {
        Self::about(centre, pt(factor, 0.0), false)
    }

    fn about(centre: Point, factor: Point, mirror: bool) -> Self {
        let linear = Self {
            mirror,
            factor,
            shift: pt(0.0, 0.0),
        };
        Self {
            shift: centre - linear.apply(centre),
            ..linear
        }
    }

    /// The image of a point.
    pub fn apply(&self, p: Point) -> Point {
        self.linear(p) + self.shift
    }

    /// The image of a vector.
    pub fn linear(&self, v: Point) -> Point {
        (if self.mirror { v.conj() } else { v }).turned(self.factor)
    }

    /// This one first, then `next`.
    pub fn then(&self, next: &Self) -> Self {
        let f = if next.mirror {
            self.factor.conj()
        } else {
            self.factor
        };
        Self {
            mirror: self.mirror != next.mirror,
            factor: f.turned(next.factor),
            shift: next.apply(self.shift),
        }
    }

    /// The factor by which lengths grow.
    pub fn scale(&self) -> f64 {
        self.factor.norm()
    }
}

impl Piece {
    /// The image under a similarity, run through in the same direction.
    pub fn transformed(&self, by: &Similarity) -> Self {
        let (turn, scale) = (by.factor.angle(), by.scale());
        let sign = if by.mirror { -1.0 } else { 1.0 };
        match self {
            Self::Line { from, to } => Self::line(by.apply(*from), by.apply(*to)),
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => Self::arc(
                by.apply(*centre),
                radius * scale,
                turn + sign * start,
                sign * sweep,
            ),
            Self::Ellipse {
                centre,
                half_axes,
                turn: t,
                start,
                sweep,
            } => Self::Ellipse {
                centre: by.apply(*centre),
                half_axes: *half_axes * scale,
                turn: turn + sign * t,
                start: sign * start,
                sweep: sign * sweep,
            },
            Self::Bezier { points } => Self::Bezier {
                points: points.map(|p| by.apply(p)),
            },
            Self::Offset { base, by: d } => Self::Offset {
                base: Box::new(base.transformed(by)),
                by: sign * d * scale,
            },
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn composing_is_applying_one_after_the_other() {
        let a = Similarity::turned(pt(1., 2.), 0.7);
        let b = Similarity::mirrored(pt(-1., 0.5), 0.3);
        let c = Similarity::scaled(pt(2., 2.), 1.5).then(&Similarity::moved(pt(3., 0.)));
        let all = a.then(&b).then(&c).then(&b);
        let p = pt(0.3, -0.8);
        let q = b.apply(c.apply(b.apply(a.apply(p))));
        assert!((all.apply(p) - q).norm() < 1e-14);
        assert!((all.scale() - 1.5).abs() < 1e-15);
    }

    #[test]
    fn pieces_and_points_move_together() {
        let pieces = [
            Piece::arc(pt(1., 0.), 2., 0.4, 3.),
            Piece::Ellipse {
                centre: pt(1., 1.),
                half_axes: pt(2., 1.),
                turn: 0.3,
                start: 0.2,
                sweep: -2.,
            },
            Piece::Offset {
                base: Box::new(Piece::Bezier {
                    points: [pt(0., 0.), pt(1., 1.), pt(2., 1.), pt(3., 0.)],
                }),
                by: 0.2,
            },
        ];
        let s = Similarity::mirrored(pt(0.2, 0.1), 1.1).then(&Similarity::scaled(pt(1., 1.), 0.5));
        for p in pieces {
            let q = p.transformed(&s);
            for t in [0.0, 0.3, 1.0] {
                assert!((q.at(t) - s.apply(p.at(t))).norm() < 1e-14, "{p:?}");
            }
        }
    }

    #[test]
    fn a_right_angle_keeps_edges_upright() {
        let p = Similarity::turned(pt(0., 0.), std::f64::consts::FRAC_PI_2).apply(pt(3., 0.));
        assert_eq!(p, pt(0., 3.));
    }
}
