//! The residual of computed levels: η² = Σ_cells h²∫(Δu + λu)² + Σ_faces (h/2)∫[∂ₙu]²
//! + Σ_walls (22β/h)∫u².
//!
//! An eigenvalue's error is proportional to it (Babuška & Osborn 1991); the constant is
//! calibrated on outlines with known levels, see `spectrum::bars`.

use super::rows::axpy;
use super::tables::Tables;
use super::wall::{Traces, beta, points, points_needed};
use crate::geometry::{Point, pt};
use crate::lattice::{Cell, CornerSpace, Key, Lattice, Part, Value, gauss};
use crate::progress::shared;

/// Weight of the wall's share. A slope error e on the wall costs (h/β)∫e² and shows as u = he/β
/// there: (β/h)∫u², over the share of η² that is error. At 22 the ring and the disc, whose inner
/// and outer rims err differently, have the same ratio of error to η² (0.016 to 0.047).
const WALL: f64 = 22.0;

/// Cells a thread takes at a time.
const STRETCH: usize = 64;

/// Coefficients of several functions on a lattice.
#[derive(Clone, Debug)]
pub struct Functions {
    /// How many.
    pub count: usize,
    /// Per region: coefficient of each spline, `[spline * count + function]`.
    pub splines: Vec<Vec<f64>>,
    /// Coefficients of the corner functions, `[corner function * count + function]`.
    pub corners: Vec<f64>,
}

/// Residuals of several levels.
#[derive(Clone, Debug)]
pub struct Residual {
    /// η² of each level.
    pub total: Vec<f64>,
    /// Cells with their share of each level's η², `[cell * levels + level]`.
    pub cells: Vec<Key>,
    /// The shares.
    pub shares: Vec<f64>,
}

/// Residuals of functions with the given values λ, normalised to ∫u² = 1.
pub fn residual(
    lattice: &Lattice,
    corners: &[CornerSpace],
    f: &Functions,
    values: &[f64],
) -> Residual {
    let p = lattice.degree;
    let tables = [Tables::new(p, p + 1), Tables::new(p, 2 * p + 1)];
    let mut first = vec![0];
    for c in corners {
        first.push(first[first.len() - 1] + c.functions.len());
    }
    let mut out = Residual {
        total: vec![0.0; f.count],
        cells: Vec::new(),
        shares: Vec::new(),
    };
    let mut index = std::collections::HashMap::new();
    for (n, r) in lattice.regions.iter().enumerate() {
        let whole: Vec<f64> = {
            let w = &tables[0].w;
            (0..w.len() * w.len())
                .map(|k| w[k / w.len()] * w[k % w.len()] * r.h * r.h)
                .collect()
        };
        let inside = r.inside.iter().map(|c| (c[0] as usize, c[1] as usize));
        let list: Vec<_> = inside.chain(r.cuts.iter().map(|c| (c.i, c.j))).collect();
        let arch = pulp::Arch::new();
        let shares = shared(&list, STRETCH, |cells| {
            let mut work = Work::new(f.count);
            let mut shares = vec![0.0; cells.len() * f.count];
            for (&(i, j), out) in cells.iter().zip(shares.chunks_exact_mut(f.count)) {
                let (t, weights) = match r.cell(i as i64, j as i64) {
                    Cell::Cut(c) => (&tables[1], &r.cuts[c as usize].weights),
                    _ => (&tables[0], &whole),
                };
                arch.dispatch(|| {
                    work.cell(lattice, n, (i, j), t, f);
                    work.add_corners(lattice, n, (i, j), t, corners, &first, f);
                    work.square(weights, values, r.h * r.h, out);
                    if let Cell::Cut(c) = r.cell(i as i64, j as i64) {
                        let parts = &r.cuts[c as usize].parts;
                        work.wall(lattice, n, (i, j), parts, corners, &first, f, out);
                    }
                });
            }
            shares
        });
        out.shares.extend(shares.into_iter().flatten());
        for (i, j) in list {
            index.insert((n, i, j), out.cells.len());
            out.cells.push(Key {
                level: r.level,
                i: r.corner[0] + i as i32,
                j: r.corner[1] + j as i32,
            });
        }
    }
    jumps(lattice, f, &index, &mut out);
    for (k, s) in out.shares.iter_mut().enumerate() {
        *s = s.max(0.0);
        out.total[k % f.count] += *s;
    }
    out
}

