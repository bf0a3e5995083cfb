//! The whole solve: plan, slices from the bottom up, proof.

use super::certificate::{BOTTOM, Bound};
use super::factor::{Factor, Symbolic};
use super::field::Field;
use super::levels::{gather, lock};
use super::pencil::{Pattern, Pencil};
use super::request::{Count, Effort, Found, Problem, Settings, Window};
use super::room::{Room, SLICE, room};
use super::slice::{Slice, Spent, Task, slice};
use super::small::all_dense;
use super::{EigenError, window};
use crate::progress::Watch;
use std::time::Instant;

/// Order and symbolic factor of a pair of sparsity patterns, kept between solves.
#[derive(Debug, Default)]
pub struct Plan {
    kept: Option<(Pattern, Symbolic)>,
}

impl Plan {
    /// An empty plan; the first solve fills it.
    pub fn new() -> Self {
        Self::default()
    }

    /// The analysis for a problem: the kept one when the patterns are the same.
    pub(super) fn ready<T: Field>(
        &mut self,
        problem: &Problem<'_, T>,
    ) -> Result<&(Pattern, Symbolic), EigenError> {
        let Problem {
            stiffness,
            mass,
            places,
            tail,
        } = *problem;
        match self.kept.take() {
            Some(kept) if kept.0.fits(stiffness, mass, tail) => Ok(self.kept.insert(kept)),
            _ => {
                let pattern = Pattern::new(stiffness, mass, places, tail)?;
                let symbolic = Symbolic::new(&pattern)?;
                Ok(self.kept.insert((pattern, symbolic)))
            }
        }
    }
}

/// Below this many unknowns the solve is dense (a choice: a Lanczos basis would hold most of the
/// space). (Above half of the spectrum it is taken too:
/// a Lanczos process has no room left there.)
const DENSE: usize = 96;

/// Vectors of a block. On splines with 20 levels blocks of 2, 4, 8 need 54, 72, 104 solves; 2 and 4
/// take the same time at 1 000 unknowns and 4 less at 16 000; 4 and 8 are even at 16 000 and 64 000.
const BLOCK: usize = 4;

/// The levels of `problem` in the window of `settings`, proved complete by their count.
///
/// # Errors
/// See [`EigenError`]. An incomplete result is not an error: see [`Count::complete`].
pub fn solve<T: Field>(
    problem: &Problem<'_, T>,
    settings: &Settings<'_, T>,
    watch: &Watch,
) -> Result<Found<T>, EigenError> {
    solve_with(&mut Plan::new(), problem, settings, watch)
}

/// [`solve`] with a plan that is reused while the sparsity patterns stay.
///
/// # Errors
/// See [`EigenError`].
pub fn solve_with<T: Field>(
    plan: &mut Plan,
    problem: &Problem<'_, T>,
    settings: &Settings<'_, T>,
    watch: &Watch,
) -> Result<Found<T>, EigenError> {
    let n = problem.stiffness.rows();
    check(settings, n)?;
    watch.step(0, settings.window.count(), "levels")?;
    wide::<T, BLOCK>(plan, problem, settings, watch)
}

/// The number of levels of `problem` below `shift`, by the inertia of K − shift·M.
///
/// # Errors
/// [`EigenError::Unstable`] when no factorisation within 3·10⁻⁹ of the shift passes its test
/// solve (which happens on a level), and those of a problem that does not fit together.
pub fn count_below<T: Field>(
    plan: &mut Plan,
    problem: &Problem<'_, T>,
    shift: f64,
) -> Result<usize, EigenError> {
    if !shift.is_finite() {
        let right = "a finite number";
        return Err(EigenError::Setting {
            name: "shift",
            value: shift,
            right,
        });
    }
    let (pattern, symbolic) = plan.ready(problem)?;
    let pencil = Pencil::new(pattern, problem.stiffness, problem.mass)?;
    let mut factor = Factor::<T>::new(symbolic);
    factor.at(&pencil, shift)?;
    Ok(factor.below)
}

fn check<T: Field>(settings: &Settings<'_, T>, n: usize) -> Result<(), EigenError> {
    let count = settings.window.count();
    if count == 0 {
        return Err(EigenError::NothingAsked);
    }
    if count > n && n > 0 {
        return Err(EigenError::TooMany {
            asked: count,
            available: n,
        });
    }
    let setting = |name, value, right| Err(EigenError::Setting { name, value, right });
    if !(1e-12..=1e-2).contains(&settings.tolerance) {
        return setting("tolerance", settings.tolerance, "between 1e-12 and 1e-2");
    }
    if !(1e-12..=1e-1).contains(&settings.cluster) {
        return setting("cluster", settings.cluster, "between 1e-12 and 0.1");
    }
    if let Window::From { value, .. } = settings.window
        && !value.is_finite()
    {
        return setting("window.value", value, "a finite number");
    }
    let start = settings.start.unwrap_or_default();
    if let Some(x) = start.iter().find(|x| x.len() != n) {
        let text = format!("a start vector of {} entries for {} unknowns", x.len(), n);
        return Err(EigenError::Shape(text));
    }
    Ok(())
}

