//! The boundary cut at the lines of the coarsest lattice, and the crossings of any line with it.
//!
//! Sub-pieces are monotone in x and y and meet their neighbours bit for bit, so that counting
//! crossings with the half-open rule is exact whatever touches whatever.

use crate::geometry::{Outline, Piece, Point};

/// Part of a boundary piece that lies in one cell.
#[derive(Clone, Copy, Debug)]
pub struct Part {
    /// Number of the piece, counted through all loops.
    pub piece: u32,
    /// Parameter range on the piece.
    pub t: [f64; 2],
    /// End points; coordinates on lattice lines are exactly those of the line.
    pub ends: [Point; 2],
}

/// A square lattice: lines at origin + k·h.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Grid {
    /// A lattice node.
    pub origin: Point,
    /// Cell size of level 0; level ℓ has h / 2^ℓ.
    pub h: f64,
}

impl Grid {
    /// Cell size of a level.
    pub fn size(&self, level: u8) -> f64 {
        self.h / f64::from(1u32 << level)
    }
    /// Position of line `k` of a level along an axis.
    pub fn line(&self, level: u8, axis: usize, k: i32) -> f64 {
        // one product and one sum, so that a line has the same bits at every level it belongs to
        self.origin.axis(axis) + self.h * (f64::from(k) / f64::from(1u32 << level))
    }
    /// Number of the cell of a level that holds the coordinate.
    pub fn cell(&self, level: u8, axis: usize, v: f64) -> i32 {
        let mut k = ((v - self.origin.axis(axis)) / self.size(level)).floor() as i32;
        // the quotient may round across a line
        if v < self.line(level, axis, k) {
            k -= 1;
        } else if v >= self.line(level, axis, k + 1) {
            k += 1;
        }
        k
    }
    /// Centre of a cell.
    pub fn centre(&self, level: u8, i: i32, j: i32) -> Point {
        let h = self.size(level);
        Point {
            x: self.line(level, 0, i) + 0.5 * h,
            y: self.line(level, 1, j) + 0.5 * h,
        }
    }
}

/// The boundary on a lattice.
#[derive(Clone, Debug)]
pub struct Trace {
    /// The lattice.
    pub grid: Grid,
    /// All pieces, numbered through the loops.
    pub pieces: Vec<Piece>,
    /// Sub-pieces with their level-0 cell.
    pub parts: Vec<([i32; 2], Part)>,
    /// For each axis (0: columns, 1: rows): part numbers by cell index minus `first[axis]`.
    lanes: [Vec<Vec<u32>>; 2],
    first: [i32; 2],
}

impl Trace {
    /// Cuts the boundary at every level-0 line.
    pub fn new(outline: &Outline, grid: Grid) -> Self {
        let mut pieces = Vec::new();
        let mut parts = Vec::new();
        for l in &outline.loops {
            let n = l.pieces.len();
            for (k, piece) in l.pieces.iter().enumerate() {
                // a joint has one position: the start of the piece that follows
                let ends = [piece.start(), l.pieces[(k + 1) % n].start()];
                let whole = Part {
                    piece: pieces.len() as u32,
                    t: [0.0, 1.0],
                    ends,
                };
                for part in monotone(piece, whole) {
                    for cut in cut_axis(piece, part, &grid, 0, 0) {
                        for p in cut_axis(piece, cut, &grid, 0, 1) {
                            parts.push((cell_of(piece, &p, &grid, 0), p));
                        }
                    }
                }
                pieces.push(piece.clone());
            }
        }
        let first: [i32; 2] =
            std::array::from_fn(|a| parts.iter().map(|p| p.0[a]).min().unwrap_or(0));
        let lanes = std::array::from_fn(|a| {
            let last = parts.iter().map(|p| p.0[a]).max().unwrap_or(0);
            let mut lanes = vec![Vec::new(); (last - first[a] + 1).max(0) as usize];
            for (k, p) in parts.iter().enumerate() {
                lanes[(p.0[a] - first[a]) as usize].push(k as u32);
            }
            lanes
        });
        Self {
            grid,
            pieces,
            parts,
            lanes,
            first,
        }
    }

    /// Where the line {coordinate `axis` = v} of level-0 lane `lane` meets the boundary, ascending
    /// along the other axis. A line on the lane's upper edge is taken as its limit from below.
    pub fn crossings(&self, axis: usize, lane: i32, v: f64) -> Vec<f64> {
        let k = lane - self.first[axis];
        let Some(parts) = usize::try_from(k)
            .ok()
            .and_then(|k| self.lanes[axis].get(k))
        else {
            return Vec::new();
        };
        let mut out: Vec<f64> = parts
            .iter()
            .filter_map(|&k| {
                let part = &self.parts[k as usize].1;
                let [a, b] = part.ends.map(|e| e.axis(axis));
                if (a < v) == (b < v) {
                    return None;
                }
                let piece = &self.pieces[part.piece as usize];
                Some(other(piece, part, axis, v))
            })
            .collect();
        out.sort_by(f64::total_cmp);
        out
    }

