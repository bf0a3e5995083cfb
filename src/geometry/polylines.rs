//! Polylines for those who need them: near the curve, and of the same area.

use super::outline::{Loop, Outline};
use super::piece::Piece;
use super::point::Point;

impl Outline {
    /// One closed polyline per loop (the last point joins the first), nowhere further than
    /// `tolerance` from the boundary, and enclosing the same area.
    pub fn polylines(&self, tolerance: f64) -> Vec<Vec<Point>> {
        self.loops.iter().map(|l| polyline(l, tolerance)).collect()
    }
}

fn polyline(l: &Loop, tolerance: f64) -> Vec<Point> {
    let mut out = Vec::new();
    for p in &l.pieces {
        let mut points = matching_area(p, tolerance);
        points.pop();
        out.extend(points);
    }
    out
}

/// Points of a piece, ends on its ends, the inner ones moved off the curve along their normals
/// by twice a third of the height of the chords there, scaled so that the area is right.
///
/// Heights after the move are at most 4/3 of a chord's (two chords, all the area from the one
/// point between them), which the flattening allows for.
fn matching_area(p: &Piece, tolerance: f64) -> Vec<Point> {
    let mut ts = p.flatten(0.7 * tolerance);
    if matches!(p, Piece::Line { .. }) {
        return vec![p.start(), p.end()];
    }
    if ts.len() == 2 {
        ts = vec![0.0, 0.5, 1.0];
    }
    let n = ts.len();
    let on: Vec<Point> = ts.iter().map(|t| p.at(*t)).collect();
    let shift: Vec<Point> = (0..n)
        .map(|k| {
            if k == 0 || k == n - 1 {
                return Point::default();
            }
            // Height of a chord over the curve: κ ℓ²/8, to the right where the curve turns left.
            let l = 0.5 * ((on[k] - on[k - 1]).norm() + (on[k + 1] - on[k]).norm());
            p.tangent(ts[k]).left() * (-p.curvature(ts[k]) * l * l / 12.0)
        })
        .collect();
    let c = p.start();
    let enclosed = |f: f64| {
        let q = |k: usize| on[k] + shift[k] * f - c;
        (0..n - 1).map(|k| 0.5 * q(k).cross(q(k + 1))).sum::<f64>()
    };
    // Quadratic in f: three values give it, Newton from the usual answer solves it.
    let target = p.area_about(c);
    let (e0, e1, e2) = (enclosed(0.0), enclosed(1.0), enclosed(2.0));
    let (a, b) = (0.5 * (e2 - 2.0 * e1 + e0), 2.0 * e1 - 1.5 * e0 - 0.5 * e2);
    let mut f = 1.0;
    for _ in 0..6 {
        let step = (e0 + f * (b + f * a) - target) / (b + 2.0 * f * a);
        f -= step;
    }
    // An inflection can leave next to nothing to scale; the bound comes before the area there.
    if !(0.0..=2.5).contains(&f) {
        f = 1.0;
    }
    (0..n).map(|k| on[k] + shift[k] * f).collect()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    fn area(l: &[Point]) -> f64 {
        let n = l.len();
        (0..n)
            .map(|k| 0.5 * (l[k] - l[0]).cross(l[(k + 1) % n] - l[0]))
            .sum()
    }

    #[test]
    fn polylines_keep_the_area_and_the_bound() {
        let trace = [
            pt(0., 0.),
            pt(2., -0.5),
            pt(3., 2.),
            pt(1., 1.5),
            pt(0., 3.),
        ];
        let shapes = [
            Outline::disc(pt(0.3, 0.1), 1.7).unwrap(),
            Outline::ellipse(pt(0., 0.), pt(3., 0.5), 0.3).unwrap(),
            Outline::ring(pt(5., 0.), 0.5, 1.0).unwrap(),
            Outline::smooth_closed(&trace).unwrap(),
            Outline::smooth_closed(&trace).unwrap().grown(0.1).unwrap(),
            Outline::stadium(pt(0., 0.), 1., 2., 0.4).unwrap(),
        ];
        for o in shapes {
            for tolerance in [0.03, 1e-3, 1e-5] {
                let lines = o.polylines(tolerance);
                let sum: f64 = lines.iter().map(|l| area(l)).sum();
                assert!(
                    (sum - o.area()).abs() < 1e-13 * o.area(),
                    "{o:?} {tolerance}"
                );
                for l in &lines {
                    for k in 0..l.len() {
                        let (a, b) = (l[k], l[(k + 1) % l.len()]);
                        for f in [0.0, 0.25, 0.5, 0.75] {
                            let d = o.distance(a + (b - a) * f).abs();
                            assert!(d <= tolerance, "{d} > {tolerance}");
                        }
                    }
                }
            }
        }
    }
}
