//! Small problems at once by a dense solve.

use super::certificate::{self, Bound};
use super::factor::Factor;
use super::field::Field;
use super::lanczos::Locked;
use super::levels::{Level, gather, measure};
use super::pencil::Pencil;
use super::request::Settings;
use super::slice::{Slice, Spent};
use super::{EigenError, dense};
use std::time::Instant;

/// Everything at once, for small problems; the count is the same as for large ones.
pub(super) fn all_dense<T: Field>(
    factor: &mut Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    lower: Bound,
    settings: &Settings<'_, T>,
    spent: &mut Spent,
) -> Result<Slice<T>, EigenError> {
    let p = pencil.pattern;
    let n = p.size();
    let (mut k, mut m) = (vec![T::default(); n * n], vec![T::default(); n * n]);
    for i in 0..n {
        for e in p.start[i] as usize..p.start[i + 1] as usize {
            let j = p.columns[e] as usize;
            for (full, half) in [(&mut k, &pencil.k), (&mut m, &pencil.m)] {
                full[j * n + i] = half[e];
                full[i * n + j] = half[e].conj();
            }
        }
    }
    let eigen = dense::generalised(&k, &m, n)?;
    let first = eigen.values.iter().filter(|&&x| x < lower.value).count();
    let values = &eigen.values[first..];
    let count = settings.window.count().min(values.len());
    let top = values.last().copied().unwrap_or(0.0);
    let next = Some(top + 0.1 * top.abs() + f64::MIN_POSITIVE);
    let end = certificate::end(values, next, count, settings.cluster);
    let (keep, shift) = end.map_or((values.len(), top + 0.05 * top.abs()), |e| {
        (e.keep, e.shift)
    });
    let vectors: Vec<&[T]> = eigen.vectors.chunks(n).skip(first).take(keep).collect();
    let locked = Locked::<T, 4> {
        v: vectors
            .chunks(4)
            .map(|g| gather(n, g.iter().copied()))
            .collect(),
        mv: Vec::new(),
    };
    let mv = locked.v.iter().map(|x| {
        let mut y = Vec::new();
        pencil.mass(x, &mut y);
        y
    });
    let locked = Locked {
        mv: mv.collect(),
        v: locked.v,
    };
    let mut levels: Vec<Level<T>> = measure(pencil, &locked, keep);
    levels.sort_by(|a, b| a.value.total_cmp(&b.value));
    let clock = Instant::now();
    factor.at(pencil, shift)?;
    spent.factor_ms += clock.elapsed().as_secs_f64() * 1e3;
    let upper = Bound {
        value: factor.shift,
        below: factor.below,
    };
    let verdict = certificate::compare(lower, upper, levels.iter().map(|l| l.value));
    Ok(Slice {
        levels,
        upper,
        next: eigen.values.get(first + keep).copied(),
        complete: verdict == certificate::Verdict::Whole,
        backward: factor.backward,
    })
}
