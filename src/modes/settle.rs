//! A reproducible choice where the solver is free: bases of degenerate groups by symmetry, signs by
//! a fixed rule.
//!
//! In a group the image ψ_j∘R of every member under a mirror R is again a combination of members.
//! The coefficients follow from least squares on sample points; their eigenvectors are even or odd.

use super::Modes;
use crate::eigen::symmetric_eigen;
use crate::geometry::{Point, Similarity, Symmetry, pt};
use std::f64::consts::{FRAC_PI_2, PI};
use std::sync::Arc;

/// Sample points beside those that large groups ask for.
const POINTS: usize = 80;
/// A parity further than this from ±1 is no parity: the outline's mirror maps the mode elsewhere.
const CLEAR: f64 = 1e-2;
/// Angle by which a mode on circles is turned to read its angular number; tells |m| up to 60.
const TURN: f64 = 0.05;

impl Modes {
    /// Turns groups into symmetry-adapted bases, fixes signs, and gives the symmetry of each mode.
    ///
    /// `groups`: for each mode, how many coincide with it; groups cut by the window are left alone.
    pub fn settle(&mut self, groups: &[usize]) -> Vec<Option<String>> {
        let symmetry = self.outline().symmetries();
        let count = self.len();
        let most = groups.iter().copied().max().unwrap_or(1).min(count);
        let points = self.generic_points(POINTS + 8 * most);
        let mut labels = vec![None; count];
        if !points.is_empty() {
            let axes = axes(&symmetry);
            let here = self.values(&points);
            let images: Vec<Vec<f64>> = axes
                .iter()
                .map(|&a| self.values_of(&points, &Similarity::mirrored(symmetry.centre, a)))
                .collect();
            let mut start = 0;
            while start < count {
                let size = groups[start].min(count - start);
                let whole = groups[start..start + size].iter().all(|&g| g == size);
                if whole && !axes.is_empty() {
                    let t = self.adapt(start..start + size, &here, &images);
                    for (k, parity) in t.into_iter().enumerate() {
                        labels[start + k] = parity.map(|p| parity_label(&p, &axes));
                    }
                }
                start += if whole { size } else { 1 };
            }
            if symmetry.circle {
                self.angular(&symmetry, &points, &mut labels);
            }
            self.fix_signs(&points);
        }
        labels
    }

    /// Diagonalises the mirrors on one group; the parities of each new member.
    fn adapt(
        &mut self,
        group: std::ops::Range<usize>,
        here: &[f64],
        images: &[Vec<f64>],
    ) -> Vec<Option<Vec<f64>>> {
        let (g, count) = (group.len(), self.len());
        let column = |v: &[f64], k: usize| -> Vec<f64> {
            v.iter()
                .skip(group.start + k)
                .step_by(count)
                .copied()
                .collect()
        };
        let a: Vec<Vec<f64>> = (0..g).map(|k| column(here, k)).collect();
        let none = || vec![None; g];
        let mut mirrors = Vec::new();
        for image in images {
            let b: Vec<Vec<f64>> = (0..g).map(|k| column(image, k)).collect();
            let Some(c) = least_squares(&a, &b) else {
                return none();
            };
            mirrors.push(c);
        }
        // commuting mirrors share eigenvectors; unequal weights keep all four classes apart
        let mut sum = vec![0.0; g * g];
        for (w, c) in [1.0, 0.5].iter().zip(&mirrors) {
            for i in 0..g {
                for j in 0..g {
                    sum[j * g + i] += 0.5 * w * (c[j * g + i] + c[i * g + j]);
                }
            }
        }
        let Ok((_, vectors)) = symmetric_eigen(&sum, g) else {
            return none();
        };
        let parities: Vec<Vec<f64>> = (0..g)
            .map(|k| {
                let y = &vectors[k * g..(k + 1) * g];
                mirrors
                    .iter()
                    .map(|c| {
                        (0..g)
                            .map(|j| (0..g).map(|i| y[i] * c[j * g + i] * y[j]).sum::<f64>())
                            .sum()
                    })
                    .collect()
            })
            .collect();
        // even members first: the order within a group is free too
        let mut order: Vec<usize> = (0..g).collect();
        order.sort_by_key(|&k| parities[k].iter().map(|p| *p < 0.0).collect::<Vec<_>>());
        let turn: Vec<f64> = order
            .iter()
            .flat_map(|&k| vectors[k * g..(k + 1) * g].iter().copied())
            .collect();
        if g > 1 {
            self.combine(group, &turn);
        }
        order
            .into_iter()
            .map(|k| {
                let p = &parities[k];
                let clear = p.iter().all(|p| (p.abs() - 1.0).abs() < CLEAR);
                clear.then(|| p.iter().map(|p| p.signum()).collect())
            })
            .collect()
    }

    /// Angular numbers of modes on circles, from a small turn about the centre.
    fn angular(&self, s: &Symmetry, points: &[Point], labels: &mut [Option<String>]) {
        let here = self.values(points);
        let there = self.values_of(points, &Similarity::turned(s.centre, TURN));
        let back = self.values_of(points, &Similarity::turned(s.centre, -TURN));
        let count = self.len();
        for (k, label) in labels.iter_mut().enumerate() {
            // ψ(θ + τ) + ψ(θ − τ) = 2 cos(mτ) ψ(θ)
            let (mut top, mut bottom) = (0.0, 0.0);
            for e in (k..here.len()).step_by(count) {
                top += here[e] * (there[e] + back[e]);
                bottom += 2.0 * here[e] * here[e];
            }
            let m = (top / bottom).clamp(-1.0, 1.0).acos() / TURN;
            if label.is_some() && (m - m.round()).abs() < 0.1 {
                let side = match m.round() as i64 {
                    0 => "",
                    _ if label.as_deref().is_some_and(|l| l.contains("y odd")) => " sin",
                    _ => " cos",
                };
                *label = Some(format!("m={:.0}{side}", m.abs().round()));
            }
        }
    }

