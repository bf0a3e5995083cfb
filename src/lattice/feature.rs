//! Small features of an outline: where it bends tightly, where two walls come close.

use super::trace::Grid;
use super::tree::{DEEPEST, Key, Splits};
use crate::geometry::{Outline, Piece, Point};
use std::collections::HashMap;

/// A place that wants small cells: `cell` at the place, growing with the distance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spot {
    /// Where.
    pub at: Point,
    /// Cell size wanted there.
    pub cell: f64,
    /// Within this distance the cells stay that small.
    pub reach: f64,
}

/// Cells per radius at an inner fillet (p = 5: 4e-7 measured at 3, 2e-5 at 2), and at an outer one,
/// where the wave itself is small.
const PER_RADIUS: [f64; 2] = [2.5, 1.0];
/// Cells across a neck, and across a slot (a spline must not see both sides of it).
const ACROSS: [f64; 2] = [2.5, 3.0];
/// Cell size over distance beyond a spot's reach.
const GRADE: f64 = 0.25;

/// A point of the boundary.
struct Sample {
    at: Point,
    /// Inward unit normal.
    inward: Point,
    piece: usize,
}

/// Spots of an outline that cells of size `h` would miss.
pub fn spots(outline: &Outline, h: f64) -> Vec<Spot> {
    let mut out = Vec::new();
    for piece in outline.pieces() {
        bends(piece, h, &mut out);
    }
    widths(outline, h, &mut out);
    out
}

/// Tight bends: the curvature along a piece against the cell size.
fn bends(piece: &Piece, h: f64, out: &mut Vec<Spot>) {
    if matches!(piece, Piece::Line { .. }) {
        return;
    }
    let wanted = |t: f64| {
        let k = piece.curvature(t);
        let per = PER_RADIUS[usize::from(k > 0.0)];
        1.0 / (k.abs() * per).max(1e-300)
    };
    // a step along the piece is at most half the cell wanted there
    let mut t = 0.0;
    for _ in 0..100_000 {
        let cell = wanted(t);
        if cell < h {
            out.push(Spot {
                at: piece.at(t),
                cell,
                reach: 0.0,
            });
        }
        if t >= 1.0 {
            break;
        }
        let speed = piece.velocity(t).norm().max(1e-300);
        t = (t + (0.7 * cell.min(h) / speed).min(0.125)).min(1.0);
    }
}

/// Necks and slots: pairs of boundary points that face each other closely.
fn widths(outline: &Outline, h: f64, out: &mut Vec<Spot>) {
    let most = ACROSS[1] * h;
    let (samples, near) = samples(outline, h);
    let bin = |p: Point| ((p.x / most).floor() as i64, (p.y / most).floor() as i64);
    let mut bins: HashMap<(i64, i64), Vec<u32>> = HashMap::new();
    for (k, s) in samples.iter().enumerate() {
        bins.entry(bin(s.at)).or_default().push(k as u32);
    }
    for a in &samples {
        let (i, j) = bin(a.at);
        // least width inside and outside
        let mut least = [f64::INFINITY; 2];
        for di in -1..=1 {
            for dj in -1..=1 {
                for &k in bins.get(&(i + di, j + dj)).into_iter().flatten() {
                    let b = &samples[k as usize];
                    if a.piece == b.piece && !near.bent[a.piece] || near.joined(a.piece, b.piece) {
                        continue;
                    }
                    let d = b.at - a.at;
                    let w = d.norm();
                    if w == 0.0 || w > most {
                        continue;
                    }
                    let (sa, sb) = (d.dot(a.inward) / w, -d.dot(b.inward) / w);
                    if sa > 0.7 && sb > 0.7 {
                        least[0] = least[0].min(w);
                    } else if sa < -0.7 && sb < -0.7 {
                        least[1] = least[1].min(w);
                    }
                }
            }
        }
        for s in 0..2 {
            let cell = least[s] / ACROSS[s];
            if cell < h {
                out.push(Spot {
                    at: a.at,
                    cell,
                    reach: least[s],
                });
            }
        }
    }
}

/// Which pieces are joined or bent.
struct Near {
    bent: Vec<bool>,
    next: Vec<usize>,
}

impl Near {
    fn joined(&self, a: usize, b: usize) -> bool {
        self.next[a] == b || self.next[b] == a
    }
}

fn samples(outline: &Outline, h: f64) -> (Vec<Sample>, Near) {
    let mut out = Vec::new();
    let mut near = Near {
        bent: Vec::new(),
        next: Vec::new(),
    };
    let mut number = 0;
    for l in &outline.loops {
        let first = number;
        for piece in &l.pieces {
            let bent = !matches!(piece, Piece::Line { .. });
            near.bent.push(bent);
            let end = first + l.pieces.len();
            near.next
                .push(if number + 1 == end { first } else { number + 1 });
            let long = (0..8)
                .map(|k| piece.velocity((f64::from(k) + 0.5) / 8.0).norm() / 8.0)
                .sum::<f64>();
            let n = ((long / (0.5 * h)).ceil() as usize).clamp(if bent { 8 } else { 3 }, 20_000);
            for k in 0..n {
                let t = (k as f64 + 0.5) / n as f64;
                let v = piece.velocity(t);
                out.push(Sample {
                    at: piece.at(t),
                    inward: v.left() * (1.0 / v.norm().max(1e-300)),
                    piece: number,
                });
            }
            number += 1;
        }
    }
    (out, near)
}

/// Splits the cells that spots ask for.
pub fn split_for(grid: &Grid, spots: &[Spot], splits: &mut Splits) {
    for spot in spots {
        for level in 0..DEEPEST {
            let h = grid.size(level);
            if h <= spot.cell * 1.001 {
                break;
            }
            let reach = spot.reach.max(h / GRADE * 0.5) + 0.3 * h;
            let low = [0, 1].map(|a| grid.cell(level, a, spot.at.axis(a) - reach));
            let high = [0, 1].map(|a| grid.cell(level, a, spot.at.axis(a) + reach));
            for i in low[0]..=high[0] {
                for j in low[1]..=high[1] {
                    let c = grid.centre(level, i, j);
                    let dx = ((c.x - spot.at.x).abs() - 0.5 * h).max(0.0);
                    let dy = ((c.y - spot.at.y).abs() - 0.5 * h).max(0.0);
                    if dx.hypot(dy) <= reach {
                        splits.split(Key { level, i, j });
                    }
                }
            }
        }
    }
}
