//! Stiffness and mass of a lattice with hard walls: bands, glue, extension, scaling.

use super::band::Band;
use super::cell::{Element, Kernel};
use super::cross::Cross;

use super::tables::Tables;
use super::wall::{Traces, beta, wall_block};
use crate::lattice::{Cut, Lattice, Role, Space};
use crate::progress::{Cancelled, Watch, shared};

/// Stiffness and mass on one sparsity pattern, symmetric, rows ascending.
#[derive(Clone, Debug)]
pub struct Pair {
    /// Start of each row, n + 1 of them.
    pub starts: Vec<usize>,
    /// Column of each entry.
    pub columns: Vec<usize>,
    /// Entries of the stiffness, walls and glue included; reduced units (length⁰).
    pub stiffness: Vec<f64>,
    /// Entries of the mass.
    pub mass: Vec<f64>,
}

impl Pair {
    /// Number of unknowns.
    pub fn len(&self) -> usize {
        self.starts.len() - 1
    }
    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }
}

/// Assembles −Δ with hard walls on a lattice.
///
/// # Errors
/// [`Cancelled`] when called off.
pub fn assemble(lattice: &Lattice, watch: &Watch) -> Result<Pair, Cancelled> {
    let t = Tables::new(lattice.degree, 2 * lattice.degree + 1);
    let mut bands = Vec::with_capacity(lattice.regions.len());
    for n in 0..lattice.regions.len() {
        watch.step(n, lattice.regions.len(), "regions")?;
        bands.push(fill(lattice, n, &t));
    }
    let cross = Cross::new(lattice, &mut bands);
    Ok(condense(lattice, &bands, &cross))
}

/// Cut cells a thread takes at a time.
const CUTS: usize = 16;

/// Stiffness and mass bands of one region, walls included.
fn fill(lattice: &Lattice, n: usize, t: &Tables) -> [Band; 2] {
    let (region, space) = (&lattice.regions[n], &lattice.spaces[n]);
    let (mut stiff, mut mass) = (Band::new(space), Band::new(space));
    let whole = Element::whole(t, region.h);
    for c in &region.inside {
        stiff.add(c[0] as usize, c[1] as usize, &whole.stiffness);
        mass.add(c[0] as usize, c[1] as usize, &whole.mass);
    }
    let pen = beta(lattice) / region.h;
    let cuts = shared(&region.cuts, CUTS, |cuts| {
        let mut kernel = Kernel::new(t);
        let mut traces = Traces::new(t.p);
        let pieces = &lattice.trace.pieces;
        let element = |c: &Cut| {
            let mut out = Element::zeros(t.p);
            kernel.element(&c.weights, region.h, &mut out);
            let low = region.low(c.i, c.j);
            let wall = wall_block(&mut traces, pieces, &c.parts, low, region.h, pen);
            for (e, w) in out.stiffness.iter_mut().zip(wall) {
                *e += w;
            }
            out
        };
        cuts.iter().map(element).collect::<Vec<_>>()
    });
    for (c, element) in region.cuts.iter().zip(cuts.iter().flatten()) {
        stiff.add(c.i, c.j, &element.stiffness);
        mass.add(c.i, c.j, &element.mass);
    }
    [stiff, mass]
}

/// A spline as a combination of unknowns.
pub(super) fn expand(space: &Space, spline: usize) -> Vec<(u32, f64)> {
    match space.roles[spline] {
        Role::Dead => Vec::new(),
        Role::Inner(u) => vec![(u, 1.0)],
        Role::Outer(t) => space.ties[t as usize].terms.clone(),
    }
}

/// Sparse accumulator for one row of both matrices.
struct Row {
    k: Vec<f64>,
    m: Vec<f64>,
    seen: Vec<bool>,
    list: Vec<u32>,
}

impl Row {
    fn new(n: usize) -> Self {
        Self {
            k: vec![0.0; n],
            m: vec![0.0; n],
            seen: vec![false; n],
            list: Vec::new(),
        }
    }
    #[inline]
    fn add(&mut self, u: u32, k: f64, m: f64) {
        let i = u as usize;
        if !self.seen[i] {
            self.seen[i] = true;
            self.list.push(u);
        }
        self.k[i] += k;
        self.m[i] += m;
    }
    fn drain(&mut self, mut give: impl FnMut(u32, f64, f64)) {
        if !self.list.is_sorted() {
            self.list.sort_unstable();
        }
        for &u in &self.list {
            let i = u as usize;
            give(u, self.k[i], self.m[i]);
            self.k[i] = 0.0;
            self.m[i] = 0.0;
            self.seen[i] = false;
        }
        self.list.clear();
    }
}

/// EᵀKE and EᵀME, region by region, with the couplings across faces.
fn condense(lattice: &Lattice, bands: &[[Band; 2]], cross: &Cross<'_>) -> Pair {
    let n = lattice.unknowns;
    let mut out = Pair {
        starts: Vec::with_capacity(n + 1),
        columns: Vec::new(),
        stiffness: Vec::new(),
        mass: Vec::new(),
    };
    out.starts.push(0);
    let mut row = Row::new(n);
    for (n, (space, band)) in lattice.spaces.iter().zip(bands).enumerate() {
        let whole = Splines {
            n,
            space,
            band,
            cross,
        };
        // rows of the outer splines, in unknowns, and who is tied to whom
        let mut outer: Vec<Vec<(u32, f64, f64)>> = Vec::with_capacity(space.ties.len());
        let mut users: Vec<Vec<(u32, f64)>> = vec![Vec::new(); space.splines.len()];
        for (t, tie) in space.ties.iter().enumerate() {
            whole.add_row(tie.spline as usize, &mut row);
            let mut list = Vec::with_capacity(row.list.len());
            row.drain(|u, k, m| list.push((u, k, m)));
            outer.push(list);
            for &(u, c) in &tie.terms {
                users[u as usize - space.unknowns[0]].push((t as u32, c));
            }
        }
        for (local, &spline) in space.splines.iter().enumerate() {
            whole.add_row(spline as usize, &mut row);
            for &(t, c) in &users[local] {
                for &(u, k, m) in &outer[t as usize] {
                    row.add(u, c * k, c * m);
                }
            }
            row.drain(|u, k, m| {
                out.columns.push(u as usize);
                out.stiffness.push(k);
                out.mass.push(m);
            });
            out.starts.push(out.columns.len());
        }
    }
    out
}

/// All couplings of the splines of one region.
struct Splines<'a> {
    n: usize,
    space: &'a Space,
    band: &'a [Band; 2],
    cross: &'a Cross<'a>,
}

impl Splines<'_> {
    /// Adds the row of a spline, columns condensed to unknowns.
    fn add_row(&self, spline: usize, row: &mut Row) {
        Band::row(self.band, spline, |s, [k, m]| {
            add(self.space, s, [k, m], row)
        });
        self.cross
            .row(self.n, spline, |space, s, k| add(space, s, [k, 0.0], row));
    }
}

#[inline]
fn add(space: &Space, spline: usize, [k, m]: [f64; 2], row: &mut Row) {
    match space.roles[spline] {
        Role::Inner(u) => row.add(u, k, m),
        Role::Outer(t) => {
            for &(u, c) in &space.ties[t as usize].terms {
                row.add(u, c * k, c * m);
            }
        }
        Role::Dead => {}
    }
}
