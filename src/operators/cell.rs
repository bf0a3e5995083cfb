//! Element matrices: stiffness ∫∇Bᵢ·∇Bⱼ and mass ∫BᵢBⱼ of one cell, by sum factorisation.

use super::tables::Tables;

/// Stiffness and mass of a cell over the (p + 1)² splines alive on it, row-major, local spline
/// (m, l) numbered m (p + 1) + l.
#[derive(Clone, Debug)]
pub struct Element {
    /// ∫∇Bᵢ·∇Bⱼ.
    pub stiffness: Vec<f64>,
    /// ∫BᵢBⱼ.
    pub mass: Vec<f64>,
}

/// Work space of the kernel.
pub struct Kernel<'a> {
    t: &'a Tables,
    v: Vec<f64>,
    s: Vec<f64>,
    pair_k: Vec<f64>,
    pair_m: Vec<f64>,
}

impl<'a> Kernel<'a> {
    /// For one degree and rule.
    pub fn new(t: &'a Tables) -> Self {
        let np = t.pairs.len();
        Self {
            t,
            v: vec![0.0; np * t.n],
            s: vec![0.0; np * t.n],
            pair_k: vec![0.0; np * np],
            pair_m: vec![0.0; np * np],
        }
    }

    /// The element of a cell of size `h` with weights `[q * n + r]`, written over `out`.
    pub fn element(&mut self, weights: &[f64], h: f64, out: &mut Element) {
        pulp::Arch::new().dispatch(|| self.compute(weights, h, out));
    }

    #[inline(always)]
    fn compute(&mut self, weights: &[f64], h: f64, out: &mut Element) {
        let t = self.t;
        let (n, np) = (t.n, t.pairs.len());
        // contract x: rows r, pairs contiguous
        self.v.fill(0.0);
        self.s.fill(0.0);
        for q in 0..n {
            let (gv, gs) = (&t.values[q * np..][..np], &t.slopes[q * np..][..np]);
            for r in 0..n {
                let w = weights[q * n + r];
                let (v, s) = (&mut self.v[r * np..][..np], &mut self.s[r * np..][..np]);
                for ((v, s), (gv, gs)) in v.iter_mut().zip(s).zip(gv.iter().zip(gs)) {
                    *v += w * gv;
                    *s += w * gs;
                }
            }
        }
        // contract y
        self.pair_k.fill(0.0);
        self.pair_m.fill(0.0);
        let f = 1.0 / (h * h);
        for r in 0..n {
            let (gv, gs) = (&t.values[r * np..][..np], &t.slopes[r * np..][..np]);
            for pair in 0..np {
                let (v, s) = (self.v[r * np + pair], self.s[r * np + pair]);
                let (fv, fs) = (f * v, f * s);
                let k = &mut self.pair_k[pair * np..][..np];
                let m = &mut self.pair_m[pair * np..][..np];
                for ((k, m), (gv, gs)) in k.iter_mut().zip(m).zip(gv.iter().zip(gs)) {
                    *m += v * gv;
                    *k += fs * gv + fv * gs;
                }
            }
        }
        unfold(t, &self.pair_k, &mut out.stiffness);
        unfold(t, &self.pair_m, &mut out.mass);
    }
}

impl Element {
    /// Zeros for degree `p`.
    pub fn zeros(p: usize) -> Self {
        let n = (p + 1).pow(4);
        Self {
            stiffness: vec![0.0; n],
            mass: vec![0.0; n],
        }
    }

    /// The element of a whole cell of size `h`.
    pub fn whole(t: &Tables, h: f64) -> Self {
        let mut out = Self::zeros(t.p);
        let w: Vec<f64> = (0..t.n * t.n)
            .map(|k| t.w[k / t.n] * t.w[k % t.n] * h * h)
            .collect();
        Kernel::new(t).element(&w, h, &mut out);
        out
    }
}

/// From pairs ((i, k), (j, l)) to the matrix of (i, j) against (k, l).
#[inline(always)]
fn unfold(t: &Tables, pairs: &[f64], out: &mut [f64]) {
    let (m, np) = (t.p + 1, t.pairs.len());
    let b = m * m;
    for (a, &(i, k)) in t.pairs.iter().enumerate() {
        for (c, &(j, l)) in t.pairs.iter().enumerate() {
            let v = pairs[a * np + c];
            out[(i * m + j) * b + k * m + l] = v;
            out[(k * m + j) * b + i * m + l] = v;
            out[(i * m + l) * b + k * m + j] = v;
            out[(k * m + l) * b + i * m + j] = v;
        }
    }
}
