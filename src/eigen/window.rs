//! Where to put the shift: in the middle of the window, by a guess that the count corrects.

use super::certificate::Bound;
use super::factor::Factor;
use super::field::Field;
use super::pencil::Pencil;
use super::{EigenError, Settings};

/// Share of the window's levels that may lie below the shift. Solves are fewest in the middle;
/// the range is a choice, so that a fair guess costs no second factorisation.
const MIDDLE: std::ops::RangeInclusive<f64> = 0.22..=0.75;

/// Corrections by interpolation before any shift inside the window will do.
const CORRECTIONS: usize = 5;

/// Factorises at a shift with about half of the `want` levels above `lower` below it. `top`: the
/// expected value of the last of them.
pub(super) fn settle<T: Field>(
    factor: &mut Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    lower: Bound,
    want: usize,
    top: f64,
) -> Result<(), EigenError> {
    let mut base = if lower.value.is_finite() {
        lower.value
    } else {
        0.0
    };
    let mut span = if top > base && top.is_finite() {
        top - base
    } else {
        1.0
    };
    if lower.value.is_infinite() && top < 0.0 {
        base = 2.0 * top;
        span = -top;
    }
    let start = base;
    // Counts at the two ends of where the shift may be.
    let mut low: Option<(f64, f64)> = None;
    let mut high: Option<(f64, f64)> = None;
    if lower.value.is_finite() {
        low = Some((base, 0.0));
    }
    let mut sigma = base + 0.5 * span;
    for round in 0..60 {
        factor.at(pencil, sigma)?;
        let inside = factor.below as f64 - lower.below as f64;
        let share = inside / want as f64;
        let fine = if want <= 3 {
            (0.0..=1.0).contains(&share)
        } else {
            MIDDLE.contains(&share)
        };
        if fine || (round >= CORRECTIONS && (0.05..=1.0).contains(&share)) {
            return Ok(());
        }
        if share < *MIDDLE.start() {
            low = Some((sigma, inside));
        } else {
            high = Some((sigma, inside));
        }
        let goal = 0.48 * want as f64;
        sigma = match (low, high) {
            (Some((a, fa)), Some((b, fb))) => {
                if b - a <= 1e-12 * (a.abs() + b.abs()) {
                    // One group fills the window: nothing lies between.
                    return Ok(());
                }
                let step = ((goal - fa) / (fb - fa)).clamp(0.1, 0.9);
                // Interpolation first; halving when it does not close in.
                a + (b - a) * if round < CORRECTIONS { step } else { 0.5 }
            }
            (Some((a, fa)), None) => {
                let grow = if fa > 0.0 && a > start {
                    (goal / fa).clamp(1.2, 8.0)
                } else {
                    4.0
                };
                if a > start {
                    start + (a - start) * grow
                } else {
                    start + span
                }
            }
            (None, Some((b, fb))) => {
                let shrink = goal / fb.max(1.0);
                if b > base && shrink > 0.02 && round < CORRECTIONS {
                    base + (b - base) * shrink
                } else {
                    // Levels below zero, or a guess far too high: step down ever faster.
                    base -= span;
                    span *= 4.0;
                    base
                }
            }
            (None, None) => sigma,
        };
    }
    Ok(())
}

/// The expected value of level number `last` by Weyl's law, with area and kinetic constant read
/// off the matrices: each unknown stands for the square of the distance to its nearest neighbour,
/// and a slow plane wave shows what K makes of it against M.
///
/// Meant for unknowns that sit on a lattice; on anything else the count corrects it.
pub(super) fn weyl<T: Field>(
    pencil: &Pencil<'_, T>,
    places: &[[f64; 2]],
    tail: usize,
    last: usize,
) -> f64 {
    let p = pencil.pattern;
    let n = p.size();
    let inner = n - tail.min(n);
    let mut nearest = vec![f64::INFINITY; n];
    let place = |i: usize| places[p.order[i] as usize];
    for i in 0..n {
        for e in p.start[i] as usize + 1..p.start[i + 1] as usize {
            let j = p.columns[e] as usize;
            if p.order[i].max(p.order[j]) as usize >= inner {
                continue;
            }
            let (a, b) = (place(i), place(j));
            let d = (a[0] - b[0]).powi(2) + (a[1] - b[1]).powi(2);
            if d > 0.0 {
                nearest[i] = nearest[i].min(d);
                nearest[j] = nearest[j].min(d);
            }
        }
    }
    let area: f64 = (0..n)
        .filter(|&i| (p.order[i] as usize) < inner)
        .map(|i| nearest[i])
        .filter(|d| d.is_finite())
        .sum();
    if area <= 0.0 {
        return f64::NAN;
    }
    // A wave of about two periods across.
    let kappa = 12.0 / area.sqrt();
    let wave: Vec<[T; 2]> = (0..n)
        .map(|i| {
            let [x, y] = place(i);
            let phase = kappa * (0.8 * x + 0.6 * y);
            [T::from_re(phase.cos()), T::from_re(phase.sin())]
        })
        .collect();
    let mut sums = vec![[T::default(); 4]; n];
    for i in 0..n {
        for e in p.start[i] as usize..p.start[i + 1] as usize {
            let j = p.columns[e] as usize;
            for part in 0..2 {
                sums[i][part] += pencil.k[e] * wave[j][part];
                sums[i][2 + part] += pencil.m[e] * wave[j][part];
                if j != i {
                    sums[j][part] += pencil.k[e].conj() * wave[i][part];
                    sums[j][2 + part] += pencil.m[e].conj() * wave[i][part];
                }
            }
        }
    }
    let mut ratios: Vec<f64> = (0..n)
        .step_by((n / 400).max(1))
        .filter_map(|i| {
            // The part of each sum in phase with the wave at i.
            let along =
                |part: usize| (sums[i][part] * wave[i][0] + sums[i][part + 1] * wave[i][1]).re();
            let ratio = along(0) / along(2);
            (ratio.is_finite() && ratio > 0.0).then_some(ratio)
        })
        .collect();
    if ratios.is_empty() {
        return f64::NAN;
    }
    ratios.sort_by(f64::total_cmp);
    let kinetic = ratios[ratios.len() / 2] / (kappa * kappa);
    // N = A k²/4π − P k/4π with the perimeter of a square: k² − (P/A) k − 4πN/A = 0.
    let side = 4.0 / area.sqrt();
    let k = 0.5 * (side + (side * side + 16.0 * std::f64::consts::PI * last as f64 / area).sqrt());
    kinetic * k * k
}

/// The caller's guess, or Weyl's.
pub(super) fn top<T: Field>(
    settings: &Settings<'_, T>,
    pencil: &Pencil<'_, T>,
    places: &[[f64; 2]],
    tail: usize,
    last: usize,
) -> f64 {
    match settings.guess {
        Some(guess) if guess.is_finite() => guess,
        _ => weyl(pencil, places, tail, last),
    }
}
