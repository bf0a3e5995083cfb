//! Polygons, checked.

use super::error::GeometryError;
use super::meet::meeting_boxes;
use super::outline::Outline;
use super::piece::Piece;
use super::point::{Box2, Point};

impl Outline {
    /// A polygon from its vertices in order, either way round; the first may be repeated at the
    /// end.
    ///
    /// # Errors
    /// Fewer than three vertices, neighbours in the same place, edges that cross or lie on each
    /// other (named by the number of their first vertex, counted from 1), no area.
    pub fn polygon(vertices: &[Point]) -> Result<Self, GeometryError> {
        let mut v = vertices;
        if v.len() > 3 && v.first() == v.last() {
            v = &v[..v.len() - 1];
        }
        let n = v.len();
        if n < 3 {
            return Err(GeometryError::TooFewPoints {
                given: n,
                needed: 3,
            });
        }
        if let Some(k) = v.iter().position(|p| !p.is_finite()) {
            return Err(GeometryError::NotFinite {
                what: format!("point {}", k + 1),
            });
        }
        let mut bounds = Box2::EMPTY;
        for p in v {
            bounds.include(*p);
        }
        let eps = 1e-12 * bounds.diagonal();
        for k in 0..n {
            let next = (k + 1) % n;
            if (v[next] - v[k]).norm() <= eps {
                return Err(GeometryError::DuplicatePoints {
                    first: k + 1,
                    second: next + 1,
                    at: v[k],
                });
            }
        }
        let twice: f64 = (0..n)
            .map(|k| (v[k] - v[0]).cross(v[(k + 1) % n] - v[0]))
            .sum();
        refuse_crossings(v, eps)?;
        if twice.abs() <= eps * bounds.diagonal() {
            return Err(GeometryError::NoArea);
        }
        let mut v = v.to_vec();
        if twice < 0.0 {
            v.reverse();
        }
        let pieces = (0..n).map(|k| Piece::line(v[k], v[(k + 1) % n])).collect();
        Ok(Self::single(pieces))
    }
}

fn refuse_crossings(v: &[Point], eps: f64) -> Result<(), GeometryError> {
    let n = v.len();
    let end = |k: usize| v[(k + 1) % n];
    let boxes: Vec<Box2> = (0..n)
        .map(|k| {
            let mut b = Box2::EMPTY;
            b.include(v[k]);
            b.include(end(k));
            b.widened(eps)
        })
        .collect();
    let mut worst: Option<(usize, usize, Point)> = None;
    for (i, j) in meeting_boxes(&boxes) {
        let found = if (j + 1) % n == i || i + 1 == j {
            // Neighbours share a vertex; they must not run back over each other.
            let (a, b) = if i + 1 == j { (i, j) } else { (j, i) };
            folds_back(v[a], v[b], end(b), eps).then_some(v[b])
        } else {
            crossing(v[i], end(i), v[j], end(j), eps)
        };
        if let Some(at) = found
            && worst.is_none_or(|w| (i, j) < (w.0, w.1))
        {
            worst = Some((i, j, at));
        }
    }
    match worst {
        Some((i, j, at)) => Err(GeometryError::EdgesCross {
            first: i + 1,
            second: j + 1,
            at,
        }),
        None => Ok(()),
    }
}

fn folds_back(a: Point, b: Point, c: Point, eps: f64) -> bool {
    let (u, w) = (a - b, c - b);
    u.dot(w) > 0.0 && u.cross(w).abs() <= eps * u.norm().max(w.norm())
}

/// A common point of two edges that are no neighbours.
fn crossing(a: Point, b: Point, c: Point, d: Point, eps: f64) -> Option<Point> {
    let (p, q) = (Piece::line(a, b), Piece::line(c, d));
    let contacts = super::meet::meet(&p, &q, eps);
    // Two edges may touch in a vertex (two parts joined in a point) without harm to the area,
    // but what is inside is then a guess: refused like a crossing.
    contacts.first().map(|(t, _)| p.at(*t))
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    #[test]
    fn a_bow_tie_is_refused_and_its_edges_are_named() {
        let e = Outline::polygon(&[pt(0., 0.), pt(1., 1.), pt(1., 0.), pt(0., 1.)]).unwrap_err();
        assert_eq!(
            e,
            GeometryError::EdgesCross {
                first: 1,
                second: 3,
                at: pt(0.5, 0.5)
            }
        );
        assert!(e.to_string().contains("from point 1"), "{e}");
    }

    #[test]
    fn bad_vertices_are_refused() {
        let sq = [pt(0., 0.), pt(1., 0.), pt(1., 1.), pt(0., 1.)];
        assert!(matches!(
            Outline::polygon(&sq[..2]),
            Err(GeometryError::TooFewPoints { given: 2, .. })
        ));
        let doubled = [sq[0], sq[1], sq[1], sq[2], sq[3]];
        assert!(matches!(
            Outline::polygon(&doubled),
            Err(GeometryError::DuplicatePoints { first: 2, .. })
        ));
        let flat = [pt(0., 0.), pt(1., 0.), pt(2., 0.)];
        assert!(Outline::polygon(&flat).is_err());
        let nan = [sq[0], pt(f64::NAN, 0.), sq[2]];
        assert!(matches!(
            Outline::polygon(&nan),
            Err(GeometryError::NotFinite { .. })
        ));
        let closed = [sq[0], sq[1], sq[2], sq[3], sq[0]];
        assert_eq!(Outline::polygon(&closed).unwrap().loops[0].pieces.len(), 4);
    }

    #[test]
    fn either_way_round_gives_the_same_area() {
        let l = [
            pt(0., 0.),
            pt(2., 0.),
            pt(2., 1.),
            pt(1., 1.),
            pt(1., 2.),
            pt(0., 2.),
        ];
        let mut r = l;
        r.reverse();
        assert_eq!(Outline::polygon(&l).unwrap().area(), 3.0);
        assert_eq!(Outline::polygon(&r).unwrap().area(), 3.0);
    }
}
