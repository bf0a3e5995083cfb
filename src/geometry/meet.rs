//! Where two pieces meet: crossings, touches, and the ends of common stretches.

use super::piece::Piece;
use super::point::{Point, exact_polar, pt};

/// A common point of two pieces, by its parameter on each.
pub(super) type Contact = (f64, f64);

/// All contacts of `a` and `b`; points nearer than `eps` count as one.
///
/// Ends lying on the other piece come first, exactly at t = 0 or 1. Where the pieces share a
/// stretch, only its ends are listed.
pub(super) fn meet(a: &Piece, b: &Piece, eps: f64) -> Vec<Contact> {
    if circle_misses(a, b, eps) || circle_misses(b, a, eps) {
        return Vec::new();
    }
    let mut found = Found {
        a,
        b,
        eps,
        contacts: Vec::new(),
    };
    for t in [0.0, 1.0] {
        let p = a.at(t);
        let (s, d) = b.nearest(p);
        if d <= eps {
            found.end(t, snapped_end(b, s, eps));
        }
        let p = b.at(t);
        let (s, d) = a.nearest(p);
        if d <= eps {
            found.end(snapped_end(a, s, eps), t);
        }
    }
    match (a, b) {
        (Piece::Line { from, to }, Piece::Line { from: f, to: g }) => {
            let (u, v) = (*to - *from, *g - *f);
            let det = u.cross(v);
            // If the shorter one strays less than eps, its ends say all there is to say.
            if det.abs() > eps * u.norm().max(v.norm()) {
                let w = *f - *from;
                found.inner(w.cross(v) / det, w.cross(u) / det);
            }
        }
        (Piece::Line { from, to }, Piece::Arc { centre, radius, .. }) => {
            for p in line_circle(*from, *to, *centre, *radius, eps) {
                found.point(p);
            }
        }
        (Piece::Arc { centre, radius, .. }, Piece::Line { from, to }) => {
            for p in line_circle(*from, *to, *centre, *radius, eps) {
                found.point(p);
            }
        }
        (
            Piece::Arc { centre, radius, .. },
            Piece::Arc {
                centre: c,
                radius: r,
                ..
            },
        ) => {
            for p in circle_circle(*centre, *radius, *c, *r, eps) {
                found.point(p);
            }
        }
        (Piece::Line { from, to }, Piece::Ellipse { .. }) => {
            for p in line_ellipse(*from, *to, b, eps) {
                found.point(p);
            }
        }
        (Piece::Ellipse { .. }, Piece::Line { from, to }) => {
            for p in line_ellipse(*from, *to, a, eps) {
                found.point(p);
            }
        }
        (Piece::Line { .. } | Piece::Arc { .. }, _) => search(b, a, eps, |s, t| found.inner(t, s)),
        _ => search(a, b, eps, |t, s| found.inner(t, s)),
    }
    found.contacts
}

/// Whether `a` is an arc whose circle stays clear of the box around `b`.
fn circle_misses(a: &Piece, b: &Piece, eps: f64) -> bool {
    let Piece::Arc { centre, radius, .. } = a else {
        return false;
    };
    let bounds = b.bounds();
    let far = (bounds.centre() - *centre).norm() + 0.5 * bounds.diagonal();
    bounds.distance(*centre) > radius + eps || far < radius - eps
}

/// 0 or 1 if the point at t is within `eps` of that end.
fn snapped_end(p: &Piece, t: f64, eps: f64) -> f64 {
    for end in [0.0, 1.0] {
        if (t - end).abs() < 0.5 && (p.at(t) - p.at(end)).norm() <= eps {
            return end;
        }
    }
    t
}

struct Found<'a> {
    a: &'a Piece,
    b: &'a Piece,
    eps: f64,
    contacts: Vec<Contact>,
}

