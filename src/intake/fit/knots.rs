//! Where the pieces of a fitted outline begin and end.

use super::Trace;
use super::corners::{Corner, crossing};
use super::runs::{self, Run};
use super::samples::{Samples, turn};
use crate::geometry::Point;

/// A place where two pieces meet.
#[derive(Clone, Copy, Debug)]
pub(super) struct Knot {
    /// Where.
    pub(super) at: Point,
    /// Unit tangent of the piece that ends here.
    pub(super) arriving: Point,
    /// Unit tangent of the piece that begins here.
    pub(super) leaving: Point,
    /// First sample the next piece does not have to follow: the blur of a corner begins.
    pub(super) first: i64,
    /// First sample after the knot that the next piece follows.
    pub(super) last: i64,
    /// Whether the piece that begins here is a line.
    pub(super) straight: bool,
}

/// An element of the loop, in order: a corner or a straight run.
enum Mark {
    Corner(Corner),
    Run(Run),
}

/// Places the knots of the whole loop, in order.
pub(super) fn place(samples: &Samples, corners: &[Corner], trace: &Trace) -> Vec<Knot> {
    let n = samples.len() as i64;
    let skip = samples.count(trace.blur);
    let mut marks = Vec::new();
    if corners.is_empty() {
        // Runs may cross the seam: look over a loop and a half, keep one loop's worth.
        let found = runs::find(samples, 0, n + n / 2, trace);
        let start = found.iter().find(|r| r.first > 0).map_or(0, |r| r.first);
        marks.extend(
            found
                .into_iter()
                .filter(|r| r.first >= start && r.last < start + n)
                .map(Mark::Run),
        );
    }
    for (k, corner) in corners.iter().enumerate() {
        let next = corners
            .get(k + 1)
            .map_or(corners[0].sample + n, |c| c.sample);
        marks.push(Mark::Corner(*corner));
        marks.extend(
            runs::find(samples, corner.sample + skip, next - skip, trace)
                .into_iter()
                .map(Mark::Run),
        );
    }
    drop_flats(&mut marks, samples, trace);
    if marks.is_empty() {
        return smooth(samples, trace);
    }
    let mut knots = Vec::new();
    for k in 0..marks.len() {
        // The last mark is followed by the first, one loop on.
        let (next, lap) = if k + 1 < marks.len() {
            (&marks[k + 1], 0)
        } else {
            (&marks[0], n)
        };
        match &marks[k] {
            Mark::Corner(corner) => {
                let before = match marks[(k + marks.len() - 1) % marks.len()] {
                    Mark::Run(run) => touching(run, corner.sample, -1, samples, trace),
                    Mark::Corner(_) => None,
                };
                let after = match next {
                    Mark::Run(run) => touching(*run, corner.sample, 1, samples, trace),
                    Mark::Corner(_) => None,
                };
                knots.push(at_corner(corner, before, after, skip));
            }
            Mark::Run(run) => run_knots(samples, run, k, &marks, (next, lap), trace, &mut knots),
        }
    }
    knots
}

/// Drops short runs that meet no corner: where a curve is merely flat, a line between two curves
/// would add two jumps of curvature and gain nothing.
fn drop_flats(marks: &mut Vec<Mark>, samples: &Samples, trace: &Trace) {
    let n = samples.len() as i64;
    let least = samples.count(trace.flat);
    let meet = |a: &Mark, b: &Mark| {
        let gap = match (a, b) {
            (Mark::Run(a), Mark::Run(b)) => return bend(a, b, samples, trace).is_some(),
            (Mark::Corner(c), Mark::Run(r)) => r.first - c.sample,
            (Mark::Run(r), Mark::Corner(c)) => c.sample - r.last,
            (Mark::Corner(_), Mark::Corner(_)) => return false,
        };
        gap.rem_euclid(n) <= 2 * reach(samples, trace)
    };
    let count = marks.len();
    let keep: Vec<bool> = (0..count)
        .map(|k| match &marks[k] {
            Mark::Run(run) if run.last - run.first < least => {
                let (before, after) = (&marks[(k + count - 1) % count], &marks[(k + 1) % count]);
                count > 1 && (meet(before, &marks[k]) || meet(&marks[k], after))
            }
            _ => true,
        })
        .collect();
    let mut keep = keep.into_iter();
    marks.retain(|_| keep.next().unwrap_or(true));
}

