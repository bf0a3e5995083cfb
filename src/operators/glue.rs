//! The glue between regions: weighted Nitsche on faces (Hansbo & Hansbo 2002, weights by trace
//! constants), −∫{∂ₙu}[v] − ∫{∂ₙv}[u] + pen ∫[u][v].
//!
//! With T = β/h on each side, γ = (1/T)/Σ(1/T) and pen = 2/Σ(1/T).

use super::wall::{Traces, beta};
use crate::geometry::Point;
use crate::lattice::{Face, Lattice, gauss};

/// The terms of one face over the splines alive on its two cells.
pub struct Blocks {
    /// Finer against finer, coarser against coarser, row-major.
    pub own: [Vec<f64>; 2],
    /// Finer (rows) against coarser.
    pub across: Vec<f64>,
}

/// Computes the terms of a face.
pub fn glue(lattice: &Lattice, face: &Face, traces: &mut [Traces; 2]) -> Blocks {
    let p = lattice.degree;
    let b = (p + 1) * (p + 1);
    let r = face.regions.map(|n| &lattice.regions[n]);
    let inverse = [0, 1].map(|s| r[s].h / beta(lattice));
    let sum = inverse[0] + inverse[1];
    let gamma = inverse.map(|x| x / sum);
    let pen = 2.0 / sum;
    let [mut fine, mut across, mut coarse] = [0; 3].map(|_| vec![0.0; b * b]);
    let rule = gauss::rule(2 * p + 1);
    let d = face.ends[1] - face.ends[0];
    let long = d.norm();
    for (g, w) in rule.x.iter().zip(&rule.w) {
        let at: Point = face.ends[0] + d * (0.5 * (1.0 + g));
        let w = 0.5 * w * long;
        for s in 0..2 {
            let c = face.cells[s];
            traces[s].set(at, face.normal, r[s].low(c[0], c[1]), r[s].h);
        }
        // jump [v] = v_fine − v_coarse; mean flux {∂v} = γ_fine ∂v_fine + γ_coarse ∂v_coarse
        for i in 0..b {
            let (vf, vc) = (traces[0].value[i], traces[1].value[i]);
            let (df, dc) = (gamma[0] * traces[0].slope[i], gamma[1] * traces[1].slope[i]);
            for j in 0..b {
                let (wf, wc) = (traces[0].value[j], traces[1].value[j]);
                let (ef, ec) = (gamma[0] * traces[0].slope[j], gamma[1] * traces[1].slope[j]);
                let k = i * b + j;
                fine[k] += w * (pen * vf * wf - df * wf - vf * ef);
                across[k] += w * (-pen * vf * wc + df * wc - vf * ec);
                coarse[k] += w * (pen * vc * wc + dc * wc + vc * ec);
            }
        }
    }
    Blocks {
        own: [fine, coarse],
        across,
    }
}
