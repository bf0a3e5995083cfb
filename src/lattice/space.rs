//! The spline space of a region: extended B-splines (Höllig, Reif & Wipper 2001).
//!
//! A spline is *inner* when its support holds a whole inside cell; every other spline alive
//! in the region is tied to the nearest block of (p + 1)² inner ones by Lagrange extrapolation.

use super::region::{Cell, Region};

/// What a spline of the lattice is to the problem.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// Not alive in the region.
    Dead,
    /// An unknown, with its number in the whole problem.
    Inner(u32),
    /// Tied to inner ones; the number of its [`Tie`].
    Outer(u32),
}

/// An outer spline as a combination of inner ones.
#[derive(Clone, Debug)]
pub struct Tie {
    /// Local number of the outer spline.
    pub spline: u32,
    /// Unknown and coefficient.
    pub terms: Vec<(u32, f64)>,
}

/// The spline space of one region.
#[derive(Clone, Debug)]
pub struct Space {
    /// Degree.
    pub degree: usize,
    /// Splines per direction: cells + degree.
    pub size: [usize; 2],
    /// Role of each spline, `i * size[1] + j`.
    pub roles: Vec<Role>,
    /// Ties of the outer splines.
    pub ties: Vec<Tie>,
    /// First unknown of this region, and one past the last.
    pub unknowns: [usize; 2],
    /// Local number of each unknown's spline.
    pub splines: Vec<u32>,
}

/// Cells whose splines found no inner block near enough; they need a finer lattice.
pub type Stranded = Vec<(usize, usize)>;

/// Farthest extrapolation, in cells, measured between a spline and its block.
/// Farther ones cost the wall form its coercivity at the usual penalty (seen at 4, degree 5).
const FARTHEST: f64 = 2.5;

impl Space {
    /// Builds the space with unknowns numbered from `first`, and lists stranded cells.
    pub fn new(region: &Region, degree: usize, first: usize) -> (Self, Stranded) {
        let p = degree;
        let size = region.size.map(|n| n + p);
        let at = |i: usize, j: usize| i * size[1] + j;
        let mut alive = vec![false; size[0] * size[1]];
        let mut inner = vec![false; size[0] * size[1]];
        let mark = |flags: &mut [bool], i: usize, j: usize| {
            for a in 0..=p {
                flags[at(i + a, j)..=at(i + a, j + p)].fill(true);
            }
        };
        for c in &region.cuts {
            mark(&mut alive, c.i, c.j);
        }
        for c in &region.inside {
            mark(&mut alive, c[0] as usize, c[1] as usize);
            mark(&mut inner, c[0] as usize, c[1] as usize);
        }
        let mut space = Self {
            degree,
            size,
            roles: vec![Role::Dead; alive.len()],
            ties: Vec::new(),
            unknowns: [first, first],
            splines: Vec::new(),
        };
        for (k, is_inner) in inner.iter().enumerate() {
            if *is_inner {
                space.roles[k] = Role::Inner(space.unknowns[1] as u32);
                space.splines.push(k as u32);
                space.unknowns[1] += 1;
            }
        }
        let blocks = blocks(region, &inner, size, p);
        let mut stranded = Vec::new();
        for i in 0..size[0] {
            for j in 0..size[1] {
                let k = at(i, j);
                if !alive[k] || inner[k] {
                    continue;
                }
                match nearest(&blocks, region.size, i, j, p) {
                    Some((a, b)) => {
                        space.roles[k] = Role::Outer(space.ties.len() as u32);
                        let terms = space.extrapolate(i, j, a, b);
                        space.ties.push(Tie {
                            spline: k as u32,
                            terms,
                        });
                    }
                    None => stranded.extend(cells_of(region, i, j, p)),
                }
            }
        }
        stranded.sort_unstable();
        stranded.dedup();
        (space, stranded)
    }

    fn extrapolate(&self, i: usize, j: usize, a: usize, b: usize) -> Vec<(u32, f64)> {
        let p = self.degree;
        let lx = lagrange(p, i as f64 - a as f64);
        let ly = lagrange(p, j as f64 - b as f64);
        let mut terms = Vec::with_capacity((p + 1) * (p + 1));
        for (k, x) in lx.iter().enumerate() {
            for (l, y) in ly.iter().enumerate() {
                if let Role::Inner(u) = self.roles[(a + k) * self.size[1] + b + l]
                    && x * y != 0.0
                {
                    terms.push((u, x * y));
                }
            }
        }
        terms
    }

    /// Local numbers of the splines alive on a cell start here, `size[1]` apart by column.
    #[inline]
    pub fn first_spline(&self, i: usize, j: usize) -> usize {
        i * self.size[1] + j
    }
}

/// Cells on which all splines are inner, and which are themselves not outside.
fn blocks(region: &Region, inner: &[bool], size: [usize; 2], p: usize) -> Vec<bool> {
    let mut ok = vec![false; region.size[0] * region.size[1]];
    for i in 0..region.size[0] {
        for j in 0..region.size[1] {
            ok[i * region.size[1] + j] = region.cell(i as i64, j as i64) != Cell::Out
                && (0..=p).all(|a| {
                    let s = (i + a) * size[1] + j;
                    inner[s..=s + p].iter().all(|&x| x)
                });
        }
    }
    ok
}

/// The block nearest to spline (i, j): by distance, then by distance of centres.
fn nearest(ok: &[bool], cells: [usize; 2], i: usize, j: usize, p: usize) -> Option<(usize, usize)> {
    let reach = p + FARTHEST as usize + 2;
    let mut best = None;
    let mut least = f64::INFINITY;
    let gap = |a: usize, i: usize| {
        let d = a as f64 - i as f64;
        d.max(-d - p as f64).max(0.0)
    };
    for a in i.saturating_sub(reach)..(i + reach).min(cells[0]) {
        let dx = gap(a, i);
        for b in j.saturating_sub(reach)..(j + reach).min(cells[1]) {
            if !ok[a * cells[1] + b] {
                continue;
            }
            let dy = gap(b, j);
            let far = dx * dx + dy * dy;
            if far > FARTHEST * FARTHEST {
                continue;
            }
            let c = |a: usize, i: usize| a as f64 + 0.5 * p as f64 - i as f64;
            let cost = far + 1e-3 * (c(a, i).powi(2) + c(b, j).powi(2));
            if cost < least {
                least = cost;
                best = Some((a, b));
            }
        }
    }
    best
}

/// Cells of the region in the support of a spline.
fn cells_of(region: &Region, i: usize, j: usize, p: usize) -> Vec<(usize, usize)> {
    let mut out = Vec::new();
    for a in i.saturating_sub(p)..=i.min(region.size[0] - 1) {
        for b in j.saturating_sub(p)..=j.min(region.size[1] - 1) {
            if matches!(region.cells[a * region.size[1] + b], Cell::Cut(_)) {
                out.push((a, b));
            }
        }
    }
    out
}

/// Lagrange basis on nodes 0…p at `t`.
fn lagrange(p: usize, t: f64) -> Vec<f64> {
    (0..=p)
        .map(|k| {
            (0..=p)
                .filter(|&m| m != k)
                .map(|m| (t - m as f64) / (k as f64 - m as f64))
                .product()
        })
        .collect()
}
