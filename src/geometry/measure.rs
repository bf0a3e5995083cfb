//! Area, perimeter, distance, winding.

use super::outline::{Loop, Outline};
use super::piece::Piece;
use super::point::{Box2, Point};

impl Loop {
    /// Enclosed area, positive counter-clockwise.
    pub fn area(&self) -> f64 {
        let Some(first) = self.pieces.first() else {
            return 0.0;
        };
        let c = first.start();
        self.pieces.iter().map(|p| p.area_about(c)).sum()
    }

    /// Length of the boundary.
    pub fn perimeter(&self) -> f64 {
        self.pieces.iter().map(Piece::length).sum()
    }

    /// Box around the loop.
    pub fn bounds(&self) -> Box2 {
        let mut b = Box2::EMPTY;
        for p in &self.pieces {
            let c = p.bounds();
            b.include(c.lo);
            b.include(c.hi);
        }
        b
    }

    /// The same loop run through the other way.
    pub fn reversed(&self) -> Self {
        Self {
            pieces: self.pieces.iter().rev().map(Piece::reversed).collect(),
        }
    }

    /// How often the loop runs round `p`, counter-clockwise counted positive.
    ///
    /// Crossings of the ray to the right; heights of joints are taken once for both neighbours,
    /// so that a ray through a joint is counted right whatever the roundoff.
    pub fn winding(&self, p: Point) -> i32 {
        let n = self.pieces.len();
        let mut turns = 0;
        for (k, piece) in self.pieces.iter().enumerate() {
            let next = self.pieces[(k + 1) % n].start().y;
            turns += match piece {
                Piece::Line { from, to } => {
                    let rises = crossing(from.y, next, p.y);
                    if rises != 0 && right_of_line(*from, *to, p, rises) {
                        rises
                    } else {
                        0
                    }
                }
                _ => curve_crossings(piece, next, p),
            };
        }
        turns
    }
}

/// +1 if the way from height a to b crosses h upwards, −1 downwards.
fn crossing(a: f64, b: f64, h: f64) -> i32 {
    i32::from(a <= h && h < b) - i32::from(b <= h && h < a)
}

fn right_of_line(from: Point, to: Point, p: Point, rises: i32) -> bool {
    let side = (to - from).cross(p - from);
    // Left of a rising edge means that the edge lies to the right.
    if rises > 0 { side > 0.0 } else { side < 0.0 }
}

fn curve_crossings(piece: &Piece, end_height: f64, p: Point) -> i32 {
    let mut cuts = vec![0.0];
    cuts.extend(piece.turning_points(1));
    cuts.push(1.0);
    let last = cuts.len() - 1;
    let height = |k: usize| {
        if k == last {
            end_height
        } else {
            piece.at(cuts[k]).y
        }
    };
    (0..last)
        .map(|k| {
            let rises = crossing(height(k), height(k + 1), p.y);
            let passes = rises != 0 && abscissa(piece, cuts[k], cuts[k + 1], p.y, rises) > p.x;
            if passes { rises } else { 0 }
        })
        .sum()
}

/// x where a stretch monotone in y has the height h.
fn abscissa(piece: &Piece, mut lo: f64, mut hi: f64, h: f64, rises: i32) -> f64 {
    let mut t = 0.5 * (lo + hi);
    for _ in 0..60 {
        let f = f64::from(rises) * (piece.at(t).y - h);
        if f > 0.0 {
            hi = t;
        } else {
            lo = t;
        }
        let newton = t - f / (f64::from(rises) * piece.velocity(t).y);
        let next = if newton > lo && newton < hi {
            newton
        } else {
            0.5 * (lo + hi)
        };
        if (next - t).abs() < 1e-16 {
            break;
        }
        t = next;
    }
    piece.at(t).x
}

impl Outline {
    /// Area.
    pub fn area(&self) -> f64 {
        self.loops.iter().map(Loop::area).sum()
    }

    /// Length of all boundaries.
    pub fn perimeter(&self) -> f64 {
        self.loops.iter().map(Loop::perimeter).sum()
    }

    /// Whether the material covers `p`.
    pub fn contains(&self, p: Point) -> bool {
        let turns: i32 = self
            .loops
            .iter()
            .filter(|l| {
                let b = l.bounds();
                b.lo.y <= p.y && p.y <= b.hi.y && p.x <= b.hi.x
            })
            .map(|l| l.winding(p))
            .sum();
        turns > 0
    }

    /// Distance from the boundary, positive inside the material.
    pub fn distance(&self, p: Point) -> f64 {
        let mut best = f64::INFINITY;
        for piece in self.pieces() {
            if piece.bounds().distance(p) < best {
                best = best.min(piece.nearest(p).1);
            }
        }
        if self.contains(p) { best } else { -best }
    }

    /// The outer loops, each with the holes in it, as outlines of their own.
    pub fn components(&self) -> Vec<Self> {
        let areas: Vec<f64> = self.loops.iter().map(Loop::area).collect();
        let mut out: Vec<(usize, Self)> = Vec::new();
        for (k, l) in self.loops.iter().enumerate() {
            if areas[k] > 0.0 {
                let loops = vec![l.clone()];
                out.push((k, Self { loops }));
            }
        }
        for (k, l) in self.loops.iter().enumerate() {
            if areas[k] > 0.0 {
                continue;
            }
            // The smallest outer loop around the hole; a point of the hole may touch the outer
            // loop, so several are asked.
            let inside = |outer: &Loop| {
                let asked = l.pieces.iter().map(|p| p.at(0.37));
                asked.filter(|p| outer.winding(*p) > 0).count() * 2 > l.pieces.len()
            };
            let home = out
                .iter_mut()
                .filter(|(i, o)| areas[*i] >= -areas[k] && inside(&o.loops[0]))
                .min_by(|a, b| areas[a.0].total_cmp(&areas[b.0]));
            if let Some((_, o)) = home {
                o.loops.push(l.clone());
            }
        }
        out.into_iter().map(|(_, o)| o).collect()
    }

    /// Number of holes.
    pub fn holes(&self) -> usize {
        self.loops.iter().filter(|l| l.area() < 0.0).count()
    }

    /// The smallest radius of curvature of the boundary between corners, and where; `None` if
    /// every edge is straight.
    pub fn min_radius(&self) -> Option<(f64, Point)> {
        let mut best: Option<(f64, Point)> = None;
        for p in self.pieces() {
            let samples = match p {
                Piece::Line { .. } => continue,
                Piece::Arc { .. } => 0,
                _ => 32,
            };
            let k = |t: f64| p.curvature(t).abs();
            let mut tightest = 0.0;
            for i in 0..=samples {
                let t = f64::from(i) / f64::from(samples.max(1));
                if k(t) > k(tightest) {
                    tightest = t;
                }
            }
            let mut step = 0.5 / f64::from(samples.max(1));
            while samples > 0 && step > 1e-9 {
                for t in [tightest - step, tightest + step] {
                    if (0.0..=1.0).contains(&t) && k(t) > k(tightest) {
                        tightest = t;
                    }
                }
                step *= 0.5;
            }
            let radius = 1.0 / k(tightest);
            if best.is_none_or(|b| radius < b.0) {
                best = Some((radius, p.at(tightest)));
            }
        }
        best
    }
}
