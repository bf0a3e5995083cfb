//! Cleaning a closed run of pieces: artefacts out, what belongs together joined.

use super::outline::Loop;
use super::piece::Piece;
use super::point::Point;
use std::f64::consts::TAU;

/// Shorter pieces than this share of the size are artefacts of the arithmetic.
const ARTEFACT: f64 = 1e-8;
/// Loops thinner than this share of the size are artefacts as well.
const THIN: f64 = 1e-9;
/// What counts as the same place or radius.
const SAME: f64 = 2e-12;

/// A clean loop from pieces that follow each other; `None` if nothing worth keeping is enclosed.
pub(super) fn tidy(pieces: Vec<Piece>, size: f64) -> Option<Loop> {
    let mut pieces = pieces;
    drop_artefacts(&mut pieces, ARTEFACT * size);
    join_alike(&mut pieces, SAME * size);
    meet_exactly(&mut pieces);
    let centre = pieces.first()?.start();
    let area: f64 = pieces.iter().map(|p| p.area_about(centre)).sum();
    let length: f64 = pieces.iter().map(Piece::length).sum();
    (2.0 * area.abs() > THIN * size * length).then_some(Loop { pieces })
}

fn drop_artefacts(pieces: &mut Vec<Piece>, short: f64) {
    let mut k = 0;
    while k < pieces.len() {
        let p = &pieces[k];
        let extent = (p.at(0.5) - p.start()).norm() + (p.end() - p.start()).norm();
        if extent >= 2.0 * short || p.length() >= short {
            k += 1;
            continue;
        }
        let (from, to) = (p.start(), p.end());
        pieces.remove(k);
        let n = pieces.len();
        if n == 0 {
            return;
        }
        if n == 1 {
            continue;
        }
        let (before, after) = ((k + n - 1) % n, k % n);
        if !bridge(pieces, before, after, short) {
            pieces.insert(k, Piece::line(from, to));
            k += 1;
        }
    }
}

/// Lets `pieces[i]` end where `pieces[j]` starts, across a gap of about `short`.
fn bridge(pieces: &mut [Piece], i: usize, j: usize, short: f64) -> bool {
    if let Some((t, s)) = crossing_near(&pieces[i], &pieces[j], 10.0 * short) {
        pieces[i] = pieces[i].part(0.0, t);
        pieces[j] = pieces[j].part(s, 1.0);
        return true;
    }
    let (end, start) = (pieces[i].end(), pieces[j].start());
    if move_end(&mut pieces[i], start) || move_start(&mut pieces[j], end) {
        return true;
    }
    (end - start).norm() <= 1e-5 * short
}

/// The crossing of `a`, continued beyond its end, with `b`, continued before its start.
fn crossing_near(a: &Piece, b: &Piece, reach: f64) -> Option<(f64, f64)> {
    let (mut t, mut s) = (1.0, 0.0);
    for _ in 0..8 {
        let (u, v, gap) = (a.velocity(t), b.velocity(s), b.at(s) - a.at(t));
        let det = u.cross(v);
        if det.abs() < 1e-3 * u.norm() * v.norm() {
            return None;
        }
        t += gap.cross(v) / det;
        s += gap.cross(u) / det;
    }
    let near = (a.at(t) - a.end()).norm() <= reach && (b.at(s) - b.start()).norm() <= reach;
    (near && t > 0.5 && t < 1.5 && s < 0.5 && s > -0.5).then_some((t, s))
}

fn move_end(p: &mut Piece, to: Point) -> bool {
    match p {
        Piece::Line { to: end, .. } => *end = to,
        Piece::Bezier { points } => points[3] = to,
        _ => return false,
    }
    true
}

fn move_start(p: &mut Piece, to: Point) -> bool {
    match p {
        Piece::Line { from, .. } => *from = to,
        Piece::Bezier { points } => points[0] = to,
        _ => return false,
    }
    true
}

/// Joins neighbours that lie on the same line, circle or ellipse.
fn join_alike(pieces: &mut Vec<Piece>, same: f64) {
    let mut out: Vec<Piece> = Vec::with_capacity(pieces.len());
    for p in pieces.drain(..) {
        match out.last().and_then(|before| joined(before, &p, same)) {
            Some(both) => {
                if let Some(last) = out.last_mut() {
                    *last = both;
                }
            }
            None => out.push(p),
        }
    }
    // Across the seam, where the list starts.
    while out.len() > 1 {
        let Some(both) = joined(&out[out.len() - 1], &out[0], same) else {
            break;
        };
        out[0] = both;
        out.pop();
    }
    *pieces = out;
}

/// One piece for two that follow each other on the same curve.
fn joined(a: &Piece, b: &Piece, same: f64) -> Option<Piece> {
    match (a, b) {
        (Piece::Line { from, to }, Piece::Line { from: _, to: end }) => {
            let d = *end - *from;
            let off = (*to - *from).cross(d.unit()).abs();
            let along = (*to - *from).dot(*end - *to) > 0.0;
            (along && off <= same).then(|| Piece::line(*from, *end))
        }
        (
            Piece::Arc {
                centre,
                radius,
                start,
                sweep,
            },
            Piece::Arc {
                centre: c,
                radius: r,
                sweep: more,
                ..
            },
        ) => {
            let alike = (*centre - *c).norm() <= same && (radius - r).abs() <= same;
            let sum = whole_turn(sweep + more);
            (alike && sweep * more > 0.0 && sum.abs() <= TAU)
                .then(|| Piece::arc(*centre, *radius, *start, sum))
        }
        (
            Piece::Ellipse {
                centre,
                half_axes,
                turn,
                start,
                sweep,
            },
            Piece::Ellipse {
                centre: c,
                half_axes: h,
                turn: t,
                start: s,
                sweep: more,
            },
        ) => {
            let angle = (s - start - sweep + WHOLE_TURNS) % TAU;
            let follows = angle.min(TAU - angle) < 1e-9;
            let alike = (*centre - *c).norm() <= same
                && (*half_axes - *h).norm() <= same
                && (t - turn).abs() * half_axes.norm() <= same;
            let sum = whole_turn(sweep + more);
            if !alike || !follows || sweep * more <= 0.0 || sum.abs() > TAU {
                return None;
            }
            Some(Piece::Ellipse {
                centre: *centre,
                half_axes: *half_axes,
                turn: *turn,
                start: *start,
                sweep: sum,
            })
        }
        _ => None,
    }
}

/// Enough whole turns to make any angle that occurs positive.
const WHOLE_TURNS: f64 = 64.0 * TAU;

/// A sweep that misses a whole turn by roundoff is a whole turn.
fn whole_turn(sweep: f64) -> f64 {
    if (sweep.abs() - TAU).abs() < 1e-11 {
        TAU.copysign(sweep)
    } else {
        sweep
    }
}

/// Puts the ends of lines and Bézier curves bitwise on the ends of their neighbours.
fn meet_exactly(pieces: &mut [Piece]) {
    let n = pieces.len();
    if n < 2 {
        return;
    }
    for i in 0..n {
        let j = (i + 1) % n;
        let (end, start) = (pieces[i].end(), pieces[j].start());
        if end != start && !move_end(&mut pieces[i], start) {
            move_start(&mut pieces[j], end);
        }
    }
}
