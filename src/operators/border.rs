//! What corner functions add to stiffness and mass.
//!
//! With every wall term kept (the ball of a corner may cross other walls):
//! k_B = −∫BΔψ − ∮ψ∂ₙB + (β/h)∮Bψ, S_ij = −∫ψ_iΔψ_j − ∮ψ_j∂ₙψ_i + (β/h)∮ψ_iψ_j.
//! Faces between regions add nothing, since ψ has no jump there.

use super::assemble::expand;
use super::rows::{axpy, sum_rows};
use super::wall::{Traces, WallPoint, beta, points, points_needed};
use crate::geometry::{Piece, Point};
use crate::lattice::{Cell, Cloud, CornerSpace, Lattice, Part, Value, clouds, gauss, spline};

/// Corner functions sampled on the rule of one cell.
struct Sampled {
    cloud: Cloud,
    /// Functions alive in the cell, numbered through the corners.
    functions: Vec<u32>,
    /// Δψ of all functions, then ψ of all, at each point.
    values: Vec<f64>,
}

/// Couplings of the corner functions, in reduced units.
#[derive(Clone, Debug, Default)]
pub struct Border {
    /// Corners and their functions.
    pub corners: Vec<CornerSpace>,
    /// Stiffness against the unknowns: one vector of their number per function.
    pub stiffness: Vec<Vec<f64>>,
    /// Mass against the unknowns.
    pub mass: Vec<Vec<f64>>,
    /// Stiffness among the functions, row-major.
    pub own_stiffness: Vec<f64>,
    /// Mass among the functions.
    pub own_mass: Vec<f64>,
    /// Asymmetry of S along two fixed vectors, relative: zero but for quadrature; the proof that all terms are right.
    pub asymmetry: f64,
    /// cᵀSd and dᵀSc for two fixed vectors.
    probed: [f64; 2],
}

impl Border {
    /// Number of functions.
    pub fn len(&self) -> usize {
        self.stiffness.len()
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.stiffness.is_empty()
    }
}

/// First function of each corner, and the number of all.
fn offsets(corners: &[CornerSpace]) -> Vec<usize> {
    let mut at = vec![0];
    for c in corners {
        at.push(at[at.len() - 1] + c.functions.len());
    }
    at
}

/// Integrates the corner functions against the splines and each other.
pub fn border(lattice: &Lattice, corners: Vec<CornerSpace>) -> Border {
    let first = offsets(&corners);
    let q = first[corners.len()];
    if q == 0 {
        return Border::default();
    }
    let mut out = Border {
        stiffness: vec![vec![0.0; lattice.unknowns]; q],
        mass: vec![vec![0.0; lattice.unknowns]; q],
        own_stiffness: vec![0.0; q * q],
        own_mass: vec![0.0; q * q],
        asymmetry: 0.0,
        probed: [0.0; 2],
        corners,
    };
    let list = clouds(
        &lattice.trace,
        &lattice.regions,
        &out.corners,
        lattice.degree,
    );
    for cloud in list {
        let sampled = sample(&out.corners, &first, cloud);
        out.volume(lattice, &sampled);
        out.walls(lattice, &first, &sampled);
    }
    out.symmetrise();
    out
}

fn sample(corners: &[CornerSpace], first: &[usize], cloud: Cloud) -> Sampled {
    let functions: Vec<u32> = cloud
        .corners
        .iter()
        .flat_map(|&c| first[c as usize] as u32..first[c as usize + 1] as u32)
        .collect();
    let nf = functions.len();
    let mut values = vec![0.0; cloud.points.len() * 2 * nf];
    let mut buffer = vec![Value::default(); nf];
    pulp::Arch::new().dispatch(|| {
        for (row, p) in values.chunks_exact_mut(2 * nf).zip(&cloud.points) {
            eval_all(corners, &cloud.corners, *p, &mut buffer);
            let (laplacians, psis) = row.split_at_mut(nf);
            for ((l, v), b) in laplacians.iter_mut().zip(psis).zip(&buffer) {
                *l = b.laplacian;
                *v = b.value;
            }
        }
    });
    Sampled {
        cloud,
        functions,
        values,
    }
}

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

