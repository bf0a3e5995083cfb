//! Parts, reversal, parallels and flattening of pieces.

use super::bezier;
use super::piece::{Piece, periodic_hits};
use super::point::Point;
use std::f64::consts::FRAC_PI_2;

impl Piece {
    /// The part from t0 to t1, t0 < t1, run through in the same direction.
    pub fn part(&self, t0: f64, t1: f64) -> Self {
        match self {
            Self::Line { .. } => Self::line(self.at(t0), self.at(t1)),
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => Self::arc(*centre, *radius, start + t0 * sweep, (t1 - t0) * sweep),
            Self::Ellipse {
                centre,
                half_axes,
                turn,
                start,
                sweep,
            } => Self::Ellipse {
                centre: *centre,
                half_axes: *half_axes,
                turn: *turn,
                start: start + t0 * sweep,
                sweep: (t1 - t0) * sweep,
            },
            Self::Bezier { points } => Self::Bezier {
                points: bezier::part(points, t0, t1),
            },
            Self::Offset { base, by } => Self::Offset {
                base: Box::new(base.part(t0, t1)),
                by: *by,
            },
        }
    }

    /// The same curve run through the other way.
    pub fn reversed(&self) -> Self {
        match self {
            Self::Line { from, to } => Self::line(*to, *from),
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => Self::arc(*centre, *radius, start + sweep, -sweep),
            Self::Ellipse {
                centre,
                half_axes,
                turn,
                start,
                sweep,
            } => Self::Ellipse {
                centre: *centre,
                half_axes: *half_axes,
                turn: *turn,
                start: start + sweep,
                sweep: -sweep,
            },
            Self::Bezier {
                points: [a, b, c, d],
            } => Self::Bezier {
                points: [*d, *c, *b, *a],
            },
            Self::Offset { base, by } => Self::Offset {
                base: Box::new(base.reversed()),
                by: -by,
            },
        }
    }

    /// The parallel curve to the left by `by` (to the right if negative).
    ///
    /// Lines and arcs stay what they are; an offset of an offset adds up. `None` where an arc
    /// would shrink to its centre or beyond.
    pub fn offset(&self, by: f64) -> Option<Self> {
        Some(match self {
            _ if by == 0.0 => self.clone(),
            Self::Line { from, to } => {
                let shift = (*to - *from).unit().left() * by;
                Self::line(*from + shift, *to + shift)
            }
            Self::Arc {
                centre,
                radius,
                start,
                sweep,
            } => {
                let r = radius - by * sweep.signum();
                if r <= 1e-13 * radius {
                    return None;
                }
                Self::arc(*centre, r, *start, *sweep)
            }
            Self::Offset { base, by: before } => {
                let sum = before + by;
                if sum.abs() <= 1e-15 * (before.abs() + by.abs()) {
                    base.as_ref().clone()
                } else {
                    Self::Offset {
                        base: base.clone(),
                        by: sum,
                    }
                }
            }
            _ => Self::Offset {
                base: Box::new(self.clone()),
                by,
            },
        })
    }

    /// Parameters, 0 and 1 included, whose chords stay within `tolerance` of the curve.
    pub fn flatten(&self, tolerance: f64) -> Vec<f64> {
        match self {
            Self::Line { .. } => vec![0.0, 1.0],
            Self::Arc { radius, sweep, .. } => {
                // Height of a chord: r (1 − cos δ/2); written so that it does not cancel.
                let half = 2.0 * (tolerance / (2.0 * radius)).sqrt().min(0.5).asin();
                let n = (sweep.abs() / (2.0 * half)).ceil().clamp(1.0, 1e6) as usize;
                let n = n.max((sweep.abs() / FRAC_PI_2).ceil() as usize);
                (0..=n).map(|k| k as f64 / n as f64).collect()
            }
            _ => {
                let mut grid = vec![0.0];
                match self {
                    Self::Ellipse { start, sweep, .. } => {
                        grid.extend(periodic_hits(0.0, FRAC_PI_2, *start, *sweep));
                    }
                    _ => grid.extend([0.25, 0.5, 0.75]),
                }
                grid.push(1.0);
                let mut out = vec![0.0];
                for w in grid.windows(2) {
                    let ends = [(w[0], self.at(w[0])), (w[1], self.at(w[1]))];
                    self.bisect(ends, tolerance, 0, &mut out);
                }
                out
            }
        }
    }

