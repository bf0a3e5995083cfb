//! From closed point sequences to an outline: orientation by nesting, pieces by fitting.

use super::Taken;
use super::crossing::crossing;
use super::fit::{self, Trace};
use super::trace::area;
use crate::geometry::{Box2, GeometryError, Loop, Outline, Piece, Point};

/// Crossings of fitted loops that are looked for one by one before fitting is given up.
const MOST_ROUNDS: usize = 50;
/// Chords a curve is replaced by to see whether it crosses another.
const CHORDS: usize = 16;

/// An outline from closed, non-crossing polygons that run either way round; with `smooth`, curves
/// within that distance of them.
pub(super) fn taken(mut polygons: Vec<Vec<Point>>, smooth: Option<f64>) -> Taken {
    orient(&mut polygons);
    match smooth {
        Some(tolerance) => fitted(&polygons, &Trace::points(tolerance)),
        None => Taken {
            outline: Outline {
                loops: polygons.iter().map(|p| straight(p)).collect(),
            },
            notes: Vec::new(),
        },
    }
}

/// The outline fitted to closed, non-crossing polygons. A loop that is too short to fit, or would
/// cross itself or another one when fitted, stays as it is.
pub(super) fn fitted(polygons: &[Vec<Point>], trace: &Trace) -> Taken {
    let mut loops: Vec<Option<Loop>> = polygons
        .iter()
        .map(|p| fit::fit(p, trace).filter(|l| alike(area(&chords(l)), area(p))))
        .collect();
    let mut kept = 0;
    for round in 0.. {
        let mut crossed = at_fault(&loops, polygons);
        if round >= MOST_ROUNDS && !crossed.is_empty() {
            crossed = (0..polygons.len()).collect();
        }
        let before = kept;
        for k in crossed {
            kept += usize::from(loops[k].take().is_some());
        }
        if kept == before {
            break;
        }
    }
    let notes = (kept > 0)
        .then(|| format!("{kept} loop(s) stay polygons as traced: smoothed, they would cross"));
    let loops = loops
        .into_iter()
        .zip(polygons)
        .map(|(l, p)| l.unwrap_or_else(|| straight(p)))
        .collect();
    Taken {
        outline: Outline { loops },
        notes: notes.into_iter().collect(),
    }
}

/// The fitted loops that have to do with a crossing, if there is one: by chords, which is quick,
/// and then exactly. Traced polygons may touch where two pixels meet at a corner; that is no
/// fault of the fit.
fn at_fault(loops: &[Option<Loop>], polygons: &[Vec<Point>]) -> Vec<usize> {
    let drawn: Vec<Vec<Point>> = loops
        .iter()
        .zip(polygons)
        .map(|(l, p)| l.as_ref().map_or_else(|| p.clone(), chords))
        .collect();
    let is_fitted = |k: &usize| loops[*k].is_some();
    if let Some(found) = crossing(&drawn) {
        return found
            .edges
            .into_iter()
            .map(|e| owner(&drawn, e))
            .filter(is_fitted)
            .collect();
    }
    let outline = Outline {
        loops: loops
            .iter()
            .zip(polygons)
            .map(|(l, p)| l.clone().unwrap_or_else(|| straight(p)))
            .collect(),
    };
    let Err(GeometryError::CrossesItself { at }) = outline.check(0.0) else {
        return Vec::new();
    };
    let distance = |k: usize| {
        let pieces = outline.loops[k].pieces.iter();
        pieces
            .map(|p| p.nearest(at).1)
            .fold(f64::INFINITY, f64::min)
    };
    (0..loops.len())
        .filter(is_fitted)
        .map(|k| (distance(k), k))
        .min_by(|a, b| a.0.total_cmp(&b.0))
        .map(|n| n.1)
        .into_iter()
        .collect()
}

/// Whether a fitted loop still encloses what it did, give or take a half.
fn alike(fitted: f64, traced: f64) -> bool {
    (fitted / traced - 1.0).abs() < 0.5
}

/// A loop as a polygon.
fn chords(whole: &Loop) -> Vec<Point> {
    let mut out = Vec::new();
    for piece in &whole.pieces {
        let n = if matches!(piece, Piece::Line { .. }) {
            1
        } else {
            CHORDS
        };
        out.extend((0..n).map(|k| piece.at(k as f64 / n as f64)));
    }
    out
}

/// The polygon an edge belongs to, edges being counted through all of them.
fn owner(polygons: &[Vec<Point>], edge: usize) -> usize {
    let mut first = 0;
    polygons
        .iter()
        .position(|p| {
            first += p.len();
            edge < first
        })
        .unwrap_or(0)
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