impl Found<'_> {
    fn end(&mut self, t: f64, s: f64) {
        if !self.contacts.contains(&(t, s)) {
            self.contacts.push((t, s));
        }
    }

    /// A point that lies on both supporting curves.
    fn point(&mut self, p: Point) {
        let (t, d) = self.a.nearest(p);
        let (s, e) = self.b.nearest(p);
        if d <= self.eps && e <= self.eps {
            self.inner(t, s);
        }
    }

    fn inner(&mut self, t: f64, s: f64) {
        if !(t > 0.0 && t < 1.0 && s > 0.0 && s < 1.0) {
            return;
        }
        let p = self.a.at(t);
        // Where curves touch, the crossing is blurred along them by √eps: near a known contact
        // a shallow crossing is that contact again.
        let shallow = self.a.tangent(t).cross(self.b.tangent(s)).abs() < 1e-3;
        let near = if shallow {
            3.0 * self.eps.sqrt() * reach(self.a, self.b).sqrt()
        } else {
            self.eps
        };
        let known = self
            .contacts
            .iter()
            .any(|(u, _)| (self.a.at(*u) - p).norm() <= near);
        if !known {
            self.contacts.push((t, s));
        }
    }
}

/// A length of the order of the pieces.
fn reach(a: &Piece, b: &Piece) -> f64 {
    let span = |p: &Piece| (p.at(0.5) - p.at(0.0)).norm();
    span(a).max(span(b))
}

fn line_circle(from: Point, to: Point, centre: Point, r: f64, eps: f64) -> Vec<Point> {
    let d = (to - from).unit();
    let w = centre - from;
    let foot = from + d * w.dot(d);
    let h = d.cross(w).abs();
    if (h - r).abs() <= eps {
        vec![foot]
    } else if h < r {
        let half = ((r - h) * (r + h)).sqrt();
        vec![foot - d * half, foot + d * half]
    } else {
        Vec::new()
    }
}

/// The circles' common points; none if they are the same circle.
fn circle_circle(c: Point, r: f64, e: Point, s: f64, eps: f64) -> Vec<Point> {
    let d = (e - c).norm();
    if d <= eps {
        return Vec::new();
    }
    let u = (e - c).unit();
    let gaps = [r + s - d, d - r + s, d + r - s];
    if gaps[0] < -eps || gaps[1] < -eps || gaps[2] < -eps {
        return Vec::new();
    }
    if gaps[0] <= eps {
        return vec![c + u * r];
    }
    if gaps[1] <= eps {
        return vec![c + u * r];
    }
    if gaps[2] <= eps {
        return vec![c - u * r];
    }
    // Heron's product keeps all digits of a thin lens.
    let h = ((d + r + s) * gaps[0] * gaps[1] * gaps[2]).sqrt() / (2.0 * d);
    let along = 0.5 * (d + (r - s) * (r + s) / d);
    let foot = c + u * along;
    vec![foot + u.left() * h, foot - u.left() * h]
}

fn line_ellipse(from: Point, to: Point, ellipse: &Piece, eps: f64) -> Vec<Point> {
    let Piece::Ellipse {
        centre,
        half_axes,
        turn,
        ..
    } = ellipse
    else {
        return Vec::new();
    };
    let e = exact_polar(*turn);
    let inside = |p: Point| {
        let q = (p - *centre).turned(e.conj());
        pt(q.x / half_axes.x, q.y / half_axes.y)
    };
    let outside = |q: Point| *centre + pt(q.x * half_axes.x, q.y * half_axes.y).turned(e);
    let small = eps / half_axes.x.min(half_axes.y);
    line_circle(inside(from), inside(to), pt(0.0, 0.0), 1.0, small)
        .into_iter()
        .map(outside)
        .collect()
}

/// Contacts of any two curves: chords of both that come near each other bracket the roots of
/// the signed distance of `a` from `b`.
fn search(a: &Piece, b: &Piece, eps: f64, mut report: impl FnMut(f64, f64)) {
    let size = a.bounds().diagonal().min(b.bounds().diagonal()).max(eps);
    let tolerance = 1e-3 * size;
    let chords = |p: &Piece| -> Vec<(f64, Point)> {
        p.flatten(tolerance)
            .iter()
            .map(|t| (*t, p.at(*t)))
            .collect()
    };
    let (ca, cb) = (chords(a), chords(b));
    for w in ca.windows(2) {
        for (j, v) in cb.windows(2).enumerate() {
            if segment_gap(w[0].1, w[1].1, v[0].1, v[1].1) <= 2.0 * tolerance + eps {
                let around = [cb[j.saturating_sub(1)].0, cb[(j + 2).min(cb.len() - 1)].0];
                for (t, s) in crossings(a, b, [w[0].0, w[1].0], around, eps) {
                    report(t, s);
                }
            }
        }
    }
}

