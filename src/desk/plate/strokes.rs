//! Thin lines on a block of cells: as dots, and as the letters that look most like them.

use super::exposure::Exposure;
use super::sight::Sight;
use crate::geometry::Point;

/// Lines on a block of cells.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Strokes {
    /// The eight dots of each cell, as the bits of a braille character.
    pub dots: Vec<u8>,
    /// The letter for each cell, where there is a line: one of `- _ | / \ + . '`.
    pub letters: Vec<Option<char>>,
}

/// Bit of the dot in column `i`, row `j` of a cell in the Unicode braille block.
pub fn bit(i: usize, j: usize) -> u8 {
    const BITS: [[u8; 4]; 2] = [[0x01, 0x02, 0x04, 0x40], [0x08, 0x10, 0x20, 0x80]];
    BITS[i & 1][j & 3]
}

/// The braille character with these dots.
pub fn braille(dots: u8) -> char {
    if dots == 0 {
        return ' ';
    }
    // the block U+2800..=U+28FF holds all 256
    char::from_u32(0x2800 + u32::from(dots)).unwrap_or(' ')
}

/// Sum of line pieces in one cell, to find the letter.
#[derive(Clone, Copy, Default)]
struct Lean {
    length: f64,
    cos2: f64,
    sin2: f64,
    height: f64,
}

impl Strokes {
    /// Closed polylines.
    pub fn outline(lines: &[Vec<Point>], sight: &Sight) -> Self {
        let mut pen = Pen::new(sight);
        for line in lines.iter().filter(|l| !l.is_empty()) {
            let places: Vec<_> = line.iter().map(|p| sight.place(*p)).collect();
            pen.closed(&places);
        }
        pen.lift()
    }

    /// Nodal lines of a mode: between neighbouring dots, both inside, where the sign changes.
    pub fn nodes(exposure: &Exposure, within: &[bool], sight: &Sight) -> Self {
        let (w, h) = sight.dots();
        let mut pen = Pen::new(sight);
        // below this the sign is not the mode's but the rounding's, next to the wall
        let least = 1e-3 * exposure.peak;
        let v = |i: usize, j: usize| exposure.values[j * w + i];
        let on = |i: usize, j: usize| within[j * w + i];
        for j in 0..h - 1 {
            for i in 0..w - 1 {
                if !(on(i, j) && on(i + 1, j) && on(i, j + 1) && on(i + 1, j + 1)) {
                    continue;
                }
                let square = [v(i, j), v(i + 1, j), v(i + 1, j + 1), v(i, j + 1)];
                if square.iter().all(|a| a.abs() < least) {
                    continue;
                }
                pen.square((i as f64 + 0.5, j as f64 + 0.5), square);
            }
        }
        pen.lift()
    }
}

struct Pen {
    columns: usize,
    rows: usize,
    dots: Vec<u8>,
    leans: Vec<Lean>,
}

impl Pen {
    fn new(sight: &Sight) -> Self {
        let n = sight.columns * sight.rows;
        Self {
            columns: sight.columns,
            rows: sight.rows,
            dots: vec![0; n],
            leans: vec![Lean::default(); n],
        }
    }

    /// A closed line through places in dots.
    fn closed(&mut self, places: &[(f64, f64)]) {
        let n = places.len();
        let mut last = None;
        // the first edge comes twice, to join the end of the line to its start
        for k in 0..=n {
            let (p, q) = (places[k % n], places[(k + 1) % n]);
            self.edge(p, q, &mut last);
            if k < n {
                self.lean_along(p, q);
            }
        }
    }

    /// One dot for each column, or each row where the edge is steeper, at the middle of that
    /// column or row; and one at the start where the dot before would not touch.
    fn edge(&mut self, p: (f64, f64), q: (f64, f64), last: &mut Option<(f64, f64)>) {
        // edges that fall between two dots go to the same one all along, whatever the rounding
        const HAIR: f64 = 1e-6;
        let (p, q) = ((p.0 + HAIR, p.1 + HAIR), (q.0 + HAIR, q.1 + HAIR));
        let (dx, dy) = (q.0 - p.0, q.1 - p.1);
        let flat = dx.abs() >= dy.abs();
        let (from, to) = if flat { (p.0, q.0) } else { (p.1, q.1) };
        let (low, high) = ((from.min(to) - 0.5).ceil(), (from.max(to) - 0.5).floor());
        let count = (high - low + 1.0).max(0.0) as usize;
        for k in 0..count {
            let at = 0.5
                + if to > from {
                    low + k as f64
                } else {
                    high - k as f64
                };
            let t = (at - from) / (to - from);
            let here = if flat {
                (at, p.1 + t * dy)
            } else {
                (p.0 + t * dx, at)
            };
            let apart = |l: &(f64, f64)| {
                let step = |a: f64, b: f64| (a.floor() - b.floor()).abs();
                step(l.0, here.0).max(step(l.1, here.1)) > 1.0
            };
            if last.as_ref().is_some_and(apart) {
                self.dot(p.0, p.1);
            }
            self.dot(here.0, here.1);
            *last = Some(here);
        }
        // straight edges keep their ends, so that corners stay sharp
        if dx.hypot(dy) > 3.0 {
            self.dot(p.0, p.1);
            self.dot(q.0, q.1);
        }
    }

