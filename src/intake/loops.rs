//! From closed point sequences to an outline: orientation by nesting, pieces by fitting.

use super::Taken;
use super::fit::{self, Trace};
use super::trace::area;
use crate::geometry::{Box2, Loop, Outline, Piece, Point};

/// An outline from closed, non-crossing polygons that run either way round; with `smooth`, curves
/// within that distance of them.
pub(super) fn taken(mut polygons: Vec<Vec<Point>>, smooth: Option<f64>) -> Taken {
    orient(&mut polygons);
    let trace = smooth.map(Trace::points);
    let loops = polygons
        .iter()
        .map(|p| {
            trace
                .and_then(|t| fit::fit(p, &t))
                .unwrap_or_else(|| straight(p))
        })
        .collect();
    Taken {
        outline: Outline { loops },
        notes: Vec::new(),
    }
}

/// A loop of lines and Bézier curves with every length multiplied.
pub(super) fn scaled(whole: &Loop, factor: f64) -> Loop {
    let pieces = whole
        .pieces
        .iter()
        .map(|piece| match piece {
            Piece::Bezier { points } => Piece::Bezier {
                points: points.map(|p| p * factor),
            },
            other => Piece::Line {
                from: other.start() * factor,
                to: other.end() * factor,
            },
        })
        .collect();
    Loop { pieces }
}

/// A closed polygon as a loop of straight edges.
pub(super) fn straight(points: &[Point]) -> Loop {
    let n = points.len();
    let pieces = (0..n)
        .map(|k| Piece::Line {
            from: points[k],
            to: points[(k + 1) % n],
        })
        .collect();
    Loop { pieces }
}

/// Turns every polygon so that what is enclosed an odd number of times lies to the left.
fn orient(polygons: &mut [Vec<Point>]) {
    let boxes: Vec<Box2> = polygons
        .iter()
        .map(|p| {
            let mut b = Box2::EMPTY;
            p.iter().for_each(|&q| b.include(q));
            b
        })
        .collect();
    let around = |k: usize, p: Point| {
        let b = &boxes[k];
        b.lo.x < p.x && p.x < b.hi.x && b.lo.y < p.y && p.y < b.hi.y
    };
    let outer: Vec<bool> = (0..polygons.len())
        .map(|k| {
            let p = polygons[k][0];
            let depth = (0..polygons.len())
                .filter(|&other| other != k && around(other, p) && holds(&polygons[other], p))
                .count();
            depth % 2 == 0
        })
        .collect();
    for (polygon, outer) in polygons.iter_mut().zip(outer) {
        if (area(polygon) > 0.0) != outer {
            polygon.reverse();
        }
    }
}

/// Whether a closed polygon holds a point, by the parity of crossings to its right.
fn holds(polygon: &[Point], p: Point) -> bool {
    let n = polygon.len();
    (0..n)
        .filter(|&k| {
            let (a, b) = (polygon[k], polygon[(k + 1) % n]);
            (a.y > p.y) != (b.y > p.y) && p.x < a.x + (b.x - a.x) * (p.y - a.y) / (b.y - a.y)
        })
        .count()
        % 2
        == 1
}
