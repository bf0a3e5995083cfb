//! Couplings across faces, spline by spline, before extension.

use super::band::Band;
use super::glue::{Blocks, glue};
use super::wall::Traces;
use crate::geometry::Point;
use crate::lattice::{Face, Lattice, Space};
use std::collections::HashMap;
use std::rc::Rc;

/// How a face lies: offset of its ends and of the finer cell in the coarser one, in finer cells.
type Lie = [i64; 6];

/// The blocks of all faces, and which faces each spline takes part in.
pub struct Cross<'a> {
    lattice: &'a Lattice,
    blocks: Vec<Rc<Blocks>>,
    /// First spline of each region in the numbering of `starts`.
    first: Vec<usize>,
    starts: Vec<u32>,
    /// Face, side and place among the splines alive on that side's cell.
    list: Vec<(u32, u8, u8)>,
}

impl<'a> Cross<'a> {
    /// Integrates all faces; blocks of one side go into the bands of the stiffness.
    pub fn new(lattice: &'a Lattice, bands: &mut [[Band; 2]]) -> Self {
        let mut traces = [Traces::new(lattice.degree), Traces::new(lattice.degree)];
        let mut known: HashMap<Lie, Rc<Blocks>> = HashMap::new();
        let mut blocks = Vec::with_capacity(lattice.faces.len());
        for face in &lattice.faces {
            let mut make = || Rc::new(glue(lattice, face, &mut traces));
            let g = match lie(lattice, face) {
                Some(lie) => Rc::clone(known.entry(lie).or_insert_with(make)),
                None => make(),
            };
            for side in 0..2 {
                let [i, j] = face.cells[side];
                bands[face.regions[side]][0].add(i, j, &g.own[side]);
            }
            blocks.push(g);
        }
        let mut first = vec![0];
        for space in &lattice.spaces {
            first.push(first[first.len() - 1] + space.roles.len());
        }
        let mut out = Self {
            lattice,
            blocks,
            starts: vec![0; first[first.len() - 1] + 1],
            first,
            list: Vec::new(),
        };
        out.index();
        out
    }

    fn index(&mut self) {
        let mut starts = std::mem::take(&mut self.starts);
        self.each(|spline, _| starts[spline + 1] += 1);
        for k in 1..starts.len() {
            starts[k] += starts[k - 1];
        }
        let mut next = starts.clone();
        let mut list = vec![(0, 0, 0); starts[starts.len() - 1] as usize];
        self.each(|spline, entry| {
            list[next[spline] as usize] = entry;
            next[spline] += 1;
        });
        (self.starts, self.list) = (starts, list);
    }

    fn each(&self, mut give: impl FnMut(usize, (u32, u8, u8))) {
        let m = self.lattice.degree + 1;
        for (f, face) in self.lattice.faces.iter().enumerate() {
            for side in 0..2 {
                let n = face.regions[side];
                let space = &self.lattice.spaces[n];
                let from =
                    self.first[n] + space.first_spline(face.cells[side][0], face.cells[side][1]);
                for k in 0..m * m {
                    let spline = from + (k / m) * space.size[1] + k % m;
                    give(spline, (f as u32, side as u8, k as u8));
                }
            }
        }
    }

    /// Calls `give(space, spline, value)` for what a spline of region `n` couples with across
    /// faces; a spline of the other side may come more than once.
    pub fn row(&self, n: usize, spline: usize, mut give: impl FnMut(&Space, usize, f64)) {
        let m = self.lattice.degree + 1;
        let at = self.first[n] + spline;
        for &(f, side, k) in &self.list[self.starts[at] as usize..self.starts[at + 1] as usize] {
            let face = &self.lattice.faces[f as usize];
            let (there, k) = (1 - side as usize, k as usize);
            let space = &self.lattice.spaces[face.regions[there]];
            let from = space.first_spline(face.cells[there][0], face.cells[there][1]);
            let block = &self.blocks[f as usize].across;
            for l in 0..m * m {
                let v = if side == 0 {
                    block[k * m * m + l]
                } else {
                    block[l * m * m + k]
                };
                give(space, from + (l / m) * space.size[1] + l % m, v);
            }
        }
    }
}

/// How a face lies when it is a whole side of its finer cell: such faces share their blocks, which
/// have no unit.
fn lie(lattice: &Lattice, face: &Face) -> Option<Lie> {
    let [fine, coarse] = face.regions.map(|n| &lattice.regions[n]);
    let low = fine.low(face.cells[0][0], face.cells[0][1]);
    let base = coarse.low(face.cells[1][0], face.cells[1][1]);
    let steps = |from: Point, to: [f64; 2]| [(from.x - to[0]) / fine.h, (from.y - to[1]) / fine.h];
    let [a, b] = face.ends.map(|e| steps(e, low));
    let c = steps(
        Point {
            x: low[0],
            y: low[1],
        },
        base,
    );
    let mut out = [0; 6];
    for (o, x) in out.iter_mut().zip([a[0], a[1], b[0], b[1], c[0], c[1]]) {
        if (x - x.round()).abs() > 1e-9 {
            return None;
        }
        *o = x.round() as i64;
    }
    Some(out)
}