impl Border {
    fn volume(&mut self, lattice: &Lattice, s: &Sampled) {
        let nf = s.functions.len();
        let q = self.len();
        let b = (lattice.degree + 1).pow(2);
        let mut block = vec![0.0; b * 2 * nf];
        let mut own = vec![0.0; nf * 2 * nf];
        let mut probed = [0.0; 2];
        pulp::Arch::new().dispatch(|| {
            if s.cloud.side > 0 {
                tensor_block(lattice, s, &mut block);
            } else {
                free_block(lattice, s, &mut block);
            }
            own_block(s, &mut own);
            let known: Vec<[f64; 2]> = s.functions.iter().map(|&f| probe(f)).collect();
            for (row, &w) in s.values.chunks_exact(2 * nf).zip(&s.cloud.weights) {
                let (lap, psi) = (probes(&known, &row[..nf]), probes(&known, &row[nf..]));
                probed[0] -= w * psi[0] * lap[1];
                probed[1] -= w * psi[1] * lap[0];
            }
        });
        self.probed[0] += probed[0];
        self.probed[1] += probed[1];
        let half = |at: usize, sign: f64| -> Vec<f64> {
            block
                .chunks_exact(2 * nf)
                .flat_map(|c| c[at..at + nf].iter().map(|x| sign * x))
                .collect()
        };
        let (k, m) = (half(0, -1.0), half(nf, 1.0));
        scatter(lattice, s, &k, &mut self.stiffness);
        scatter(lattice, s, &m, &mut self.mass);
        for (a, &f) in s.functions.iter().enumerate() {
            for (c, &g) in s.functions.iter().enumerate().skip(a) {
                let to = f as usize * q + g as usize;
                self.own_stiffness[to] -= own[a * 2 * nf + c];
                self.own_mass[to] += own[a * 2 * nf + nf + c];
            }
        }
    }

    fn walls(&mut self, lattice: &Lattice, first: &[usize], s: &Sampled) {
        let (n, i, j) = s.cloud.cell;
        let region = &lattice.regions[n];
        let Cell::Cut(c) = region.cell(i as i64, j as i64) else {
            return;
        };
        let (low, pen) = (region.low(i, j), beta(lattice) / region.h);
        let nf = s.functions.len();
        let q = first[first.len() - 1];
        let mut traces = Traces::new(lattice.degree);
        let mut k = vec![0.0; traces.value.len() * nf];
        let mut values = vec![Value::default(); nf];
        let mut psis = vec![0.0; nf];
        let known: Vec<[f64; 2]> = s.functions.iter().map(|&f| probe(f)).collect();
        for part in &region.cuts[c as usize].parts {
            for w in self.wall_rule(lattice, s, part, region.h) {
                eval_all(&self.corners, &s.cloud.corners, w.at, &mut values);
                traces.set(w.at, w.normal, low, region.h);
                for c in 0..traces.value.len() {
                    let a = w.weight * (pen * traces.value[c] - traces.slope[c]);
                    for (k, v) in k[c * nf..][..nf].iter_mut().zip(&values) {
                        *k += a * v.value;
                    }
                }
                for (psi, v) in psis.iter_mut().zip(&values) {
                    *psi = v.value;
                }
                let right = probes(&known, &psis);
                for (a, &f) in s.functions.iter().enumerate() {
                    let g = values[a].gradient;
                    let slope = g[0] * w.normal.x + g[1] * w.normal.y;
                    let x = w.weight * (pen * values[a].value - slope);
                    for (v, &g) in values.iter().zip(&s.functions).skip(a) {
                        self.own_stiffness[f as usize * q + g as usize] += x * v.value;
                    }
                    self.probed[0] += known[a][0] * x * right[1];
                    self.probed[1] += known[a][1] * x * right[0];
                }
            }
        }
        scatter(lattice, s, &k, &mut self.stiffness);
    }

