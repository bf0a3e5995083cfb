//! Whether an outline is fit to be worked with.

use super::error::GeometryError;
use super::meet::{meet, meeting_boxes};
use super::outline::Outline;
use super::piece::Piece;
use super::point::{Box2, Point};

impl Outline {
    /// Refuses an outline that is empty, not closed, crosses itself, encloses nothing, or has a
    /// part thinner than `thinnest` of its size (the diagonal of its box).
    pub fn check(&self, thinnest: f64) -> Result<(), GeometryError> {
        let size = self.bounds().diagonal();
        if self.loops.is_empty() || size.is_nan() || size <= 0.0 {
            return Err(GeometryError::NoArea);
        }
        if !size.is_finite() {
            return Err(GeometryError::NotFinite {
                what: "a coordinate of the outline".to_string(),
            });
        }
        self.check_joints(size)?;
        if let Some(at) = self.self_crossing(1e-12 * size) {
            return Err(GeometryError::CrossesItself { at });
        }
        // Loops run the wrong way round would count as holes of nothing.
        if self.area() <= 1e-12 * size * size {
            return Err(GeometryError::NoArea);
        }
        let narrow = self.narrowest();
        for gap in [narrow.neck, narrow.slot].into_iter().flatten() {
            if gap.width < thinnest * size {
                return Err(GeometryError::Sliver {
                    width: gap.width,
                    at: gap.at,
                });
            }
        }
        Ok(())
    }

    fn check_joints(&self, size: f64) -> Result<(), GeometryError> {
        for l in &self.loops {
            let n = l.pieces.len();
            for k in 0..n {
                let (end, start) = (l.pieces[k].end(), l.pieces[(k + 1) % n].start());
                if (end - start).norm() > 1e-9 * size {
                    return Err(GeometryError::Open {
                        from: end,
                        to: start,
                    });
                }
            }
        }
        Ok(())
    }

    /// A place where two pieces cross or touch elsewhere than in a common end.
    fn self_crossing(&self, eps: f64) -> Option<Point> {
        let pieces: Vec<&Piece> = self.pieces().collect();
        let boxes: Vec<Box2> = pieces.iter().map(|p| p.bounds().widened(eps)).collect();
        let is_end = |t: f64| t == 0.0 || t == 1.0;
        meeting_boxes(&boxes).into_iter().find_map(|(i, j)| {
            meet(pieces[i], pieces[j], eps)
                .into_iter()
                .find(|(t, s)| !(is_end(*t) && is_end(*s)))
                .map(|(t, _)| pieces[i].at(t))
        })
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    #[test]
    fn good_outlines_pass() {
        let l = Outline::rectangle(pt(0., 0.), pt(2., 1.))
            .unwrap()
            .add(&Outline::rectangle(pt(0., 0.), pt(1., 2.)).unwrap())
            .unwrap();
        for o in [
            l.clone(),
            l.rounded(0.1).unwrap(),
            Outline::disc(pt(0., 0.), 1.).unwrap(),
            Outline::ring(pt(0., 0.), 0.5, 1.).unwrap(),
            Outline::sector(pt(0., 0.), 1., 0., 0.2).unwrap(),
        ] {
            assert_eq!(o.check(1e-6), Ok(()), "{o:?}");
        }
    }

    #[test]
    fn bad_ones_say_where() {
        assert_eq!(Outline::default().check(1e-6), Err(GeometryError::NoArea));
        let v = [pt(0., 0.), pt(1., 1.), pt(1., 0.), pt(0., 1.)];
        let bow = (0..4).map(|k| Piece::line(v[k], v[(k + 1) % 4])).collect();
        let crossing = GeometryError::CrossesItself { at: pt(0.5, 0.5) };
        assert_eq!(Outline::single(bow).check(1e-6), Err(crossing));
        let open = (0..3).map(|k| Piece::line(v[k], v[k + 1])).collect();
        assert!(matches!(
            Outline::single(open).check(1e-6),
            Err(GeometryError::Open { .. })
        ));
        let gap = Outline::disc(pt(0., 0.), 1.)
            .unwrap()
            .add(&Outline::disc(pt(2.0 + 1e-7, 0.), 1.).unwrap())
            .unwrap();
        assert!(matches!(gap.check(1e-6), Err(GeometryError::Sliver { .. })));
    }
}
