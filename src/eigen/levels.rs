//! Levels in elimination order, into panels and out of them.

use super::field::Field;
use super::lanczos::Locked;
use super::panel::Panel;
use super::pencil::Pencil;
use crate::units::Scalar;

/// A level in elimination order.
#[derive(Debug, Clone)]
pub(super) struct Level<T> {
    pub value: f64,
    pub residual: f64,
    pub vector: Vec<T>,
}

/// Panels of known levels with their products with M.
pub(super) fn lock<'l, T: Field, const B: usize>(
    pencil: &Pencil<'_, T>,
    levels: impl Iterator<Item = &'l Level<T>>,
) -> Locked<T, B> {
    let levels: Vec<&Level<T>> = levels.collect();
    let v: Vec<Panel<T, B>> = levels
        .chunks(B)
        .map(|group| {
            gather(
                pencil.pattern.size(),
                group.iter().map(|l| l.vector.as_slice()),
            )
        })
        .collect();
    let mv = v
        .iter()
        .map(|x| {
            let mut y = Vec::new();
            pencil.mass(x, &mut y);
            y
        })
        .collect();
    Locked { v, mv }
}

/// Up to B vectors side by side.
pub(super) fn gather<'v, T: Field, const B: usize>(
    n: usize,
    vectors: impl Iterator<Item = &'v [T]>,
) -> Panel<T, B> {
    let mut panel = vec![T::zeros::<B>(); n];
    for (c, x) in vectors.take(B).enumerate() {
        for (row, &x) in panel.iter_mut().zip(x) {
            T::put(row, c, x);
        }
    }
    panel
}

/// Levels from vectors: the value by Rayleigh's quotient, the residual by fresh products.
pub(super) fn measure<T: Field, const B: usize>(
    pencil: &Pencil<'_, T>,
    vectors: &Locked<T, B>,
    count: usize,
) -> Vec<Level<T>> {
    let n = pencil.pattern.size();
    let mut levels = Vec::with_capacity(count);
    let mut kx = Vec::new();
    for (v, mv) in vectors.v.iter().zip(&vectors.mv) {
        pencil.stiffness(v, &mut kx);
        for c in 0..B.min(count - levels.len()) {
            let (mut top, mut bottom) = (0.0, 0.0);
            for i in 0..n {
                let x = T::at(&v[i], c).conj();
                top += (x * T::at(&kx[i], c)).re();
                bottom += (x * T::at(&mv[i], c)).re();
            }
            let value = top / bottom;
            let norm = bottom.sqrt().recip();
            let mut r = 0.0;
            for i in 0..n {
                let d = T::at(&kx[i], c) - T::at(&mv[i], c).scale(value);
                r += Scalar::abs2(d) / pencil.mass[i];
            }
            let vector = v.iter().map(|row| T::at(row, c).scale(norm)).collect();
            let size = value.abs().max(f64::MIN_POSITIVE);
            levels.push(Level {
                value,
                residual: r.sqrt() * norm / size,
                vector,
            });
        }
    }
    levels
}
