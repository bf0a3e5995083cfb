//! Nodal lines: where ψ changes sign, by marching squares on the samples.

use super::field::Field;
use tiny_skia::{Path, PathBuilder};

/// Side, in samples, of the blocks in which the amplitude is judged.
const BLOCK: usize = 8;
/// A nodal line is drawn in full where the amplitude around it is above the first part of the
/// peak, and not at all below the second: the page is blank there, and the sign is near the
/// accuracy of the mode.
const FULL: f32 = 1e-2;
const BLANK: f32 = 5e-4;
/// Shades in which lines fade.
const SHADES: usize = 6;

/// Nodal lines as paths on the page, each with the strength, 0 to 1, it is to be drawn with;
/// `inside` tells whether a pixel lies wholly in the outline.
pub fn nodal_lines(field: &Field, inside: impl Fn(usize, usize) -> bool) -> Vec<(f32, Path)> {
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
    let mut shades: Vec<PathBuilder> = vec![PathBuilder::new(); SHADES];
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
            if positive.iter().all(|&p| p == positive[0]) || !k.iter().all(|&k| within[k]) {
                continue;
            }
            let strength = loud.at(i, j);
            if strength <= 0.0 {
                continue;
            }
            let builder = &mut shades[((strength * SHADES as f32) as usize).min(SHADES - 1)];
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
    let strength = |shade: usize| (shade + 1) as f32 / SHADES as f32;
    shades
        .into_iter()
        .enumerate()
        .filter_map(|(shade, builder)| Some((strength(shade), builder.finish()?)))
        .collect()
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

/// How much a line is worth, by blocks.
struct Loudness {
    /// 0 blank to 1 full, for each block with its neighbours.
    blocks: Vec<f32>,
    across: usize,
    down: usize,
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
        let (top, peak) = (&top, field.peak as f32);
        let worth = |amplitude: f32| {
            let decades = (amplitude / peak).max(1e-30).log10() - BLANK.log10();
            (decades / (FULL / BLANK).log10()).clamp(0.0, 1.0)
        };
        let blocks = (0..across * down)
            .map(|b| {
                let near = |c: usize, end: usize| c.saturating_sub(1)..(c + 2).min(end);
                let around = near(b / across, down)
                    .flat_map(|j| near(b % across, across).map(move |i| top[j * across + i]));
                worth(around.fold(0.0, f32::max))
            })
            .collect();
        Self {
            blocks,
            across,
            down,
        }
    }

    /// Between the middles of blocks it is interpolated, so that lines fade smoothly.
    fn at(&self, i: usize, j: usize) -> f32 {
        let place = |k: usize, end: usize| {
            let x = ((k as f32 + 0.5) / BLOCK as f32 - 0.5).clamp(0.0, (end - 1) as f32);
            let low = (x as usize).min(end.saturating_sub(2));
            (low, (low + 1).min(end - 1), x - low as f32)
        };
        let (i0, i1, s) = place(i, self.across);
        let (j0, j1, t) = place(j, self.down);
        let at = |i: usize, j: usize| self.blocks[j * self.across + i];
        let row = |j: usize| at(i0, j) + s * (at(i1, j) - at(i0, j));
        row(j0) + t * (row(j1) - row(j0))
    }
}

#[cfg(test)]
mod tests {
    use super::super::example::box_modes;
    use super::super::place::{Area, View};
    use super::*;

    #[test]
    fn the_nodes_of_a_box_mode_are_straight_and_in_place() {
        let modes = box_modes();
        let area = Area {
            left: 0.0,
            top: 0.0,
            width: 299.3,
            height: 200.0,
        };
        let view = View::fit(modes.outline().bounds(), area);
        let field = Field::sample(&modes, 3, &view, 300, 200);
        let lines = nodal_lines(&field, |x, _| x < 299);
        assert!(
            lines.len() == 1 && lines[0].0 == 1.0,
            "all in full strength"
        );
        for p in lines[0].1.points() {
            let third = p.x / (299.3 / 3.0);
            assert!((third - third.round()).abs() < 1e-3, "{p:?}");
            assert!((0.9..2.1).contains(&third));
        }
        assert!(nodal_lines(&field, |_, _| false).is_empty());
    }
}