/// Work space: u and Δu at the points of one cell, functions contiguous.
struct Work {
    count: usize,
    u: Vec<f64>,
    lap: Vec<f64>,
    half: [Vec<f64>; 2],
}

impl Work {
    fn new(count: usize) -> Self {
        Self {
            count,
            u: Vec::new(),
            lap: Vec::new(),
            half: [Vec::new(), Vec::new()],
        }
    }

    /// u and Δu of the splines, by sum factorisation.
    #[inline(always)]
    fn cell(
        &mut self,
        lattice: &Lattice,
        region: usize,
        (i, j): (usize, usize),
        t: &Tables,
        f: &Functions,
    ) {
        let (m, n, l) = (t.p + 1, t.n, self.count);
        let space = &lattice.spaces[region];
        let inv = lattice.regions[region].h.powi(-2);
        let c = &f.splines[region];
        for h in &mut self.half {
            h.clear();
            h.resize(m * n * l, 0.0);
        }
        for (o, d) in [(0, 0), (1, 2)] {
            let half = &mut self.half[o];
            for a in 0..m {
                let row = (space.first_spline(i, j) + a * space.size[1]) * l;
                for r in 0..n {
                    let to = &mut half[(a * n + r) * l..][..l];
                    for b in 0..m {
                        axpy(to, t.at[d][r * m + b], &c[row + b * l..][..l]);
                    }
                }
            }
        }
        self.u.clear();
        self.u.resize(n * n * l, 0.0);
        self.lap.clear();
        self.lap.resize(n * n * l, 0.0);
        for q in 0..n {
            for a in 0..m {
                let (b0, b2) = (t.at[0][q * m + a], inv * t.at[2][q * m + a]);
                let (v, w) = (
                    &self.half[0][a * n * l..][..n * l],
                    &self.half[1][a * n * l..][..n * l],
                );
                axpy(&mut self.u[q * n * l..][..n * l], b0, v);
                axpy(&mut self.lap[q * n * l..][..n * l], b2, v);
                axpy(&mut self.lap[q * n * l..][..n * l], inv * b0, w);
            }
        }
    }

    #[allow(clippy::too_many_arguments)]
    #[inline(always)]
    fn add_corners(
        &mut self,
        lattice: &Lattice,
        region: usize,
        (i, j): (usize, usize),
        t: &Tables,
        corners: &[CornerSpace],
        first: &[usize],
        f: &Functions,
    ) {
        let r = &lattice.regions[region];
        let low = r.low(i, j);
        let centre = pt(low[0] + 0.5 * r.h, low[1] + 0.5 * r.h);
        let l = self.count;
        for (c, corner) in corners.iter().enumerate() {
            if corner.distance(centre) > corner.radius + 0.71 * r.h {
                continue;
            }
            let mut v = vec![Value::default(); corner.functions.len()];
            for q in 0..t.n {
                for s in 0..t.n {
                    let at = pt(low[0] + r.h * t.u[q], low[1] + r.h * t.u[s]);
                    corner.eval(at, &mut v);
                    let to = (q * t.n + s) * l;
                    for (k, v) in v.iter().enumerate() {
                        let y = &f.corners[(first[c] + k) * l..][..l];
                        axpy(&mut self.u[to..][..l], v.value, y);
                        axpy(&mut self.lap[to..][..l], v.laplacian, y);
                    }
                }
            }
        }
    }

