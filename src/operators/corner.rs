//! What corner functions add to stiffness and mass in one cell.

use super::rows::{axpy, sum_rows};
use super::wall::{Traces, WallPoint, beta, points, points_needed};
use crate::geometry::{Piece, Point};
use crate::lattice::{Cell, Cloud, CornerSpace, Lattice, Part, Value, gauss, spline};

/// The integrals of one cell over the functions alive in it.
pub struct Terms {
    /// Functions alive in the cell, numbered through the corners.
    pub functions: Vec<u32>,
    /// Stiffness against the splines alive, `[spline * functions + function]`.
    pub stiffness: Vec<f64>,
    /// Mass against them.
    pub mass: Vec<f64>,
    /// Stiffness among the functions, row-major, upper triangle.
    pub own_stiffness: Vec<f64>,
    /// Mass among them.
    pub own_mass: Vec<f64>,
    /// cᵀSd and dᵀSc for two fixed vectors.
    pub probed: [f64; 2],
}

/// A cell under way.
struct Local<'a> {
    lattice: &'a Lattice,
    corners: &'a [CornerSpace],
    cloud: &'a Cloud,
    functions: Vec<u32>,
    /// Components of the two fixed vectors.
    known: Vec<[f64; 2]>,
    /// Δψ of all functions, then ψ of all, at each point.
    values: Vec<f64>,
}

/// Integrates the functions of `corners` over the cell of a cloud; `first`: the number of each
/// corner's first function.
pub fn terms(lattice: &Lattice, corners: &[CornerSpace], first: &[usize], cloud: &Cloud) -> Terms {
    let functions: Vec<u32> = cloud
        .corners
        .iter()
        .flat_map(|&c| first[c as usize] as u32..first[c as usize + 1] as u32)
        .collect();
    let (nf, b) = (functions.len(), (lattice.degree + 1).pow(2));
    let known = functions.iter().map(|&f| probe(f)).collect();
    let mut out = Terms {
        functions: functions.clone(),
        stiffness: vec![0.0; b * nf],
        mass: vec![0.0; b * nf],
        own_stiffness: vec![0.0; nf * nf],
        own_mass: vec![0.0; nf * nf],
        probed: [0.0; 2],
    };
    let mut local = Local {
        lattice,
        corners,
        cloud,
        functions,
        known,
        values: Vec::new(),
    };
    pulp::Arch::new().dispatch(|| {
        local.sample();
        local.volume(&mut out);
        local.walls(&mut out);
    });
    out
}

