//! Length, area and nearest point of a piece.

use super::piece::Piece;
use super::point::{Point, pt};
use std::f64::consts::TAU;

/// Nodes and weights of the 8-point Gauss–Legendre rule on [−1, 1], positive half
/// (Abramowitz & Stegun, table 25.4).
const GAUSS: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362),
    (0.525_532_409_916_329, 0.313_706_645_877_887_3),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_48),
    (0.960_289_856_497_536_3, 0.101_228_536_290_376_26),
];

fn gauss(f: &impl Fn(f64) -> f64, a: f64, b: f64) -> f64 {
    let (m, h) = (0.5 * (a + b), 0.5 * (b - a));
    let sum: f64 = GAUSS
        .iter()
        .map(|(x, w)| w * (f(m - h * x) + f(m + h * x)))
        .sum();
    h * sum
}

/// ∫ f over [a, b]: halves until the halves agree with the whole to `tolerance`.
pub(super) fn integrate(f: &impl Fn(f64) -> f64, a: f64, b: f64, tolerance: f64) -> f64 {
    fn refine(f: &impl Fn(f64) -> f64, a: f64, b: f64, whole: f64, tol: f64, depth: u32) -> f64 {
        let m = 0.5 * (a + b);
        let (l, r) = (gauss(f, a, m), gauss(f, m, b));
        // The halves are 2¹⁶ times nearer than the whole once the rule converges.
        if depth >= 12 || (l + r - whole).abs() <= 1e3 * tol {
            return l + r;
        }
        refine(f, a, m, l, tol, depth + 1) + refine(f, m, b, r, tol, depth + 1)
    }
    refine(f, a, b, gauss(f, a, b), tolerance, 0)
}

impl Piece {
    /// Arc length.
    pub fn length(&self) -> f64 {
        match self {
            Self::Line { from, to } => (*to - *from).norm(),
            Self::Arc { radius, sweep, .. } => radius * sweep.abs(),
            _ => self.length_between(0.0, 1.0),
        }
    }

    /// Arc length from t0 to t1, t0 ≤ t1.
    pub fn length_between(&self, t0: f64, t1: f64) -> f64 {
        if let Self::Line { .. } | Self::Arc { .. } = self {
            return (t1 - t0) * self.length();
        }
        let speed = |t: f64| self.velocity(t).norm();
        let rough = gauss(&speed, t0, t1);
        integrate(&speed, t0, t1, 1e-15 * rough.abs())
    }

    /// Contribution to the area about the origin: ½ ∫ (x dy − y dx).
    pub fn area_term(&self) -> f64 {
        self.area_about(pt(0.0, 0.0))
    }

    /// Area swept by the vector from `c` to the piece, ½ ∫ (P − c) × dP. Summed over a loop it
    /// does not depend on `c`; a `c` nearby loses no digits.
    pub(super) fn area_about(&self, c: Point) -> f64 {
        match self {
            Self::Line { from, to } => 0.5 * (*from - c).cross(*to - c),
            Self::Arc {
                centre,
                radius,
                sweep,
                ..
            } => {
                let chord = self.end() - self.start();
                0.5 * (radius * radius * sweep + (*centre - c).cross(chord))
            }
            Self::Ellipse {
                centre,
                half_axes,
                sweep,
                ..
            } => {
                let chord = self.end() - self.start();
                0.5 * (half_axes.x * half_axes.y * sweep + (*centre - c).cross(chord))
            }
            // Degree 5: exact with 8 points.
            Self::Bezier { .. } => {
                gauss(&|t| 0.5 * (self.at(t) - c).cross(self.velocity(t)), 0., 1.)
            }
            Self::Offset { .. } => {
                let f = |t: f64| 0.5 * (self.at(t) - c).cross(self.velocity(t));
                let box_ = self.bounds();
                let size = box_.diagonal() * (box_.diagonal() + (box_.centre() - c).norm());
                integrate(&f, 0.0, 1.0, 1e-16 * size)
            }
        }
    }

    /// The nearest point of the piece to `p`: its t and its distance.
    pub fn nearest(&self, p: Point) -> (f64, f64) {
        match self {
            Self::Line { from, to } => {
                let d = *to - *from;
                let t = ((p - *from).dot(d) / d.dot(d)).clamp(0.0, 1.0);
                let t = if t.is_nan() { 0.0 } else { t };
                (t, (self.at(t) - p).norm())
            }
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => {
                let v = p - *centre;
                let along = ((v.angle() - start) * sweep.signum()).rem_euclid(TAU);
                if along <= sweep.abs() {
                    (along / sweep.abs(), (v.norm() - radius).abs())
                } else {
                    self.nearer_end(p)
                }
            }
            _ => self.nearest_searched(p),
        }
    }

    fn nearer_end(&self, p: Point) -> (f64, f64) {
        let (a, b) = ((self.start() - p).norm(), (self.end() - p).norm());
        if a <= b { (0.0, a) } else { (1.0, b) }
    }

    /// Samples the distance, then walks down from every sample that is a local minimum.
    fn nearest_searched(&self, p: Point) -> (f64, f64) {
        let n = match self {
            Self::Ellipse { sweep, .. } => 4 + (sweep.abs() * 2.5) as usize,
            Self::Bezier { .. } => 8,
            _ => 16,
        };
        let t = |k: usize| k as f64 / n as f64;
        let d: Vec<f64> = (0..=n).map(|k| (self.at(t(k)) - p).norm()).collect();
        let mut best = self.nearer_end(p);
        for k in 0..=n {
            let (lo, hi) = (k.saturating_sub(1), (k + 1).min(n));
            // Between samples the distance falls by no more than the way between them.
            if d[k] <= d[lo] && d[k] <= d[hi] {
                let found = self.foot_within(p, t(lo), t(hi), t(k));
                let distance = (self.at(found) - p).norm();
                if distance < best.1 {
                    best = (found, distance);
                }
            }
        }
        best
    }

