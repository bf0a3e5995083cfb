//! A region: connected cells of one size, with rules to integrate over them.

use super::cutcell;
use super::trace::Part;
use super::tree::{Columns, Key, Leaf};
use std::collections::HashMap;

/// What a cell of a region is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cell {
    /// Not of this region.
    Out,
    /// Wholly inside.
    Inside,
    /// Cut by the boundary; the number of its [`Cut`].
    Cut(u32),
}

/// A cut cell.
#[derive(Clone, Debug)]
pub struct Cut {
    /// Column in the region.
    pub i: usize,
    /// Row in the region.
    pub j: usize,
    /// Boundary parts inside the cell, material on the left.
    pub parts: Vec<Part>,
    /// Weights of the n × n tensor Gauss rule for cell ∩ outline, `[q * n + r]`, q along x.
    pub weights: Vec<f64>,
    /// Area of cell ∩ outline over area of the cell.
    pub fraction: f64,
}

/// Connected cells of one size.
#[derive(Clone, Debug)]
pub struct Region {
    /// Refinement level.
    pub level: u8,
    /// Cell size.
    pub h: f64,
    /// Lattice position of cell (0, 0) on its level.
    pub corner: [i32; 2],
    /// Lower left corner of cell (0, 0).
    pub origin: [f64; 2],
    /// Columns and rows.
    pub size: [usize; 2],
    /// Row-major by column: `i * size[1] + j`.
    pub cells: Vec<Cell>,
    /// Inside cells.
    pub inside: Vec<[u32; 2]>,
    /// Cut cells.
    pub cuts: Vec<Cut>,
}

impl Region {
    /// The cell at (i, j), `Out` beyond the rim.
    pub fn cell(&self, i: i64, j: i64) -> Cell {
        if i < 0 || j < 0 || i >= self.size[0] as i64 || j >= self.size[1] as i64 {
            return Cell::Out;
        }
        self.cells[i as usize * self.size[1] + j as usize]
    }

    /// The region's own number of a lattice cell.
    pub fn local(&self, key: Key) -> (i64, i64) {
        (
            i64::from(key.i) - i64::from(self.corner[0]),
            i64::from(key.j) - i64::from(self.corner[1]),
        )
    }

    /// Lower left corner of a cell.
    pub fn low(&self, i: usize, j: usize) -> [f64; 2] {
        [
            self.origin[0] + i as f64 * self.h,
            self.origin[1] + j as f64 * self.h,
        ]
    }

    /// Area of the region.
    pub fn area(&self) -> f64 {
        let cut: f64 = self.cuts.iter().map(|c| c.fraction).sum();
        (cut + self.inside.len() as f64) * self.h * self.h
    }
}

/// Groups leaves into regions: one for each connected set of leaves of the same size.
pub fn regions(leaves: Vec<Leaf>) -> Vec<Vec<Leaf>> {
    let index: HashMap<Key, u32> = leaves
        .iter()
        .enumerate()
        .map(|(n, l)| (l.key, n as u32))
        .collect();
    let mut mark = vec![u32::MAX; leaves.len()];
    let mut count = 0;
    let mut stack = Vec::new();
    for start in 0..leaves.len() {
        if mark[start] != u32::MAX {
            continue;
        }
        mark[start] = count;
        stack.push(start as u32);
        while let Some(n) = stack.pop() {
            let key = leaves[n as usize].key;
            for di in -1..=1 {
                for dj in -1..=1 {
                    if let Some(&m) = index.get(&key.beside(di, dj))
                        && mark[m as usize] == u32::MAX
                    {
                        mark[m as usize] = count;
                        stack.push(m);
                    }
                }
            }
        }
        count += 1;
    }
    let mut out: Vec<Vec<Leaf>> = (0..count).map(|_| Vec::new()).collect();
    for (n, leaf) in leaves.into_iter().enumerate() {
        out[mark[n] as usize].push(leaf);
    }
    out.sort_by_key(|g| (g[0].key.level, g[0].key.i, g[0].key.j));
    out
}

/// Builds a region from its leaves; rules with `n` points a side.
pub fn build(
    leaves: Vec<Leaf>,
    columns: &mut Columns<'_>,
    trace: &super::trace::Trace,
    n: usize,
) -> Region {
    let level = leaves[0].key.level;
    let lo: [i32; 2] = [
        leaves.iter().map(|l| l.key.i).min().unwrap_or(0),
        leaves.iter().map(|l| l.key.j).min().unwrap_or(0),
    ];
    let hi: [i32; 2] = [
        leaves.iter().map(|l| l.key.i).max().unwrap_or(0),
        leaves.iter().map(|l| l.key.j).max().unwrap_or(0),
    ];
    let size = [0, 1].map(|a| (hi[a] - lo[a] + 1) as usize);
    let grid = &trace.grid;
    let mut region = Region {
        level,
        h: grid.size(level),
        corner: lo,
        origin: [grid.line(level, 0, lo[0]), grid.line(level, 1, lo[1])],
        size,
        cells: vec![Cell::Out; size[0] * size[1]],
        inside: Vec::new(),
        cuts: Vec::new(),
    };
    let mut fitter = cutcell::Fitter::new(n);
    for leaf in leaves {
        let (i, j) = region.local(leaf.key);
        let (i, j) = (i as usize, j as usize);
        let at = i * size[1] + j;
        if !leaf.is_cut() {
            region.cells[at] = Cell::Inside;
            region.inside.push([i as u32, j as u32]);
            continue;
        }
        let edge = columns.get(level, leaf.key.i, true);
        let low = [
            grid.line(level, 0, leaf.key.i),
            grid.line(level, 1, leaf.key.j),
        ];
        let (weights, fraction) = fitter.weights(&trace.pieces, &leaf.parts, low, region.h, edge);
        region.cells[at] = Cell::Cut(region.cuts.len() as u32);
        region.cuts.push(Cut {
            i,
            j,
            parts: leaf.parts,
            weights,
            fraction,
        });
    }
    region
}
