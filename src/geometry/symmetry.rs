//! Mirror axes and rotations of an outline.

use super::outline::Outline;
use super::piece::Piece;
use super::piece_measure::integrate;
use super::point::{Point, pt};
use super::similarity::Similarity;
use std::f64::consts::{PI, TAU};

/// How far, in sizes, an image may lie from the boundary and still count as on it.
const SAME: f64 = 1e-9;

/// The symmetries of an outline.
#[derive(Clone, Debug, PartialEq)]
pub struct Symmetry {
    /// Centroid; every axis runs through it.
    pub centre: Point,
    /// Angles of the mirror axes, radians in [0, π), ascending.
    pub mirrors: Vec<f64>,
    /// The outline is unchanged by 1/rotation of a turn; 1 if by nothing less than a whole one.
    pub rotation: usize,
    /// Every rotation and every mirror: the boundary is circles about the centre. `mirrors` is
    /// then empty and `rotation` 1.
    pub circle: bool,
}

impl Outline {
    /// Centroid of the area, by Green's formula ∮ (x²/2 dy, −y²/2 dx).
    pub fn centroid(&self) -> Point {
        let c = self.bounds().centre();
        let size = self.bounds().diagonal();
        let mut sum = pt(0.0, 0.0);
        for p in self.pieces() {
            let f = |t: f64, axis: usize| {
                let (q, v) = (p.at(t) - c, p.velocity(t));
                if axis == 0 {
                    0.5 * q.x * q.x * v.y
                } else {
                    -0.5 * q.y * q.y * v.x
                }
            };
            let small = 1e-17 * size * size * size;
            sum.x += integrate(&|t| f(t, 0), 0.0, 1.0, small);
            sum.y += integrate(&|t| f(t, 1), 0.0, 1.0, small);
        }
        c + sum * (1.0 / self.area())
    }

    /// Mirror axes and rotations about the centroid.
    ///
    /// A symmetry takes the boundary points furthest from the centre, or any other class of
    /// points singled out by their distance, to each other: those pairs give the candidates,
    /// and every candidate is tried on sample points of the whole boundary.
    pub fn symmetries(&self) -> Symmetry {
        let centre = self.centroid();
        let size = self.bounds().diagonal();
        let mut out = Symmetry {
            centre,
            mirrors: Vec::new(),
            rotation: 1,
            circle: false,
        };
        let marks = self.marks(centre, size);
        let Some(class) = smallest_class(&marks, centre, size) else {
            out.circle = true;
            return out;
        };
        let samples: Vec<Point> = self
            .pieces()
            .flat_map(|p| [0.0, 0.11, 0.31, 0.5, 0.73, 0.93].map(|t| p.at(t)))
            .collect();
        let angle = |p: &Point| (*p - centre).angle();
        let first = angle(&class[0]);
        // The least turn that fits generates all rotations; one mirror then gives all mirrors.
        let mut turns: Vec<f64> = class
            .iter()
            .map(|p| (angle(p) - first).rem_euclid(TAU))
            .filter(|turn| (1e-6..TAU - 1e-6).contains(turn))
            .collect();
        turns.sort_by(f64::total_cmp);
        let least = turns
            .into_iter()
            .find(|turn| self.is_kept(&Similarity::turned(centre, *turn), &samples, size));
        if let Some(least) = least {
            out.rotation = (TAU / least).round() as usize;
        }
        let axis = class
            .iter()
            .map(|p| 0.5 * (angle(p) + first))
            .find(|axis| self.is_kept(&Similarity::mirrored(centre, *axis), &samples, size));
        if let Some(axis) = axis {
            let step = PI / out.rotation as f64;
            let base = axis.rem_euclid(step);
            let base = if step - base < 1e-9 { 0.0 } else { base };
            out.mirrors = (0..out.rotation).map(|k| base + k as f64 * step).collect();
        }
        out
    }

    fn is_kept(&self, by: &Similarity, samples: &[Point], size: f64) -> bool {
        let pieces: Vec<(&Piece, super::point::Box2)> =
            self.pieces().map(|p| (p, p.bounds())).collect();
        samples.iter().all(|p| {
            let q = by.apply(*p);
            pieces
                .iter()
                .any(|(p, b)| b.distance(q) <= SAME * size && p.nearest(q).1 <= SAME * size)
        })
    }

    /// Points the geometry singles out: corners, changes of curvature, and the places where the
    /// distance from the centre is stationary.
    fn marks(&self, centre: Point, size: f64) -> Vec<Point> {
        let mut out = Vec::new();
        for l in &self.loops {
            let n = l.pieces.len();
            for (k, p) in l.pieces.iter().enumerate() {
                let next = &l.pieces[(k + 1) % n];
                let (a, b) = (p.tangent(1.0), next.tangent(0.0));
                let bend = (p.curvature(1.0) - next.curvature(0.0)).abs() * size;
                if a.cross(b).abs() > 1e-7 || a.dot(b) < 0.0 || bend > 1e-5 {
                    out.push(p.end());
                }
                if matches!(p, Piece::Arc { centre: c, .. } if (*c - centre).norm() <= SAME * size)
                {
                    continue;
                }
                let slope = |t: f64| (p.at(t) - centre).dot(p.tangent(t));
                stationary(&slope, |t| out.push(p.at(t)));
                // A stationary point may lie right in a smooth joint.
                if slope(1.0).abs() <= 1e-9 * size {
                    out.push(p.end());
                }
            }
        }
        let mut kept: Vec<Point> = Vec::new();
        for p in out {
            if kept.iter().all(|q| (*q - p).norm() > 1e-7 * size) {
                kept.push(p);
            }
        }
        kept
    }
}

