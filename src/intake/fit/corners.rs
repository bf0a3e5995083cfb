//! Corners of a trace: places where the tangents of both sides disagree.

use super::Trace;
use super::samples::{Samples, turn, unit};
use crate::geometry::Point;

/// A corner, as it is seen from its neighbourhood.
#[derive(Clone, Copy, Debug)]
pub(super) struct Corner {
    /// The sample nearest to it.
    pub(super) sample: i64,
    /// Where the tangents of both sides cross.
    pub(super) at: Point,
    /// A point and the direction of the trace before the corner.
    pub(super) arriving: (Point, Point),
    /// The same after it.
    pub(super) leaving: (Point, Point),
}

/// Finds the corners, in order.
///
/// A parabola on each side, away from the blur, is continued to the place: on a smooth curve the
/// two tangents agree, at a corner they differ by its bend. A fillet would look the same to them,
/// so the crossing of the tangents must also lie as near to the trace as a blurred corner leaves
/// it.
pub(super) fn find(samples: &Samples, trace: &Trace) -> Vec<Corner> {
    let n = samples.len() as i64;
    let skip = samples.count(trace.blur);
    let window = samples.count(trace.window).max(3);
    let sides = |k: i64, window: i64| {
        (
            samples.parabola(k - skip - window, k - skip, k),
            samples.parabola(k + skip, k + skip + window, k),
        )
    };
    let bend = |k: i64, window: i64| {
        let (before, after) = sides(k, window);
        turn(before.tangent, after.tangent)
    };
    // Where a straight edge runs into an arc, a window over the joint continues wrongly; half a
    // window does so elsewhere, so that the lesser of both is large at corners only.
    let bends: Vec<f64> = (0..n)
        .map(|k| {
            let (whole, half) = (bend(k, window), bend(k, window / 2));
            if whole * half <= 0.0 {
                0.0
            } else {
                whole.signum() * whole.abs().min(half.abs())
            }
        })
        .collect();
    let reach = skip + window / 2;
    let mut corners: Vec<Corner> = Vec::new();
    for k in 0..n {
        let size = bends[k as usize].abs();
        let beaten = (-reach..=reach).any(|d| {
            let other = bends[(k + d).rem_euclid(n) as usize].abs();
            other > size || (other == size && d < 0)
        });
        if size < trace.bend || beaten {
            continue;
        }
        // The bend is the same all over the blur; the corner is where the tangents cross.
        let (before, after) = sides(k, window);
        let Some(at) = crossing((before.at, before.tangent), (after.at, after.tangent)) else {
            continue;
        };
        let (distance, k) = (k - reach..=k + reach)
            .map(|j| ((samples.at(j) - at).norm(), j))
            .fold((f64::INFINITY, k), |m, d| if d.0 < m.0 { d } else { m });
        if distance > allowance(bends[k.rem_euclid(n) as usize], trace) {
            continue;
        }
        let (before, after) = sides(k, window);
        let at = crossing((before.at, before.tangent), (after.at, after.tangent)).unwrap_or(at);
        if corners.iter().any(|c: &Corner| {
            (c.sample - k)
                .rem_euclid(n)
                .min((k - c.sample).rem_euclid(n))
                < skip
        }) {
            continue;
        }
        corners.push(Corner {
            sample: k,
            at,
            arriving: (before.at, before.tangent),
            leaving: (after.at, after.tangent),
        });
    }
    corners.sort_by_key(|c| c.sample);
    corners
}

/// How far a blurred corner may lie from its trace.
///
/// Averaging over a box of half width 1 (a pixel, and the mean of four) takes 0.59 off a right
/// angle and about 0.4/tan(ω/2) off a wedge of angle ω; half as much again is allowed, and the
/// tolerance. A fillet of radius r lies r(1/sin(ω/2) − 1) off, so that radii above about twice the
/// blur are told apart.
fn allowance(bend: f64, trace: &Trace) -> f64 {
    let half_angle = (std::f64::consts::PI - bend.abs()) / 2.0;
    2.0 * trace.tolerance + 0.35 * trace.blur / half_angle.tan().max(0.05)
}

/// Where two lines, each a point and a direction, cross; `None` when they are nearly parallel.
pub(super) fn crossing(a: (Point, Point), b: (Point, Point)) -> Option<Point> {
    let (p, u, q, v) = (a.0, unit(a.1), b.0, unit(b.1));
    let sine = u.cross(v);
    if sine.abs() < 0.02 {
        return None;
    }
    Some(p + u * ((q - p).cross(v) / sine))
}