    /// Points on a part: none where every function vanishes, graded towards the corners the
    /// piece ends in (r = z⁶), plain elsewhere.
    fn wall_rule(&self, lattice: &Lattice, s: &Sampled, part: &Part, h: f64) -> Vec<WallPoint> {
        let piece = &lattice.trace.pieces[part.piece as usize];
        let straight = matches!(piece, Piece::Line { .. });
        let ends = |c: &CornerSpace| [c.edges[0] == part.piece, c.edges[1] == part.piece];
        let mut at = [false; 2];
        let mut needed = false;
        for &c in &s.cloud.corners {
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
            return points(piece, part, points_needed(lattice.degree, part, h)).collect();
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

    /// Fills the lower triangles, and compares cᵀSd with dᵀSc.
    fn symmetrise(&mut self) {
        let q = self.len();
        let mut size = 0.0;
        for i in 0..q {
            for j in 0..q {
                if j < i {
                    self.own_stiffness[i * q + j] = self.own_stiffness[j * q + i];
                    self.own_mass[i * q + j] = self.own_mass[j * q + i];
                }
                let [c, d] = [probe(i as u32)[0], probe(j as u32)[1]];
                size += (c * d * self.own_stiffness[i * q + j]).powi(2);
            }
        }
        self.asymmetry = (self.probed[0] - self.probed[1]).abs() / f64::sqrt(size).max(1e-300);
    }
}

/// Components of the two fixed vectors c, d with which the symmetry of S is probed.
#[inline(always)]
fn probe(f: u32) -> [f64; 2] {
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

/// Adds a cell's block [spline][function] to the vectors of its functions.
fn scatter(lattice: &Lattice, s: &Sampled, block: &[f64], to: &mut [Vec<f64>]) {
    let (n, i, j) = s.cloud.cell;
    let space = &lattice.spaces[n];
    let (m, nf) = (lattice.degree + 1, s.functions.len());
    let first = space.first_spline(i, j);
    for c in 0..m * m {
        for (u, x) in expand(space, first + (c / m) * space.size[1] + c % m) {
            for (f, v) in s.functions.iter().zip(&block[c * nf..][..nf]) {
                to[*f as usize][u as usize] += x * v;
            }
        }
    }
}

/// Splines against functions on a tensor rule, one direction after the other.
#[inline(always)]
fn tensor_block(lattice: &Lattice, s: &Sampled, out: &mut [f64]) {
    let (m, n) = (lattice.degree + 1, s.cloud.side);
    let wide = 2 * s.functions.len();
    let rule = gauss::rule(n);
    let mut b = vec![0.0; n * m];
    for (b, x) in b.chunks_exact_mut(m).zip(&rule.x) {
        spline::eval(lattice.degree, 0.5 * (1.0 + x), 0, b);
    }
    let mut line = vec![0.0; m * wide];
    let mut factors = [0.0; CHUNK];
    for r in 0..n {
        line.fill(0.0);
        for a in 0..m {
            for q in 0..n {
                factors[q] = s.cloud.weights[q * n + r] * b[q * m + a];
            }
            let to = &mut line[a * wide..][..wide];
            sum_rows(to, &factors[..n], &s.values[r * wide..], n * wide);
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
fn free_block(lattice: &Lattice, s: &Sampled, out: &mut [f64]) {
    let (n, i, j) = s.cloud.cell;
    let region = &lattice.regions[n];
    let low = region.low(i, j);
    let wide = 2 * s.functions.len();
    let mut traces = Traces::new(lattice.degree);
    let b = traces.value.len();
    let count = s.cloud.points.len();
    let mut basis = vec![0.0; b * CHUNK];
    for start in (0..count).step_by(CHUNK) {
        let here = CHUNK.min(count - start);
        for k in 0..here {
            traces.values_at(s.cloud.points[start + k], low, region.h);
            let w = s.cloud.weights[start + k];
            for (c, v) in traces.value.iter().enumerate() {
                basis[c * CHUNK + k] = w * v;
            }
        }
        for (c, to) in out.chunks_exact_mut(wide).enumerate() {
            let factors = &basis[c * CHUNK..][..here];
            sum_rows(to, factors, &s.values[start * wide..], wide);
        }
    }
}

/// Functions against functions, upper triangles: Δψ, then ψ.
#[inline(always)]
fn own_block(s: &Sampled, out: &mut [f64]) {
    let nf = s.functions.len();
    let wide = 2 * nf;
    let count = s.cloud.points.len();
    let mut factors = [0.0; CHUNK];
    for start in (0..count).step_by(CHUNK) {
        let here = CHUNK.min(count - start);
        for f in 0..nf {
            for (k, factor) in factors[..here].iter_mut().enumerate() {
                *factor = s.cloud.weights[start + k] * s.values[(start + k) * wide + nf + f];
            }
            for from in [f, nf + f] {
                let to = &mut out[f * wide + from..][..nf - f];
                sum_rows(to, &factors[..here], &s.values[start * wide + from..], wide);
            }
        }
    }
}

/// Points taken together, so that their rows stay in the first cache.
const CHUNK: usize = 64;
