//! The formulas of a cubic Bézier curve.

use super::point::Point;

/// The point at t, from the nearer end, so that the ends are met exactly.
pub(super) fn at(p: &[Point; 4], t: f64) -> Point {
    if t > 0.5 {
        return at(&[p[3], p[2], p[1], p[0]], 1.0 - t);
    }
    let (a, b, c) = (p[1] - p[0], p[2] - p[0], p[3] - p[0]);
    let s = 1.0 - t;
    p[0] + a * (3.0 * s * s * t) + b * (3.0 * s * t * t) + c * (t * t * t)
}

/// Derivative by t.
pub(super) fn velocity(p: &[Point; 4], t: f64) -> Point {
    let s = 1.0 - t;
    (p[1] - p[0]) * (3.0 * s * s) + (p[2] - p[1]) * (6.0 * s * t) + (p[3] - p[2]) * (3.0 * t * t)
}

/// Second derivative by t.
fn acceleration(p: &[Point; 4], t: f64) -> Point {
    let second = |a: Point, b: Point, c: Point| (a + c) - b * 2.0;
    second(p[0], p[1], p[2]) * (6.0 * (1.0 - t)) + second(p[1], p[2], p[3]) * (6.0 * t)
}

/// Unit vector along the curve; at an end with a doubled control point the limit.
pub(super) fn tangent(p: &[Point; 4], t: f64) -> Point {
    let v = velocity(p, t);
    let reach = (p[1] - p[0])
        .norm()
        .max((p[2] - p[0]).norm())
        .max((p[3] - p[0]).norm());
    if v.norm() > 1e-9 * reach {
        return v.unit();
    }
    // The first derivative vanishes: the direction is that of the next one that does not.
    let a = acceleration(p, t) * if t > 0.5 { -1.0 } else { 1.0 };
    if a.norm() > 1e-9 * reach {
        a.unit()
    } else {
        (p[3] - p[0]).unit()
    }
}

/// Signed curvature; zero where the velocity vanishes.
pub(super) fn curvature(p: &[Point; 4], t: f64) -> f64 {
    let v = velocity(p, t);
    let speed = v.norm();
    if speed == 0.0 {
        return 0.0;
    }
    v.cross(acceleration(p, t)) / (speed * speed * speed)
}

/// Roots in (0, 1) of the derivative of one coordinate.
pub(super) fn turning_points(p: &[Point; 4], axis: usize) -> Vec<f64> {
    let d = |k: usize| p[k + 1].axis(axis) - p[k].axis(axis);
    let (c, b, a) = (d(0), 2.0 * (d(1) - d(0)), d(0) - 2.0 * d(1) + d(2));
    let mut out = quadratic_roots(a, b, c);
    out.retain(|t| *t > 1e-12 && *t < 1.0 - 1e-12);
    out.sort_by(f64::total_cmp);
    out
}

/// Real simple roots of a t² + b t + c without cancellation.
fn quadratic_roots(a: f64, b: f64, c: f64) -> Vec<f64> {
    let size = a.abs().max(b.abs()).max(c.abs());
    if a.abs() <= 1e-14 * size {
        return if b == 0.0 { Vec::new() } else { vec![-c / b] };
    }
    let disc = b * b - 4.0 * a * c;
    if disc <= 0.0 {
        return Vec::new();
    }
    let q = -0.5 * (b + disc.sqrt().copysign(b));
    if q == 0.0 {
        return vec![0.0];
    }
    vec![q / a, c / q]
}

/// The control points of the part from t0 to t1 (polar form of the curve).
pub(super) fn part(p: &[Point; 4], t0: f64, t1: f64) -> [Point; 4] {
    let mix = |a: Point, b: Point, t: f64| a * (1.0 - t) + b * t;
    let blossom = |u: f64, v: f64, w: f64| {
        let q = [mix(p[0], p[1], u), mix(p[1], p[2], u), mix(p[2], p[3], u)];
        let r = [mix(q[0], q[1], v), mix(q[1], q[2], v)];
        mix(r[0], r[1], w)
    };
    [
        at(p, t0),
        blossom(t0, t0, t1),
        blossom(t0, t1, t1),
        at(p, t1),
    ]
}