    /// Halves the range until its chord is near enough; pushes the ends of the ranges.
    fn bisect(&self, [a, b]: [(f64, Point); 2], tolerance: f64, depth: u32, out: &mut Vec<f64>) {
        let chord = b.1 - a.1;
        let length = chord.norm();
        let at = |f: f64| self.at(a.0 + (b.0 - a.0) * f);
        let height = |p: Point| {
            if length > 0.0 {
                ((p - a.1).cross(chord) / length).abs()
            } else {
                (p - a.1).norm()
            }
        };
        let middle = at(0.5);
        // Three samples may miss the highest point of an uneven bulge: a third is kept in hand.
        let highest = height(middle).max(height(at(0.25))).max(height(at(0.75)));
        if depth >= 18 || highest <= 0.75 * tolerance && chord.norm() < f64::MAX {
            out.push(b.0);
            return;
        }
        let m = (0.5 * (a.0 + b.0), middle);
        self.bisect([a, m], tolerance, depth + 1, out);
        self.bisect([m, b], tolerance, depth + 1, out);
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::super::point::pt;
    use super::*;

    fn zoo() -> Vec<Piece> {
        let bezier = Piece::Bezier {
            points: [pt(0., 0.), pt(1., 2.), pt(3., -1.), pt(4., 1.)],
        };
        let ellipse = Piece::Ellipse {
            centre: pt(1., 2.),
            half_axes: pt(3., 0.5),
            turn: 0.4,
            start: -1.0,
            sweep: 4.5,
        };
        vec![
            Piece::line(pt(0.3, -1.), pt(2., 4.)),
            Piece::arc(pt(1., 1.), 2.5, 0.3, -4.0),
            bezier.offset(-0.15).expect("no arc"),
            ellipse.offset(0.02).expect("no arc"),
            bezier,
            ellipse,
        ]
    }

    #[test]
    fn a_part_runs_on_the_same_curve() {
        for p in zoo() {
            let q = p.part(0.2, 0.7);
            let r = p.reversed();
            for t in [0.0, 0.35, 1.0] {
                assert!(
                    (q.at(t) - p.at(0.2 + 0.5 * t)).norm() < 4e-15 * 4.0,
                    "{p:?}"
                );
                assert!((r.at(t) - p.at(1.0 - t)).norm() < 4e-15 * 4.0, "{p:?}");
            }
        }
    }

    #[test]
    fn offsets_add_up_and_give_the_base_back() {
        for p in zoo() {
            let there = p.offset(0.01).expect("small");
            let back = there.offset(-0.01).expect("small");
            let twice = there.offset(0.02).expect("small");
            for t in [0.0, 0.4, 1.0] {
                assert!((back.at(t) - p.at(t)).norm() < 1e-14);
                let expected = p.at(t) + p.tangent(t).left() * 0.03;
                assert!((twice.at(t) - expected).norm() < 1e-14);
            }
        }
        assert!(Piece::arc(pt(0., 0.), 1.0, 0.0, 3.0).offset(1.0).is_none());
    }

    #[test]
    fn chords_stay_within_the_tolerance() {
        for p in zoo() {
            for tolerance in [1e-2, 1e-4, 1e-6] {
                let ts = p.flatten(tolerance);
                for w in ts.windows(2) {
                    let (a, b) = (p.at(w[0]), p.at(w[1]));
                    for k in 1..20 {
                        let q = p.at(w[0] + (w[1] - w[0]) * f64::from(k) / 20.0);
                        let h = (q - a).cross((b - a).unit()).abs();
                        assert!(h <= tolerance * (1.0 + 1e-9), "{p:?}: {h} > {tolerance}");
                    }
                }
            }
        }
    }
}