/// Distance of two segments.
pub(super) fn segment_gap(a: Point, b: Point, c: Point, d: Point) -> f64 {
    let side = |p: Point, q: Point, r: Point| (q - p).cross(r - p);
    if side(a, b, c) * side(a, b, d) < 0.0 && side(c, d, a) * side(c, d, b) < 0.0 {
        return 0.0;
    }
    let to = |p: Point, q: Point, r: Point| Piece::line(q, r).nearest(p).1;
    to(a, c, d)
        .min(to(b, c, d))
        .min(to(c, a, b))
        .min(to(d, a, b))
}

/// Roots on [lo, hi] of the signed distance g(t) of `a` from `b`, and touches where |g| ≤ eps at
/// an extremum.
fn crossings(a: &Piece, b: &Piece, [lo, hi]: [f64; 2], around: [f64; 2], eps: f64) -> Vec<Contact> {
    let foot = |t: f64| b.foot_in(a.at(t), around[0], around[1]);
    let g = |t: f64| {
        let s = foot(t);
        (a.at(t) - b.at(s)).dot(b.tangent(s).left())
    };
    let slope = |t: f64| a.tangent(t).dot(b.tangent(foot(t)).left());
    // Only where the foot lies on the piece itself: continued past a cusp, a parallel turns back.
    let (lo, hi) = (onto(&foot, lo, hi, around), onto(&foot, hi, lo, around));
    if lo >= hi {
        return Vec::new();
    }
    let mid = 0.5 * (lo + hi);
    if [lo, mid, hi].iter().all(|t| g(*t).abs() <= 2.0 * eps) {
        return Vec::new(); // A common stretch; its ends are found as end points.
    }
    let mut cuts = vec![lo, hi];
    let mut out = Vec::new();
    if slope(lo) * slope(hi) < 0.0 {
        let t = bisect(&slope, lo, hi);
        if g(t).abs() <= eps {
            return vec![(t, foot(t))];
        }
        cuts.insert(1, t);
    }
    for w in cuts.windows(2) {
        if g(w[0]) * g(w[1]) <= 0.0 {
            let t = polish(a, b, bisect(&g, w[0], w[1]), &foot);
            out.push((t, foot(t)));
        }
    }
    out.retain(|(t, s)| (a.at(*t) - b.at(*s)).norm() <= eps);
    out
}

/// `t` moved towards `other` until its foot lies in the given range; beyond `other` if it never does.
fn onto(foot: &impl Fn(f64) -> f64, t: f64, other: f64, around: [f64; 2]) -> f64 {
    let (s, r) = (foot(t), foot(other));
    let bound = if s < around[0] {
        around[0]
    } else if s > around[1] {
        around[1]
    } else {
        return t;
    };
    if (s - bound) * (r - bound) > 0.0 {
        return other + (other - t);
    }
    bisect(&|x| foot(x) - bound, t, other)
}

/// The sign change of f in [lo, hi], by the Illinois rule.
fn bisect(f: &impl Fn(f64) -> f64, lo: f64, hi: f64) -> f64 {
    let (mut lo, mut hi) = (lo.min(hi), lo.max(hi));
    let (mut flo, mut fhi) = (f(lo), f(hi));
    let mut side = 0;
    for k in 0..80 {
        if hi - lo <= 1e-16 || flo == fhi {
            break;
        }
        // A plain halving now and then, should the function be too crooked for the rule.
        let t = if k % 4 == 3 {
            0.5 * (lo + hi)
        } else {
            ((lo * fhi - hi * flo) / (fhi - flo)).clamp(lo, hi)
        };
        let ft = f(t);
        if ft == 0.0 {
            return t;
        }
        if (ft > 0.0) == (fhi > 0.0) {
            if (hi - t) <= 1e-17 {
                return t;
            }
            (hi, fhi) = (t, ft);
            if side == 1 {
                flo *= 0.5;
            }
            side = 1;
        } else {
            if (t - lo) <= 1e-17 {
                return t;
            }
            (lo, flo) = (t, ft);
            if side == -1 {
                fhi *= 0.5;
            }
            side = -1;
        }
    }
    if flo.abs() < fhi.abs() { lo } else { hi }
}