    /// Root of (P(t) − p)·v(t) in [lo, hi]: Newton with curvature, kept in by bisection.
    fn foot_within(&self, p: Point, mut lo: f64, mut hi: f64, mut t: f64) -> f64 {
        if let Self::Offset { base, .. } = self {
            // Parallels share their normals; the base has no cusps.
            return base.foot_within(p, lo, hi, t);
        }
        let fine = 1e-16 * (1.0 + self.velocity(t).norm());
        for _ in 0..60 {
            let (r, v) = (self.at(t) - p, self.velocity(t));
            let f = r.dot(v);
            if f > 0.0 {
                hi = t;
            } else {
                lo = t;
            }
            let speed2 = v.dot(v);
            let bend = 1.0 + self.curvature(t) * r.dot(v.unit().left());
            let mut next = t - f / (speed2 * bend);
            if !(next > lo && next < hi) || bend <= 0.0 {
                next = 0.5 * (lo + hi);
            }
            let step = (next - t).abs();
            t = next;
            if step * speed2.sqrt() <= fine || hi - lo <= 1e-17 {
                break;
            }
        }
        t
    }

    /// Foot of the perpendicular from `p` within [lo, hi]; a value beyond the end it lies behind.
    pub(super) fn foot_in(&self, p: Point, lo: f64, hi: f64) -> f64 {
        if let Self::Offset { base, .. } = self {
            return base.foot_in(p, lo, hi);
        }
        let pull = |t: f64| {
            let v = self.velocity(t);
            (self.at(t) - p).dot(v) / v.dot(v)
        };
        let (a, b) = (pull(lo), pull(hi));
        if a >= 0.0 {
            return lo - a;
        }
        if b <= 0.0 {
            return hi - b;
        }
        self.foot_within(p, lo, hi, lo + (hi - lo) * a / (a - b))
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    /// Complete elliptic integral of the second kind by the arithmetic–geometric mean
    /// (Abramowitz & Stegun 17.6): perimeter of an ellipse.
    fn ellipse_perimeter(a: f64, b: f64) -> f64 {
        let (mut x, mut y, mut sum, mut power) = (a, b, 0.0, 0.5);
        for _ in 0..12 {
            let c2 = x * x - y * y;
            sum += power * c2;
            (x, y) = (0.5 * (x + y), (x * y).sqrt());
            power *= 2.0;
        }
        // Σ 2ⁿ⁻¹ cₙ² with c₀² = a² − b²; perimeter = 2π (a² − Σ) / M.
        std::f64::consts::TAU * (a * a - sum) / x
    }

    fn ellipse(a: f64, b: f64) -> Piece {
        Piece::Ellipse {
            centre: pt(3., -2.),
            half_axes: pt(a, b),
            turn: 0.3,
            start: 0.2,
            sweep: TAU,
        }
    }

    #[test]
    fn the_perimeter_of_an_ellipse_is_the_elliptic_integral() {
        // c₀² of the textbook sum is a² − b²; later ones are (a − b)²/4 of the step before.
        for (a, b) in [(1.0, 1.0), (2.0, 1.0), (1.0, 0.1)] {
            let exact = ellipse_perimeter(a, b);
            let got = ellipse(a, b).length();
            assert!(
                (got - exact).abs() < 1e-14 * exact,
                "{a} {b}: {got} {exact}"
            );
        }
        let known = ellipse_perimeter(1.0, 0.5) - 4.844_224_110_273_838;
        // The sum of the c² cancels a little.
        assert!(known.abs() < 5e-14, "{known}");
    }

    #[test]
    fn the_area_between_parallels_is_steiners() {
        // A closed convex curve: offset outwards by d adds L d + π d².
        let e = ellipse(2.0, 1.0);
        let d = 0.3;
        let out = e.offset(-d).expect("no arc");
        let exact = e.area_term() + e.length() * d + std::f64::consts::PI * d * d;
        assert!((out.area_term() - exact).abs() < 1e-14 * exact);
        assert!((out.length() - e.length() - TAU * d).abs() < 1e-13);
    }

    #[test]
    fn no_sample_is_nearer_than_the_nearest() {
        let b = Piece::Bezier {
            points: [pt(0., 0.), pt(1., 2.), pt(3., -1.), pt(4., 1.)],
        };
        let all = [
            ellipse(2., 0.4).part(0.1, 0.8),
            b.offset(0.1).expect("no arc"),
            b,
            Piece::arc(pt(0.5, 0.5), 1.5, 2.0, -3.0),
        ];
        for p in all {
            for i in 0..100 {
                let q = pt(f64::from(i % 10) * 0.7 - 1.0, f64::from(i / 10) * 0.6 - 3.0);
                let (t, d) = p.nearest(q);
                assert!(((p.at(t) - q).norm() - d).abs() < 1e-14);
                let sampled = (0..=2000)
                    .map(|k| (p.at(f64::from(k) / 2000.0) - q).norm())
                    .fold(f64::INFINITY, f64::min);
                assert!(d <= sampled + 1e-14, "{p:?} {q:?}: {d} {sampled}");
            }
        }
    }
}