fn wide<T: Field, const B: usize>(
    plan: &mut Plan,
    problem: &Problem<'_, T>,
    settings: &Settings<'_, T>,
    watch: &Watch,
) -> Result<Found<T>, EigenError> {
    let clock = Instant::now();
    let (pattern, symbolic) = plan.ready(problem)?;
    let plan_ms = clock.elapsed().as_secs_f64() * 1e3;
    let clock = Instant::now();
    let n = pattern.size();
    let count = settings.window.count();
    let pencil = Pencil::new(pattern, problem.stiffness, problem.mass)?;
    let small = n <= DENSE || count * 2 > n;
    let room = room::<T, B>(
        n,
        count,
        pattern.columns.len(),
        symbolic.length(),
        settings.memory,
        small,
    )?;
    let mut factor = Factor::<T>::new(symbolic);
    let mut spent = Spent::default();
    let lower = match settings.window {
        Window::Lowest(_) => BOTTOM,
        Window::From { value, .. } => {
            let clock = Instant::now();
            factor.at(&pencil, value - 1e-9 * value.abs())?;
            spent.factor_ms += clock.elapsed().as_secs_f64() * 1e3;
            Bound {
                value: factor.shift,
                below: factor.below,
            }
        }
    };
    if count > n - lower.below {
        return Err(EigenError::TooMany {
            asked: count,
            available: n - lower.below,
        });
    }
    let whole = if small {
        all_dense(&mut factor, &pencil, lower, settings, &mut spent)?
    } else {
        sliced::<T, B>(
            &mut factor,
            &pencil,
            lower,
            problem,
            settings,
            &room,
            watch,
            &mut spent,
        )?
    };
    let effort = Effort {
        solves: spent.solves,
        factorisations: factor.count,
        factor_length: symbolic.length(),
        memory: room.bytes,
        plan_ms,
        factor_ms: spent.factor_ms,
        solve_ms: clock.elapsed().as_secs_f64() * 1e3 - spent.factor_ms,
    };
    let mut levels = whole.levels;
    let rest = levels.split_off(count.min(levels.len()));
    let found = lower.below + levels.len() + rest.len();
    Ok(Found {
        first_index: lower.below + 1,
        beyond: rest.iter().map(|l| l.value).collect(),
        next: whole.next,
        count: Count {
            shift: whole.upper.value,
            below: whole.upper.below,
            found,
            complete: whole.complete && found == whole.upper.below && levels.len() == count,
            backward: whole.backward,
        },
        values: levels.iter().map(|l| l.value).collect(),
        residuals: levels.iter().map(|l| l.residual).collect(),
        vectors: levels.iter().map(|l| pencil.outward(&l.vector)).collect(),
        effort,
    })
}

#[allow(clippy::too_many_arguments)]
fn sliced<T: Field, const B: usize>(
    factor: &mut Factor<'_, T>,
    pencil: &Pencil<'_, T>,
    bottom: Bound,
    problem: &Problem<'_, T>,
    settings: &Settings<'_, T>,
    room: &Room,
    watch: &Watch,
    spent: &mut Spent,
) -> Result<Slice<T>, EigenError> {
    let count = settings.window.count();
    let mut all = Slice {
        levels: Vec::new(),
        upper: bottom,
        next: None,
        complete: true,
        backward: 0.0,
    };
    let last = window::top(
        settings,
        pencil,
        problem.places,
        problem.tail,
        bottom.below + count,
    );
    let mut width: Option<f64> = None;
    while all.levels.len() < count {
        let done = all.levels.len();
        let lower = all.upper;
        let want = room.slice.min(count - done);
        let base = if lower.value.is_finite() {
            lower.value
        } else {
            0.0
        };
        // Levels come about evenly (Weyl): the width of a slice follows the one before it.
        let share = want as f64 / (count - done) as f64;
        let top = match width {
            Some(width) => base + width * want as f64,
            None if bottom.below > 0 && (last.is_nan() || last <= base) => {
                base * (1.0 + want as f64 / bottom.below as f64)
            }
            None => base + (last - base) * share,
        };
        // Levels below the slice as far as the shift reaches.
        let reach = if lower.value.is_finite() {
            0.6 * (top - base)
        } else {
            0.0
        };
        let near = all
            .levels
            .iter()
            .rev()
            .take_while(|l| l.value > lower.value - reach)
            .take(SLICE);
        let known = lock::<T, B>(pencil, near);
        let start = settings
            .start
            .filter(|s| !s.is_empty())
            .map(|s| mix::<T, B>(pencil, s));
        let task = Task {
            lower,
            want,
            top,
            tolerance: settings.tolerance,
            cluster: settings.cluster,
            columns: room
                .columns
                .min(pencil.pattern.size() - known.v.len() * B - 2 * B),
            known,
            start,
            watch,
            done: (done, count),
        };
        let part = slice(factor, pencil, task, spent)?;
        if part.levels.is_empty() {
            all.complete = false;
            break;
        }
        width = Some((part.upper.value - base) / part.levels.len() as f64);
        all.levels.extend(part.levels);
        all.upper = part.upper;
        all.next = part.next;
        all.complete &= part.complete;
        all.backward = all.backward.max(part.backward);
    }
    Ok(all)
}

/// B sums of the caller's vectors, with fixed pseudo-random weights so that none cancels.
fn mix<T: Field, const B: usize>(
    pencil: &Pencil<'_, T>,
    vectors: &[Vec<T>],
) -> super::panel::Panel<T, B> {
    let n = pencil.pattern.size();
    let mut noise = super::pencil::Noise::new(3);
    let mut sums: Vec<Vec<T>> = vec![vec![T::default(); n]; B];
    for (i, x) in vectors.iter().enumerate() {
        let x = pencil.inward(x);
        let weight = 1.0 + 0.5 * noise.next();
        for (sum, &x) in sums[i % B].iter_mut().zip(&x) {
            *sum += x.scale(weight);
        }
    }
    for sum in sums.iter_mut().skip(vectors.len().min(B)) {
        for x in sum.iter_mut() {
            *x = T::from_parts(noise.next(), noise.next());
        }
    }
    gather(n, sums.iter().map(Vec::as_slice))
}
