//! Moving the boundary outwards or inwards by the same distance everywhere.
//!
//! Every piece sweeps the strip between itself and its parallel; round joins sweep sectors. The
//! raw boundary is the sum of the old one and the rims of these strips, so its winding number is
//! that of the old outline plus (growing) or minus (shrinking) the number of strips over a
//! point: positive exactly in the grown outline, provided that no strip counts negatively. A
//! strip folds over where the distance exceeds the radius of curvature; folded stretches are
//! therefore replaced by narrow strips on chords, which cannot fold. They lie inside the swept
//! region and never show.

use super::error::GeometryError;
use super::fillet::CORNER;
use super::outline::{Loop, Outline, turn_between};
use super::overlay::FillRule;
use super::piece::Piece;
use super::point::{Box2, Point};

/// Turn of the chords that stand in for a folded stretch, radians.
const FOLD_TURN: f64 = 0.3;

impl Outline {
    /// The outline with its edge moved outwards by `by` (inwards if negative): all points within
    /// `by` of the material, or all that have the distance −`by` from the outside.
    ///
    /// # Errors
    /// [`GeometryError::NothingLeft`] if it shrinks to nothing.
    pub fn grown(&self, by: f64) -> Result<Self, GeometryError> {
        if !by.is_finite() {
            return Err(GeometryError::NotFinite {
                what: "the distance to grow by".to_string(),
            });
        }
        if by == 0.0 {
            return Ok(self.clone());
        }
        let loops: Vec<Loop> = self.loops.iter().map(|l| raw(&l.pieces, by)).collect();
        let out = Self::resolved(&loops, FillRule::Positive)?;
        if out.loops.is_empty() {
            return Err(GeometryError::NothingLeft {
                step: "grow",
                reason: format!("no part of the outline is wider than {}", -2.0 * by),
            });
        }
        Ok(out)
    }

    /// A thick line through the points, `width` wide, with round ends and joins.
    pub fn track(points: &[Point], width: f64) -> Result<Self, GeometryError> {
        let n = points.len();
        if n < 2 {
            return Err(GeometryError::TooFewPoints {
                given: n,
                needed: 2,
            });
        }
        if width.is_nan() || width <= 0.0 || width.is_infinite() {
            return Err(GeometryError::NotPositive {
                what: "the width of the track",
                value: width,
            });
        }
        let mut bounds = Box2::EMPTY;
        for (k, p) in points.iter().enumerate() {
            if !p.is_finite() {
                return Err(GeometryError::NotFinite {
                    what: format!("point {}", k + 1),
                });
            }
            bounds.include(*p);
        }
        for (k, w) in points.windows(2).enumerate() {
            if (w[1] - w[0]).norm() <= 1e-12 * bounds.diagonal() {
                return Err(GeometryError::DuplicatePoints {
                    first: k + 1,
                    second: k + 2,
                    at: w[0],
                });
            }
        }
        // There and back again: a loop without area, grown by half the width.
        let there = points.windows(2).map(|w| Piece::line(w[0], w[1]));
        let back = points.windows(2).rev().map(|w| Piece::line(w[1], w[0]));
        let spine: Vec<Piece> = there.chain(back).collect();
        Self::resolved(&[raw(&spine, 0.5 * width)], FillRule::Positive)
    }
}

/// The offset of one piece as a run of pieces from one point to another, and the outward normals
/// of the piece at its start and its end.
struct Strand {
    pieces: Vec<Piece>,
    from: Point,
    to: Point,
    lead: Point,
    aim: Point,
}

/// The raw boundary, crossings and all.
fn raw(pieces: &[Piece], by: f64) -> Loop {
    let strands: Vec<Strand> = pieces.iter().map(|p| strand(p, by)).collect();
    let n = pieces.len();
    let mut out = Vec::new();
    for (k, s) in strands.iter().enumerate() {
        out.extend(s.pieces.iter().cloned());
        let next = (k + 1) % n;
        let vertex = pieces[next].start();
        let turn = turn_between(&pieces[k], &pieces[next]);
        join(&mut out, (s, &strands[next]), vertex, turn, by);
    }
    Loop { pieces: out }
}

/// Closes the gap at a vertex. A strand that is not whole may end on the vertex itself.
fn join(out: &mut Vec<Piece>, (a, b): (&Strand, &Strand), vertex: Point, turn: f64, by: f64) {
    if turn.abs() < CORNER && (b.from - a.to).norm() <= 2.0 * CORNER * by.abs() {
        push_line(out, a.to, b.from, by);
    } else if turn * by > 0.0 && turn.abs() >= CORNER {
        // The side that opens: the sector about the vertex is swept as well.
        let arc = Piece::arc(vertex, by.abs(), (a.aim * by).angle(), turn);
        push_line(out, a.to, vertex + a.aim * by, by);
        let end = vertex + b.lead * by;
        out.push(arc);
        push_line(out, end, b.from, by);
    } else {
        push_line(out, a.to, vertex, by);
        push_line(out, vertex, b.from, by);
    }
}