    fn lean_along(&mut self, p: (f64, f64), q: (f64, f64)) {
        let (dx, dy) = (q.0 - p.0, q.1 - p.1);
        let pieces = 2 * (dx.abs().max(dy.abs()).ceil() as usize).max(1);
        let piece = (dx / pieces as f64, dy / pieces as f64);
        for k in 0..pieces {
            let t = (k as f64 + 0.5) / pieces as f64;
            self.lean((p.0 + t * dx, p.1 + t * dy), piece);
        }
    }

    /// The zero line of a linear function over a square of four dots.
    fn square(&mut self, corner: (f64, f64), v: [f32; 4]) {
        const AT: [(f64, f64); 4] = [(0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)];
        let mut hits = Vec::with_capacity(4);
        for k in 0..4 {
            let (a, b) = (v[k], v[(k + 1) % 4]);
            if (a < 0.0) != (b < 0.0) {
                let t = f64::from(a / (a - b));
                let (p, q) = (AT[k], AT[(k + 1) % 4]);
                hits.push((
                    corner.0 + p.0 + t * (q.0 - p.0),
                    corner.1 + p.1 + t * (q.1 - p.1),
                ));
            }
        }
        for pair in hits.chunks_exact(2) {
            let middle = (0.5 * (pair[0].0 + pair[1].0), 0.5 * (pair[0].1 + pair[1].1));
            self.dot(middle.0, middle.1);
            self.lean(middle, (pair[1].0 - pair[0].0, pair[1].1 - pair[0].1));
        }
    }

    fn cell(&self, x: f64, y: f64) -> Option<(usize, usize, usize)> {
        if !(x >= 0.0 && y >= 0.0) {
            return None;
        }
        let (i, j) = (x as usize, y as usize);
        let fits = i < 2 * self.columns && j < 4 * self.rows;
        fits.then(|| ((j / 4) * self.columns + i / 2, i, j))
    }

    fn dot(&mut self, x: f64, y: f64) {
        if let Some((cell, i, j)) = self.cell(x, y) {
            self.dots[cell] |= bit(i, j);
        }
    }

    fn lean(&mut self, at: (f64, f64), (dx, dy): (f64, f64)) {
        let length = dx.hypot(dy);
        if length == 0.0 {
            return;
        }
        if let Some((cell, _, _)) = self.cell(at.0, at.1) {
            let l = &mut self.leans[cell];
            l.length += length;
            // the doubled angle does not care which way a line runs
            l.cos2 += (dx * dx - dy * dy) / length;
            l.sin2 += 2.0 * dx * dy / length;
            l.height += length * (at.1 % 4.0) / 4.0;
        }
    }

    fn lift(self) -> Strokes {
        Strokes {
            letters: self.leans.iter().map(letter).collect(),
            dots: self.dots,
        }
    }
}

fn letter(l: &Lean) -> Option<char> {
    if l.length <= 0.0 {
        return None;
    }
    let low = l.height / l.length;
    if l.length < 1.2 {
        return Some(if low > 0.5 { '.' } else { '\'' });
    }
    if l.cos2.hypot(l.sin2) < 0.55 * l.length {
        return Some('+');
    }
    let angle = 0.5 * l.sin2.atan2(l.cos2).to_degrees();
    Some(match angle.abs() {
        a if a < 20.0 => {
            if low > 0.66 {
                '_'
            } else {
                '-'
            }
        }
        a if a > 72.0 => '|',
        _ if angle > 0.0 => '\\',
        _ => '/',
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ring(sight: &Sight, turn: f64, sides: usize) -> Vec<Vec<Point>> {
        let r = 0.3 * sight.cell() * sight.columns as f64;
        let step = std::f64::consts::TAU / sides as f64;
        let at = |k: usize| Point::polar(turn + k as f64 * step) * r;
        vec![(0..sides).map(at).collect()]
    }

    #[test]
    fn closed_lines_have_no_gaps() {
        let at = |x, y| Point { x, y };
        let bounds = crate::geometry::Box2 {
            lo: at(-1.0, -1.0),
            hi: at(1.0, 1.0),
        };
        let sight = Sight::fit(bounds, 40, 20, 2.0).expect("there is room");
        let (w, h) = sight.dots();
        for (sides, turn) in [
            (3, 0.1),
            (4, 0.0),
            (4, 0.3),
            (5, 0.7),
            (60, 0.0),
            (400, 0.2),
        ] {
            let strokes = Strokes::outline(&ring(&sight, turn, sides), &sight);
            let on = |i: usize, j: usize| {
                i < w && j < h && strokes.dots[(j / 4) * sight.columns + i / 2] & bit(i, j) != 0
            };
            // what can be reached from outside without crossing a dot must leave the middle out
            let mut seen = vec![false; w * h];
            let mut open = vec![(0usize, 0usize)];
            while let Some((i, j)) = open.pop() {
                if i >= w || j >= h || seen[j * w + i] || on(i, j) {
                    continue;
                }
                seen[j * w + i] = true;
                let (left, up) = (i.wrapping_sub(1), j.wrapping_sub(1));
                open.extend([(i + 1, j), (left, j), (i, j + 1), (i, up)]);
            }
            assert!(!seen[(h / 2) * w + w / 2], "{sides} sides turned by {turn}");
        }
    }
}
