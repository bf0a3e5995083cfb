//! Closed loops of pieces, and what can be measured on them.

use super::piece::Piece;
use super::point::{Box2, Point, pt};
use std::f64::consts::{PI, TAU};

/// A closed loop of pieces, each starting where the one before ends.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Loop {
    /// The pieces in order.
    pub pieces: Vec<Piece>,
}

/// A region of the plane: the material lies to the left of every loop
/// (outer loops counter-clockwise, holes clockwise).
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Outline {
    /// Outer loops and holes.
    pub loops: Vec<Loop>,
}

/// A place where two pieces meet at an angle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Corner {
    /// Where.
    pub at: Point,
    /// Interior angle, radians, in (0, 2π).
    pub angle: f64,
    /// Direction of the outgoing edge, radians; the interior is counter-clockwise of it.
    pub direction: f64,
    /// Curvatures of the incoming and the outgoing edge.
    pub curvatures: [f64; 2],
    /// Loop, and index in it of the piece that starts here.
    pub place: (usize, usize),
}

impl Outline {
    /// A polygon from its vertices in order, either way round.
    pub fn polygon(vertices: &[Point]) -> Self {
        let n = vertices.len();
        let twice: f64 = (0..n)
            .map(|i| vertices[i].cross(vertices[(i + 1) % n]))
            .sum();
        let mut v = vertices.to_vec();
        if twice < 0.0 {
            v.reverse();
        }
        let pieces = (0..n)
            .map(|i| Piece::Line {
                from: v[i],
                to: v[(i + 1) % n],
            })
            .collect();
        Self {
            loops: vec![Loop { pieces }],
        }
    }

    /// A disc.
    pub fn disc(centre: Point, radius: f64) -> Self {
        Self {
            loops: vec![Loop {
                pieces: vec![Piece::Arc {
                    centre,
                    radius,
                    start: 0.0,
                    sweep: TAU,
                }],
            }],
        }
    }

    /// Box around the outline.
    pub fn bounds(&self) -> Box2 {
        let mut b = Box2::EMPTY;
        for p in self.pieces() {
            let c = p.bounds();
            b.include(c.lo);
            b.include(c.hi);
        }
        b
    }

    /// All pieces of all loops.
    pub fn pieces(&self) -> impl Iterator<Item = &Piece> {
        self.loops.iter().flat_map(|l| l.pieces.iter())
    }

    /// Every joint whose direction turns by more than `tolerance` radians.
    pub fn corners(&self, tolerance: f64) -> Vec<Corner> {
        let mut out = Vec::new();
        for (i, l) in self.loops.iter().enumerate() {
            let n = l.pieces.len();
            for k in 0..n {
                let (before, after) = (&l.pieces[(k + n - 1) % n], &l.pieces[k]);
                let (a, b) = (before.velocity(1.0), after.velocity(0.0));
                let turn = a.cross(b).atan2(a.dot(b));
                if turn.abs() > tolerance {
                    out.push(Corner {
                        at: after.start(),
                        angle: PI - turn,
                        direction: b.y.atan2(b.x),
                        curvatures: [before.curvature(1.0), after.curvature(0.0)],
                        place: (i, k),
                    });
                }
            }
        }
        out
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_square_has_four_right_angles() {
        let q = Outline::polygon(&[pt(0., 0.), pt(1., 0.), pt(1., 1.), pt(0., 1.)]);
        let c = q.corners(1e-9);
        assert_eq!(c.len(), 4);
        assert!(c.iter().all(|c| (c.angle - PI / 2.0).abs() < 1e-15));
    }
}
