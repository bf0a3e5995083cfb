//! What corner functions add to stiffness and mass.
//!
//! With every wall term kept (the ball of a corner may cross other walls):
//! k_B = −∫BΔψ − ∮ψ∂ₙB + (β/h)∮Bψ, S_ij = −∫ψ_iΔψ_j − ∮ψ_j∂ₙψ_i + (β/h)∮ψ_iψ_j.
//! Faces between regions add nothing, since ψ has no jump there.

use super::assemble::expand;
use super::wall::{Traces, WallPoint, beta, points, points_needed};
use crate::geometry::{Piece, Point};
use crate::lattice::{Cell, Cloud, CornerSpace, Lattice, Part, Value, clouds, gauss};

/// Corner functions sampled on the rule of one cell.
#[derive(Clone, Debug)]
pub struct Sampled {
    /// The rule.
    pub cloud: Cloud,
    /// Functions alive in the cell, numbered through the corners.
    pub functions: Vec<u32>,
    /// ψ, `[point * functions + f]`.
    pub values: Vec<f64>,
    /// Δψ, same layout.
    pub laplacians: Vec<f64>,
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
    /// |S − Sᵀ| / |S|: zero but for quadrature; the proof that all terms are right.
    pub asymmetry: f64,
    /// The samples, kept for the residual.
    pub sampled: Vec<Sampled>,
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
        sampled: Vec::new(),
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
        out.sampled.push(sampled);
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
    let mut values = vec![0.0; cloud.points.len() * nf];
    let mut laplacians = values.clone();
    let mut buffer = vec![Value::default(); nf];
    for (k, p) in cloud.points.iter().enumerate() {
        eval_all(corners, &cloud.corners, *p, &mut buffer);
        for (f, b) in buffer.iter().enumerate() {
            values[k * nf + f] = b.value;
            laplacians[k * nf + f] = b.laplacian;
        }
    }
    Sampled {
        cloud,
        functions,
        values,
        laplacians,
    }
}

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
        let (n, i, j) = s.cloud.cell;
        let region = &lattice.regions[n];
        let low = region.low(i, j);
        let nf = s.functions.len();
        let q = self.len();
        let mut traces = Traces::new(lattice.degree);
        let b = traces.value.len();
        let (mut k, mut m) = (vec![0.0; b * nf], vec![0.0; b * nf]);
        let (mut sk, mut sm) = (vec![0.0; nf * nf], vec![0.0; nf * nf]);
        pulp::Arch::new().dispatch(|| {
            for (x, (p, &w)) in s.cloud.points.iter().zip(&s.cloud.weights).enumerate() {
                let (v, l) = (&s.values[x * nf..][..nf], &s.laplacians[x * nf..][..nf]);
                traces.values_at(*p, low, region.h);
                for (c, value) in traces.value.iter().enumerate() {
                    add_two(
                        &mut k[c * nf..][..nf],
                        &mut m[c * nf..][..nf],
                        w * value,
                        l,
                        v,
                    );
                }
                for (f, value) in v.iter().enumerate() {
                    add_two(
                        &mut sk[f * nf..][..nf],
                        &mut sm[f * nf..][..nf],
                        w * value,
                        l,
                        v,
                    );
                }
            }
        });
        self.scatter(lattice, s.cloud.cell, &s.functions, &k, -1.0, false);
        self.scatter(lattice, s.cloud.cell, &s.functions, &m, 1.0, true);
        for (a, &f) in s.functions.iter().enumerate() {
            for (c, &g) in s.functions.iter().enumerate() {
                self.own_stiffness[f as usize * q + g as usize] -= sk[a * nf + c];
                self.own_mass[f as usize * q + g as usize] += sm[a * nf + c];
            }
        }
    }

    fn scatter(
        &mut self,
        lattice: &Lattice,
        (n, i, j): (usize, usize, usize),
        functions: &[u32],
        block: &[f64],
        sign: f64,
        mass: bool,
    ) {
        let space = &lattice.spaces[n];
        let (m, nf) = (lattice.degree + 1, functions.len());
        let first = space.first_spline(i, j);
        let to = if mass {
            &mut self.mass
        } else {
            &mut self.stiffness
        };
        for c in 0..m * m {
            for (u, x) in expand(space, first + (c / m) * space.size[1] + c % m) {
                for (f, v) in functions.iter().zip(&block[c * nf..][..nf]) {
                    to[*f as usize][u as usize] += sign * x * v;
                }
            }
        }
    }

    fn walls(&mut self, lattice: &Lattice, first: &[usize], s: &Sampled) {
        let (n, i, j) = s.cloud.cell;
        let region = &lattice.regions[n];
        let Cell::Cut(c) = region.cell(i as i64, j as i64) else {
            return;
        };
        let (low, pen) = (region.low(i, j), beta(lattice.degree) / region.h);
        let nf = s.functions.len();
        let q = first[first.len() - 1];
        let mut traces = Traces::new(lattice.degree);
        let mut k = vec![0.0; traces.value.len() * nf];
        let mut values = vec![Value::default(); nf];
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
                for (a, &f) in s.functions.iter().enumerate() {
                    let g = values[a].gradient;
                    let slope = g[0] * w.normal.x + g[1] * w.normal.y;
                    let x = w.weight * (pen * values[a].value - slope);
                    for (v, &g) in values.iter().zip(&s.functions) {
                        self.own_stiffness[f as usize * q + g as usize] += x * v.value;
                    }
                }
            }
        }
        self.scatter(lattice, s.cloud.cell, &s.functions, &k, 1.0, false);
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
            // a corner's own functions vanish on its own straight edges
            needed |= !(straight && (e[0] || e[1]));
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

    fn symmetrise(&mut self) {
        let q = self.len();
        let (mut worst, mut largest) = (0.0_f64, 0.0_f64);
        for i in 0..q {
            for j in 0..q {
                largest = largest.max(self.own_stiffness[i * q + j].abs());
            }
            for j in 0..i {
                let (a, b) = (self.own_stiffness[i * q + j], self.own_stiffness[j * q + i]);
                worst = worst.max((a - b).abs());
                self.own_stiffness[i * q + j] = 0.5 * (a + b);
                self.own_stiffness[j * q + i] = 0.5 * (a + b);
            }
        }
        self.asymmetry = worst / largest;
    }
}

#[inline(always)]
fn add_two(k: &mut [f64], m: &mut [f64], f: f64, l: &[f64], v: &[f64]) {
    for ((k, m), (l, v)) in k.iter_mut().zip(m).zip(l.iter().zip(v)) {
        *k += f * l;
        *m += f * v;
    }
}