/// One Newton step for both curves at once, to the last digit.
fn polish(a: &Piece, b: &Piece, t: f64, foot: &impl Fn(f64) -> f64) -> f64 {
    let s = foot(t);
    let (u, v) = (a.velocity(t), b.velocity(s));
    let det = u.cross(v);
    if det.abs() <= 1e-6 * u.norm() * v.norm() {
        return t;
    }
    t + (b.at(s) - a.at(t)).cross(v) / det
}

/// Pairs (i, j), i < j, of boxes that meet: a sweep in x.
pub(super) fn meeting_boxes(boxes: &[super::point::Box2]) -> Vec<(usize, usize)> {
    let mut order: Vec<usize> = (0..boxes.len()).collect();
    order.sort_by(|i, j| boxes[*i].lo.x.total_cmp(&boxes[*j].lo.x));
    let mut active: Vec<usize> = Vec::new();
    let mut out = Vec::new();
    for i in order {
        active.retain(|j| boxes[*j].hi.x >= boxes[i].lo.x);
        for j in &active {
            if boxes[i].meets(&boxes[*j]) {
                out.push((i.min(*j), i.max(*j)));
            }
        }
        active.push(i);
    }
    out
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use std::f64::consts::TAU;

    fn circle(x: f64, y: f64, r: f64) -> Piece {
        Piece::arc(pt(x, y), r, 0.1, TAU)
    }
    fn ellipse(x: f64, a: f64, b: f64) -> Piece {
        Piece::Ellipse {
            centre: pt(x, 0.),
            half_axes: pt(a, b),
            turn: 0.0,
            start: 0.3,
            sweep: TAU,
        }
    }

    fn worst(a: &Piece, b: &Piece, contacts: &[Contact]) -> f64 {
        contacts
            .iter()
            .map(|(t, s)| (a.at(*t) - b.at(*s)).norm())
            .fold(0.0, f64::max)
    }

    #[test]
    fn crossings_are_exact_to_the_last_digits() {
        let bezier = Piece::Bezier {
            points: [pt(-2., -1.), pt(0., 3.), pt(0.5, -3.), pt(2., 1.)],
        };
        let cases = [
            (circle(0., 0., 1.), circle(1., 0., 1.), 2),
            (circle(0., 0., 1.), ellipse(0., 2., 0.5), 4),
            (ellipse(0., 2., 0.5), ellipse(0.3, 0.5, 2.), 4),
            (
                Piece::line(pt(-3., -1.), pt(3., 1.)),
                ellipse(0., 2., 0.5),
                2,
            ),
            (bezier.clone(), Piece::line(pt(-3., 0.), pt(3., 0.1)), 3),
            (bezier.offset(0.1).expect("no arc"), circle(0., 0., 1.), 2),
        ];
        for (a, b, n) in cases {
            let found = meet(&a, &b, 1e-12);
            assert_eq!(found.len(), n, "{a:?} {b:?} {found:?}");
            assert!(worst(&a, &b, &found) < 4e-15, "{a:?} {b:?}");
            assert_eq!(meet(&b, &a, 1e-12).len(), n);
        }
    }

    #[test]
    fn a_touch_is_one_contact_and_a_gap_none() {
        for (gap, n) in [(1e-6, 0), (0.0, 1), (-1e-6, 2), (-1e-9, 2)] {
            let a = ellipse(0., 2., 1.);
            let b = ellipse(3.5 + gap, 1.5, 1.);
            assert_eq!(meet(&a, &b, 1e-12).len(), n, "ellipses {gap}");
            let (a, b) = (circle(0., 0., 2.), circle(3.5 + gap, 0., 1.5));
            assert_eq!(meet(&a, &b, 1e-12).len(), n, "circles {gap}");
        }
    }

    #[test]
    fn a_common_stretch_gives_its_ends() {
        let a = circle(0., 0., 1.).part(0.0, 0.5);
        let b = circle(0., 0., 1.).part(0.25, 0.75);
        assert_eq!(meet(&a, &b, 1e-12).len(), 2);
        let (a, b) = (
            ellipse(0., 2., 1.).part(0., 0.5),
            ellipse(0., 2., 1.).part(0.2, 0.7),
        );
        assert_eq!(meet(&a, &b, 1e-12).len(), 2);
    }
}
