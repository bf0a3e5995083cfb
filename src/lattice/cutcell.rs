//! Rules for cut cells by moment fitting (Müller, Kummer & Oberlack 2013), moments from the
//! divergence theorem: nothing is clipped or triangulated.
//!
//! On the reference square [−1, 1]², with X_a(x) = ∫₋₁ˣ P_a,
//! ∫ P_a P_b = Σ over boundary parts ∫ X_a P_b dy + the right edge's inside share ∫ X_a(1) P_b dy,
//! and X_a(1) = 2 δ_a0.

use super::gauss::{self, legendre};
use super::trace::Part;
use crate::geometry::Piece;

/// Work space for cells with rules of `n` points a side.
pub struct Fitter {
    n: usize,
    /// `[q * n + a]`: w_q (2a + 1)/2 P_a(x_q).
    fit: Vec<f64>,
    px: Vec<f64>,
    py: Vec<f64>,
    moments: Vec<f64>,
    half: Vec<f64>,
}

impl Fitter {
    /// For rules of `n` points a side, exact on products of polynomials of degree n − 1.
    pub fn new(n: usize) -> Self {
        let rule = gauss::rule(n);
        let mut fit = vec![0.0; n * n];
        let mut p = vec![0.0; n];
        for q in 0..n {
            legendre(rule.x[q], &mut p);
            for a in 0..n {
                fit[q * n + a] = rule.w[q] * (a as f64 + 0.5) * p[a];
            }
        }
        Self {
            n,
            fit,
            px: vec![0.0; n + 2],
            py: vec![0.0; n + 2],
            moments: vec![0.0; n * n],
            half: vec![0.0; n * n],
        }
    }

    /// Weights `[q * n + r]` for the inside of a cell, and the inside fraction.
    ///
    /// `low`: lower left corner; `edge`: crossings of the line through the right edge, ascending.
    pub fn weights(
        &mut self,
        pieces: &[Piece],
        parts: &[Part],
        low: [f64; 2],
        h: f64,
        edge: &[f64],
    ) -> (Vec<f64>, f64) {
        let n = self.n;
        self.moments.fill(0.0);
        for part in parts {
            self.add_part(&pieces[part.piece as usize], part, low, h);
        }
        for span in edge.chunks_exact(2) {
            let (y0, y1) = (span[0].max(low[1]), span[1].min(low[1] + h));
            if y1 > y0 {
                self.add_edge(2.0 * (y0 - low[1]) / h - 1.0, 2.0 * (y1 - low[1]) / h - 1.0);
            }
        }
        let fraction = self.moments[0] / 4.0;
        // weights = F moments Fᵀ h²/4
        for q in 0..n {
            for b in 0..n {
                let mut s = 0.0;
                for a in 0..n {
                    s += self.fit[q * n + a] * self.moments[a * n + b];
                }
                self.half[q * n + b] = s * h * h / 4.0;
            }
        }
        let mut w = vec![0.0; n * n];
        for q in 0..n {
            for r in 0..n {
                let mut s = 0.0;
                for b in 0..n {
                    s += self.half[q * n + b] * self.fit[r * n + b];
                }
                w[q * n + r] = s;
            }
        }
        (w, fraction)
    }

    fn add_part(&mut self, piece: &Piece, part: &Part, low: [f64; 2], h: f64) {
        let n = self.n;
        let straight = matches!(piece, Piece::Line { .. });
        // a straight part gives a polynomial of degree 2n − 1; a curved one needs a few more
        let rule = gauss::rule(if straight { n } else { n + 6 });
        let [a, b] = part.ends;
        let half = 0.5 * (part.t[1] - part.t[0]);
        for (g, w) in rule.x.iter().zip(&rule.w) {
            let (p, dy) = if straight {
                let s = 0.5 * (1.0 + g);
                (a + (b - a) * s, 0.5 * (b.y - a.y))
            } else {
                let t = part.t[0] + half * (1.0 + g);
                (piece.at(t), piece.velocity(t).y * half)
            };
            let x = 2.0 * (p.x - low[0]) / h - 1.0;
            let y = 2.0 * (p.y - low[1]) / h - 1.0;
            legendre(x, &mut self.px[..n + 1]);
            legendre(y, &mut self.py[..n]);
            let f = w * dy * 2.0 / h;
            for a in 0..n {
                let big = if a == 0 {
                    x + 1.0
                } else {
                    (self.px[a + 1] - self.px[a - 1]) / (2 * a + 1) as f64
                };
                let c = f * big;
                for (m, py) in self.moments[a * n..(a + 1) * n].iter_mut().zip(&self.py) {
                    *m += c * py;
                }
            }
        }
    }

    fn add_edge(&mut self, y0: f64, y1: f64) {
        let n = self.n;
        legendre(y0, &mut self.px[..n + 1]);
        legendre(y1, &mut self.py[..n + 1]);
        self.moments[0] += 2.0 * (y1 - y0);
        for b in 1..n {
            let d = |k: usize| self.py[k] - self.px[k];
            let v = (d(b + 1) - d(b - 1)) / (2 * b + 1) as f64;
            self.moments[b] += 2.0 * v;
        }
    }
}
