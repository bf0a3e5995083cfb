//! Rounding corners: an arc tangent to both edges in the place of every corner.

use super::error::GeometryError;
use super::meet::meet;
use super::outline::{Loop, Outline, turn_between};
use super::piece::Piece;
use super::point::Point;
use super::tidy::tidy;
use std::f64::consts::TAU;

/// A joint that turns by less is no corner, radians.
pub(super) const CORNER: f64 = 1e-7;

impl Outline {
    /// Every corner, outer and inner, replaced by an arc of this radius tangent to both edges.
    ///
    /// # Errors
    /// [`GeometryError::NoRoomToRound`] names a corner whose arc does not fit (an edge is too
    /// short for it, or for the arcs at both its ends) and the largest radius that would.
    pub fn rounded(&self, radius: f64) -> Result<Self, GeometryError> {
        if radius.is_nan() || radius < 0.0 || radius.is_infinite() {
            return Err(GeometryError::NotPositive {
                what: "the radius of the rounding",
                value: radius,
            });
        }
        if radius == 0.0 {
            return Ok(self.clone());
        }
        if let Ok(out) = self.filleted(radius) {
            return Ok(out);
        }
        let (mut fits, mut not) = (0.0, radius);
        let mut corner = Point::default();
        for _ in 0..40 {
            let middle = 0.5 * (fits + not);
            match self.filleted(middle) {
                Ok(_) => fits = middle,
                Err(at) => (not, corner) = (middle, at),
            }
        }
        if let (true, Err(at)) = (
            fits == 0.0 || corner == Point::default(),
            self.filleted(radius),
        ) {
            corner = at;
        }
        Err(GeometryError::NoRoomToRound {
            at: corner,
            radius,
            largest: fits,
        })
    }

    /// The rounded outline, or the corner that has no room.
    fn filleted(&self, radius: f64) -> Result<Self, Point> {
        let size = self.bounds().diagonal();
        let mut loops = Vec::new();
        let mut arcs = Vec::new();
        for l in &self.loops {
            let (pieces, new) = fillet_loop(l, radius, size)?;
            arcs.extend(new);
            loops.extend(tidy(pieces, size));
        }
        let out = Self { loops };
        // An arc must not run into anything else.
        for (arc, corner) in &arcs {
            let b = arc.bounds();
            for p in out.pieces() {
                if p.bounds().meets(&b)
                    && meet(arc, p, 1e-10 * size)
                        .iter()
                        .any(|(t, _)| (0.01..0.99).contains(t) && !on_itself(arc, p))
                {
                    return Err(*corner);
                }
            }
        }
        Ok(out)
    }
}

/// Whether `p` lies on the circle of the arc, so that contacts are those of the arc with itself.
fn on_itself(arc: &Piece, p: &Piece) -> bool {
    match (arc, p) {
        (
            Piece::Arc { centre, radius, .. },
            Piece::Arc {
                centre: c,
                radius: r,
                ..
            },
        ) => (*centre - *c).norm() <= 1e-9 * radius && (radius - r).abs() <= 1e-9 * radius,
        _ => false,
    }
}

/// The pieces between two corners, run through by u from 0 to their number.
struct Run<'a> {
    pieces: Vec<&'a Piece>,
}

impl Run<'_> {
    fn place(&self, u: f64) -> (&Piece, f64) {
        let k = (u.floor().max(0.0) as usize).min(self.pieces.len() - 1);
        (self.pieces[k], u - k as f64)
    }
    fn end(&self) -> f64 {
        self.pieces.len() as f64
    }
    fn at(&self, u: f64) -> Point {
        let (p, t) = self.place(u);
        p.at(t)
    }
    fn tangent(&self, u: f64) -> Point {
        let (p, t) = self.place(u);
        p.tangent(t)
    }
    /// The point at the distance `by` to the left.
    fn beside(&self, u: f64, by: f64) -> Point {
        self.at(u) + self.tangent(u).left() * by
    }
    fn beside_velocity(&self, u: f64, by: f64) -> Point {
        let (p, t) = self.place(u);
        p.velocity(t) * (1.0 - by * p.curvature(t))
    }
    /// The pieces from u to v.
    fn between(&self, u: f64, v: f64) -> Vec<Piece> {
        let mut out = Vec::new();
        for (k, p) in self.pieces.iter().enumerate() {
            let (a, b) = (
                (u - k as f64).clamp(0.0, 1.0),
                (v - k as f64).clamp(0.0, 1.0),
            );
            if b - a > 1e-13 {
                out.push(if (a, b) == (0.0, 1.0) {
                    (*p).clone()
                } else {
                    p.part(a, b)
                });
            }
        }
        out
    }
}

type Filleted = (Vec<Piece>, Vec<(Piece, Point)>);

