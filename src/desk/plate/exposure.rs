//! One mode sampled on the dots of a sight.

use super::sight::Sight;
use crate::geometry::Point;
use crate::modes::{Modes, Raster};

/// ψ on every dot, from the upper left.
#[derive(Clone, Debug, PartialEq)]
pub struct Exposure {
    /// Values, 0 outside.
    pub values: Vec<f32>,
    /// Largest |ψ| among them.
    pub peak: f32,
}

impl Exposure {
    /// Samples mode `mode` (from 0).
    pub fn take(modes: &Modes, mode: usize, sight: &Sight) -> Self {
        let (width, height) = sight.dots();
        let from_below = modes.sample(mode, &sight.raster());
        let mut values = Vec::with_capacity(width * height);
        for row in from_below.chunks(width).rev() {
            values.extend(row.iter().map(|v| *v as f32));
        }
        let peak = values.iter().fold(0f32, |m, v| m.max(v.abs()));
        Self { values, peak }
    }
}

/// For every point of a raster, row by row from the lowest, whether it lies inside closed
/// polylines (even–odd rule, one sweep over the edges).
pub fn inside(lines: &[Vec<Point>], raster: &Raster) -> Vec<bool> {
    let mut crossings: Vec<Vec<f64>> = vec![Vec::new(); raster.height];
    for line in lines {
        for (k, &a) in line.iter().enumerate() {
            let b = line[(k + 1) % line.len()];
            let (lo, hi) = if a.y < b.y { (a, b) } else { (b, a) };
            let row = |y: f64| ((y - raster.origin.y) / raster.step.y).ceil().max(0.0) as usize;
            for (j, hits) in crossings
                .iter_mut()
                .enumerate()
                .take(row(hi.y))
                .skip(row(lo.y))
            {
                let y = raster.origin.y + raster.step.y * j as f64;
                hits.push(lo.x + (hi.x - lo.x) * (y - lo.y) / (hi.y - lo.y));
            }
        }
    }
    let mut out = vec![false; raster.width * raster.height];
    for (j, hits) in crossings.iter_mut().enumerate() {
        hits.sort_by(f64::total_cmp);
        let column = |x: f64| ((x - raster.origin.x) / raster.step.x).ceil().max(0.0) as usize;
        for pair in hits.chunks_exact(2) {
            let (from, to) = (column(pair[0]), column(pair[1]).min(raster.width));
            for i in from..to {
                out[j * raster.width + i] = true;
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_frame_with_a_hole() {
        let square = |r: f64| -> Vec<Point> {
            [(-r, -r), (r, -r), (r, r), (-r, r)]
                .iter()
                .map(|&(x, y)| Point { x, y })
                .collect()
        };
        let raster = Raster {
            origin: Point { x: -3.0, y: -3.0 },
            step: Point { x: 1.0, y: 1.0 },
            width: 7,
            height: 7,
        };
        let got: String = inside(&[square(2.5), square(1.5)], &raster)
            .chunks(7)
            .map(|r| {
                r.iter()
                    .map(|b| if *b { '#' } else { '.' })
                    .collect::<String>()
                    + "\n"
            })
            .collect();
        let want = "\
.......
.#####.
.#...#.
.#...#.
.#...#.
.#####.
.......
";
        assert_eq!(got, want);
    }
}
