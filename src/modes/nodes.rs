//! Nodal domains: the connected parts of the outline where a mode keeps its sign
//! (at most k of them for level k: Courant 1923).

use super::{Modes, Raster};
use crate::geometry::pt;

/// Sample points along the longer side of the outline.
const LONG_SIDE: f64 = 320.0;
/// Values below this share of the largest belong to a node.
const NODE: f64 = 1e-3;
/// Parts smaller than this many samples are crumbs of a node.
const CRUMB: usize = 6;

impl Modes {
    /// Number of nodal domains of a mode, counted on a raster: parts narrower than about a
    /// hundredth of the outline can be missed, and nodes that all but cross can be misread.
    ///
    /// # Panics
    /// When `mode` is not below [`Modes::len`].
    pub fn nodal_domains(&self, mode: usize) -> usize {
        let b = self.outline().bounds();
        let size = b.size();
        let step = size.x.max(size.y) / LONG_SIDE;
        let raster = Raster {
            origin: b.lo + pt(0.37 * step, 0.41 * step),
            step: pt(step, step),
            width: (size.x / step).ceil().max(1.0) as usize,
            height: (size.y / step).ceil().max(1.0) as usize,
        };
        let psi = self.sample(mode, &raster);
        let most = psi.iter().fold(0.0_f64, |m, v| m.max(v.abs()));
        let sign: Vec<i8> = psi
            .iter()
            .map(|v| i8::from(*v > NODE * most) - i8::from(*v < -NODE * most))
            .collect();
        let (w, h) = (raster.width, raster.height);
        let mut seen = vec![false; w * h];
        let mut domains = 0;
        let mut stack = Vec::new();
        for start in 0..w * h {
            if seen[start] || sign[start] == 0 {
                continue;
            }
            let mut members = 0;
            seen[start] = true;
            stack.push(start);
            while let Some(k) = stack.pop() {
                members += 1;
                let (i, j) = (k % w, k / w);
                let beside = [
                    (i > 0).then(|| k - 1),
                    (i + 1 < w).then_some(k + 1),
                    (j > 0).then(|| k - w),
                    (j + 1 < h).then_some(k + w),
                ];
                for n in beside.into_iter().flatten() {
                    if !seen[n] && sign[n] == sign[k] {
                        seen[n] = true;
                        stack.push(n);
                    }
                }
            }
            domains += usize::from(members >= CRUMB);
        }
        domains
    }
}