impl Local<'_> {
    #[inline(always)]
    fn sample(&mut self) {
        let nf = self.functions.len();
        let mut values = vec![0.0; self.cloud.points.len() * 2 * nf];
        let mut buffer = vec![Value::default(); nf];
        for (row, p) in values.chunks_exact_mut(2 * nf).zip(&self.cloud.points) {
            eval_all(self.corners, &self.cloud.corners, *p, &mut buffer);
            let (laplacians, psis) = row.split_at_mut(nf);
            for ((l, v), b) in laplacians.iter_mut().zip(psis).zip(&buffer) {
                *l = b.laplacian;
                *v = b.value;
            }
        }
        self.values = values;
    }

    #[inline(always)]
    fn volume(&self, out: &mut Terms) {
        let nf = self.functions.len();
        let b = (self.lattice.degree + 1).pow(2);
        let mut block = vec![0.0; b * 2 * nf];
        let mut own = vec![0.0; nf * 2 * nf];
        if self.cloud.side > 0 {
            self.tensor_block(&mut block);
        } else {
            self.free_block(&mut block);
        }
        self.own_block(&mut own);
        for (row, &w) in self.values.chunks_exact(2 * nf).zip(&self.cloud.weights) {
            let (lap, psi) = (
                probes(&self.known, &row[..nf]),
                probes(&self.known, &row[nf..]),
            );
            out.probed[0] -= w * psi[0] * lap[1];
            out.probed[1] -= w * psi[1] * lap[0];
        }
        for (c, row) in block.chunks_exact(2 * nf).enumerate() {
            for f in 0..nf {
                out.stiffness[c * nf + f] -= row[f];
                out.mass[c * nf + f] += row[nf + f];
            }
        }
        for (a, row) in own.chunks_exact(2 * nf).enumerate() {
            for f in a..nf {
                out.own_stiffness[a * nf + f] -= row[f];
                out.own_mass[a * nf + f] += row[nf + f];
            }
        }
    }

    #[inline(always)]
    fn walls(&self, out: &mut Terms) {
        let (n, i, j) = self.cloud.cell;
        let region = &self.lattice.regions[n];
        let Cell::Cut(c) = region.cell(i as i64, j as i64) else {
            return;
        };
        let (low, pen) = (region.low(i, j), beta(self.lattice) / region.h);
        let nf = self.functions.len();
        let mut traces = Traces::new(self.lattice.degree);
        let mut values = vec![Value::default(); nf];
        let mut psis = vec![0.0; nf];
        for part in &region.cuts[c as usize].parts {
            for w in self.wall_rule(part, region.h) {
                eval_all(self.corners, &self.cloud.corners, w.at, &mut values);
                for (psi, v) in psis.iter_mut().zip(&values) {
                    *psi = v.value;
                }
                traces.set(w.at, w.normal, low, region.h);
                for c in 0..traces.value.len() {
                    let a = w.weight * (pen * traces.value[c] - traces.slope[c]);
                    axpy(&mut out.stiffness[c * nf..][..nf], a, &psis);
                }
                let right = probes(&self.known, &psis);
                for (a, v) in values.iter().enumerate() {
                    let slope = v.gradient[0] * w.normal.x + v.gradient[1] * w.normal.y;
                    let x = w.weight * (pen * v.value - slope);
                    axpy(
                        &mut out.own_stiffness[a * nf + a..][..nf - a],
                        x,
                        &psis[a..],
                    );
                    out.probed[0] += self.known[a][0] * x * right[1];
                    out.probed[1] += self.known[a][1] * x * right[0];
                }
            }
        }
    }

    /// Points on a part: none where every function vanishes, graded towards the corners the
    /// piece ends in (r = z⁶), plain elsewhere.
    fn wall_rule(&self, part: &Part, h: f64) -> Vec<WallPoint> {
        let piece = &self.lattice.trace.pieces[part.piece as usize];
        let straight = matches!(piece, Piece::Line { .. });
        let ends = |c: &CornerSpace| [c.edges[0] == part.piece, c.edges[1] == part.piece];
        let mut at = [false; 2];
        let mut needed = false;
        for &c in &self.cloud.corners {
            let c = &self.corners[c as usize];
            let e = ends(c);
            // functions of a corner with straight edges vanish on these
            needed |= c.curved || !(straight && (e[0] || e[1]));
            for k in 0..2 {
                let near = c.distance(part.ends[0]).min(c.distance(part.ends[1])) < 3.0 * h;
                at[k] |= e[k] && near;
            }
        }
        if !needed {
            return Vec::new();
        }
        if !at[0] && !at[1] {
            return points(piece, part, points_needed(self.lattice.degree, part, h)).collect();
        }
        let rule = gauss::rule(20);
        let [t0, t1] = part.t;
        let mut cuts = vec![t0, t1];
        if at[0] && at[1] && t0 < 0.5 && t1 > 0.5 {
            cuts.insert(1, 0.5);
        }
        let mut out = Vec::new();
        for w in cuts.windows(2) {
            let from_start = at[0] && (!at[1] || w[1] <= 0.5);
            // distance from the singular end in t
            let (r0, r1) = if from_start {
                (w[0], w[1])
            } else {
                (1.0 - w[1], 1.0 - w[0])
            };
            let (z0, z1) = (r0.powf(1.0 / 6.0), r1.powf(1.0 / 6.0));
            for (x, wx) in rule.x.iter().zip(&rule.w) {
                let z = 0.5 * (z0 + z1) + 0.5 * (z1 - z0) * x;
                let r = z.powi(6);
                let t = if from_start { r } else { 1.0 - r };
                let v = piece.velocity(t);
                let speed = v.norm();
                out.push(WallPoint {
                    at: piece.at(t),
                    normal: Point {
                        x: v.y / speed,
                        y: -v.x / speed,
                    },
                    weight: wx * 0.5 * (z1 - z0) * 6.0 * z.powi(5) * speed,
                });
            }
        }
        out
    }

    /// Splines against functions on a tensor rule, one direction after the other.
    #[inline(always)]
    fn tensor_block(&self, out: &mut [f64]) {
        let (m, n) = (self.lattice.degree + 1, self.cloud.side);
        let wide = 2 * self.functions.len();
        let rule = gauss::rule(n);
        let mut b = vec![0.0; n * m];
        for (b, x) in b.chunks_exact_mut(m).zip(&rule.x) {
            spline::eval(self.lattice.degree, 0.5 * (1.0 + x), 0, b);
        }
        let mut line = vec![0.0; m * wide];
        let mut factors = [0.0; CHUNK];
        for r in 0..n {
            line.fill(0.0);
            for a in 0..m {
                for q in 0..n {
                    factors[q] = self.cloud.weights[q * n + r] * b[q * m + a];
                }
                let to = &mut line[a * wide..][..wide];
                sum_rows(to, &factors[..n], &self.values[r * wide..], n * wide);
            }
            for a in 0..m {
                for c in 0..m {
                    let to = &mut out[(a * m + c) * wide..][..wide];
                    axpy(to, b[r * m + c], &line[a * wide..][..wide]);
                }
            }
        }
    }

    /// Splines against functions on any points.
    #[inline(always)]
    fn free_block(&self, out: &mut [f64]) {
        let (n, i, j) = self.cloud.cell;
        let region = &self.lattice.regions[n];
        let low = region.low(i, j);
        let wide = 2 * self.functions.len();
        let mut traces = Traces::new(self.lattice.degree);
        let b = traces.value.len();
        let count = self.cloud.points.len();
        let mut basis = vec![0.0; b * CHUNK];
        for start in (0..count).step_by(CHUNK) {
            let here = CHUNK.min(count - start);
            for k in 0..here {
                traces.values_at(self.cloud.points[start + k], low, region.h);
                let w = self.cloud.weights[start + k];
                for (c, v) in traces.value.iter().enumerate() {
                    basis[c * CHUNK + k] = w * v;
                }
            }
            for (c, to) in out.chunks_exact_mut(wide).enumerate() {
                let factors = &basis[c * CHUNK..][..here];
                sum_rows(to, factors, &self.values[start * wide..], wide);
            }
        }
    }

    /// Functions against functions, upper triangles: Δψ, then ψ.
    #[inline(always)]
    fn own_block(&self, out: &mut [f64]) {
        let nf = self.functions.len();
        let wide = 2 * nf;
        let count = self.cloud.points.len();
        let mut factors = [0.0; CHUNK];
        for start in (0..count).step_by(CHUNK) {
            let here = CHUNK.min(count - start);
            for f in 0..nf {
                for (k, factor) in factors[..here].iter_mut().enumerate() {
                    *factor =
                        self.cloud.weights[start + k] * self.values[(start + k) * wide + nf + f];
                }
                for from in [f, nf + f] {
                    let to = &mut out[f * wide + from..][..nf - f];
                    sum_rows(
                        to,
                        &factors[..here],
                        &self.values[start * wide + from..],
                        wide,
                    );
                }
            }
        }
    }
}

/// Points taken together, so that their rows stay in the first cache.
const CHUNK: usize = 64;

#[inline(always)]
fn eval_all(corners: &[CornerSpace], list: &[u32], p: Point, out: &mut [Value]) {
    let mut at = 0;
    for &c in list {
        let c = &corners[c as usize];
        let n = c.functions.len();
        c.eval(p, &mut out[at..at + n]);
        at += n;
    }
}

/// Components of the two fixed vectors c, d with which the symmetry of S is probed.
#[inline(always)]
pub fn probe(f: u32) -> [f64; 2] {
    // golden-ratio sequences: no two functions weigh the same
    let x = f64::from(f + 1);
    [
        (0.618_033_988_749_895 * x).fract() + 0.5,
        (0.414_213_562_373_095 * x).fract() - 1.5,
    ]
}

#[inline(always)]
fn probes(known: &[[f64; 2]], v: &[f64]) -> [f64; 2] {
    let mut out = [0.0; 2];
    for (c, v) in known.iter().zip(v) {
        out[0] += c[0] * v;
        out[1] += c[1] * v;
    }
    out
}
