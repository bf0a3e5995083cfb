//! The window, slice by slice: a shift in its middle, Lanczos, and a count in the gap above it.

use super::dense;
use super::factor::{Factor, Plan, TRUSTED};
use super::lanczos::{Lanczos, Ritz};
use super::{EigenError, Found, Number, Problem, Settings, Window};
use crate::progress::Watch;
use std::time::Instant;

/// Most levels of one slice: beyond, the basis outgrows the factor.
const SLICE: usize = 120;
/// Levels computed above the last one, to see a gap.
const EXTRA: usize = 3;
/// A gap counts as one when it is this wide, relative to the level.
const GAP: f64 = 1e-6;

/// The levels of a window.
///
/// # Errors
/// See [`EigenError`].
pub fn solve<T: Number>(
    problem: &Problem<'_, T>,
    settings: &Settings<'_, T>,
    watch: &Watch,
) -> Result<Found<T>, EigenError> {
    check(problem)?;
    let n = problem.stiffness.rows();
    let count = match settings.window {
        Window::Lowest(c) | Window::From { count: c, .. } => c,
    };
    if count == 0 || count > n {
        return Err(EigenError::TooMany {
            asked: count,
            unknowns: n,
        });
    }
    if n <= dense::SMALL || 3 * count + 20 > n {
        return dense::solve(problem, settings.window);
    }
    let clock = Instant::now();
    let plan = Plan::new(
        problem.stiffness,
        problem.places,
        problem.tail,
        settings.memory,
    )?;
    let mut work = Work {
        problem,
        settings,
        plan: &plan,
        watch,
        out: Found {
            first_index: 1,
            complete: true,
            ..Found::default()
        },
        factor_ms: clock.elapsed().as_secs_f64() * 1e3,
    };
    work.slices(count)?;
    let mut out = work.out;
    out.factor_ms = work.factor_ms;
    out.solve_ms = clock.elapsed().as_secs_f64() * 1e3 - out.factor_ms;
    Ok(out)
}

fn check<T: Number>(p: &Problem<'_, T>) -> Result<(), EigenError> {
    let (k, m) = (p.stiffness, p.mass);
    let ill = |s: &str| Err(EigenError::IllPosed(s.into()));
    if k.rows() != k.cols() || k.shape() != m.shape() || p.places.len() != k.rows() {
        return ill("shapes differ");
    }
    if k.indices() != m.indices() {
        return ill("stiffness and mass are not on one pattern");
    }
    let finite = |v: &[T]| v.iter().all(|v| crate::units::Scalar::abs2(*v).is_finite());
    if !finite(k.data()) || !finite(m.data()) {
        return ill("an entry is not a number");
    }
    Ok(())
}

struct Work<'a, T: Number> {
    problem: &'a Problem<'a, T>,
    settings: &'a Settings<'a, T>,
    plan: &'a Plan,
    watch: &'a Watch,
    out: Found<T>,
    factor_ms: f64,
}

/// A value with the number of levels below it.
#[derive(Clone, Copy)]
struct Mark {
    value: f64,
    below: usize,
}

impl<'a, T: Number> Work<'a, T> {
    /// A trusted factor near a shift; moves the shift within `room` of it when need be.
    fn factor(&mut self, shift: f64, room: f64) -> Result<(f64, Factor<'a, T>), EigenError> {
        let clock = Instant::now();
        let mut last = None;
        for step in [0.0, 0.31, -0.29, 0.63, -0.67] {
            let s = shift + step * room;
            let b = (s != 0.0).then_some((self.problem.mass, s));
            self.out.factorisations += 1;
            match Factor::new(self.plan, self.problem.stiffness, b) {
                Ok(f) if f.trust <= TRUSTED => {
                    last = Some((s, f));
                    break;
                }
                _ => {}
            }
        }
        self.factor_ms += clock.elapsed().as_secs_f64() * 1e3;
        last.ok_or_else(|| EigenError::Failed(format!("no stable factorisation near {shift:.6e}")))
    }

    fn slices(&mut self, count: usize) -> Result<(), EigenError> {
        let mut mark = match self.settings.window {
            Window::Lowest(_) => Mark {
                value: 0.0,
                below: 0,
            },
            Window::From { value, .. } => {
                let (s, f) = self.factor(value * (1.0 - 1e-12), 1e-11 * value.abs())?;
                Mark {
                    value: s,
                    below: f.negative,
                }
            }
        };
        let first = mark.below;
        self.out.first_index = first + 1;
        // mean distance of levels, for the next slice's shift
        let mut density = self
            .settings
            .guess
            .map(|g| count as f64 / (g - mark.value).max(1e-300));
        while self.out.values.len() < count {
            let want = (count - self.out.values.len()).min(SLICE);
            let bottom =
                self.out.values.is_empty() && matches!(self.settings.window, Window::Lowest(_));
            let start = self.out.values.len();
            mark = self.slice(mark, bottom, want, density)?;
            let got = self.out.values.len() - start;
            let (a, b) = (self.out.values[start], self.out.values[start + got - 1]);
            if got > 1 && b > a {
                density = Some(got as f64 / (b - a));
            }
            self.watch
                .step(self.out.values.len().min(count), count, "levels")?;
        }
        self.out.shift = mark.value;
        self.out.below = mark.below;
        self.out.found = first + self.out.values.len();
        self.out.complete = self.out.below == self.out.found;
        let rest = self.out.values.split_off(count);
        self.out.beyond.splice(0..0, rest);
        self.out.vectors.truncate(count);
        self.out.residuals.truncate(count);
        Ok(())
    }

