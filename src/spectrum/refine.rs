//! What to change when an error bar is above the accuracy asked for.

use super::attempt::Attempt;
use super::bars::SPREAD;
use crate::lattice::{DEEPEST, Key};
use std::cmp::Ordering;
use std::collections::HashSet;

/// The next step.
#[derive(Clone, Debug, PartialEq)]
pub enum Next {
    /// Every bar is small enough.
    Done,
    /// The error is spread out: a smaller cell size, by this factor.
    Finer(f64),
    /// The error sits in few cells: split them.
    Split(Vec<Key>),
}

/// Share of the error allowed that the cells left whole may hold.
const LEFT: f64 = 0.5;
/// Unknowns a split cell adds; splines at the edge of a region lie partly outside it.
const PER_SPLIT: f64 = 5.0;

/// Judges an attempt against the relative accuracy asked for.
pub fn next(attempt: &Attempt, accuracy: f64) -> Next {
    let excess = |b: &(f64, f64)| b.1 / (accuracy * b.0.abs());
    let worst = attempt.bars.iter().map(excess).fold(0.0, f64::max);
    if worst <= 1.0 {
        return Next::Done;
    }
    let levels = attempt.bars.len();
    let r = &attempt.residual;
    // every level above the accuracy says which cells it suffers from
    let mut wanted = vec![false; r.cells.len()];
    let mut order: Vec<usize> = (0..r.cells.len()).collect();
    for (l, bar) in attempt.bars.iter().enumerate() {
        if excess(bar) <= 1.0 {
            continue;
        }
        let share = |c: usize| r.shares[c * levels + l];
        order.sort_by(|&a, &b| share(b).partial_cmp(&share(a)).unwrap_or(Ordering::Equal));
        let mut left = r.total[l];
        let allowed = LEFT * accuracy * bar.0.abs() / SPREAD;
        for &c in &order {
            if left <= allowed {
                break;
            }
            left -= share(c);
            wanted[c] = true;
        }
    }
    let marked: Vec<Key> = (0..r.cells.len())
        .filter(|&c| wanted[c] && r.cells[c].level < DEEPEST)
        .map(|c| r.cells[c])
        .collect();
    // with their neighbours: a strip of cut cells alone has too few inside cells to lean on
    let known: HashSet<Key> = r.cells.iter().copied().collect();
    let mut few: Vec<Key> = marked
        .iter()
        .flat_map(|k| (-1..=1).flat_map(move |i| (-1..=1).map(move |j| k.beside(i, j))))
        .filter(|k| known.contains(k))
        .collect();
    few.sort_unstable();
    few.dedup();
    let p = attempt.lattice.degree as f64;
    let factor = (0.7 / worst).powf(0.5 / p).clamp(0.4, 0.93);
    let split = PER_SPLIT * few.len() as f64;
    let finer = attempt.unknowns as f64 * (factor.powi(-2) - 1.0);
    if few.is_empty() || finer < split {
        Next::Finer(factor)
    } else {
        Next::Split(few)
    }
}
