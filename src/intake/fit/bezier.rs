//! Cubic Bézier curves through points, with given ends and end tangents (Schneider 1990).

use super::Trace;
use super::samples::{turn, unit};
use crate::geometry::Point;

/// Reparametrisations before a stretch is split.
const ROUNDS: usize = 12;
/// Splits of splits of splits.
const DEPTH: usize = 24;

/// The ends of a stretch: points, and unit tangents along the trace.
#[derive(Clone, Copy, Debug)]
pub(super) struct Ends {
    pub(super) from: Point,
    pub(super) leaving: Point,
    pub(super) to: Point,
    pub(super) arriving: Point,
}

/// Fits curves to `points`, handing each to `out` in order; consecutive ones share their tangent.
pub(super) fn fit(
    points: &[Point],
    ends: Ends,
    trace: &Trace,
    depth: usize,
    out: &mut dyn FnMut([Point; 4]),
) {
    let turned = total_turn(points, &ends, trace);
    let split_by_turn = turned > 2.0;
    let chord = (ends.to - ends.from).norm();
    let mut worst = 0;
    if !split_by_turn || points.len() < 8 || depth >= DEPTH {
        let (curve, miss, place) = best(points, &ends);
        worst = place;
        let short = chord < trace.window.min(20.0 * trace.tolerance) * 0.5 || points.len() < 8;
        if miss <= trace.tolerance || short || depth >= DEPTH {
            out(curve);
            return;
        }
    }
    let middle = if split_by_turn {
        half_turn(points, trace)
    } else {
        worst
    };
    let middle = middle.clamp(points.len() / 4, points.len() - 1 - points.len() / 4);
    let (at, tangent) = joint(points, middle, trace);
    fit(
        &points[..=middle],
        Ends {
            to: at,
            arriving: tangent,
            ..ends
        },
        trace,
        depth + 1,
        out,
    );
    fit(
        &points[middle..],
        Ends {
            from: at,
            leaving: tangent,
            ..ends
        },
        trace,
        depth + 1,
        out,
    );
}

/// The point and tangent at a place inside a stretch: a parabola over the widest window that
/// still follows the points.
fn joint(points: &[Point], middle: usize, trace: &Trace) -> (Point, Point) {
    let room = middle.min(points.len() - 1 - middle);
    let mut best = (
        points[middle],
        unit(points[(middle + 1).min(points.len() - 1)] - points[middle.saturating_sub(1)]),
    );
    let mut half = 2;
    while half <= room {
        let (at, tangent, miss) = parabola(points, middle, half);
        if miss > 0.6 * trace.tolerance && half > 4 {
            break;
        }
        best = (at, tangent);
        half += 1 + half / 6;
    }
    best
}

/// The parabola through points middle ± half: point and tangent in the middle, largest miss.
fn parabola(points: &[Point], middle: usize, half: usize) -> (Point, Point, f64) {
    let origin = points[middle];
    let (mut s2, mut s4) = (0.0, 0.0);
    let (mut m0, mut m1, mut m2) = (Point::default(), Point::default(), Point::default());
    let scale = 1.0 / half as f64;
    let all = || {
        (middle - half..=middle + half)
            .map(|k| ((k as f64 - middle as f64) * scale, points[k] - origin))
    };
    for (u, p) in all() {
        s2 += u * u;
        s4 += u.powi(4);
        m0 = m0 + p;
        m1 = m1 + p * u;
        m2 = m2 + p * (u * u);
    }
    let s0 = (2 * half + 1) as f64;
    let determinant = s0 * s4 - s2 * s2;
    let c0 = (m0 * s4 - m2 * s2) * (1.0 / determinant);
    let c2 = (m2 * s0 - m0 * s2) * (1.0 / determinant);
    let c1 = m1 * (1.0 / s2);
    let miss = all()
        .map(|(u, p)| (p - c0 - c1 * u - c2 * (u * u)).norm())
        .fold(0.0, f64::max);
    (origin + c0, unit(c1), miss)
}

/// Directions of chords about a third of a window long, which waver little.
fn chords(points: &[Point], trace: &Trace) -> Vec<Point> {
    let length: f64 = points.windows(2).map(|w| (w[1] - w[0]).norm()).sum();
    let step = (trace.window * 0.5 / (length / points.len() as f64).max(f64::MIN_POSITIVE)).ceil()
        as usize;
    let step = step.clamp(1, points.len().max(2) / 2);
    (0..points.len().saturating_sub(step))
        .step_by(step)
        .map(|k| points[k + step] - points[k])
        .collect()
}

/// By how much the stretch turns in all, left and right counted alike.
fn total_turn(points: &[Point], ends: &Ends, trace: &Trace) -> f64 {
    let chords = chords(points, trace);
    let inner: f64 = chords
        .windows(2)
        .map(|w| turn(w[0], w[1]))
        .map(f64::abs)
        .sum();
    let (Some(first), Some(last)) = (chords.first(), chords.last()) else {
        return 0.0;
    };
    inner + turn(ends.leaving, *first).abs() + turn(*last, ends.arriving).abs()
}