    /// The first sample point where a mode is near its largest says the sign: positive there.
    fn fix_signs(&mut self, points: &[Point]) {
        let (values, count) = (self.values(points), self.len());
        for k in 0..count {
            let own = || values.iter().skip(k).step_by(count);
            let most = own().fold(0.0_f64, |m, v| m.max(v.abs()));
            if own()
                .find(|v| v.abs() > 0.4 * most)
                .is_some_and(|v| *v < 0.0)
            {
                self.combine(k..k + 1, &[-1.0]);
            }
        }
    }

    /// Replaces members of a group by combinations: row k of `turn` makes the new member k.
    fn combine(&mut self, group: std::ops::Range<usize>, turn: &[f64]) {
        let (g, count, first) = (group.len(), self.len(), group.start);
        let functions = Arc::make_mut(&mut self.functions);
        let mut old = vec![0.0; g];
        for v in functions
            .splines
            .iter_mut()
            .chain(std::iter::once(&mut functions.corners))
        {
            for row in v.chunks_exact_mut(count) {
                old.copy_from_slice(&row[first..first + g]);
                for k in 0..g {
                    row[first + k] = (0..g).map(|i| turn[k * g + i] * old[i]).sum();
                }
            }
        }
    }

    /// Inside points at generic places, always the same for an outline: the sequence of fractional
    /// parts of n/ρ, n/ρ² with ρ³ = ρ + 1 (Roberts 2018).
    fn generic_points(&self, wanted: usize) -> Vec<Point> {
        let b = self.outline().bounds();
        let mut out = Vec::with_capacity(wanted);
        for n in 1..200 * wanted {
            let f = n as f64;
            let (u, v) = (
                (0.754_877_666_246_693 * f).fract(),
                (0.569_840_290_998_053 * f).fract(),
            );
            let p = b.lo + pt(u * b.size().x, v * b.size().y);
            if self.inside(p) {
                out.push(p);
                if out.len() == wanted {
                    break;
                }
            }
        }
        out
    }

    fn values_of(&self, points: &[Point], by: &Similarity) -> Vec<f64> {
        let moved: Vec<Point> = points.iter().map(|p| by.apply(*p)).collect();
        self.values(&moved)
    }

    /// All modes at points, `[point * modes + mode]`.
    fn values(&self, points: &[Point]) -> Vec<f64> {
        let mut out = vec![0.0; points.len() * self.len()];
        for (row, p) in out.chunks_exact_mut(self.len()).zip(points) {
            self.all_at(*p, row);
        }
        out
    }
}

/// The mirror axes used: the first, and the one across it where there is one.
fn axes(s: &Symmetry) -> Vec<f64> {
    if s.circle {
        return vec![0.0, FRAC_PI_2];
    }
    let Some(&first) = s.mirrors.first() else {
        return Vec::new();
    };
    let across = |m: &&f64| ((**m - first).rem_euclid(PI) - FRAC_PI_2).abs() < 1e-6;
    std::iter::once(first)
        .chain(s.mirrors.iter().find(across).copied())
        .collect()
}

/// "x even, y odd" for axes along x and y; with u and v for tilted ones.
fn parity_label(parities: &[f64], axes: &[f64]) -> String {
    let word = |p: f64| if p > 0.0 { "even" } else { "odd" };
    let tilted = axes[0].abs() > 1e-6;
    match parities {
        // the mirror line along u turns v round, the one across it turns u round
        [v, u] if tilted => format!(
            "u {}, v {} (u at {:.4}°)",
            word(*u),
            word(*v),
            axes[0].to_degrees()
        ),
        [y, x] => format!("x {}, y {}", word(*x), word(*y)),
        [p] => format!(
            "{} about the axis at {:.4}°",
            word(*p),
            axes[0].to_degrees()
        ),
        _ => String::new(),
    }
}

/// C with B = A C in the least-squares sense, by columns; `None` when A is singular.
fn least_squares(a: &[Vec<f64>], b: &[Vec<f64>]) -> Option<Vec<f64>> {
    let g = a.len();
    let dot = |x: &[f64], y: &[f64]| -> f64 { x.iter().zip(y).map(|(x, y)| x * y).sum() };
    // normal equations: the columns are modes on generic points, well conditioned
    let mut m: Vec<Vec<f64>> = (0..g)
        .map(|i| {
            (0..g)
                .map(|j| dot(&a[i], &a[j]))
                .chain((0..g).map(|j| dot(&a[i], &b[j])))
                .collect()
        })
        .collect();
    for k in 0..g {
        let p = (k..g).max_by(|&i, &j| m[i][k].abs().total_cmp(&m[j][k].abs()))?;
        m.swap(k, p);
        let pivot = m[k][k];
        if pivot.abs() < 1e-300 {
            return None;
        }
        for x in &mut m[k] {
            *x /= pivot;
        }
        let row = m[k].clone();
        for (i, other) in m.iter_mut().enumerate() {
            if i != k {
                let f = other[k];
                for (x, r) in other.iter_mut().zip(&row) {
                    *x -= f * r;
                }
            }
        }
    }
    Some((0..g * g).map(|e| m[e % g][g + e / g]).collect())
}