/// The line of a run that reaches up to a corner on its side (−1 before, 1 after).
fn touching(run: Run, corner: i64, side: i64, samples: &Samples, trace: &Trace) -> Option<Run> {
    let n = samples.len() as i64;
    let gap = if side > 0 {
        run.first - corner
    } else {
        corner - run.last
    };
    (gap.rem_euclid(n) <= reach(samples, trace)).then_some(run)
}

/// How near a run must come to a corner, or to the next run, to meet it.
fn reach(samples: &Samples, trace: &Trace) -> i64 {
    samples.count(trace.blur) + samples.count(0.4 * trace.window)
}

/// The knot of a corner, moved to where the lines beside it cross, if there are any.
fn at_corner(corner: &Corner, before: Option<Run>, after: Option<Run>, skip: i64) -> Knot {
    let line = |run: Option<Run>, otherwise: (Point, Point)| {
        run.map_or(otherwise, |r| (r.point, r.direction))
    };
    let (a, b) = (line(before, corner.arriving), line(after, corner.leaving));
    Knot {
        at: crossing(a, b).unwrap_or(corner.at),
        arriving: a.1,
        leaving: b.1,
        first: corner.sample - skip,
        last: corner.sample + skip,
        straight: after.is_some(),
    }
}

/// The knots at the ends of a run that are not corners already.
fn run_knots(
    samples: &Samples,
    run: &Run,
    k: usize,
    marks: &[Mark],
    (next, lap): (&Mark, i64),
    trace: &Trace,
    out: &mut Vec<Knot>,
) {
    let on_line = |sample: i64| {
        let p = samples.at(sample);
        run.point + run.direction * (p - run.point).dot(run.direction)
    };
    let smooth = |sample: i64, straight: bool| Knot {
        at: on_line(sample),
        arriving: run.direction,
        leaving: run.direction,
        first: sample,
        last: sample,
        straight,
    };
    let previous = &marks[(k + marks.len() - 1) % marks.len()];
    let starts_at_mark = match previous {
        Mark::Corner(c) => touching(*run, c.sample, 1, samples, trace).is_some(),
        Mark::Run(p) if marks.len() > 1 => bend(p, run, samples, trace).is_some(),
        Mark::Run(_) => false,
    };
    if !starts_at_mark {
        out.push(smooth(run.first, true));
    }
    match next {
        Mark::Corner(c) if touching(*run, c.sample + lap, -1, samples, trace).is_some() => {}
        Mark::Run(r) if marks.len() > 1 => match bend(run, r, samples, trace) {
            Some(at) => out.push(Knot {
                at,
                arriving: run.direction,
                leaving: r.direction,
                first: run.last,
                last: r.first + lap,
                straight: true,
            }),
            None => out.push(smooth(run.last, false)),
        },
        _ => out.push(smooth(run.last, false)),
    }
}

/// The obtuse corner between two runs that nearly meet, if their lines cross between them.
fn bend(a: &Run, b: &Run, samples: &Samples, trace: &Trace) -> Option<Point> {
    let n = samples.len() as i64;
    let gap = (b.first - a.last).rem_euclid(n);
    if gap > 2 * reach(samples, trace) || turn(a.direction, b.direction).abs() < 0.05 {
        return None;
    }
    let at = crossing((a.point, a.direction), (b.point, b.direction))?;
    let near = (a.last..=a.last + gap)
        .map(|k| (samples.at(k) - at).norm())
        .fold(f64::INFINITY, f64::min);
    let beyond = |run: &Run, end: i64, sign: f64| {
        sign * (at - samples.at(end)).dot(run.direction) > -samples.step
    };
    let outside = beyond(a, a.last, 1.0) && beyond(b, b.first, -1.0);
    (outside && near < 2.0 * trace.tolerance + 0.3 * trace.blur).then_some(at)
}

/// Two knots on a loop without corners and straight runs.
fn smooth(samples: &Samples, trace: &Trace) -> Vec<Knot> {
    let n = samples.len() as i64;
    [0, n / 2]
        .into_iter()
        .map(|k| {
            let half = samples.count(trace.window).min(n / 8);
            let local = samples.parabola(k - half, k + half, k);
            Knot {
                at: local.at,
                arriving: local.tangent,
                leaving: local.tangent,
                first: k,
                last: k,
                straight: false,
            }
        })
        .collect()
}
