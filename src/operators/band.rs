//! A region's matrix before extension: (2p + 1)² couplings per spline, at fixed places.

use crate::lattice::Space;

/// Couplings of every spline of a region with those whose supports overlap its own.
#[derive(Clone, Debug)]
pub struct Band {
    p: usize,
    width: usize,
    size: [usize; 2],
    values: Vec<f64>,
}

impl Band {
    /// All zero.
    pub fn new(space: &Space) -> Self {
        let width = (2 * space.degree + 1).pow(2);
        Self {
            p: space.degree,
            width,
            size: space.size,
            values: vec![0.0; space.roles.len() * width],
        }
    }

    /// Adds a cell's block over the splines alive on cell (i, j).
    #[inline]
    pub fn add(&mut self, i: usize, j: usize, block: &[f64]) {
        let (p, m) = (self.p, self.p + 1);
        let (side, b) = (2 * p + 1, (p + 1) * (p + 1));
        for a in 0..m {
            for c in 0..m {
                let row = (i + a) * self.size[1] + j + c;
                let values = &mut self.values[row * self.width..][..self.width];
                let from = &block[(a * m + c) * b..][..b];
                for k in 0..m {
                    let start = (k + p - a) * side + p - c;
                    for (v, f) in values[start..start + m].iter_mut().zip(&from[k * m..]) {
                        *v += f;
                    }
                }
            }
        }
    }

    /// Calls `give(spline, values)` for the couplings of a spline in two bands of one space,
    /// ascending, places where both are zero left out.
    #[inline]
    pub fn row(bands: &[Self; 2], spline: usize, mut give: impl FnMut(usize, [f64; 2])) {
        let (p, size) = (bands[0].p, bands[0].size);
        let side = 2 * p + 1;
        let (i, j) = (spline / size[1], spline % size[1]);
        let at = spline * bands[0].width;
        for a in p.saturating_sub(i)..side.min(size[0] + p - i) {
            let base = (i + a - p) * size[1];
            for c in p.saturating_sub(j)..side.min(size[1] + p - j) {
                let v = [0, 1].map(|b| bands[b].values[at + a * side + c]);
                if v != [0.0; 2] {
                    give(base + j + c - p, v);
                }
            }
        }
    }
}
