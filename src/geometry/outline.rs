//! Closed loops of pieces, and what can be measured on them.

use super::piece::Piece;
use super::point::{Box2, Point};
use std::f64::consts::PI;

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
                let turn = turn_between(before, after);
                let b = after.tangent(0.0);
                if turn.abs() > tolerance {
                    out.push(Corner {
                        at: after.start(),
                        angle: PI - turn,
                        direction: b.angle(),
                        curvatures: [before.curvature(1.0), after.curvature(0.0)],
                        place: (i, k),
                    });
                }
            }
        }
        out
    }
}

/// Angle by which the direction turns from the end of one piece to the start of the next,
/// radians in [−π, π], positive to the left.
///
/// At a cusp the two half turns differ by which side is the thin one; there the curvatures tell.
pub(super) fn turn_between(before: &Piece, after: &Piece) -> f64 {
    let (a, b) = (before.tangent(1.0), after.tangent(0.0));
    let turn = a.cross(b).atan2(a.dot(b));
    if turn.abs() < PI - 1e-9 {
        return turn;
    }
    // Seen from the tip, the way back bends by −κ; if it lies to the left, the tip is material.
    if -before.curvature(1.0) >= after.curvature(0.0) {
        PI
    } else {
        -PI
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    #[test]
    fn a_square_has_four_right_angles() {
        let q = Outline::rectangle(pt(0., 0.), pt(1., 1.)).unwrap();
        let c = q.corners(1e-9);
        assert_eq!(c.len(), 4);
        assert!(c.iter().all(|c| (c.angle - PI / 2.0).abs() < 1e-15));
    }
}
