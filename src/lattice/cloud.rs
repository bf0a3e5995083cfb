//! Points and weights on the cells that corner functions reach.
//!
//! Near a corner the homogeneous rule is used: from each boundary stretch of cell ∩ outline
//! towards the corner, x = c + σ⁴ (y(τ) − c); elsewhere tensor Gauss or fitted weights.

use super::cutcell::Fitter;
use super::gauss;
use super::region::{Cell, Region};
use super::singular::CornerSpace;
use super::trace::{Part, Trace};
use crate::geometry::{Piece, Point, pt};

/// The rule of one cell.
#[derive(Clone, Debug)]
pub struct Cloud {
    /// Region and cell.
    pub cell: (usize, usize, usize),
    /// Corners whose functions reach the cell.
    pub corners: Vec<u32>,
    /// Points.
    pub points: Vec<Point>,
    /// Weights: area.
    pub weights: Vec<f64>,
    /// Points a side where they form a tensor rule, `[q * n + r]`; 0 elsewhere.
    pub side: usize,
}

/// Cells with their centre this many cells from a corner get the homogeneous rule.
const NEAR: f64 = 1.6;
/// Points of the homogeneous rule along σ and along a stretch.
const SIGMA: usize = 12;
const TAU: usize = 14;

/// Clouds of all cells that the corners reach.
pub fn clouds(
    trace: &Trace,
    regions: &[Region],
    corners: &[CornerSpace],
    degree: usize,
) -> Vec<Cloud> {
    let mut out = Vec::new();
    for (n, r) in regions.iter().enumerate() {
        let cells = r
            .inside
            .iter()
            .map(|c| (c[0] as usize, c[1] as usize))
            .chain(r.cuts.iter().map(|c| (c.i, c.j)));
        for (i, j) in cells {
            let low = r.low(i, j);
            let centre = pt(low[0] + 0.5 * r.h, low[1] + 0.5 * r.h);
            let reach: Vec<u32> = (0..corners.len() as u32)
                .filter(|&c| {
                    let c = &corners[c as usize];
                    c.distance(centre) < c.radius + 0.71 * r.h
                })
                .collect();
            if reach.is_empty() {
                continue;
            }
            let near = reach
                .iter()
                .copied()
                .map(|c| (corners[c as usize].distance(centre), c))
                .min_by(|a, b| a.0.total_cmp(&b.0));
            let mut cloud = Cloud {
                cell: (n, i, j),
                corners: reach,
                points: Vec::new(),
                weights: Vec::new(),
                side: 0,
            };
            match near {
                Some((d, c)) if d < NEAR * r.h => {
                    homogeneous(trace, r, (i, j), &corners[c as usize], &mut cloud);
                }
                other => {
                    let far = other.map_or(f64::INFINITY, |o| o.0 / r.h);
                    tensor(trace, r, (i, j), far, degree, &mut cloud);
                }
            }
            if !cloud.points.is_empty() {
                out.push(cloud);
            }
        }
    }
    out
}

fn tensor(
    trace: &Trace,
    r: &Region,
    (i, j): (usize, usize),
    far: f64,
    degree: usize,
    cloud: &mut Cloud,
) {
    let low = r.low(i, j);
    // Gauss on an analytic function with its singularity d half-cells off converges like
    // (d + √(d² − 1))^(−2n)
    let n = match r.cell(i as i64, j as i64) {
        Cell::Cut(_) if far < 3.0 => 2 * degree + 7,
        Cell::Cut(_) => 2 * degree + 4,
        _ if far < 2.5 => degree + 7,
        _ if far < 4.0 => degree + 4,
        _ => degree + 3,
    };
    let rule = gauss::rule(n);
    let weights = match r.cell(i as i64, j as i64) {
        Cell::Cut(c) => {
            let cut = &r.cuts[c as usize];
            if cut.fraction < 1e-13 {
                return;
            }
            let level = r.level;
            let ci = r.corner[0] + i as i32;
            let edge = trace.crossings(0, ci >> level, trace.grid.line(level, 0, ci + 1));
            Fitter::new(n)
                .weights(&trace.pieces, &cut.parts, low, r.h, &edge)
                .0
        }
        _ => (0..n * n)
            .map(|k| 0.25 * r.h * r.h * rule.w[k / n] * rule.w[k % n])
            .collect(),
    };
    cloud.side = n;
    for (k, w) in weights.into_iter().enumerate() {
        cloud.points.push(pt(
            low[0] + 0.5 * r.h * (1.0 + rule.x[k / n]),
            low[1] + 0.5 * r.h * (1.0 + rule.x[k % n]),
        ));
        cloud.weights.push(w);
    }
}