/// A line, unless its ends are the same but for roundoff.
fn push_line(out: &mut Vec<Piece>, from: Point, to: Point, by: f64) {
    if (to - from).norm() > 1e-13 * by.abs() {
        out.push(Piece::line(from, to));
    }
}

fn strand(piece: &Piece, by: f64) -> Strand {
    let (p, q) = (piece.start(), piece.end());
    let (lead, aim) = (-piece.tangent(0.0).left(), -piece.tangent(1.0).left());
    let Some(parallel) = piece.offset(-by) else {
        // An arc at least as tight as the distance sweeps its sector up to the centre.
        let centre = match piece {
            Piece::Arc { centre, .. } => *centre,
            _ => p,
        };
        return Strand {
            pieces: vec![Piece::line(p, centre), Piece::line(centre, q)],
            from: p,
            to: q,
            lead,
            aim,
        };
    };
    // An offset is the parallel of its base; curvature and folds are those of the piece itself.
    let mut cuts = vec![0.0];
    cuts.extend(piece.folds(-by));
    cuts.push(1.0);
    let folded = |t: f64| 1.0 + by * piece.curvature(t) < 0.0;
    if cuts.len() == 2 && !folded(0.5) {
        return Strand {
            from: parallel.start(),
            to: parallel.end(),
            pieces: vec![parallel],
            lead,
            aim,
        };
    }
    let mut out: Vec<Piece> = Vec::new();
    let mut ends: Vec<(Point, Point)> = Vec::new();
    for w in cuts.windows(2) {
        let part = piece.part(w[0], w[1]);
        let run = if folded(0.5 * (w[0] + w[1])) {
            chord_strips(&part, by)
        } else {
            part.offset(-by).into_iter().collect()
        };
        let (Some(first), Some(last)) = (run.first(), run.last()) else {
            continue;
        };
        let (from, to) = (first.start(), last.end());
        if let Some((_, end)) = ends.last() {
            push_line(&mut out, *end, from, by);
        }
        ends.push((from, to));
        out.extend(run);
    }
    Strand {
        from: ends.first().map_or(p, |e| e.0),
        to: ends.last().map_or(q, |e| e.1),
        pieces: out,
        lead,
        aim,
    }
}

