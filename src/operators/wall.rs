//! The hard wall by symmetric Nitsche: −∫(∂ₙu)v − ∫u(∂ₙv) + (β/h)∫uv (Nitsche 1971).

use super::rows::axpy;
use crate::geometry::{Piece, Point};
use crate::lattice::{Lattice, Part, gauss, spline};

/// β by degree 0…7. For 2…5 the smallest coercive values over random placements were measured as
/// 6.9, 12.3, 19.5, 27.4; these keep a factor 1.6.
const BETA: [f64; 8] = [2.0, 6.0, 12.0, 20.0, 32.0, 45.0, 60.0, 80.0];

/// The penalty β of a lattice.
pub fn beta(lattice: &Lattice) -> f64 {
    lattice.stiffening * BETA[lattice.degree.min(7)]
}

/// A point of a wall rule.
#[derive(Clone, Copy, Debug)]
pub struct WallPoint {
    /// Where.
    pub at: Point,
    /// Outward unit normal.
    pub normal: Point,
    /// Weight: length.
    pub weight: f64,
}

/// Gauss points on a part of the boundary, `n` of them.
pub fn points(piece: &Piece, part: &Part, n: usize) -> impl Iterator<Item = WallPoint> {
    let rule = gauss::rule(n);
    let [a, b] = part.ends;
    let straight = matches!(piece, Piece::Line { .. });
    let half = 0.5 * (part.t[1] - part.t[0]);
    rule.x.iter().zip(&rule.w).map(move |(g, w)| {
        let (at, v) = if straight {
            (a + (b - a) * (0.5 * (1.0 + g)), (b - a) * 0.5)
        } else {
            let t = part.t[0] + half * (1.0 + g);
            (piece.at(t), piece.velocity(t) * half)
        };
        let speed = v.norm();
        WallPoint {
            at,
            // the material lies on the left
            normal: Point {
                x: v.y / speed,
                y: -v.x / speed,
            },
            weight: w * speed,
        }
    })
}

/// Points needed on a part: exact for products of two splines on a part of a cell's length,
/// fewer on shorter ones, whose integrands are all but constant.
pub fn points_needed(p: usize, part: &Part, h: f64) -> usize {
    let long = (part.ends[1] - part.ends[0]).norm() / h;
    if long > 0.3 {
        2 * p + 1
    } else if long > 0.05 {
        p + 3
    } else {
        p.max(3)
    }
}

/// Values and normal derivatives of the splines alive on a cell, at one point.
pub struct Traces {
    p: usize,
    bx: [f64; 8],
    by: [f64; 8],
    dx: [f64; 8],
    dy: [f64; 8],
    /// Values, (p + 1)² of them.
    pub value: Vec<f64>,
    /// Normal derivatives.
    pub slope: Vec<f64>,
}

impl Traces {
    /// For degree `p`.
    pub fn new(p: usize) -> Self {
        let z = [0.0; 8];
        Self {
            p,
            bx: z,
            by: z,
            dx: z,
            dy: z,
            value: vec![0.0; (p + 1) * (p + 1)],
            slope: vec![0.0; (p + 1) * (p + 1)],
        }
    }

    /// Evaluates the values alone.
    #[inline(always)]
    pub fn values_at(&mut self, at: Point, low: [f64; 2], h: f64) {
        let p = self.p;
        spline::eval(p, (at.x - low[0]) / h, 0, &mut self.bx[..=p]);
        spline::eval(p, (at.y - low[1]) / h, 0, &mut self.by[..=p]);
        for m in 0..=p {
            for l in 0..=p {
                self.value[m * (p + 1) + l] = self.bx[m] * self.by[l];
            }
        }
    }

    /// Evaluates at a point of the cell with lower left corner `low` and size `h`.
    #[inline(always)]
    pub fn set(&mut self, at: Point, normal: Point, low: [f64; 2], h: f64) {
        let p = self.p;
        let (u, v) = ((at.x - low[0]) / h, (at.y - low[1]) / h);
        spline::eval(p, u, 0, &mut self.bx[..=p]);
        spline::eval(p, v, 0, &mut self.by[..=p]);
        spline::eval(p, u, 1, &mut self.dx[..=p]);
        spline::eval(p, v, 1, &mut self.dy[..=p]);
        let (nx, ny) = (normal.x / h, normal.y / h);
        for m in 0..=p {
            for l in 0..=p {
                let k = m * (p + 1) + l;
                self.value[k] = self.bx[m] * self.by[l];
                self.slope[k] = nx * self.dx[m] * self.by[l] + ny * self.bx[m] * self.dy[l];
            }
        }
    }
}

/// The wall terms of one cell, over the splines alive on it, with penalty `pen` = β/h.
pub fn wall_block(
    traces: &mut Traces,
    pieces: &[Piece],
    parts: &[Part],
    low: [f64; 2],
    h: f64,
    pen: f64,
) -> Vec<f64> {
    let b = (traces.p + 1) * (traces.p + 1);
    let (mut out, mut left) = (vec![0.0; b * b], vec![0.0; b]);
    pulp::Arch::new().dispatch(|| {
        for part in parts {
            let points = points(
                &pieces[part.piece as usize],
                part,
                points_needed(traces.p, part, h),
            );
            for q in points {
                traces.set(q.at, q.normal, low, h);
                // half of the symmetric form: (β/2h v − ∂ₙv) vᵀ, and its transpose below
                for (l, (v, d)) in left.iter_mut().zip(traces.value.iter().zip(&traces.slope)) {
                    *l = q.weight * (0.5 * pen * v - d);
                }
                for (row, l) in out.chunks_exact_mut(b).zip(&left) {
                    axpy(row, *l, &traces.value);
                }
            }
        }
    });
    symmetrise(&mut out, b);
    out
}

/// Adds the transpose of a block to itself.
fn symmetrise(block: &mut [f64], b: usize) {
    for i in 0..b {
        block[i * b + i] *= 2.0;
        for k in 0..i {
            let s = block[i * b + k] + block[k * b + i];
            block[i * b + k] = s;
            block[k * b + i] = s;
        }
    }
}
