//! Faces: stretches of lattice lines along which two regions meet inside the outline.

use super::region::{Cell, Region};
use super::trace::Trace;
use crate::geometry::{Point, pt};
use std::collections::HashMap;

/// A straight stretch between a cell of a coarse and a cell of a fine region.
#[derive(Clone, Copy, Debug)]
pub struct Face {
    /// Regions on both sides: the finer one first.
    pub regions: [usize; 2],
    /// The cell of each, local to its region.
    pub cells: [[usize; 2]; 2],
    /// Ends of the stretch.
    pub ends: [Point; 2],
    /// Unit normal from the finer to the coarser side.
    pub normal: Point,
}

/// All faces between regions; stretches are clipped at the boundary.
pub fn faces(trace: &Trace, regions: &[Region]) -> Vec<Face> {
    if regions.len() < 2 {
        return Vec::new();
    }
    // owner of a cell, by level and lattice position
    let mut owners: HashMap<(u8, i32, i32), (usize, [usize; 2])> = HashMap::new();
    for (n, r) in regions.iter().enumerate() {
        for i in 0..r.size[0] {
            for j in 0..r.size[1] {
                if r.cells[i * r.size[1] + j] != Cell::Out {
                    let key = (r.level, r.corner[0] + i as i32, r.corner[1] + j as i32);
                    owners.insert(key, (n, [i, j]));
                }
            }
        }
    }
    let mut out = Vec::new();
    for (n, r) in regions.iter().enumerate() {
        if r.level == 0 {
            continue;
        }
        for i in 0..r.size[0] {
            for j in 0..r.size[1] {
                if r.cells[i * r.size[1] + j] == Cell::Out {
                    continue;
                }
                let (ci, cj) = (r.corner[0] + i as i32, r.corner[1] + j as i32);
                for (di, dj) in [(-1, 0), (1, 0), (0, -1), (0, 1)] {
                    let up = (r.level - 1, (ci + di) >> 1, (cj + dj) >> 1);
                    let Some(&(m, cell)) = owners.get(&up) else {
                        continue;
                    };
                    side(trace, r.level, [ci, cj], [di, dj], |ends| {
                        out.push(Face {
                            regions: [n, m],
                            cells: [[i, j], cell],
                            ends,
                            normal: pt(f64::from(di), f64::from(dj)),
                        });
                    });
                }
            }
        }
    }
    out
}

/// The inside stretches of one side of a cell.
fn side(
    trace: &Trace,
    level: u8,
    cell: [i32; 2],
    step: [i32; 2],
    mut give: impl FnMut([Point; 2]),
) {
    let grid = &trace.grid;
    let axis = usize::from(step[0] == 0);
    let k = cell[axis] + i32::from(step[axis] > 0);
    let v = grid.line(level, axis, k);
    // the lane below the line, in which the line is an upper edge or lies within
    let lane = (k - 1) >> level;
    let o = 1 - axis;
    let (lo, hi) = (
        grid.line(level, o, cell[o]),
        grid.line(level, o, cell[o] + 1),
    );
    for span in trace.crossings(axis, lane, v).chunks_exact(2) {
        let (a, b) = (span[0].max(lo), span[1].min(hi));
        if b > a {
            give(if axis == 0 {
                [pt(v, a), pt(v, b)]
            } else {
                [pt(a, v), pt(b, v)]
            });
        }
    }
}