fn fillet_loop(l: &Loop, radius: f64, size: f64) -> Result<Filleted, Point> {
    let n = l.pieces.len();
    let corners: Vec<(usize, f64)> = (0..n)
        .map(|k| (k, turn_between(&l.pieces[(k + n - 1) % n], &l.pieces[k])))
        .filter(|(_, turn)| turn.abs() > CORNER)
        .collect();
    if corners.is_empty() {
        return Ok((l.pieces.clone(), Vec::new()));
    }
    let m = corners.len();
    let runs: Vec<Run> = (0..m)
        .map(|i| {
            let (from, to) = (corners[i].0, corners[(i + 1) % m].0);
            let count = (to + n - from - 1) % n + 1;
            Run {
                pieces: (0..count).map(|k| &l.pieces[(from + k) % n]).collect(),
            }
        })
        .collect();
    // Corner i lies between run i − 1 and run i: where its arc leaves the one and meets the other.
    let mut touches = Vec::with_capacity(m);
    for (i, (_, turn)) in corners.iter().enumerate() {
        let (before, after) = (&runs[(i + m - 1) % m], &runs[i]);
        let corner = after.at(0.0);
        touches.push(touch(before, after, *turn, radius).ok_or(corner)?);
    }
    let mut out = Vec::new();
    let mut arcs = Vec::new();
    for i in 0..m {
        let next = (i + 1) % m;
        let (from, to) = (touches[i].1, touches[next].0);
        let run = &runs[i];
        let overlap = (run.at(from.min(run.end())) - run.at(to.max(0.0))).norm();
        if from > to && overlap > 1e-9 * size {
            return Err(run.at(0.0));
        }
        out.extend(run.between(from, to));
        let turn = corners[next].1;
        let arc = arc_between(run, to, &runs[next], touches[next].1, turn, radius);
        arcs.push((arc.clone(), runs[next].at(0.0)));
        out.push(arc);
    }
    Ok((out, arcs))
}

fn arc_between(a: &Run, u: f64, b: &Run, v: f64, turn: f64, radius: f64) -> Piece {
    let side = turn.signum();
    let centre = (a.beside(u, side * radius) + b.beside(v, side * radius)) * 0.5;
    let (t, w) = (a.tangent(u), b.tangent(v));
    let sweep = (side * t.cross(w).atan2(t.dot(w))).rem_euclid(TAU);
    Piece::arc(centre, radius, (t.left() * -side).angle(), side * sweep)
}

/// Parameters at which a circle of this radius, on the inner side of the turn, touches both
/// runs; the one nearest to the corner.
fn touch(a: &Run, b: &Run, turn: f64, radius: f64) -> Option<(f64, f64)> {
    let by = turn.signum() * radius;
    let reach = radius * (0.5 * turn.abs()).tan();
    let straight = |r: &Run, k: usize| match r.pieces[k] {
        Piece::Line { from, to } => Some((*to - *from).norm()),
        _ => None,
    };
    if let (Some(l), Some(m)) = (straight(a, a.pieces.len() - 1), straight(b, 0)) {
        let slack = 1.0 + 1e-12;
        if reach <= l * slack && reach <= m * slack {
            return Some((a.end() - (reach / l).min(1.0), (reach / m).min(1.0)));
        }
        if a.pieces.len() == 1 && reach > l * slack || b.pieces.len() == 1 && reach > m * slack {
            return None;
        }
    }
    let (mut u, mut v) = scan(a, b, by)?;
    for _ in 0..40 {
        let gap = b.beside(v, by) - a.beside(u, by);
        let (p, q) = (a.beside_velocity(u, by), b.beside_velocity(v, by));
        let det = p.cross(q);
        if det == 0.0 {
            return None;
        }
        let (du, dv) = (gap.cross(q) / det, gap.cross(p) / det);
        u = (u + du.clamp(-0.3, 0.3)).clamp(0.0, a.end());
        v = (v + dv.clamp(-0.3, 0.3)).clamp(0.0, b.end());
        if du.abs().max(dv.abs()) < 1e-15 {
            break;
        }
    }
    let gap = (b.beside(v, by) - a.beside(u, by)).norm();
    (gap <= 1e-12 * (radius + a.at(u).norm())).then_some((u, v))
}

