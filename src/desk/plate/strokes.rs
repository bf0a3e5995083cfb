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
        let (w, h) = sight.dots();
        let mut pen = Pen::new(sight);
        for line in lines {
            for (k, &a) in line.iter().enumerate() {
                let (p, q) = (sight.place(a), sight.place(line[(k + 1) % line.len()]));
                let near = |c: (f64, f64)| {
                    c.0 > -9e3 && c.1 > -9e3 && c.0 < w as f64 + 9e3 && c.1 < h as f64 + 9e3
                };
                if near(p) && near(q) {
                    pen.line(p, q);
                }
            }
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

    /// A straight line between places in dots: one dot for each column, or each row where it is
    /// steeper, at the middle of that column or row.
    fn line(&mut self, p: (f64, f64), q: (f64, f64)) {
        let (dx, dy) = (q.0 - p.0, q.1 - p.1);
        // edges that fall between two dots go to the same one all along, whatever the rounding
        const HAIR: f64 = 1e-6;
        let (p, q) = ((p.0 + HAIR, p.1 + HAIR), (q.0 + HAIR, q.1 + HAIR));
        let flat = dx.abs() >= dy.abs();
        let (from, to) = if flat { (p.0, q.0) } else { (p.1, q.1) };
        let (first, last) = ((from.min(to) - 0.5).ceil(), (from.max(to) - 0.5).floor());
        let mut at = first + 0.5;
        while at <= last + 0.5 {
            let t = (at - from) / (to - from);
            if flat {
                self.dot(at, p.1 + t * dy);
            } else {
                self.dot(p.0 + t * dx, at);
            }
            at += 1.0;
        }
        // straight edges keep their ends, so that corners stay sharp
        if dx.hypot(dy) > 3.0 {
            self.dot(p.0, p.1);
            self.dot(q.0, q.1);
        }
        let steps = (dx.abs().max(dy.abs()).ceil() as usize).max(1);
        let pieces = 2 * steps;
        for k in 0..pieces {
            let t = (k as f64 + 0.5) / pieces as f64;
            self.lean(
                (p.0 + t * dx, p.1 + t * dy),
                (dx / pieces as f64, dy / pieces as f64),
            );
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
