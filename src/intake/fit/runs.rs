//! Straight runs of a trace.

use super::Trace;
use super::samples::{Samples, unit};
use crate::geometry::Point;

/// A straight run: the samples it covers and its line.
#[derive(Clone, Copy, Debug)]
pub(super) struct Run {
    /// First sample on the line.
    pub(super) first: i64,
    /// Last sample on the line.
    pub(super) last: i64,
    /// A point of the line.
    pub(super) point: Point,
    /// Its direction, along the trace.
    pub(super) direction: Point,
}

/// Finds the straight runs among samples `first`..=`last`, in order and not overlapping.
///
/// A run is grown as long as it stays within half the tolerance of its line. On a gentle arc that
/// gives a chord; what tells it from a straight edge is that its middle bows out by a good part of
/// what it was allowed, whereas an edge wavers about its line.
pub(super) fn find(samples: &Samples, first: i64, last: i64, trace: &Trace) -> Vec<Run> {
    let least = samples.count(trace.run);
    let stride = (least / 4).max(1);
    let mut runs: Vec<Run> = Vec::new();
    let mut start = first;
    while start + least <= last {
        let end = longest(samples, start, last, 0.5 * trace.tolerance);
        if end - start < least {
            start += stride;
            continue;
        }
        let floor = runs.last().map_or(first, |r| r.last + 1);
        let run = settle(samples, start, end, floor, last, trace);
        if run.last - run.first >= least && !bowed(samples, &run, trace) {
            start = run.last.max(start + stride);
            runs.push(run);
        } else {
            start += stride;
        }
    }
    runs
}

/// The last sample up to which a line through all from `start` on stays within `allowed`.
fn longest(samples: &Samples, start: i64, limit: i64, allowed: f64) -> i64 {
    let fits = |end: i64| miss(samples, start, end, &line(samples, start, end)) <= allowed;
    let (mut good, mut step) = (start + 2, 4);
    if good > limit || !fits(good) {
        return start;
    }
    while good + step <= limit && fits(good + step) {
        good += step;
        step *= 2;
    }
    while step >= 1 {
        if good + step <= limit && fits(good + step) {
            good += step;
        }
        step /= 2;
    }
    good
}

/// Refits the line to the middle of the run, and lets it grow and shrink until it is what it says.
fn settle(samples: &Samples, start: i64, end: i64, floor: i64, limit: i64, trace: &Trace) -> Run {
    let (mut first, mut last) = (start, end);
    let mut fitted = line(samples, first, last);
    for _ in 0..3 {
        let fifth = (last - first) / 5;
        fitted = line(samples, first + fifth, last - fifth);
        let near =
            |k: i64, share: f64| off(samples.at(k), &fitted).abs() <= share * trace.tolerance;
        (first, last) = (first + fifth, last - fifth);
        while first > floor && near(first - 1, 0.5) {
            first -= 1;
        }
        while last < limit && near(last + 1, 0.5) {
            last += 1;
        }
        // The outermost samples already follow what comes next.
        while first < last && !near(first, 0.2) {
            first += 1;
        }
        while last > first && !near(last, 0.2) {
            last -= 1;
        }
    }
    Run {
        first,
        last,
        point: fitted.0,
        direction: fitted.1,
    }
}

/// Whether the run is a chord of an arc: the sagitta of its inner four fifths is too large.
fn bowed(samples: &Samples, run: &Run, trace: &Trace) -> bool {
    let tenth = (run.last - run.first) / 10;
    let (first, last) = (run.first + tenth, run.last - tenth);
    let middle = (first + last) / 2;
    let ends = [
        samples.parabola(first, last, first).at,
        samples.parabola(first, last, last).at,
    ];
    let bow = samples.parabola(first, last, middle).at - (ends[0] + ends[1]) * 0.5;
    run.direction.cross(bow).abs() > 0.25 * trace.tolerance
}

/// The line of least squares through samples: their mean and the main axis of their spread.
fn line(samples: &Samples, first: i64, last: i64) -> (Point, Point) {
    let n = (last - first + 1) as f64;
    let origin = samples.at(first);
    let mean =
        (first..=last).fold(Point::default(), |s, k| s + (samples.at(k) - origin)) * (1.0 / n);
    let (mut xx, mut xy, mut yy) = (0.0, 0.0, 0.0);
    for k in first..=last {
        let d = samples.at(k) - origin - mean;
        xx += d.x * d.x;
        xy += d.x * d.y;
        yy += d.y * d.y;
    }
    let axis = Point::polar(0.5 * (2.0 * xy).atan2(xx - yy));
    let along = samples.at(last) - samples.at(first);
    let direction = if axis.dot(along) < 0.0 { -axis } else { axis };
    (origin + mean, unit(direction))
}

/// Signed distance of a point from a line.
fn off(p: Point, line: &(Point, Point)) -> f64 {
    line.1.cross(p - line.0)
}

fn miss(samples: &Samples, first: i64, last: i64, line: &(Point, Point)) -> f64 {
    (first..=last)
        .map(|k| off(samples.at(k), line).abs())
        .fold(0.0, f64::max)
}