/// Rectangles on the chords of a stretch, joined through its points.
///
/// A chord lies deeper than the curve by its height; the rectangle is shorter by twice that, so
/// that it never reaches beyond the distance. What it misses there lies near the cusps, under
/// the strips of the other branch.
fn chord_strips(part: &Piece, by: f64) -> Vec<Piece> {
    let turn: f64 = (0..4)
        .map(|k| {
            let (a, b) = (
                part.tangent(0.25 * f64::from(k)),
                part.tangent(0.25 * f64::from(k + 1)),
            );
            a.cross(b).atan2(a.dot(b)).abs()
        })
        .sum();
    let count = (turn / FOLD_TURN).ceil().clamp(2.0, 24.0) as usize;
    let t = |k: usize| k as f64 / count as f64;
    let points: Vec<Point> = (0..=count).map(|k| part.at(t(k))).collect();
    let mut out = Vec::new();
    for (k, w) in points.windows(2).enumerate() {
        let normal = (w[1] - w[0]).unit().left();
        let height = (part.at(t(k) + 0.5 / count as f64) - w[0])
            .dot(normal)
            .abs();
        let depth = by.signum() * (by.abs() - 2.0 * height).max(0.0);
        let (a, b) = (w[0] - normal * depth, w[1] - normal * depth);
        out.extend([
            Piece::line(w[0], a),
            Piece::line(a, b),
            Piece::line(b, w[1]),
        ]);
    }
    out
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::super::similarity::Similarity;
    use super::*;
    use std::f64::consts::PI;

    fn l_shape() -> Outline {
        Outline::polygon(&[
            pt(0., 0.),
            pt(2., 0.),
            pt(2., 1.),
            pt(1., 1.),
            pt(1., 2.),
            pt(0., 2.),
        ])
        .unwrap()
    }
    fn turns() -> Vec<Similarity> {
        (0..8)
            .map(|k| Similarity::turned(pt(0.2, 0.7), 0.41 * f64::from(k)))
            .collect()
    }
    fn near(o: &Outline, area: f64) {
        assert!(
            (o.area() - area).abs() < 1e-12 * area.max(1.0),
            "{} {area}\n{o:#?}",
            o.area()
        );
    }

    #[test]
    fn a_convex_polygon_grows_by_steiners_formula() {
        let tri = Outline::polygon(&[pt(0., 0.), pt(3., 0.2), pt(1., 2.)]).unwrap();
        for s in turns() {
            let t = tri.transformed(&s);
            for d in [1e-3, 0.1, 1.0, 10.0] {
                let g = t.grown(d).unwrap();
                near(&g, t.area() + t.perimeter() * d + PI * d * d);
                assert!(g.corners(1e-7).is_empty());
                // There and back gives a convex outline back.
                let back = g.grown(-d).unwrap();
                assert_eq!(back.pieces().count(), 3, "{d} {back:#?}");
                assert!((back.area() - t.area()).abs() < 1e-12 * g.area());
            }
        }
    }

    #[test]
    fn an_l_grows_and_shrinks_by_hand_computed_areas() {
        for s in turns() {
            let l = l_shape().transformed(&s);
            for d in [0.01, 0.1, 0.3] {
                // Five convex corners gain a quarter disc each, the inner one loses d².
                near(
                    &l.grown(d).unwrap(),
                    3.0 + 8.0 * d + 1.25 * PI * d * d - d * d,
                );
                // Inwards: mitres at five corners, an arc around the inner one.
                near(
                    &l.grown(-d).unwrap(),
                    3.0 - 8.0 * d + 5.0 * d * d - PI * d * d / 4.0,
                );
            }
            assert!(matches!(
                l.grown(-0.6),
                Err(GeometryError::NothingLeft { .. })
            ));
        }
    }

    #[test]
    fn shapes_thinner_than_the_distance_vanish() {
        let r = Outline::rectangle(pt(0., 0.), pt(1., 1.)).unwrap();
        let discs = Outline::disc(pt(0., 0.), 1.0).unwrap();
        let e = Outline::ellipse(pt(0., 0.), pt(2., 1.), 0.3).unwrap();
        let ring = Outline::ring(pt(0., 0.), 0.5, 1.0).unwrap();
        for o in [r, discs, e, ring.clone()] {
            for d in [1.01, 1.5, 4.0] {
                assert!(
                    matches!(o.grown(-d), Err(GeometryError::NothingLeft { .. })),
                    "{o:?} {d}"
                );
            }
        }
        // A hole closes when its rim has moved by its radius.
        near(&ring.grown(0.6).unwrap(), PI * 1.6 * 1.6);
        near(&ring.grown(0.3).unwrap(), PI * (1.3 * 1.3 - 0.04));
        assert_eq!(ring.grown(0.6).unwrap().loops.len(), 1);
    }

    #[test]
    fn folded_parallels_leave_the_true_inner_outline() {
        // Inwards past the radius of curvature at the tips (b²/a = 0.5 here): what is left has
        // every point of its edge at the distance d from the ellipse.
        for s in turns() {
            let e = Outline::ellipse(pt(0., 0.), pt(2., 1.), 0.0)
                .unwrap()
                .transformed(&s);
            for d in [0.45, 0.5001, 0.503, 0.55, 0.8, 0.95] {
                let g = e.grown(-d).unwrap();
                assert_eq!(g.loops.len(), 1);
                for p in g.pieces() {
                    for k in 0..=20 {
                        let q = p.at(f64::from(k) / 20.0);
                        assert!((e.distance(q) - d).abs() < 1e-12, "{d}");
                    }
                }
                assert_eq!(g.corners(1e-7).len(), if d > 0.5 { 2 } else { 0 });
            }
        }
    }

    #[test]
    fn tracks_have_round_ends_and_joins() {
        let straight = Outline::track(&[pt(0., 0.), pt(3., 4.)], 0.5).unwrap();
        near(&straight, 5.0 * 0.5 + PI / 16.0);
        assert_eq!(straight.pieces().count(), 4);
        // A right-angled bend: quarter disc outside, square counted twice inside.
        let bend = Outline::track(&[pt(0., 0.), pt(3., 0.), pt(3., 2.)], 1.0).unwrap();
        near(&bend, 5.0 + PI / 4.0 + PI / 16.0 - 0.25);
        assert_eq!(bend.corners(1e-7).len(), 1);
        let closed = [pt(0., 0.), pt(4., 0.), pt(4., 4.), pt(0., 4.), pt(0., 0.)];
        let frame = Outline::track(&closed, 1.0).unwrap();
        near(&frame, 16.0 + 8.0 + PI / 4.0 - 9.0);
        assert_eq!(frame.holes(), 1);
    }
}
