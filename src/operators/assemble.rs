//! Stiffness and mass of a lattice with hard walls: bands, glue, extension, scaling.

use super::band::Band;
use super::cell::{Element, Kernel};
use super::glue::glue;
use super::tables::Tables;
use super::wall::{Traces, add_wall, beta, symmetrise};
use crate::lattice::{Lattice, Role, Space};
use crate::progress::{Cancelled, Watch};

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
    let cross = faces(lattice, &mut bands);
    Ok(condense(lattice, &bands, cross))
}

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
    let mut kernel = Kernel::new(t);
    let mut element = Element::zeros(t.p);
    let mut traces = Traces::new(t.p);
    let mut block = vec![0.0; whole.mass.len()];
    let b = (t.p + 1) * (t.p + 1);
    for c in &region.cuts {
        kernel.element(&c.weights, region.h, &mut element);
        block.fill(0.0);
        let low = region.low(c.i, c.j);
        add_wall(
            &mut block,
            &mut traces,
            &lattice.trace.pieces,
            &c.parts,
            low,
            region.h,
            pen,
        );
        symmetrise(&mut block, b);
        for (e, w) in element.stiffness.iter_mut().zip(&block) {
            *e += w;
        }
        stiff.add(c.i, c.j, &element.stiffness);
        mass.add(c.i, c.j, &element.mass);
    }
    [stiff, mass]
}

/// Glue terms: same-side blocks into the bands, cross blocks as entries (row, column, value),
/// both triangles.
fn faces(lattice: &Lattice, bands: &mut [[Band; 2]]) -> Vec<(u32, u32, f64)> {
    let m = lattice.degree + 1;
    let mut traces = [Traces::new(lattice.degree), Traces::new(lattice.degree)];
    let mut out = Vec::new();
    for face in &lattice.faces {
        let g = glue(lattice, face, &mut traces);
        let [f, c] = g.regions;
        bands[f][0].add(g.cells[0][0], g.cells[0][1], &g.blocks[0]);
        bands[c][0].add(g.cells[1][0], g.cells[1][1], &g.blocks[2]);
        let terms = |s: usize| -> Vec<Vec<(u32, f64)>> {
            let space = &lattice.spaces[g.regions[s]];
            let first = space.first_spline(g.cells[s][0], g.cells[s][1]);
            (0..m * m)
                .map(|k| expand(space, first + (k / m) * space.size[1] + k % m))
                .collect()
        };
        let (fine, coarse) = (terms(0), terms(1));
        for (i, rows) in fine.iter().enumerate() {
            for (j, cols) in coarse.iter().enumerate() {
                let v = g.blocks[1][i * m * m + j];
                for &(r, x) in rows {
                    for &(c, y) in cols {
                        out.push((r, c, v * x * y));
                        out.push((c, r, v * x * y));
                    }
                }
            }
        }
    }
    out.sort_unstable_by_key(|e| (e.0, e.1));
    out.dedup_by(|b, a| {
        let same = a.0 == b.0 && a.1 == b.1;
        if same {
            a.2 += b.2;
        }
        same
    });
    out
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

/// EᵀKE and EᵀME, region by region, with the glue's cross entries merged in.
fn condense(lattice: &Lattice, bands: &[[Band; 2]], cross: Vec<(u32, u32, f64)>) -> Pair {
    let n = lattice.unknowns;
    let mut out = Pair {
        starts: Vec::with_capacity(n + 1),
        columns: Vec::new(),
        stiffness: Vec::new(),
        mass: Vec::new(),
    };
    out.starts.push(0);
    let mut row = Row::new(n);
    let mut next = cross.into_iter().peekable();
    for (space, band) in lattice.spaces.iter().zip(bands) {
        // rows of the outer splines, in unknowns, and who is tied to whom
        let mut outer: Vec<Vec<(u32, f64, f64)>> = Vec::with_capacity(space.ties.len());
        let mut users: Vec<Vec<(u32, f64)>> = vec![Vec::new(); space.splines.len()];
        for (t, tie) in space.ties.iter().enumerate() {
            add_band_row(space, band, tie.spline as usize, &mut row);
            let mut list = Vec::with_capacity(row.list.len());
            row.drain(|u, k, m| list.push((u, k, m)));
            outer.push(list);
            for &(u, c) in &tie.terms {
                users[u as usize - space.unknowns[0]].push((t as u32, c));
            }
        }
        for (local, &spline) in space.splines.iter().enumerate() {
            add_band_row(space, band, spline as usize, &mut row);
            for &(t, c) in &users[local] {
                for &(u, k, m) in &outer[t as usize] {
                    row.add(u, c * k, c * m);
                }
            }
            let me = (space.unknowns[0] + local) as u32;
            while let Some((_, c, v)) = next.next_if(|e| e.0 == me) {
                row.add(c, v, 0.0);
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

fn add_band_row(space: &Space, band: &[Band; 2], spline: usize, row: &mut Row) {
    Band::row(band, spline, |s, [k, m]| match space.roles[s] {
        Role::Inner(u) => row.add(u, k, m),
        Role::Outer(t) => {
            for &(u, c) in &space.ties[t as usize].terms {
                row.add(u, c * k, c * m);
            }
        }
        Role::Dead => {}
    });
}