    /// Adds WALL·β/h ∫u² over the walls of a cell.
    #[allow(clippy::too_many_arguments)]
    #[inline(always)]
    fn wall(
        &mut self,
        lattice: &Lattice,
        region: usize,
        (i, j): (usize, usize),
        parts: &[Part],
        corners: &[CornerSpace],
        first: &[usize],
        f: &Functions,
        out: &mut [f64],
    ) {
        let (r, space) = (&lattice.regions[region], &lattice.spaces[region]);
        let (p, l, low) = (lattice.degree, self.count, r.low(i, j));
        let mut traces = Traces::new(p);
        for part in parts {
            let piece = &lattice.trace.pieces[part.piece as usize];
            let n = points_needed(p, part, r.h).min(p + 1);
            for q in points(piece, part, n) {
                traces.values_at(q.at, low, r.h);
                let u = &mut self.u[..l];
                u.fill(0.0);
                for (k, v) in traces.value.iter().enumerate() {
                    let spline =
                        space.first_spline(i, j) + k / (p + 1) * space.size[1] + k % (p + 1);
                    axpy(u, *v, &f.splines[region][spline * l..][..l]);
                }
                for (c, corner) in corners.iter().enumerate() {
                    if corner.distance(q.at) < corner.radius {
                        let mut v = vec![Value::default(); corner.functions.len()];
                        corner.eval(q.at, &mut v);
                        for (k, v) in v.iter().enumerate() {
                            axpy(u, v.value, &f.corners[(first[c] + k) * l..][..l]);
                        }
                    }
                }
                for (o, u) in out.iter_mut().zip(u.iter()) {
                    *o += WALL * beta(lattice) * q.weight / r.h * u * u;
                }
            }
        }
    }

    /// Adds scale · Σ w (Δu + λu)² per function.
    #[inline(always)]
    fn square(&self, weights: &[f64], values: &[f64], scale: f64, out: &mut [f64]) {
        let l = self.count;
        for (k, w) in weights.iter().enumerate() {
            let (u, lap) = (&self.u[k * l..][..l], &self.lap[k * l..][..l]);
            for (((o, u), lap), value) in out.iter_mut().zip(u).zip(lap).zip(values) {
                let r = lap + value * u;
                *o += scale * w * r * r;
            }
        }
    }
}

/// Jumps of the normal derivative across faces, half to each side.
#[allow(clippy::needless_range_loop)] // both sides are indexed in step
fn jumps(
    lattice: &Lattice,
    f: &Functions,
    index: &std::collections::HashMap<(usize, usize, usize), usize>,
    out: &mut Residual,
) {
    let p = lattice.degree;
    let l = f.count;
    let rule = gauss::rule(p + 1);
    let mut traces = Traces::new(p);
    let (mut jump, mut step) = (vec![0.0; l], vec![0.0; l]);
    for face in &lattice.faces {
        let d = face.ends[1] - face.ends[0];
        let long = d.norm();
        let r = face.regions.map(|n| &lattice.regions[n]);
        for (g, w) in rule.x.iter().zip(&rule.w) {
            let at: Point = face.ends[0] + d * (0.5 * (1.0 + g));
            jump.fill(0.0);
            step.fill(0.0);
            for s in 0..2 {
                let c = face.cells[s];
                let space = &lattice.spaces[face.regions[s]];
                traces.set(at, face.normal, r[s].low(c[0], c[1]), r[s].h);
                let sign = if s == 0 { 1.0 } else { -1.0 };
                for k in 0..traces.value.len() {
                    let spline =
                        space.first_spline(c[0], c[1]) + k / (p + 1) * space.size[1] + k % (p + 1);
                    let x = &f.splines[face.regions[s]][spline * l..][..l];
                    axpy(&mut jump, sign * traces.slope[k], x);
                    axpy(&mut step, sign * traces.value[k], x);
                }
            }
            for s in 0..2 {
                let key = (face.regions[s], face.cells[s][0], face.cells[s][1]);
                let Some(&cell) = index.get(&key) else {
                    continue;
                };
                let h = r[s].h;
                let w = 0.5 * w * long * 0.5;
                for k in 0..l {
                    out.shares[cell * l + k] +=
                        w * (0.5 * h * jump[k] * jump[k] + step[k] * step[k] / h);
                }
            }
        }
    }
}