/// The point at which the stretch has turned half its way.
fn half_turn(points: &[Point], trace: &Trace) -> usize {
    let chords = chords(points, trace);
    let turns: Vec<f64> = chords.windows(2).map(|w| turn(w[0], w[1]).abs()).collect();
    let half = turns.iter().sum::<f64>() / 2.0;
    let mut so_far = 0.0;
    for (k, t) in turns.iter().enumerate() {
        so_far += t;
        if so_far >= half {
            return (k + 1) * points.len() / chords.len().max(1);
        }
    }
    points.len() / 2
}

/// The best curve with these ends, how far a point is from it at most, and which one.
fn best(points: &[Point], ends: &Ends) -> ([Point; 4], f64, usize) {
    let mut parameters = by_chord(points, ends);
    let mut curve = least_squares(points, &parameters, ends);
    let (mut miss, mut worst) = largest_miss(points, &parameters, &curve);
    for _ in 0..ROUNDS {
        for (t, p) in parameters.iter_mut().zip(points) {
            *t = nearer(&curve, *p, *t);
        }
        let next = least_squares(points, &parameters, ends);
        let (next_miss, next_worst) = largest_miss(points, &parameters, &next);
        let settled = (miss - next_miss).abs() < 1e-3 * miss;
        if next_miss <= miss {
            (curve, miss, worst) = (next, next_miss, next_worst);
        }
        if settled || next_miss > miss {
            break;
        }
    }
    (curve, miss, worst)
}

/// First guess of the parameters: the share of the length from end to end.
fn by_chord(points: &[Point], ends: &Ends) -> Vec<f64> {
    let mut so_far = points.first().map_or(0.0, |p| (*p - ends.from).norm());
    let mut out = vec![so_far];
    for w in points.windows(2) {
        so_far += (w[1] - w[0]).norm();
        out.push(so_far);
    }
    let total = so_far + points.last().map_or(0.0, |p| (ends.to - *p).norm());
    let scale = if total > 0.0 { 1.0 / total } else { 0.0 };
    out.iter_mut().for_each(|t| *t *= scale);
    out
}

/// The lengths of both handles by least squares at given parameters (Schneider 1990).
fn least_squares(points: &[Point], parameters: &[f64], ends: &Ends) -> [Point; 4] {
    let (u, v) = (ends.leaving, -ends.arriving);
    let (mut uu, mut uv, mut vv, mut ru, mut rv) = (0.0, 0.0, 0.0, 0.0, 0.0);
    for (p, &t) in points.iter().zip(parameters) {
        let s = 1.0 - t;
        let (b0, b1, b2, b3) = (s * s * s, 3.0 * s * s * t, 3.0 * s * t * t, t * t * t);
        let rest = *p - ends.from * (b0 + b1) - ends.to * (b2 + b3);
        let (a, b) = (u * b1, v * b2);
        uu += a.dot(a);
        uv += a.dot(b);
        vv += b.dot(b);
        ru += a.dot(rest);
        rv += b.dot(rest);
    }
    let chord = (ends.to - ends.from).norm();
    let determinant = uu * vv - uv * uv;
    let (mut left, mut right) = if determinant > 1e-12 * uu * vv {
        (
            (ru * vv - rv * uv) / determinant,
            (rv * uu - ru * uv) / determinant,
        )
    } else {
        (chord / 3.0, chord / 3.0)
    };
    // A handle that is negative or absurdly long: Wu and Barsky's rule, a third of the chord.
    let sound = |a: f64| a > 1e-3 * chord && a < 3.0 * chord;
    if !sound(left) || !sound(right) {
        (left, right) = (chord / 3.0, chord / 3.0);
    }
    [
        ends.from,
        ends.from + u * left,
        ends.to + v * right,
        ends.to,
    ]
}

fn at(c: &[Point; 4], t: f64) -> Point {
    let s = 1.0 - t;
    c[0] * (s * s * s) + c[1] * (3.0 * s * s * t) + c[2] * (3.0 * s * t * t) + c[3] * (t * t * t)
}

/// One Newton step towards the parameter of the point nearest to `p`.
fn nearer(c: &[Point; 4], p: Point, t: f64) -> f64 {
    let s = 1.0 - t;
    let d = at(c, t) - p;
    let first = (c[1] - c[0]) * (3.0 * s * s)
        + (c[2] - c[1]) * (6.0 * s * t)
        + (c[3] - c[2]) * (3.0 * t * t);
    let second = (c[2] - c[1] * 2.0 + c[0]) * (6.0 * s) + (c[3] - c[2] * 2.0 + c[1]) * (6.0 * t);
    let slope = first.dot(first) + d.dot(second);
    if slope <= 0.0 {
        return t;
    }
    (t - d.dot(first) / slope).clamp(0.0, 1.0)
}

fn largest_miss(points: &[Point], parameters: &[f64], c: &[Point; 4]) -> (f64, usize) {
    let misses = points
        .iter()
        .zip(parameters)
        .map(|(p, &t)| (at(c, t) - *p).norm());
    misses
        .enumerate()
        .fold((0.0, 0), |m, (k, d)| if d > m.0 { (d, k) } else { m })
}
