//! Adding, cutting and keeping.

use super::error::{GeometryError, Remark};
use super::outline::{Loop, Outline};
use super::overlay::{FillRule, OverlayRule, Side, overlay};
use super::piece::Piece;

/// A boolean step.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Operation {
    /// Union.
    Add,
    /// Difference.
    Cut,
    /// Intersection.
    Keep,
}

impl Outline {
    /// The union with `other`.
    pub fn add(&self, other: &Self) -> Result<Self, GeometryError> {
        self.combined(Operation::Add, other).map(|(o, _)| o)
    }

    /// What is left after `other` is cut away.
    ///
    /// # Errors
    /// [`GeometryError::NothingLeft`] if the cut takes everything.
    pub fn cut(&self, other: &Self) -> Result<Self, GeometryError> {
        self.combined(Operation::Cut, other).map(|(o, _)| o)
    }

    /// The part that lies in `other`.
    ///
    /// # Errors
    /// [`GeometryError::NothingLeft`] if they have nothing in common.
    pub fn keep(&self, other: &Self) -> Result<Self, GeometryError> {
        self.combined(Operation::Keep, other).map(|(o, _)| o)
    }

    /// The step and, where it did nothing one would draw it for, a remark.
    pub fn combined(
        &self,
        operation: Operation,
        other: &Self,
    ) -> Result<(Self, Option<Remark>), GeometryError> {
        let sides = [(self, Side::Subject), (other, Side::Clip)];
        let loops: Vec<(&[Piece], Side)> = sides
            .iter()
            .flat_map(|(o, side)| o.loops.iter().map(move |l| (l.pieces.as_slice(), *side)))
            .collect();
        let rule = match operation {
            Operation::Add => OverlayRule::Union,
            Operation::Cut => OverlayRule::Difference,
            Operation::Keep => OverlayRule::Intersect,
        };
        let loops = overlay(&loops, rule, FillRule::NonZero, false)?;
        if loops.is_empty() {
            let (step, reason) = match operation {
                Operation::Add => ("add", "neither part encloses any area"),
                Operation::Cut => ("cut", "the cut covers the whole outline"),
                Operation::Keep => ("keep", "the two have no area in common"),
            };
            return Err(GeometryError::NothingLeft {
                step,
                reason: reason.to_string(),
            });
        }
        let result = Self { loops };
        let remark = self.remark(operation, other, &result);
        Ok((result, remark))
    }

    fn remark(&self, operation: Operation, other: &Self, result: &Self) -> Option<Remark> {
        if self.loops.is_empty() {
            return None;
        }
        let (a, b, c) = (self.area(), other.area(), result.area());
        let same = |x: f64, y: f64| (x - y).abs() <= 1e-11 * (a + b);
        match operation {
            Operation::Cut if same(a, c) => Some(Remark::CutMissed),
            Operation::Keep if same(a, c) => Some(Remark::KeptAll),
            Operation::Add if same(a, c) => Some(Remark::AddedInside),
            Operation::Add
                if same(a + b, c) && result.loops.len() == self.loops.len() + other.loops.len() =>
            {
                Some(Remark::AddedApart)
            }
            _ => None,
        }
    }

