//! One slice of the spectrum: shift, Lanczos, count, and again until the count agrees.

use super::certificate::{Bound, End, Verdict, compare};
use super::factor::Factor;
use super::field::Field;
use super::judge::{Judge, State};
use super::lanczos::{Estimate, Lanczos, Locked};
use super::levels::{Level, lock, measure};
use super::panel::Panel;
use super::pencil::Pencil;
use super::{EigenError, window};
use crate::progress::Watch;
use std::time::Instant;

/// A slice, certified or not.
pub(super) struct Slice<T> {
    /// Ascending, all below `upper`.
    pub levels: Vec<Level<T>>,
    pub upper: Bound,
    /// The level above `upper`, as far as it is known.
    pub next: Option<f64>,
    pub complete: bool,
    /// Worst backward error of the counts.
    pub backward: f64,
}

/// What is wanted of a slice.
pub(super) struct Task<'a, T: Field, const B: usize> {
    pub lower: Bound,
    pub want: usize,
    /// Expected value of the last level.
    pub top: f64,
    pub tolerance: f64,
    pub cluster: f64,
    /// Most columns of the Lanczos basis.
    pub columns: usize,
    /// Levels known already, to stay orthogonal to.
    pub known: Locked<T, B>,
    pub start: Option<Panel<T, B>>,
    pub watch: &'a Watch,
    /// Levels done before this slice, and in all, for the progress.
    pub done: (usize, usize),
}

/// Time and solves spent.
#[derive(Default)]
pub(super) struct Spent {
    pub solves: usize,
    pub factor_ms: f64,
}

/// Rounds of new blocks when the count says that levels are missing; each finds up to a block of
/// copies of every level.
const ROUNDS: usize = 64;

pub(super) fn slice<T: Field, const B: usize>(
    factor: &mut Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    task: Task<'_, T, B>,
    spent: &mut Spent,
) -> Result<Slice<T>, EigenError> {
    let n = pencil.pattern.size();
    let clock = Instant::now();
    window::settle(factor, pencil, task.lower, task.want, task.top)?;
    spent.factor_ms += clock.elapsed().as_secs_f64() * 1e3;

    let mut moves = 0;
    let (mut levels, end) = loop {
        if let Some(found) = search(factor, pencil, &task, moves < MOVES, spent)? {
            break found;
        }
        // Off the level, by steps that grow until they are of the order of a spacing.
        moves += 1;
        let base = if task.lower.value.is_finite() {
            task.lower.value
        } else {
            0.0
        };
        let step = 2e-4 * 5f64.powi(moves) * (factor.shift - base).abs();
        let clock = Instant::now();
        factor.at(pencil, factor.shift + step)?;
        spent.factor_ms += clock.elapsed().as_secs_f64() * 1e3;
    };
    let clock = Instant::now();
    factor.at(pencil, end.shift)?;
    spent.factor_ms += clock.elapsed().as_secs_f64() * 1e3;
    let mut upper = Bound {
        value: factor.shift,
        below: factor.below,
    };
    let mut backward = factor.backward;
    let mut verdict = compare(task.lower, upper, levels.iter().map(|l| l.value));
    for round in 0..ROUNDS {
        match verdict {
            Verdict::Whole => break,
            Verdict::Missing(missing) => {
                let found = repair(factor, pencil, &task, &levels, upper, missing, round, spent)?;
                if found.is_empty() {
                    break;
                }
                levels.extend(found);
            }
            Verdict::Surplus(_) => {
                // The count may be the one that erred: count again a little lower in the gap.
                if round > 2 {
                    break;
                }
                let last = levels.iter().map(|l| l.value).filter(|&x| x < upper.value);
                let last = last.fold(f64::NEG_INFINITY, f64::max);
                factor.at(pencil, last + 0.6 * (upper.value - last))?;
                upper = Bound {
                    value: factor.shift,
                    below: factor.below,
                };
                backward = backward.max(factor.backward);
            }
        }
        verdict = compare(task.lower, upper, levels.iter().map(|l| l.value));
    }
    levels.sort_by(|a, b| a.value.total_cmp(&b.value));
    levels.retain(|l| l.value > task.lower.value && l.value < upper.value);
    debug_assert!(levels.len() <= n);
    Ok(Slice {
        levels,
        upper,
        next: Some(end.next).filter(|&x| x > upper.value),
        complete: verdict == Verdict::Whole,
        backward,
    })
}