/// The homogeneous rule on one cell.
fn homogeneous(
    trace: &Trace,
    r: &Region,
    (i, j): (usize, usize),
    corner: &CornerSpace,
    cloud: &mut Cloud,
) {
    let c = corner.at;
    if let Cell::Cut(k) = r.cell(i as i64, j as i64) {
        for part in &r.cuts[k as usize].parts {
            let piece = &trace.pieces[part.piece as usize];
            if matches!(piece, Piece::Line { .. }) {
                straight(c, part.ends, r.h, cloud);
            } else {
                bent(c, piece, part, corner, cloud);
            }
        }
    }
    for ends in sides(trace, r, (i, j)) {
        straight(c, ends, r.h, cloud);
    }
}

/// Inside stretches of the four sides of a cell, counter-clockwise.
fn sides(trace: &Trace, r: &Region, (i, j): (usize, usize)) -> Vec<[Point; 2]> {
    let (level, grid) = (r.level, &trace.grid);
    let cell = [r.corner[0] + i as i32, r.corner[1] + j as i32];
    let whole = r.cell(i as i64, j as i64) == Cell::Inside;
    let mut out = Vec::new();
    for axis in 0..2 {
        let o = 1 - axis;
        let (lo, hi) = (
            grid.line(level, o, cell[o]),
            grid.line(level, o, cell[o] + 1),
        );
        for up in 0..2 {
            let k = cell[axis] + up;
            let v = grid.line(level, axis, k);
            let spans = if whole {
                vec![lo, hi]
            } else {
                trace.crossings(axis, (k - 1) >> level, v)
            };
            for s in spans.chunks_exact(2) {
                let (a, b) = (s[0].max(lo), s[1].min(hi));
                if b <= a {
                    continue;
                }
                let at = |w| if axis == 0 { pt(v, w) } else { pt(w, v) };
                // right side upwards, left downwards; bottom rightwards, top leftwards
                let forward = (axis == 0) == (up == 1);
                out.push(if forward {
                    [at(a), at(b)]
                } else {
                    [at(b), at(a)]
                });
            }
        }
    }
    out
}

/// Fan from the corner over a straight stretch, τ = |d| sinh u along it.
fn straight(c: Point, ends: [Point; 2], h: f64, cloud: &mut Cloud) {
    let (a, b) = (ends[0] - c, ends[1] - c);
    let long = (b - a).norm();
    if long == 0.0 {
        return;
    }
    let t = (b - a) * (1.0 / long);
    let d = a.cross(t);
    if d.abs() < 1e-13 * h {
        return;
    }
    let foot = a - t * a.dot(t);
    let (ta, tb) = (a.dot(t), b.dot(t));
    let mut breaks = vec![ta];
    if ta < 0.0 && tb > 0.0 {
        breaks.push(0.0);
    }
    breaks.push(tb);
    let rule = gauss::rule(TAU);
    for w in breaks.windows(2) {
        let (u0, u1) = ((w[0] / d.abs()).asinh(), (w[1] / d.abs()).asinh());
        let pieces = ((u1 - u0) / 3.0).ceil().max(1.0);
        for z in 0..pieces as usize {
            let v0 = u0 + (u1 - u0) * z as f64 / pieces;
            let half = 0.5 * (u1 - u0) / pieces;
            for (x, w) in rule.x.iter().zip(&rule.w) {
                let u = v0 + half * (1.0 + x);
                let y = foot + t * (d.abs() * u.sinh());
                ray(c, y, w * half * d.abs() * u.cosh() * d, cloud);
            }
        }
    }
}

/// Fan over a curved stretch; graded towards the corner where the stretch ends in it.
fn bent(c: Point, piece: &Piece, part: &Part, corner: &CornerSpace, cloud: &mut Cloud) {
    let rule = gauss::rule(TAU + 4);
    let [t0, t1] = part.t;
    let starts = corner.edges[0] == part.piece && t0 == 0.0;
    let ends = corner.edges[1] == part.piece && t1 == 1.0;
    for (x, w) in rule.x.iter().zip(&rule.w) {
        let z = 0.5 * (1.0 + x);
        let (t, dt) = if starts {
            (t1 * z.powi(4), t1 * 4.0 * z.powi(3) * 0.5)
        } else if ends {
            let s = 1.0 - t0;
            (1.0 - s * z.powi(4), s * 4.0 * z.powi(3) * 0.5)
        } else {
            (t0 + (t1 - t0) * z, 0.5 * (t1 - t0))
        };
        let y = piece.at(t) - c;
        ray(c, y, w * dt * y.cross(piece.velocity(t)), cloud);
    }
}

/// Points c + σ⁴ y with weights s ds, s = σ⁴.
fn ray(c: Point, y: Point, w: f64, cloud: &mut Cloud) {
    let rule = gauss::rule(SIGMA);
    for (x, ws) in rule.x.iter().zip(&rule.w) {
        let g = 0.5 * (1.0 + x);
        let s = g.powi(4);
        cloud.points.push(c + y * s);
        cloud.weights.push(w * s * 4.0 * g.powi(3) * 0.5 * ws);
    }
}