    /// Distributes parts of a cell of `level` over its four children.
    pub fn quarter(&self, parts: &[Part], level: u8, i: i32, j: i32) -> [Vec<Part>; 4] {
        let mut out: [Vec<Part>; 4] = Default::default();
        for part in parts {
            let piece = &self.pieces[part.piece as usize];
            for a in cut_axis(piece, *part, &self.grid, level + 1, 0) {
                for p in cut_axis(piece, a, &self.grid, level + 1, 1) {
                    let c = cell_of(piece, &p, &self.grid, level + 1);
                    let (a, b) = ((c[0] - 2 * i).clamp(0, 1), (c[1] - 2 * j).clamp(0, 1));
                    out[(2 * a + b) as usize].push(p);
                }
            }
        }
        out
    }
}

/// The other coordinate where a monotone part meets {coordinate `axis` = v}.
fn other(piece: &Piece, part: &Part, axis: usize, v: f64) -> f64 {
    for e in part.ends {
        if e.axis(axis) == v {
            return e.axis(1 - axis);
        }
    }
    piece.at(solve(piece, part, axis, v)).axis(1 - axis)
}

/// Splits a piece where x or y is stationary.
fn monotone(piece: &Piece, whole: Part) -> Vec<Part> {
    let mut ts = piece.turning_points(0);
    ts.extend(piece.turning_points(1));
    ts.sort_by(f64::total_cmp);
    ts.dedup_by(|a, b| *a - *b < 1e-12);
    split(piece, whole, &ts, |t| piece.at(t))
}

fn split(_: &Piece, whole: Part, ts: &[f64], at: impl Fn(f64) -> Point) -> Vec<Part> {
    let mut out = Vec::with_capacity(ts.len() + 1);
    let mut left = whole;
    for &t in ts {
        if t <= left.t[0] || t >= left.t[1] {
            continue;
        }
        let p = at(t);
        out.push(Part {
            t: [left.t[0], t],
            ends: [left.ends[0], p],
            ..left
        });
        left.t[0] = t;
        left.ends[0] = p;
    }
    out.push(left);
    out
}

/// Cuts a monotone part at the lines of one axis and level.
fn cut_axis(piece: &Piece, part: Part, grid: &Grid, level: u8, axis: usize) -> Vec<Part> {
    let [a, b] = part.ends.map(|e| e.axis(axis));
    let (lo, hi) = (a.min(b), a.max(b));
    let (k0, k1) = (grid.cell(level, axis, lo), grid.cell(level, axis, hi));
    if k0 == k1 {
        return vec![part];
    }
    let mut lines: Vec<f64> = (k0..=k1 + 1)
        .map(|k| grid.line(level, axis, k))
        .filter(|&v| v > lo && v < hi)
        .collect();
    if b < a {
        lines.reverse();
    }
    let mut out = Vec::with_capacity(lines.len() + 1);
    let mut left = part;
    for v in lines {
        let t = solve(piece, &left, axis, v);
        let mut p = piece.at(t);
        // on the line to the bit, and inside the part's own box on the other axis
        let o = 1 - axis;
        let (l, h) = (left.ends[0].axis(o), left.ends[1].axis(o));
        let w = p.axis(o).clamp(l.min(h), l.max(h));
        p = if axis == 0 {
            Point { x: v, y: w }
        } else {
            Point { x: w, y: v }
        };
        out.push(Part {
            t: [left.t[0], t],
            ends: [left.ends[0], p],
            ..left
        });
        left.t[0] = t;
        left.ends[0] = p;
    }
    out.push(left);
    out
}

/// Parameter where a monotone part reaches {coordinate `axis` = v}: Newton inside a bracket.
fn solve(piece: &Piece, part: &Part, axis: usize, v: f64) -> f64 {
    let [mut lo, mut hi] = part.t;
    let [a, b] = part.ends.map(|e| e.axis(axis));
    let rising = b > a;
    let mut t = lo + (hi - lo) * ((v - a) / (b - a)).clamp(0.0, 1.0);
    if matches!(piece, Piece::Line { .. }) {
        return t;
    }
    for _ in 0..60 {
        let f = piece.at(t).axis(axis) - v;
        if f == 0.0 {
            break;
        }
        if (f < 0.0) == rising {
            lo = t;
        } else {
            hi = t;
        }
        let mut next = t - f / piece.velocity(t).axis(axis);
        if !(next > lo && next < hi) {
            next = 0.5 * (lo + hi);
        }
        if (next - t).abs() <= 1e-16 {
            t = next;
            break;
        }
        t = next;
    }
    t
}

/// The cell of a level a part lies in, by its middle; never outside the span of its end points.
fn cell_of(piece: &Piece, part: &Part, grid: &Grid, level: u8) -> [i32; 2] {
    let m = piece.at(0.5 * (part.t[0] + part.t[1]));
    std::array::from_fn(|a| {
        let [s, e] = part.ends.map(|p| p.axis(a));
        grid.cell(level, a, m.axis(a).clamp(s.min(e), s.max(e)))
    })
}