/// Times a shift may be moved off a level, and how near is too near: the distance over the shift.
/// Rounding grows with the inverse of it.
const MOVES: i32 = 3;
const NEAR: f64 = 1e-7;

/// Levels and where they end.
type Harvest<T> = (Vec<Level<T>>, End);

/// The main Lanczos run, at the shift the factor stands at. None: that is too near to a level,
/// and `movable`.
fn search<T: Field, const B: usize>(
    factor: &Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    task: &Task<'_, T, B>,
    movable: bool,
    spent: &mut Spent,
) -> Result<Option<Harvest<T>>, EigenError> {
    let mut judge = Judge {
        lower: task.lower.value,
        shift: factor.shift,
        inside: factor.below.saturating_sub(task.lower.below),
        want: task.want,
        tolerance: task.tolerance,
        cluster: task.cluster,
        stalled: (0, 0),
    };
    let warm = task.start.is_some();
    let mut run = Lanczos::<T, B>::start(pencil, factor, &task.known, task.start.clone(), 1)?;
    let want = task.want.max(judge.inside);
    // The first look comes when about this many columns usually do; measured on splines.
    let digits = -task.tolerance.log10();
    let usual = (want as f64 * (1.3 + 0.1 * digits)) as usize + 5 * B;
    let mut look = if warm { want + 2 * B } else { usual };
    let limit = 60 * (want + 4 * B) + 1000;
    let mut seen = 0;
    loop {
        task.watch.step(task.done.0 + seen, task.done.1, "levels")?;
        run.expand()?;
        if movable && run.columns() <= 2 * B && run.stretch * judge.size(factor.shift) * NEAR > 1.0
        {
            spent.solves += run.solves;
            return Ok(None);
        }
        let full = run.columns() + B > task.columns || run.spent;
        if run.columns() < look && !full {
            continue;
        }
        let (eigen, estimates) = run.ritz()?;
        let state = judge.state(&estimates);
        let (list, _, _) = judge.list(&estimates);
        seen = list.len().min(task.want);
        let end = match state {
            State::Done(end) => end,
            State::Wait(missing) => {
                if run.spent || run.solves > limit {
                    return Err(EigenError::NotConverged {
                        converged: list.len(),
                        wanted: task.want,
                        solves: run.solves,
                    });
                }
                if full {
                    let keep = keep_panels(task.columns, want, B);
                    let mut by: Vec<&Estimate> = estimates.iter().collect();
                    by.sort_by(|a, b| {
                        (a.value - judge.shift)
                            .abs()
                            .total_cmp(&(b.value - judge.shift).abs())
                    });
                    let chosen: Vec<usize> = by.iter().take(keep * B).map(|e| e.column).collect();
                    run.restart(&eigen, &chosen[..chosen.len() / B * B]);
                }
                look = run.columns() + (missing * 2 / 3).clamp(B, 8 * B) / B * B;
                continue;
            }
        };
        spent.solves += run.solves;
        let chosen: Vec<usize> = list
            .iter()
            .filter(|e| e.value < end.shift)
            .map(|e| e.column)
            .collect();
        let found = run.vectors(&eigen, &chosen);
        return Ok(Some((measure::<T, B>(pencil, &found, chosen.len()), end)));
    }
}

/// Panels kept at a restart: the window and a little more, and room for at least four new ones.
fn keep_panels(columns: usize, want: usize, block: usize) -> usize {
    let all = columns / block;
    (want / block + 3).min(all.saturating_sub(4)).max(1)
}

