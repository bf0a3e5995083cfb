//! The narrowest places of an outline: necks of the material, slots between its parts.

use super::outline::{Outline, turn_between};
use super::piece::Piece;
use super::point::{Box2, Point};
use std::f64::consts::TAU;

/// A narrow place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gap {
    /// Distance of the two walls.
    pub width: f64,
    /// The point halfway between them.
    pub at: Point,
}

/// The narrowest neck and the narrowest slot of an outline.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Narrowest {
    /// Through the material.
    pub neck: Option<Gap>,
    /// Through the outside (a hole counts as outside).
    pub slot: Option<Gap>,
}

/// A chord of the boundary with what is needed to shoot from it.
struct Chord {
    a: Point,
    b: Point,
    /// The piece it is a chord of, and the middle of its range.
    piece: usize,
    t: f64,
    /// The chords before and after, unless a corner lies between.
    next_to: [Option<usize>; 2],
}

impl Outline {
    /// The narrowest neck and slot; exact between smooth walls, else to a few parts in a thousand.
    ///
    /// Rays along the normals of many boundary points find the opposite wall; a place counts
    /// where the width is no larger than on either side of it along the boundary, so that the
    /// tip of a wedge, where the width falls to nothing by itself, is no neck. Corners that
    /// point into the space looked at are tried in all directions between their two normals.
    pub fn narrowest(&self) -> Narrowest {
        let size = self.bounds().diagonal();
        let mut chords = Vec::new();
        let mut pieces = Vec::new();
        for l in &self.loops {
            let first = chords.len();
            for p in &l.pieces {
                let mut ts = p.flatten(2e-4 * size);
                // Long edges need several shots.
                let steps = (p.length() / (0.04 * size)).ceil().clamp(3.0, 64.0) as usize;
                if ts.len() <= steps {
                    ts = (0..=steps).map(|k| k as f64 / steps as f64).collect();
                }
                for w in ts.windows(2) {
                    chords.push(Chord {
                        a: p.at(w[0]),
                        b: p.at(w[1]),
                        piece: pieces.len(),
                        t: 0.5 * (w[0] + w[1]),
                        next_to: [None, None],
                    });
                }
                pieces.push(p);
            }
            let n = chords.len() - first;
            for k in 0..n {
                let (this, after) = (first + k, first + (k + 1) % n);
                let (p, q) = (pieces[chords[this].piece], pieces[chords[after].piece]);
                let inner = std::ptr::eq(p, q) && chords[this].t < chords[after].t;
                if inner || turn_between(p, q).abs() < 1e-3 {
                    chords[this].next_to[1] = Some(after);
                    chords[after].next_to[0] = Some(this);
                }
            }
        }
        let grid = ChordGrid::new(&chords, self.bounds());
        Narrowest {
            neck: self.side(&pieces, &chords, &grid, 1.0),
            slot: self.side(&pieces, &chords, &grid, -1.0),
        }
    }

    /// `sign` 1 looks into the material, −1 out of it.
    fn side(
        &self,
        pieces: &[&Piece],
        chords: &[Chord],
        grid: &ChordGrid,
        sign: f64,
    ) -> Option<Gap> {
        let mut best: Option<Gap> = None;
        let mut offer = |width: f64, at: Point| {
            if best.is_none_or(|b| width < b.width) {
                best = Some(Gap { width, at });
            }
        };
        let shots: Vec<Option<(f64, usize)>> = chords
            .iter()
            .enumerate()
            .map(|(k, c)| {
                let normal = (c.b - c.a).unit().left() * sign;
                grid.hit(chords, (c.a + c.b) * 0.5, normal, k)
            })
            .collect();
        for k in 0..chords.len() {
            let Some((width, hit)) = shots[k] else {
                continue;
            };
            // At the end of an edge only what the corner there tries by itself may be smaller.
            let neighbour = |j: usize| shots[j].map_or(f64::INFINITY, |s| s.0);
            let [before, after] = chords[k].next_to.map(|j| j.map(neighbour));
            let slack = 1.0 + 1e-9;
            let (Some(before), Some(after)) = (before, after) else {
                continue;
            };
            let facing = (chords[k].b - chords[k].a)
                .unit()
                .dot((chords[hit].b - chords[hit].a).unit());
            if width <= before * slack && width <= after * slack && facing < -0.5 {
                let (c, h) = (&chords[k], &chords[hit]);
                let normal = (c.b - c.a).unit().left() * sign;
                offer(width, (c.a + c.b) * 0.5 + normal * (0.5 * width));
                let (a, b) = (pieces[c.piece], pieces[h.piece]);
                if let Some((p, q)) = closest_approach(a, c.t, b, h.t)
                    && (p - q).norm() <= width
                {
                    offer((p - q).norm(), (p + q) * 0.5);
                }
            }
        }
        for (width, at) in self.corner_gaps(sign) {
            offer(width, at);
        }
        best
    }

