//! Nodal lines: where ψ changes sign, by marching squares on the samples.

use super::field::Field;
use tiny_skia::{Path, PathBuilder};

/// Side, in samples, of the blocks in which the amplitude is judged.
const BLOCK: usize = 8;
/// Below this part of the peak, in a block and its neighbours, a change of sign is left out: the
/// page is blank there, and the sign is near the accuracy of the mode.
const FAINT: f32 = 1e-3;

/// Nodal lines as a path on the page; `inside` tells whether a pixel lies wholly in the outline.
pub fn nodal_lines(field: &Field, inside: impl Fn(usize, usize) -> bool) -> Option<Path> {
    let (nx, ny) = field.count;
    let loud = Loudness::of(field);
    let place = |i: usize, j: usize| {
        (
            field.start.0 + i * field.stride,
            field.start.1 + j * field.stride,
        )
    };
    let within: Vec<bool> = (0..nx * ny)
        .map(|k| {
            let (x, y) = place(k % nx, k / nx);
            inside(x, y)
        })
        .collect();
    let mut builder = PathBuilder::new();
    for j in 0..ny.saturating_sub(1) {
        for i in 0..nx.saturating_sub(1) {
            let k = [
                j * nx + i,
                j * nx + i + 1,
                (j + 1) * nx + i + 1,
                (j + 1) * nx + i,
            ];
            let v = k.map(|k| field.values[k]);
            let positive = v.map(|v| v >= 0.0);
            if positive.iter().all(|&p| p == positive[0])
                || !k.iter().all(|&k| within[k])
                || !loud.at(i, j)
            {
                continue;
            }
            let (x, y) = place(i, j);
            for (from, to) in crossings(v, positive) {
                let pixel = |p: (f32, f32)| {
                    let s = field.stride as f32;
                    (x as f32 + 0.5 + s * p.0, y as f32 + 0.5 + s * p.1)
                };
                let (a, b) = (pixel(from), pixel(to));
                builder.move_to(a.0, a.1);
                builder.line_to(b.0, b.1);
            }
        }
    }
    builder.finish()
}

type Place = (f32, f32);

/// Segments in one cell, its corners in order around it from the upper left.
fn crossings(v: [f32; 4], positive: [bool; 4]) -> Vec<(Place, Place)> {
    const CORNERS: [Place; 4] = [(0.0, 0.0), (1.0, 0.0), (1.0, 1.0), (0.0, 1.0)];
    let hits: Vec<Place> = (0..4)
        .filter(|&e| positive[e] != positive[(e + 1) % 4])
        .map(|e| {
            let f = (e + 1) % 4;
            let t = v[e] / (v[e] - v[f]);
            let (a, b) = (CORNERS[e], CORNERS[f]);
            (a.0 + t * (b.0 - a.0), a.1 + t * (b.1 - a.1))
        })
        .collect();
    match hits[..] {
        [a, b] => vec![(a, b)],
        // a saddle: the sign in the middle says which corners are joined
        [a, b, c, d] => {
            let middle = v.iter().sum::<f32>() >= 0.0;
            if middle == positive[0] {
                vec![(a, b), (c, d)]
            } else {
                vec![(d, a), (b, c)]
            }
        }
        _ => Vec::new(),
    }
}

/// Whether the field is worth a line, by blocks.
struct Loudness {
    blocks: Vec<bool>,
    across: usize,
}

impl Loudness {
    fn of(field: &Field) -> Self {
        let (nx, ny) = field.count;
        let (across, down) = (nx.div_ceil(BLOCK), ny.div_ceil(BLOCK));
        let mut top = vec![0.0f32; across * down];
        for (k, v) in field.values.iter().enumerate() {
            let b = (k / nx / BLOCK) * across + k % nx / BLOCK;
            top[b] = top[b].max(v.abs());
        }
        let floor = FAINT * field.peak as f32;
        let blocks = (0..across * down)
            .map(|b| {
                let (i, j) = (b % across, b / across);
                let near = |c: usize, end: usize| c.saturating_sub(1)..(c + 2).min(end);
                near(j, down).any(|j| near(i, across).any(|i| top[j * across + i] > floor))
            })
            .collect();
        Self { blocks, across }
    }

    fn at(&self, i: usize, j: usize) -> bool {
        self.blocks[(j / BLOCK) * self.across + i / BLOCK]
    }
}

#[cfg(test)]
mod tests {
    use super::super::place::{Area, View};
    use super::*;
    use crate::geometry::{Outline, Point};
    use crate::modes::Modes;

    #[test]
    fn the_nodes_of_a_box_mode_are_straight_and_in_place() {
        let at = |x, y| Point { x, y };
        let outline = Outline::polygon(&[at(0.0, 0.0), at(3.0, 0.0), at(3.0, 2.0), at(0.0, 2.0)]);
        let modes = Modes::placeholder(outline, vec![(3, 1)]);
        let area = Area {
            left: 0.0,
            top: 0.0,
            width: 299.3,
            height: 200.0,
        };
        let view = View::fit(modes.outline().bounds(), area);
        let field = Field::sample(&modes, 0, &view, 300, 200);
        let path = nodal_lines(&field, |_, _| true).expect("two lines");
        for p in path.points() {
            let third = p.x / (299.3 / 3.0);
            assert!((third - third.round()).abs() < 1e-3, "{p:?}");
            assert!((0.9..2.1).contains(&third));
        }
        assert!(nodal_lines(&field, |_, _| false).is_none());
    }
}