/// Sign changes of `f` on [0, 1].
fn stationary(f: &impl Fn(f64) -> f64, mut found: impl FnMut(f64)) {
    const STEPS: usize = 40;
    // An uneven grid, so that no symmetric place falls on it.
    let at = |k: usize| {
        if k == 0 || k == STEPS {
            k as f64 / STEPS as f64
        } else {
            (k as f64 + 0.113) / STEPS as f64
        }
    };
    for k in 0..STEPS {
        let (mut a, mut b) = (at(k), at(k + 1));
        let rising = f(b) > 0.0;
        if (f(a) > 0.0) == rising {
            continue;
        }
        for _ in 0..54 {
            let m = 0.5 * (a + b);
            if (f(m) > 0.0) == rising {
                b = m;
            } else {
                a = m;
            }
        }
        found(0.5 * (a + b));
    }
}

/// The smallest set of marks at the same distance from the centre.
fn smallest_class(marks: &[Point], centre: Point, size: f64) -> Option<Vec<Point>> {
    let mut by_distance: Vec<(f64, Point)> = marks
        .iter()
        .map(|p| ((*p - centre).norm(), *p))
        .filter(|(r, _)| *r > 1e-6 * size)
        .collect();
    by_distance.sort_by(|a, b| a.0.total_cmp(&b.0));
    by_distance
        .chunk_by(|a, b| b.0 - a.0 <= 10.0 * SAME * size)
        .min_by_key(|c| c.len())
        .map(|c| c.iter().map(|(_, p)| *p).collect())
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use std::f64::consts::FRAC_PI_4;

    fn near(a: f64, b: f64) -> bool {
        (a - b).abs() < 1e-8
    }
    fn turned(o: &Outline, angle: f64) -> Outline {
        o.transformed(&Similarity::turned(pt(3., -2.), angle))
    }

    #[test]
    fn an_l_has_one_diagonal_mirror() {
        let l = Outline::rectangle(pt(0., 0.), pt(2., 1.))
            .unwrap()
            .add(&Outline::rectangle(pt(0., 0.), pt(1., 2.)).unwrap())
            .unwrap();
        let s = l.symmetries();
        assert!((s.centre - pt(5. / 6., 5. / 6.)).norm() < 1e-14);
        assert_eq!((s.mirrors.len(), s.rotation, s.circle), (1, 1, false));
        assert!(near(s.mirrors[0], FRAC_PI_4));
        let s = turned(&l.rounded(0.1).unwrap(), 0.3).symmetries();
        assert_eq!((s.mirrors.len(), s.rotation), (1, 1));
        assert!(near(s.mirrors[0], FRAC_PI_4 + 0.3));
    }

    #[test]
    fn the_usual_shapes_have_their_groups() {
        let o = pt(0.3, -0.2);
        let hexagon: Vec<Point> = (0..6)
            .map(|k| Point::polar(TAU * f64::from(k) / 6.0))
            .collect();
        let quatrefoil = (0..4)
            .map(|k| Outline::disc(Point::polar(TAU * f64::from(k) / 4.0), 1.0).unwrap())
            .reduce(|a, b| a.add(&b).unwrap())
            .unwrap();
        let cases = [
            (Outline::rectangle(o, pt(2., 1.)).unwrap(), 2, 2),
            (Outline::rectangle(o, pt(1., 1.)).unwrap(), 4, 4),
            (Outline::ellipse(o, pt(2., 1.), 0.4).unwrap(), 2, 2),
            (Outline::stadium(o, 1., 2., 0.4).unwrap(), 2, 2),
            (Outline::sector(o, 1., 0., 1.).unwrap(), 1, 1),
            (Outline::polygon(&hexagon).unwrap(), 6, 6),
            (quatrefoil.clone(), 4, 4),
            (quatrefoil.rounded(0.2).unwrap(), 4, 4),
            (Outline::smooth_closed(&hexagon).unwrap(), 6, 6),
            (
                Outline::polygon(&[pt(0., 0.), pt(3., 0.), pt(4., 1.), pt(1., 1.)]).unwrap(),
                0,
                2,
            ),
            (
                Outline::polygon(&[pt(0., 0.), pt(3., 0.), pt(1., 1.)]).unwrap(),
                0,
                1,
            ),
        ];
        for (shape, mirrors, rotation) in cases {
            for angle in [0.0, 0.7, 2.9] {
                let s = turned(&shape, angle).symmetries();
                assert_eq!(
                    (s.mirrors.len(), s.rotation),
                    (mirrors, rotation),
                    "{shape:?}"
                );
                assert!(!s.circle);
            }
        }
        assert!(Outline::disc(o, 1.).unwrap().symmetries().circle);
        assert!(Outline::ring(o, 0.5, 1.).unwrap().symmetries().circle);
    }

    #[test]
    fn a_mirror_needs_all_of_the_outline() {
        let eccentric = Outline::disc(pt(0., 0.), 2.)
            .unwrap()
            .cut(&Outline::disc(pt(0.5, 0.), 0.4).unwrap())
            .unwrap();
        let s = eccentric.symmetries();
        assert_eq!((s.mirrors.len(), s.rotation, s.circle), (1, 1, false));
        assert!(near(s.mirrors[0], 0.0));
    }
}
