//! A smooth closed curve through points.

use super::error::GeometryError;
use super::outline::Outline;
use super::piece::Piece;
use super::point::{Box2, Point};

impl Outline {
    /// The closed cubic spline through the points, over chord lengths: slope and curvature are
    /// continuous everywhere. Either way round.
    ///
    /// # Errors
    /// Fewer than three points, neighbours in the same place, no area.
    pub fn smooth_closed(points: &[Point]) -> Result<Self, GeometryError> {
        let mut p = points;
        if p.len() > 3 && p.first() == p.last() {
            p = &p[..p.len() - 1];
        }
        let n = p.len();
        if n < 3 {
            return Err(GeometryError::TooFewPoints {
                given: n,
                needed: 3,
            });
        }
        if let Some(k) = p.iter().position(|p| !p.is_finite()) {
            return Err(GeometryError::NotFinite {
                what: format!("point {}", k + 1),
            });
        }
        let mut bounds = Box2::EMPTY;
        for q in p {
            bounds.include(*q);
        }
        let h: Vec<f64> = (0..n).map(|k| (p[(k + 1) % n] - p[k]).norm()).collect();
        if let Some(k) = h.iter().position(|h| *h <= 1e-12 * bounds.diagonal()) {
            return Err(GeometryError::DuplicatePoints {
                first: k + 1,
                second: (k + 1) % n + 1,
                at: p[k],
            });
        }
        let slopes = slopes(p, &h);
        let pieces = (0..n)
            .map(|k| {
                let next = (k + 1) % n;
                Piece::Bezier {
                    points: [
                        p[k],
                        p[k] + slopes[k] * (h[k] / 3.0),
                        p[next] - slopes[next] * (h[k] / 3.0),
                        p[next],
                    ],
                }
            })
            .collect();
        let mut out = Self::single(pieces);
        let area = out.area();
        if area.abs() <= 1e-12 * bounds.diagonal() * bounds.diagonal() {
            return Err(GeometryError::NoArea);
        }
        if area < 0.0 {
            out.loops[0] = out.loops[0].reversed();
        }
        Ok(out)
    }
}

/// Slopes mₖ of the spline: continuity of the second derivative at every knot,
/// mₖ₋₁/hₖ₋₁ + 2 mₖ (1/hₖ₋₁ + 1/hₖ) + mₖ₊₁/hₖ = 3 (dₖ₋₁/hₖ₋₁ + dₖ/hₖ) with secants d,
/// a cyclic tridiagonal system (Sherman & Morrison 1950).
fn slopes(p: &[Point], h: &[f64]) -> Vec<Point> {
    let n = p.len();
    let w: Vec<f64> = h.iter().map(|h| 1.0 / h).collect();
    let before = |k: usize| (k + n - 1) % n;
    let right: Vec<Point> = (0..n)
        .map(|k| {
            let (a, b) = (before(k), (k + 1) % n);
            (p[k] - p[a]) * (3.0 * w[a] * w[a]) + (p[b] - p[k]) * (3.0 * w[k] * w[k])
        })
        .collect();
    let mut diagonal: Vec<f64> = (0..n).map(|k| 2.0 * (w[before(k)] + w[k])).collect();
    // The corner entry w[n−1] is moved into a rank-one term.
    let (corner, gamma) = (w[n - 1], -diagonal[0]);
    diagonal[0] -= gamma;
    diagonal[n - 1] -= corner * corner / gamma;
    let solve = |mut x: Vec<Point>| {
        let mut d = diagonal.clone();
        for k in 1..n {
            let f = w[k - 1] / d[k - 1];
            d[k] -= f * w[k - 1];
            x[k] = x[k] - x[k - 1] * f;
        }
        x[n - 1] = x[n - 1] * (1.0 / d[n - 1]);
        for k in (0..n - 1).rev() {
            x[k] = (x[k] - x[k + 1] * w[k]) * (1.0 / d[k]);
        }
        x
    };
    let y = solve(right);
    let mut u = vec![Point::default(); n];
    u[0].x = gamma;
    u[n - 1].x = corner;
    let z = solve(u);
    let ratio = corner / gamma;
    let share = (y[0] + y[n - 1] * ratio) * (1.0 / (1.0 + z[0].x + z[n - 1].x * ratio));
    (0..n).map(|k| y[k] - share * z[k].x).collect()
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    #[test]
    fn slope_and_curvature_are_continuous() {
        let points: Vec<Point> = [0.0, 0.7, 1.1, 2.4, 3.0, 4.4, 5.5]
            .iter()
            .enumerate()
            .map(|(k, a)| Point::polar(*a) * (1.0 + 0.1 * k as f64))
            .collect();
        let o = Outline::smooth_closed(&points).unwrap();
        let p = &o.loops[0].pieces;
        for k in 0..p.len() {
            let next = &p[(k + 1) % p.len()];
            assert_eq!(p[k].end(), next.start());
            assert!(p[k].tangent(1.0).cross(next.tangent(0.0)).abs() < 1e-14);
            assert!((p[k].curvature(1.0) - next.curvature(0.0)).abs() < 1e-12);
        }
        assert!(o.corners(1e-7).is_empty());
    }

    #[test]
    fn a_circle_comes_back_with_the_fourth_power() {
        let error = |n: usize| {
            let points: Vec<Point> = (0..n)
                .map(|k| Point::polar(std::f64::consts::TAU * k as f64 / n as f64))
                .collect();
            let o = Outline::smooth_closed(&points).unwrap();
            (o.area() - std::f64::consts::PI).abs()
        };
        let order = (error(16) / error(32)).log2();
        assert!((3.8..4.2).contains(&order), "{order}");
        assert!(pt(0., 0.).is_finite() && error(64) < 1e-5);
    }
}
