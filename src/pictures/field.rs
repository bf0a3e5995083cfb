//! A mode sampled for the page: once every few pixels, and smooth in between.

use super::place::View;
use crate::modes::{Modes, Raster};

/// Samples above which the stride grows: at this number each half wave of the thousandth mode
/// still has fifteen samples, and the evaluation stays a matter of a tenth of a second.
const SAMPLES: usize = 300_000;

/// ψ on every `stride`-th pixel of a rectangle.
#[derive(Clone, Debug)]
pub struct Field {
    /// First column and row, pixels.
    pub start: (usize, usize),
    /// Pixels covered along x and y.
    pub size: (usize, usize),
    /// Pixels from one sample to the next.
    pub stride: usize,
    /// Samples along x and y.
    pub count: (usize, usize),
    /// The samples, row by row from the top.
    pub values: Vec<f32>,
    /// The largest |ψ| among them.
    pub peak: f64,
}

impl Field {
    /// Samples mode `mode` (from 0) on the pixels that `view` touches of a `width` by `height`
    /// page.
    pub fn sample(modes: &Modes, mode: usize, view: &View, width: u32, height: u32) -> Self {
        let (x0, x1, y0, y1) = view.pixels(width, height);
        let size = (x1.saturating_sub(x0).max(1), y1.saturating_sub(y0).max(1));
        let stride = ((size.0 * size.1) as f64 / SAMPLES as f64)
            .sqrt()
            .ceil()
            .max(1.0) as usize;
        let count = (reach(size.0, stride), reach(size.1, stride));
        let step = stride as f64 / view.scale;
        let lowest = y0 as f64 + 0.5 + (stride * (count.1 - 1)) as f64;
        let raster = Raster {
            origin: view.point(x0 as f64 + 0.5, lowest),
            step: crate::geometry::Point { x: step, y: step },
            width: count.0,
            height: count.1,
        };
        let upward = in_bands(modes, mode, &raster);
        let values: Vec<f32> = upward
            .rchunks(count.0)
            .flat_map(|row| row.iter().map(|&v| v as f32))
            .collect();
        let peak = values.iter().fold(0.0f32, |m, v| m.max(v.abs()));
        Self {
            start: (x0, y0),
            size,
            stride,
            count,
            values,
            peak: f64::from(peak),
        }
    }

    /// ψ at every pixel of row `row` of the rectangle, by cubic interpolation (E. Catmull &
    /// R. Rom 1974): it meets the samples and has a continuous slope.
    pub fn row(&self, row: usize, out: &mut Vec<f32>) {
        out.clear();
        let n = self.count.0;
        let line = |j: usize| &self.values[j * n..(j + 1) * n];
        let (j, t) = (
            row / self.stride,
            (row % self.stride) as f32 / self.stride as f32,
        );
        if self.stride == 1 {
            out.extend_from_slice(&line(j)[..self.size.0]);
            return;
        }
        let w = weights(t);
        let last = self.count.1 - 1;
        let rows = [j.saturating_sub(1), j, (j + 1).min(last), (j + 2).min(last)].map(line);
        let across: Vec<f32> = (0..n)
            .map(|i| (0..4).map(|k| w[k] * rows[k][i]).sum())
            .collect();
        let phases: Vec<[f32; 4]> = (0..self.stride)
            .map(|p| weights(p as f32 / self.stride as f32))
            .collect();
        for x in 0..self.size.0 {
            let (i, w) = (x / self.stride, phases[x % self.stride]);
            let pick = |k: usize| across[k.min(n - 1)];
            out.push(
                w[0] * pick(i.saturating_sub(1))
                    + w[1] * pick(i)
                    + w[2] * pick(i + 1)
                    + w[3] * pick(i + 2),
            );
        }
    }
}

/// Samples needed so that the last one is not before the last pixel.
fn reach(size: usize, stride: usize) -> usize {
    (size - 1).div_ceil(stride) + 1
}

fn weights(t: f32) -> [f32; 4] {
    let (t2, t3) = (t * t, t * t * t);
    [
        0.5 * (-t + 2.0 * t2 - t3),
        0.5 * (2.0 - 5.0 * t2 + 3.0 * t3),
        0.5 * (t + 4.0 * t2 - 3.0 * t3),
        0.5 * (t3 - t2),
    ]
}

/// The raster's samples, taken in bands of rows by as many threads as the machine has.
fn in_bands(modes: &Modes, mode: usize, raster: &Raster) -> Vec<f64> {
    let threads = std::thread::available_parallelism().map_or(1, |n| n.get().min(8));
    let rows = raster.height.div_ceil(threads).max(16);
    let band = |first: usize| {
        let mut part = *raster;
        part.origin.y += raster.step.y * first as f64;
        part.height = rows.min(raster.height - first);
        modes.sample(mode, &part)
    };
    let firsts: Vec<usize> = (0..raster.height).step_by(rows).collect();
    if firsts.len() == 1 {
        return band(0);
    }
    std::thread::scope(|scope| {
        let jobs: Vec<_> = firsts
            .iter()
            .map(|&f| scope.spawn(move || band(f)))
            .collect();
        let mut all = Vec::with_capacity(raster.width * raster.height);
        for (job, &first) in jobs.into_iter().zip(&firsts) {
            // a worker that died is replaced by doing its band here, where its panic shows
            all.extend(job.join().unwrap_or_else(|_| band(first)));
        }
        all
    })
}

#[cfg(test)]
mod tests {
    use super::super::example::box_modes;
    use super::super::place::Area;
    use super::*;

    #[test]
    fn between_samples_the_field_is_the_mode() {
        let modes = box_modes();
        let view = View::fit(
            modes.outline().bounds(),
            Area {
                left: 3.0,
                top: 5.0,
                width: 1500.0,
                height: 1000.0,
            },
        );
        let field = Field::sample(&modes, 3, &view, 1600, 1100);
        assert!(field.stride == 3 && field.peak > 0.8);
        let mut row = Vec::new();
        let mut worst = 0.0f64;
        for j in [0, 7, 8, 501, 999] {
            field.row(j, &mut row);
            assert_eq!(row.len(), field.size.0);
            for (i, v) in row.iter().enumerate() {
                let (x, y) = (field.start.0 + i, field.start.1 + j);
                let exact = modes.value(3, view.point(x as f64 + 0.5, y as f64 + 0.5));
                worst = worst.max((f64::from(*v) - exact).abs());
            }
        }
        // the kink at the wall costs the most: slope × stride / 16 = π·3/1500·3/16 of the peak
        assert!(worst < 1.3e-3, "{worst}");
    }
}
