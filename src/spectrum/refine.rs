//! What to change when an error bar is above the accuracy asked for.

use super::attempt::Attempt;
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

/// Share of a level's η² that the split cells must hold.
const BULK: f64 = 0.85;
/// Above this share of all cells the error counts as spread out.
const SPREAD_OUT: f64 = 0.2;

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
        let mut sum = 0.0;
        for &c in &order {
            if sum >= BULK * r.total[l] {
                break;
            }
            sum += share(c);
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
    if few.len() as f64 > SPREAD_OUT * r.cells.len() as f64 || few.is_empty() {
        let p = attempt.lattice.degree as f64;
        Next::Finer((0.7 / worst).powf(0.5 / p).clamp(0.4, 0.93))
    } else {
        Next::Split(few)
    }
}