/// The crossing of the two parallels nearest to the corner, to within a chord.
fn scan(a: &Run, b: &Run, by: f64) -> Option<(f64, f64)> {
    const STEPS: usize = 48;
    let samples = |r: &Run| -> Vec<(f64, Point)> {
        let n = STEPS * r.pieces.len();
        (0..=n)
            .map(|k| r.end() * k as f64 / n as f64)
            .map(|u| (u, r.beside(u, by)))
            .collect()
    };
    let (mut p, q) = (samples(a), samples(b));
    p.reverse();
    // Diagonal order: the nearest crossing is found first.
    for sum in 0..p.len() + q.len() - 3 {
        for i in sum.saturating_sub(q.len() - 2)..=sum.min(p.len() - 2) {
            let j = sum - i;
            let (c, d, e, f) = (p[i], p[i + 1], q[j], q[j + 1]);
            let (s, r) = (d.1 - c.1, f.1 - e.1);
            let det = s.cross(r);
            let w = e.1 - c.1;
            let (x, y) = (w.cross(r) / det, w.cross(s) / det);
            let slack = -1e-9..=1.0 + 1e-9;
            if det != 0.0 && slack.contains(&x) && slack.contains(&y) {
                return Some((c.0 + x * (d.0 - c.0), e.0 + y * (f.0 - e.0)));
            }
        }
    }
    None
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::super::similarity::Similarity;
    use super::*;
    use std::f64::consts::PI;

    fn rectangle(w: f64, h: f64) -> Outline {
        Outline::rectangle(pt(0., 0.), pt(w, h)).unwrap()
    }
    fn l_shape() -> Outline {
        rectangle(2., 1.).add(&rectangle(1., 2.)).unwrap()
    }

    #[test]
    fn rounded_squares_and_ls_have_their_areas() {
        for k in 0..8 {
            let s = Similarity::turned(pt(1., 2.), 0.6 * f64::from(k));
            for r in [0.02, 0.1, 0.3] {
                let q = rectangle(1., 1.).transformed(&s).rounded(r).unwrap();
                assert!((q.area() - (1.0 - (4.0 - PI) * r * r)).abs() < 1e-13);
                assert!((q.perimeter() - (4.0 - 8.0 * r + 2.0 * PI * r)).abs() < 1e-13);
                assert!(q.corners(1e-9).is_empty());
                // Five corners lose (1 − π/4) r², the inner one gains it.
                let l = l_shape().transformed(&s).rounded(r).unwrap();
                assert!((l.area() - (3.0 - (4.0 - PI) * r * r)).abs() < 1e-13);
                assert!(l.corners(1e-9).is_empty());
                assert_eq!(l.pieces().count(), 12);
            }
        }
    }

    #[test]
    fn arcs_that_use_an_edge_up_are_joined() {
        let q = rectangle(1., 1.).rounded(0.5).unwrap();
        assert_eq!(q.pieces().count(), 1);
        assert!((q.area() - PI / 4.0).abs() < 1e-14);
        let s = rectangle(2., 1.).rounded(0.5).unwrap();
        assert_eq!(s.pieces().count(), 4);
    }

    #[test]
    fn no_room_names_a_corner_and_the_largest_radius() {
        for (o, largest) in [(rectangle(2., 1.), 0.5), (l_shape(), 0.5)] {
            match o.rounded(0.7) {
                Err(GeometryError::NoRoomToRound { largest: l, at, .. }) => {
                    assert!((l - largest).abs() < 1e-8, "{l}");
                    assert!(o.distance(at).abs() < 1e-12);
                }
                other => panic!("{other:?}"),
            }
        }
        assert!(rectangle(1., 1.).rounded(-1.0).is_err());
        assert!(rectangle(1., 1.).rounded(f64::NAN).is_err());
    }

    #[test]
    fn curved_edges_are_met_tangentially() {
        // Two discs with a neck: four inner corners between arcs and lines, the neck narrower
        // than twice the radius.
        let d = |x: f64| Outline::disc(pt(x, 0.), 1.0).unwrap();
        let neck = Outline::rectangle(pt(0., -0.1), pt(3., 0.2)).unwrap();
        let o = d(0.).add(&d(3.)).unwrap().add(&neck).unwrap();
        assert_eq!(o.corners(1e-7).len(), 4);
        for r in [0.05, 0.2, 0.4] {
            let f = o.rounded(r).unwrap();
            assert!(f.corners(1e-9).is_empty(), "{r}");
            assert!(f.area() > o.area());
            let tightest = f.min_radius().unwrap().0;
            assert!((tightest - r).abs() < 1e-12);
        }
        // The fillets of one side meet when (1 + r)² = 1.5² + (r + 0.1)².
        let largest = 1.26 / 1.8;
        match o.rounded(1.0) {
            Err(GeometryError::NoRoomToRound { largest: l, .. }) => {
                assert!((l - largest).abs() < 1e-8, "{l} {largest}");
            }
            other => panic!("{other:?}"),
        }
        let e = Outline::ellipse(pt(0., 0.), pt(2., 1.), 0.3).unwrap();
        let lens = e.keep(&Outline::disc(pt(1.5, 0.), 1.2).unwrap()).unwrap();
        assert!(lens.rounded(0.1).unwrap().corners(1e-9).is_empty());
    }

    #[test]
    fn the_tip_of_a_crescent_is_rounded_too() {
        let moon = Outline::disc(pt(0., 0.), 2.0)
            .unwrap()
            .cut(&Outline::disc(pt(1., 0.), 1.0).unwrap())
            .unwrap();
        let c = moon.corners(1e-7);
        // One loop that visits the point of touch twice, a tip of material on either side.
        assert_eq!(c.len(), 2, "{moon:#?}");
        assert!(c.iter().all(|c| c.angle.abs() < 1e-7), "{c:?}");
        let f = moon.rounded(0.05).unwrap();
        assert!(f.corners(1e-9).is_empty());
        assert!(f.area() < moon.area() && f.area() > moon.area() - 0.2);
    }
}