    /// Shortest ways from every corner that points into the space looked at, to any wall they
    /// meet squarely or to another such corner.
    fn corner_gaps(&self, sign: f64) -> Vec<(f64, Point)> {
        let mut corners = Vec::new();
        for l in &self.loops {
            let n = l.pieces.len();
            for k in 0..n {
                let (a, b) = (&l.pieces[(k + n - 1) % n], &l.pieces[k]);
                if turn_between(a, b) * sign < -1e-3 {
                    corners.push((b.start(), a.tangent(1.0), b.tangent(0.0)));
                }
            }
        }
        // Locally shortest: the way lies between the two normals of the corner.
        let between = |c: &(Point, Point, Point), d: Point| {
            c.1.dot(d) >= -1e-9 * d.norm() && c.2.dot(d) <= 1e-9 * d.norm()
        };
        let mut out = Vec::new();
        for (i, c) in corners.iter().enumerate() {
            let mut reach = f64::INFINITY;
            let mut found = None;
            for p in self.pieces() {
                if p.bounds().distance(c.0) >= reach {
                    continue;
                }
                let (t, width) = p.nearest(c.0);
                let inner = t > 1e-9 && t < 1.0 - 1e-9;
                if inner && width > 0.0 && width < reach && between(c, p.at(t) - c.0) {
                    (reach, found) = (width, Some(p.at(t)));
                }
            }
            for (j, o) in corners.iter().enumerate() {
                let d = o.0 - c.0;
                if i != j && d.norm() < reach && between(c, d) && between(o, -d) {
                    (reach, found) = (d.norm(), Some(o.0));
                }
            }
            if let Some(q) = found {
                let middle = (c.0 + q) * 0.5;
                if self.contains(middle) == (sign > 0.0) {
                    out.push((reach, middle));
                }
            }
        }
        out
    }
}

/// The pair of points near t and s where the way from one piece to the other is perpendicular to
/// both. Newton for parallel tangents and a foot, which stays well-conditioned when the pieces
/// all but touch; `None` between straight walls, where the width is known already.
fn closest_approach(a: &Piece, mut t: f64, b: &Piece, mut s: f64) -> Option<(Point, Point)> {
    for _ in 0..20 {
        let (ta, tb) = (a.tangent(t), b.tangent(s));
        let (va, vb) = (a.velocity(t).norm(), b.velocity(s).norm());
        let (ka, kb) = (a.curvature(t) * va, b.curvature(s) * vb);
        let r = a.at(t) - b.at(s);
        let (f, g) = (ta.cross(tb), r.dot(ta));
        let (ft, fs) = (ta.left().cross(tb) * ka, ta.cross(tb.left()) * kb);
        let (gt, gs) = (va + r.dot(ta.left()) * ka, -vb * tb.dot(ta));
        let det = ft * gs - fs * gt;
        let (dt, ds) = ((f * gs - fs * g) / det, (ft * g - gt * f) / det);
        if !(dt.is_finite() && ds.is_finite()) {
            return None;
        }
        t -= dt;
        s -= ds;
        if !on_piece(a, t) || !on_piece(b, s) {
            return None;
        }
        if dt.abs().max(ds.abs()) < 1e-14 {
            break;
        }
    }
    Some((a.at(t), b.at(s)))
}

/// Whether t lies on the piece; a whole circle goes on beyond its seam.
fn on_piece(p: &Piece, t: f64) -> bool {
    let whole = match p {
        Piece::Arc { sweep, .. } | Piece::Ellipse { sweep, .. } => sweep.abs() > TAU - 1e-9,
        _ => false,
    };
    let beyond = if whole { 0.5 } else { 1e-9 };
    (-beyond..=1.0 + beyond).contains(&t)
}

/// Chords by the cells of a square grid they touch.
struct ChordGrid {
    bounds: Box2,
    cell: f64,
    columns: usize,
    rows: usize,
    cells: Vec<Vec<u32>>,
}

impl ChordGrid {
    fn new(chords: &[Chord], bounds: Box2) -> Self {
        let bounds = bounds.widened(1e-6 * bounds.diagonal());
        let per_side = (chords.len() as f64).sqrt().clamp(4.0, 256.0);
        let cell = bounds.size().x.max(bounds.size().y) / per_side;
        let columns = (bounds.size().x / cell) as usize + 1;
        let rows = (bounds.size().y / cell) as usize + 1;
        let mut out = Self {
            bounds,
            cell,
            columns,
            rows,
            cells: vec![Vec::new(); columns * rows],
        };
        for (k, c) in chords.iter().enumerate() {
            let (i0, j0) = out.place(Point {
                x: c.a.x.min(c.b.x),
                y: c.a.y.min(c.b.y),
            });
            let (i1, j1) = out.place(Point {
                x: c.a.x.max(c.b.x),
                y: c.a.y.max(c.b.y),
            });
            for j in j0..=j1 {
                for i in i0..=i1 {
                    out.cells[j * columns + i].push(k as u32);
                }
            }
        }
        out
    }

