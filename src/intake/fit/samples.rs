//! A closed trace at equal steps of its length, and parabolas through parts of it.

use crate::geometry::{Point, pt};

/// More samples than this are not made; the step is widened instead.
const MOST: f64 = 400_000.0;

/// Points of a closed curve at equal steps of arc length.
pub(super) struct Samples {
    pub(super) points: Vec<Point>,
    /// Arc length from one to the next.
    pub(super) step: f64,
}

/// A parabola through samples, by least squares, over the arc length from a place.
#[derive(Clone, Copy, Debug)]
pub(super) struct Parabola {
    /// The point at the place.
    pub(super) at: Point,
    /// The unit tangent there, along the trace.
    pub(super) tangent: Point,
}

impl Samples {
    /// Samples about `step` apart; `None` when the curve has fewer than 16 of them.
    pub(super) fn new(points: &[Point], step: f64) -> Option<Self> {
        let n = points.len();
        let length: f64 = (0..n)
            .map(|k| (points[(k + 1) % n] - points[k]).norm())
            .sum();
        let count = (length / step).min(MOST).floor() as usize;
        if count < 16 || !length.is_finite() {
            return None;
        }
        let step = length / count as f64;
        let mut out = Vec::with_capacity(count);
        let (mut edge, mut before) = (0, 0.0);
        for k in 0..count {
            let wanted = k as f64 * step;
            loop {
                let (a, b) = (points[edge % n], points[(edge + 1) % n]);
                let size = (b - a).norm();
                if before + size >= wanted || edge + 1 >= n {
                    let t = if size > 0.0 {
                        ((wanted - before) / size).min(1.0)
                    } else {
                        0.0
                    };
                    out.push(a + (b - a) * t);
                    break;
                }
                before += size;
                edge += 1;
            }
        }
        Some(Self { points: out, step })
    }

    pub(super) fn len(&self) -> usize {
        self.points.len()
    }

    /// The length of the whole curve.
    pub(super) fn length(&self) -> f64 {
        self.step * self.points.len() as f64
    }

    /// Sample `k`, counted round the curve in either direction.
    pub(super) fn at(&self, k: i64) -> Point {
        self.points[k.rem_euclid(self.points.len() as i64) as usize]
    }

    /// The samples from `first` to `last`, both included; `last` may lie behind the end.
    pub(super) fn between(&self, first: i64, last: i64) -> Vec<Point> {
        (first..=last.max(first)).map(|k| self.at(k)).collect()
    }

    /// The number of samples in a length, at least one.
    pub(super) fn count(&self, length: f64) -> i64 {
        (length / self.step).round().max(1.0) as i64
    }

    /// The parabola through samples `first`..=`last` and what it says at sample `place`, which
    /// may lie outside of them.
    pub(super) fn parabola(&self, first: i64, last: i64, place: i64) -> Parabola {
        // Least squares in powers of u = k − middle, scaled to [−1, 1], so that the normal
        // equations are well conditioned; odd and even powers separate.
        let middle = (first + last) as f64 / 2.0;
        let half = ((last - first) as f64 / 2.0).max(1.0);
        let origin = self.at((first + last) / 2);
        let (mut s0, mut s2, mut s4) = (0.0, 0.0, 0.0);
        let (mut m0, mut m1, mut m2) = (Point::default(), Point::default(), Point::default());
        for k in first..=last {
            let u = (k as f64 - middle) / half;
            let p = self.at(k) - origin;
            s0 += 1.0;
            s2 += u * u;
            s4 += u.powi(4);
            m0 = m0 + p;
            m1 = m1 + p * u;
            m2 = m2 + p * (u * u);
        }
        let determinant = s0 * s4 - s2 * s2;
        let (c0, c2) = if determinant > 1e-9 * s0 * s4 {
            (
                (m0 * s4 - m2 * s2) * (1.0 / determinant),
                (m2 * s0 - m0 * s2) * (1.0 / determinant),
            )
        } else {
            (m0 * (1.0 / s0), Point::default())
        };
        let c1 = m1 * (1.0 / s2.max(f64::MIN_POSITIVE));
        let value = |u: f64| c0 + c1 * u + c2 * (u * u);
        let u = (place as f64 - middle) / half;
        Parabola {
            at: origin + value(u),
            tangent: unit(c1 + c2 * (2.0 * u)),
        }
    }
}

/// The unit vector along `v`; along x when it vanishes.
pub(super) fn unit(v: Point) -> Point {
    let size = v.norm();
    if size > 0.0 {
        v * (1.0 / size)
    } else {
        pt(1.0, 0.0)
    }
}

/// The angle from `a` to `b`, in (−π, π].
pub(super) fn turn(a: Point, b: Point) -> f64 {
    a.cross(b).atan2(a.dot(b))
}