    /// The same region from loops that may cross, by the given rule of winding.
    pub(super) fn resolved(loops: &[Loop], fill: FillRule) -> Result<Self, GeometryError> {
        let sides: Vec<(&[Piece], Side)> = loops
            .iter()
            .map(|l| (l.pieces.as_slice(), Side::Subject))
            .collect();
        let loops = overlay(&sides, OverlayRule::Subject, fill, true)?;
        Ok(Self { loops })
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::{Point, pt};
    use super::super::similarity::Similarity;
    use super::*;
    use std::f64::consts::PI;

    fn disc(x: f64, y: f64, r: f64) -> Outline {
        Outline::disc(pt(x, y), r).unwrap()
    }
    fn rectangle(x: f64, y: f64, w: f64, h: f64) -> Outline {
        Outline::rectangle(pt(x, y), pt(w, h)).unwrap()
    }
    /// Neighbours must meet within a few roundings of the size.
    fn assert_closed(o: &Outline, size: f64) {
        for l in &o.loops {
            for k in 0..l.pieces.len() {
                let gap = l.pieces[k].end() - l.pieces[(k + 1) % l.pieces.len()].start();
                assert!(gap.norm() <= 1e-13 * size, "{l:#?}");
            }
        }
    }
    /// A few placements, none of them special.
    fn placements() -> Vec<Similarity> {
        let mut out = vec![Similarity::IDENTITY];
        for k in 1..12 {
            let k = f64::from(k);
            out.push(
                Similarity::turned(pt(0.3, 0.1), 0.37 * k)
                    .then(&Similarity::moved(pt(1.7 * k, -0.9 * k)))
                    .then(&Similarity::scaled(pt(0., 0.), 1.3f64.powf(k - 6.0))),
            );
        }
        out.push(Similarity::mirrored(pt(0.2, 0.), 0.4));
        out
    }

    #[test]
    fn the_lens_of_two_discs_has_its_textbook_area() {
        // Unit discs at distance d: 2 acos(d/2) − (d/2) √(4 − d²).
        for d in [0.1, 1.0, 1.9, 1.999, 2.0 - 1e-6] {
            let lens: f64 = 2.0 * f64::acos(d / 2.0) - 0.5 * d * (4.0 - d * d).sqrt();
            for s in placements() {
                let (a, b) = (
                    disc(0., 0., 1.).transformed(&s),
                    disc(d, 0., 1.).transformed(&s),
                );
                let f = s.scale() * s.scale();
                let keep = a.keep(&b).unwrap();
                let add = a.add(&b).unwrap();
                let cut = a.cut(&b).unwrap();
                for (o, area) in [(&keep, lens), (&add, 2. * PI - lens), (&cut, PI - lens)] {
                    assert_closed(o, a.bounds().diagonal());
                    assert_eq!(o.loops.len(), 1);
                    assert_eq!(o.corners(1e-7).len(), 2);
                    // Positions err by roundoff, corners of thin lenses by roundoff / angle.
                    assert!((o.area() - f * area).abs() < 1e-13 * f * PI, "{d} {s:?}");
                }
            }
        }
    }

    #[test]
    fn an_l_of_rectangles_has_exactly_six_corners() {
        for s in placements() {
            for (a, b) in [
                (rectangle(0., 0., 2., 1.), rectangle(0., 1., 1., 1.)),
                (rectangle(0., 0., 2., 1.), rectangle(0., 0., 1., 2.)),
                (rectangle(0., 0., 2., 1.), rectangle(0., 0.3, 1., 1.7)),
            ] {
                let l = a.transformed(&s).add(&b.transformed(&s)).unwrap();
                assert_eq!(l.loops.len(), 1, "{s:?}");
                assert_eq!(l.loops[0].pieces.len(), 6, "{s:?} {l:#?}");
                assert_eq!(l.corners(1e-7).len(), 6);
                assert_closed(&l, l.bounds().diagonal());
                let f = s.scale() * s.scale();
                assert!((l.area() - 3.0 * f).abs() < 1e-13 * 3.0 * f);
            }
        }
    }

    #[test]
    fn identical_outlines_change_nothing() {
        let shapes = [
            disc(0.3, 0.2, 1.),
            rectangle(0., 0., 2., 1.),
            Outline::ellipse(pt(0., 1.), pt(2., 0.5), 0.3).unwrap(),
            Outline::ring(pt(0., 0.), 0.4, 1.).unwrap(),
            Outline::smooth_closed(&[pt(0., 0.), pt(2., 0.), pt(3., 2.), pt(1., 3.)]).unwrap(),
        ];
        for s in placements() {
            for o in &shapes {
                let o = o.transformed(&s);
                let twice = o.add(&o).unwrap();
                assert_eq!(twice.loops.len(), o.loops.len());
                assert!((twice.area() - o.area()).abs() <= 1e-14 * o.area());
                assert_eq!(
                    twice.pieces().count(),
                    o.pieces().count(),
                    "{s:?} {twice:#?}"
                );
                assert!((o.keep(&o).unwrap().area() - o.area()).abs() <= 1e-14 * o.area());
                assert!(matches!(o.cut(&o), Err(GeometryError::NothingLeft { .. })));
            }
        }
    }

    #[test]
    fn touching_discs_keep_their_boundaries() {
        for s in placements() {
            let (big, out, inn) = (disc(0., 0., 2.), disc(3., 0., 1.), disc(1., 0., 1.));
            let [big, out, inn] = [big, out, inn].map(|o| o.transformed(&s));
            let f = PI * s.scale() * s.scale();
            let two = big.add(&out).unwrap();
            assert_eq!(two.loops.len(), 2);
            assert!((two.area() - 5.0 * f).abs() < 1e-13 * 5.0 * f);
            let moon = big.cut(&inn).unwrap();
            assert!(
                (moon.area() - 3.0 * f).abs() < 1e-13 * 5.0 * f,
                "{s:?} {moon:#?}"
            );
            let same = big.add(&inn).unwrap();
            assert_eq!(same.pieces().count(), 1, "{s:?} {same:#?}");
            assert!((same.area() - 4.0 * f).abs() < 1e-13 * 4.0 * f);
            assert!(matches!(
                big.keep(&out),
                Err(GeometryError::NothingLeft { .. })
            ));
        }
    }

    #[test]
    fn curves_of_nearly_equal_curvature_that_touch_are_kept_apart() {
        // Chord errors of either are larger than the gap between them for a long way.
        for s in placements() {
            let (a, b) = (disc(0., 0., 1.), disc(0.001, 0., 0.999));
            let (a, b) = (a.transformed(&s), b.transformed(&s));
            let f = PI * s.scale() * s.scale();
            let moon = a.cut(&b).unwrap();
            let exact = (1.0 - 0.999 * 0.999) * f;
            assert!((moon.area() - exact).abs() < 1e-13 * f, "{s:?}");
            assert_eq!(a.add(&b).unwrap().pieces().count(), 1);
        }
    }

    #[test]
    fn squares_that_touch_in_a_vertex_stay_two_loops() {
        for s in placements() {
            let a = rectangle(0., 0., 1., 1.).transformed(&s);
            let b = rectangle(1., 1., 1., 1.).transformed(&s);
            let o = a.add(&b).unwrap();
            assert_eq!(o.loops.len(), 2, "{s:?} {o:#?}");
            assert_eq!(o.corners(1e-7).len(), 8);
        }
    }

    #[test]
    fn a_hole_that_touches_the_edge_has_the_angles_of_its_wedges() {
        for s in placements() {
            let q = rectangle(0., 0., 4., 4.).transformed(&s);
            let diamond = [pt(2., 0.), pt(3., 1.), pt(2., 2.), pt(1., 1.)];
            let o = q
                .cut(&Outline::polygon(&diamond).unwrap().transformed(&s))
                .unwrap();
            assert_eq!(o.loops.len(), 1);
            let c = o.corners(1e-7);
            assert_eq!(c.len(), 9);
            assert_eq!(
                c.iter()
                    .filter(|c| (c.angle - PI / 4.0).abs() < 1e-12)
                    .count(),
                2
            );
        }
    }

    #[test]
    fn remarks_tell_what_a_step_did_not_do() {
        let a = rectangle(0., 0., 2., 2.);
        let remark = |op, b: &Outline| a.combined(op, b).unwrap().1;
        assert_eq!(
            remark(Operation::Cut, &disc(5., 0., 1.)),
            Some(Remark::CutMissed)
        );
        assert_eq!(
            remark(Operation::Add, &disc(5., 0., 1.)),
            Some(Remark::AddedApart)
        );
        assert_eq!(
            remark(Operation::Add, &disc(1., 1., 0.5)),
            Some(Remark::AddedInside)
        );
        assert_eq!(
            remark(Operation::Keep, &disc(1., 1., 5.)),
            Some(Remark::KeptAll)
        );
        assert_eq!(remark(Operation::Cut, &disc(1., 1., 0.5)), None);
        assert_eq!(a.cut(&disc(1., 1., 0.5)).unwrap().holes(), 1);
    }

    #[test]
    fn a_circle_cut_off_and_put_back_is_whole_again() {
        let (o, half) = (disc(0.1, 0.2, 1.), rectangle(-3., 0.05, 6., 3.));
        let (upper, lower) = (o.keep(&half).unwrap(), o.cut(&half).unwrap());
        let again = upper.add(&lower).unwrap();
        assert_eq!(again.loops.len(), 1);
        assert_eq!(again.pieces().count(), 1, "{again:#?}");
        assert!((again.area() - PI).abs() < 1e-14);
        assert!(again.contains(pt(0.1, 0.05)) && !again.contains(Point::default() + pt(2., 0.)));
    }
}
