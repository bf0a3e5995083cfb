//! The quadtree of cells: which cells are split, and the leaves with what they hold.

use super::trace::{Part, Trace};
use std::collections::{HashMap, HashSet};

/// Deepest level of refinement.
pub const DEEPEST: u8 = 14;

/// A cell: level and position on its level.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Key {
    /// Level; 0 is the coarsest.
    pub level: u8,
    /// Column.
    pub i: i32,
    /// Row.
    pub j: i32,
}

impl Key {
    /// The cell one level up.
    pub fn parent(self) -> Option<Self> {
        (self.level > 0).then(|| Self {
            level: self.level - 1,
            i: self.i >> 1,
            j: self.j >> 1,
        })
    }
    /// The neighbour displaced by (di, dj).
    pub fn beside(self, di: i32, dj: i32) -> Self {
        Self {
            level: self.level,
            i: self.i + di,
            j: self.j + dj,
        }
    }
}

/// The set of split cells; neighbours, diagonal ones included, differ by one level at most.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Splits {
    cells: HashSet<Key>,
}

impl Splits {
    /// Whether a cell is split.
    pub fn has(&self, k: Key) -> bool {
        self.cells.contains(&k)
    }

    /// Number of split cells.
    pub fn len(&self) -> usize {
        self.cells.len()
    }

    /// Whether no cell is split.
    pub fn is_empty(&self) -> bool {
        self.cells.is_empty()
    }

    /// Splits a cell, and whatever else keeps neighbours within one level.
    /// Returns whether anything changed.
    pub fn split(&mut self, key: Key) -> bool {
        if key.level >= DEEPEST || !self.cells.insert(key) {
            return false;
        }
        if let Some(up) = key.parent() {
            self.split(up);
            for di in -1..=1 {
                for dj in -1..=1 {
                    if let Some(p) = key.beside(di, dj).parent() {
                        self.split(p);
                    }
                }
            }
        }
        true
    }
}

/// A cell that is not split, wholly or partly inside the outline.
#[derive(Clone, Debug)]
pub struct Leaf {
    /// Which cell.
    pub key: Key,
    /// The boundary in it; empty for an inside cell.
    pub parts: Vec<Part>,
}

impl Leaf {
    /// Whether the boundary passes through.
    pub fn is_cut(&self) -> bool {
        !self.parts.is_empty()
    }
}

/// Crossings of vertical lines, computed once per line.
pub struct Columns<'a> {
    trace: &'a Trace,
    lists: HashMap<(u8, i32, bool), Vec<f64>>,
}

impl<'a> Columns<'a> {
    /// No line computed yet.
    pub fn new(trace: &'a Trace) -> Self {
        Self {
            trace,
            lists: HashMap::new(),
        }
    }

    /// Crossings of the centre line (`edge` false) or of the right edge of a column of cells.
    pub fn get(&mut self, level: u8, i: i32, edge: bool) -> &[f64] {
        let trace = self.trace;
        self.lists.entry((level, i, edge)).or_insert_with(|| {
            let x = if edge {
                trace.grid.line(level, 0, i + 1)
            } else {
                trace.grid.centre(level, i, 0).x
            };
            trace.crossings(0, i >> level, x)
        })
    }

    /// Whether the centre of a cell without boundary is inside.
    fn inside(&mut self, k: Key) -> bool {
        let y = self.trace.grid.centre(k.level, k.i, k.j).y;
        self.get(k.level, k.i, false)
            .iter()
            .filter(|&&c| c < y)
            .count()
            % 2
            == 1
    }
}

/// All leaves that touch the inside.
pub fn leaves(trace: &Trace, splits: &Splits, columns: &mut Columns<'_>) -> Vec<Leaf> {
    let mut cut: HashMap<(i32, i32), Vec<Part>> = HashMap::new();
    for (c, p) in &trace.parts {
        cut.entry((c[0], c[1])).or_default().push(*p);
    }
    let (mut lo, mut hi) = ([i32::MAX; 2], [i32::MIN; 2]);
    for (c, _) in &trace.parts {
        for a in 0..2 {
            lo[a] = lo[a].min(c[a]);
            hi[a] = hi[a].max(c[a]);
        }
    }
    let mut out = Vec::new();
    if trace.parts.is_empty() {
        return out;
    }
    for i in lo[0]..=hi[0] {
        for j in lo[1]..=hi[1] {
            let parts = cut.remove(&(i, j)).unwrap_or_default();
            descend(
                trace,
                splits,
                columns,
                Key { level: 0, i, j },
                parts,
                &mut out,
            );
        }
    }
    out
}

fn descend(
    trace: &Trace,
    splits: &Splits,
    columns: &mut Columns<'_>,
    key: Key,
    parts: Vec<Part>,
    out: &mut Vec<Leaf>,
) {
    if parts.is_empty() && !columns.inside(key) {
        return;
    }
    if !splits.has(key) {
        out.push(Leaf { key, parts });
        return;
    }
    let quarters = trace.quarter(&parts, key.level, key.i, key.j);
    for (c, parts) in quarters.into_iter().enumerate() {
        let child = Key {
            level: key.level + 1,
            i: 2 * key.i + (c as i32 >> 1),
            j: 2 * key.j + (c as i32 & 1),
        };
        descend(trace, splits, columns, child, parts, out);
    }
}