/// Looks for levels that the count says are missing, away from all known ones, at the shift of
/// the count.
#[allow(clippy::too_many_arguments)]
fn repair<T: Field, const B: usize>(
    factor: &Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    task: &Task<'_, T, B>,
    found: &[Level<T>],
    upper: Bound,
    missing: usize,
    round: usize,
    spent: &mut Spent,
) -> Result<Vec<Level<T>>, EigenError> {
    let mut locked = lock::<T, B>(pencil, found.iter());
    locked.v.extend(task.known.v.iter().cloned());
    locked.mv.extend(task.known.mv.iter().cloned());
    let judge = Judge {
        lower: task.lower.value,
        shift: factor.shift,
        inside: 0,
        want: missing,
        tolerance: task.tolerance,
        cluster: task.cluster,
        stalled: (0, 0),
    };
    let seed = 100 + round as u64;
    let mut run = Lanczos::<T, B>::start(pencil, factor, &locked, None, seed)?;
    let mut idle = 0;
    loop {
        task.watch.step(
            task.done.0 + task.want.min(found.len()),
            task.done.1,
            "levels",
        )?;
        for _ in 0..2 {
            run.expand()?;
        }
        let (eigen, estimates) = run.ritz()?;
        let inside = |e: &&Estimate| e.value > judge.lower && e.value < upper.value;
        let good: Vec<&Estimate> = estimates
            .iter()
            .filter(inside)
            .filter(|e| judge.good(e))
            .collect();
        let open = estimates
            .iter()
            .filter(inside)
            .filter(|e| !judge.good(e))
            .count();
        let full = run.columns() + 2 * B > task.columns || run.spent;
        idle = if open == 0 { idle + 1 } else { 0 };
        if good.len() >= missing || (idle >= 4 && !good.is_empty()) || idle >= 12 || full {
            spent.solves += run.solves;
            let chosen: Vec<usize> = good.iter().map(|e| e.column).take(missing).collect();
            let vectors = run.vectors(&eigen, &chosen);
            return Ok(measure::<T, B>(pencil, &vectors, chosen.len()));
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::certificate::BOTTOM;
    use super::super::factor::Symbolic;
    use super::super::pencil::Pattern;
    use super::*;
    use sprs::{CsMat, TriMat};

    /// A square grid of springs of uneven strength: no two levels alike, no mass but one.
    fn grid(side: usize) -> (CsMat<f64>, CsMat<f64>, Vec<[f64; 2]>) {
        let n = side * side;
        let mut k = TriMat::new((n, n));
        for i in 0..n {
            k.add_triplet(i, i, 1.0 + 1e-3 * (i as f64 * 0.7).sin());
            for (to, there) in [(i + 1, (i + 1) % side != 0), (i + side, i + side < n)] {
                if there {
                    k.add_triplet(i, to, -0.25);
                    k.add_triplet(to, i, -0.25);
                }
            }
        }
        let places = (0..n)
            .map(|i| [(i % side) as f64, (i / side) as f64])
            .collect();
        (k.to_csr(), CsMat::eye(n), places)
    }

    fn task(known: Locked<f64, 4>, watch: &Watch) -> Task<'_, f64, 4> {
        Task {
            lower: BOTTOM,
            want: 12,
            top: 0.12,
            tolerance: 1e-8,
            cluster: 1e-6,
            columns: 80,
            known,
            start: None,
            watch,
            done: (0, 12),
        }
    }

    #[test]
    fn deliberate_misses_are_caught() {
        let (k, m, places) = grid(20);
        let pattern = Pattern::new(&k, &m, &places, 0).expect("the grid fits together");
        let symbolic = Symbolic::new(&pattern).expect("the grid is small");
        let pencil = Pencil::new(&pattern, &k, &m).expect("the grid is sound");
        let mut factor = Factor::new(&symbolic);
        let watch = Watch::quiet();
        let mut spent = Spent::default();
        let all = slice(
            &mut factor,
            &pencil,
            task(Locked::default(), &watch),
            &mut spent,
        )
        .expect("the grid is solved");
        assert!(all.complete && all.levels.len() >= 12);
        for hidden in 0..11 {
            // A level that the process is kept away from, and that nobody counted.
            let known = lock::<f64, 4>(&pencil, std::iter::once(&all.levels[hidden]));
            let part = slice(&mut factor, &pencil, task(known, &watch), &mut spent)
                .expect("the grid is solved");
            assert!(
                !part.complete,
                "level {hidden} was hidden, and the count did not notice"
            );
            let verdict = compare(BOTTOM, part.upper, part.levels.iter().map(|l| l.value));
            assert_eq!(verdict, Verdict::Missing(1));
        }
    }
}