    fn place(&self, p: Point) -> (usize, usize) {
        let q = (p - self.bounds.lo) * (1.0 / self.cell);
        (
            (q.x.max(0.0) as usize).min(self.columns - 1),
            (q.y.max(0.0) as usize).min(self.rows - 1),
        )
    }

    /// First chord met by the ray, other than `own`, and the distance to it.
    fn hit(&self, chords: &[Chord], from: Point, d: Point, own: usize) -> Option<(f64, usize)> {
        let mut best: Option<(f64, usize)> = None;
        let (mut i, mut j) = self.place(from);
        // Distance along the ray to the next grid line in x and in y, and between lines.
        let lo = self.bounds.lo;
        let line = |k: usize, up: bool| (k + usize::from(up)) as f64 * self.cell;
        let step = |v: f64| {
            if v == 0.0 {
                f64::INFINITY
            } else {
                self.cell / v.abs()
            }
        };
        let first = |v: f64, x: f64, k: usize| {
            if v == 0.0 {
                f64::INFINITY
            } else {
                (line(k, v > 0.0) - x) / v
            }
        };
        let (mut tx, mut ty) = (first(d.x, from.x - lo.x, i), first(d.y, from.y - lo.y, j));
        loop {
            for k in &self.cells[j * self.columns + i] {
                let k = *k as usize;
                if k == own {
                    continue;
                }
                let (c, s) = (&chords[k], chords[k].b - chords[k].a);
                let det = d.cross(s);
                let w = c.a - from;
                let (t, u) = (w.cross(s) / det, w.cross(d) / det);
                let ahead = t > 1e-9 * self.cell && (0.0..=1.0).contains(&u);
                if det != 0.0 && ahead && best.is_none_or(|b| t < b.0) {
                    best = Some((t, k));
                }
            }
            let here = tx.min(ty);
            if best.is_some_and(|b| b.0 <= here) {
                return best;
            }
            if tx < ty {
                tx += step(d.x);
                if d.x > 0.0 {
                    i += 1;
                } else {
                    i = i.wrapping_sub(1);
                }
            } else {
                ty += step(d.y);
                if d.y > 0.0 {
                    j += 1;
                } else {
                    j = j.wrapping_sub(1);
                }
            }
            if i >= self.columns || j >= self.rows {
                return best;
            }
        }
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    fn rectangle(x: f64, y: f64, w: f64, h: f64) -> Outline {
        Outline::rectangle(pt(x, y), pt(w, h)).unwrap()
    }
    fn disc(x: f64, y: f64, r: f64) -> Outline {
        Outline::disc(pt(x, y), r).unwrap()
    }
    fn close(gap: Option<Gap>, width: f64) {
        let got = gap.expect("a gap").width;
        assert!((got - width).abs() < 4e-3 * width, "{got} {width}");
    }

    #[test]
    fn walls_that_face_each_other_are_measured() {
        close(rectangle(0., 0., 10., 1.).narrowest().neck, 1.0);
        assert!(rectangle(0., 0., 10., 1.).narrowest().slot.is_none());
        let ring = Outline::ring(pt(0., 0.), 0.8, 1.0).unwrap().narrowest();
        close(ring.neck, 0.2);
        close(ring.slot, 1.6);
        let u = rectangle(0., 0., 3., 3.)
            .cut(&rectangle(1., 1., 0.5, 5.))
            .unwrap();
        close(u.narrowest().slot, 0.5);
        close(u.narrowest().neck, 1.0);
    }

    #[test]
    fn necks_between_discs_and_corners_are_found() {
        // Two discs that overlap a little: a neck between two inner corners, 2√(1 − 0.99²).
        let pair = disc(0., 0., 1.).add(&disc(1.98, 0., 1.)).unwrap();
        let n = pair.narrowest().neck.expect("a neck");
        close(Some(n), 2.0 * f64::sqrt(1.0 - 0.99 * 0.99));
        assert!((n.at - pt(0.99, 0.)).norm() < 1e-9);
        let apart = disc(0., 0., 1.).add(&disc(2.1, 0.3, 1.)).unwrap();
        close(apart.narrowest().slot, 2.1f64.hypot(0.3) - 2.0);
        let channel = disc(0., 0., 1.)
            .add(&disc(3., 0., 1.))
            .unwrap()
            .add(&rectangle(0., -0.05, 3., 0.1))
            .unwrap();
        close(channel.narrowest().neck, 0.1);
    }

    #[test]
    fn a_wedge_is_no_neck() {
        let t = Outline::polygon(&[pt(0., 0.), pt(4., 0.), pt(0., 0.7)]).unwrap();
        let neck = t.narrowest().neck;
        assert!(neck.is_none_or(|n| n.width > 0.3), "{neck:?}");
    }
}