    /// Levels from `low` on, at least `want` of them, up to a gap; returns the gap's mark.
    fn slice(
        &mut self,
        low: Mark,
        bottom: bool,
        want: usize,
        density: Option<f64>,
    ) -> Result<Mark, EigenError> {
        let (shift, mut factor) = self.middle(low, bottom, want, density)?;
        let inside = factor.negative - low.below.min(factor.negative);
        let n = self.problem.stiffness.rows();
        let mut extra = EXTRA;
        for attempt in 0..5 {
            let above = (want + extra).saturating_sub(inside).max(1);
            let b = block(n, attempt);
            let cap = (4 * (inside + above) + 60).min(n);
            let start = if attempt == 0 {
                self.settings.start.unwrap_or(&[])
            } else {
                &[]
            };
            let mut lanczos = Lanczos::new(self.problem.mass, shift, b, cap, start)?;
            let tolerance = self.settings.tolerance;
            let low_value = if bottom { f64::NEG_INFINITY } else { low.value };
            let pairs = lanczos.run(&mut factor, inside + above, self.watch, |p| {
                let (a, b) = converged(p, low_value, shift, inside, above, tolerance);
                (a + b, inside + above)
            })?;
            self.out.solves += lanczos.solves;
            let mut list: Vec<&Ritz> = pairs
                .iter()
                .filter(|r| r.value > low_value && r.residual <= tolerance * 10.0)
                .collect();
            list.sort_by(|a, b| a.value.total_cmp(&b.value));
            list.truncate(inside + above);
            if list.len() < want {
                continue;
            }
            let Some(gap) = gap(&list, want) else {
                extra = 4 * extra + 8;
                continue;
            };
            let (a, b) = (list[gap - 1].value, list[gap].value);
            let (s, f) = self.factor(0.5 * (a + b), 0.3 * (b - a))?;
            let complete = f.negative == low.below + gap;
            if complete || attempt == 4 {
                self.keep(&lanczos, &list, gap, shift);
                return Ok(Mark {
                    value: s,
                    below: f.negative,
                });
            }
            // a copy was missed: wider blocks, new noise
            extra += 2;
        }
        Err(EigenError::Failed(
            "the levels of a window could not be separated".into(),
        ))
    }

    fn keep(&mut self, lanczos: &Lanczos<'_, T>, list: &[&Ritz], gap: usize, shift: f64) {
        let n = self.problem.stiffness.rows();
        let vectors = lanczos.vectors(&list[..gap]);
        for (k, r) in list[..gap].iter().enumerate() {
            self.out.values.push(r.value);
            self.out
                .residuals
                .push(r.residual * ((r.value - shift) / r.value).abs().max(1e-30));
            self.out.vectors.push(vectors[k * n..(k + 1) * n].to_vec());
        }
        self.out.beyond = list[gap..].iter().map(|r| r.value).collect();
    }

    /// A factor at a shift with a good share of the wanted levels below it.
    fn middle(
        &mut self,
        low: Mark,
        bottom: bool,
        want: usize,
        density: Option<f64>,
    ) -> Result<(f64, Factor<'a, T>), EigenError> {
        let Some(density) = density else {
            return if bottom {
                self.factor(0.0, 0.0)
            } else {
                self.factor(low.value * 1.01, 1e-3 * low.value.abs())
            };
        };
        let mut reach = 0.55 * want as f64 / density;
        for tries in 0..6 {
            let (s, f) = self.factor(low.value + reach, 0.02 * reach)?;
            let inside = f.negative.saturating_sub(low.below);
            let share = inside as f64 / want as f64;
            if want <= 3 && inside <= want || (0.2..=0.85).contains(&share) || tries == 5 {
                return Ok((s, f));
            }
            reach *= (0.5 / share.max(0.05)).clamp(0.3, 3.0);
        }
        self.factor(0.0, 0.0)
    }
}

/// Vectors of a block: wider ones make better use of the factor once it leaves the cache.
fn block(n: usize, attempt: usize) -> usize {
    let b = if n <= 4_000 {
        3
    } else if n <= 30_000 {
        4
    } else {
        8
    };
    b + 3 * attempt
}

/// Converged pairs between `low` and the shift (at most `inside`), and in an unbroken row above it
/// (at most `above`).
fn converged(
    pairs: &[Ritz],
    low: f64,
    shift: f64,
    inside: usize,
    above: usize,
    tolerance: f64,
) -> (usize, usize) {
    let below = pairs
        .iter()
        .filter(|r| r.value > low && r.value < shift && r.residual <= tolerance)
        .count();
    let mut over: Vec<&Ritz> = pairs.iter().filter(|r| r.value > shift).collect();
    over.sort_by(|a, b| a.value.total_cmp(&b.value));
    let row = over.iter().take_while(|r| r.residual <= tolerance).count();
    (below.min(inside), row.min(above))
}

/// The first gap at or after `want` levels, or the widest of those seen.
fn gap(list: &[&Ritz], want: usize) -> Option<usize> {
    (want..list.len()).find(|&g| {
        let (a, b) = (list[g - 1].value, list[g].value);
        b - a > GAP * b.abs()
    })
}
