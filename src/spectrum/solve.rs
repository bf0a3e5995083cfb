//! The loop: choose a lattice, solve, judge, refine.

use super::attempt::{ASYMMETRY, Attempt};
use super::level::{Certificate, LatticeInfo, Level, Spectrum, Timings, Wanted};
use super::model::Model;
use super::refine::{Next, next};
use super::{bars, weyl};
use crate::eigen::{EigenError, Window};
use crate::geometry::Outline;
use crate::lattice::{Demand, LatticeError, Plan};
use crate::modes::Modes;
use crate::progress::{Cancelled, Watch};
use std::sync::Arc;

/// Why there is no spectrum.
#[derive(Debug, thiserror::Error)]
pub enum SpectrumError {
    /// Called off.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
    /// The request cannot be met by any lattice that fits the machine; the message says what would.
    #[error("{0}")]
    TooMuch(String),
    /// The machine's fault: the factorisation or the iteration failed.
    #[error("{0}")]
    Numerical(String),
}

impl From<LatticeError> for SpectrumError {
    fn from(e: LatticeError) -> Self {
        Self::Numerical(e.to_string())
    }
}

impl From<EigenError> for SpectrumError {
    fn from(e: EigenError) -> Self {
        match e {
            EigenError::Cancelled(c) => Self::Cancelled(c),
            other => Self::Numerical(other.to_string()),
        }
    }
}

/// Degree taken unless the user insists.
pub const DEGREE: usize = 5;
/// Attempts before the best answer is given with its own, larger bar.
const ATTEMPTS: usize = 8;
/// Most unknowns of one problem; p = 5 needs about 10 kB each.
const MOST_UNKNOWNS: f64 = 1.2e6;

/// Accuracy of a draft.
const DRAFT: f64 = 1e-4;

/// The levels of a model, as exact as asked for.
///
/// # Errors
/// See [`SpectrumError`].
pub fn solve(model: &Model, wanted: &Wanted, watch: &Watch) -> Result<Spectrum, SpectrumError> {
    refined(model, wanted, ATTEMPTS, watch)
}

/// Levels while an edit is under way: one coarse lattice, whatever error bars it gives.
///
/// # Errors
/// See [`SpectrumError`].
pub fn draft(model: &Model, wanted: &Wanted, watch: &Watch) -> Result<Spectrum, SpectrumError> {
    let rough = Wanted {
        accuracy: wanted.accuracy.max(DRAFT),
        cell: None,
        degree: None,
        ..wanted.clone()
    };
    refined(model, &rough, 1, watch)
}

fn refined(
    model: &Model,
    wanted: &Wanted,
    attempts: usize,
    watch: &Watch,
) -> Result<Spectrum, SpectrumError> {
    let (outline, kinetic) = (&model.outline, model.kinetic);
    let (area, perimeter) = (outline.area(), outline.perimeter());
    let from = wanted.from.map(|e| e / kinetic);
    let below = from.map_or(0.0, |l| weyl::count(area, perimeter, l));
    let top = weyl::level(area, perimeter, below + wanted.count as f64 + 1.5);
    let mut demand = Demand {
        wave_number: top.sqrt(),
        accuracy: wanted.accuracy,
        cell: wanted.cell,
        degree: wanted.degree.unwrap_or(DEGREE),
        finer: 1.0,
        round: 0,
    };
    let window = match from {
        None => Window::Lowest(wanted.count),
        Some(value) => Window::From {
            value,
            count: wanted.count,
        },
    };
    let mut timings = Timings::default();
    let mut plan = Plan::new(outline, &demand);
    let mut extra = Vec::new();
    for round in 0..attempts {
        let cells = area / plan.grid.h.powi(2) + perimeter / plan.grid.h;
        if cells > MOST_UNKNOWNS {
            return Err(SpectrumError::TooMuch(format!(
                "this needs about {cells:.1e} unknowns; ask for fewer levels, a lower accuracy or \
                 a larger cell"
            )));
        }
        watch.step(round, attempts, "lattices")?;
        let attempt = Attempt::new(outline, plan.clone(), window, top, &mut timings, watch)?;
        let step = next(&attempt, wanted.accuracy);
        if std::env::var("DBG").is_ok() {
            eprintln!(
                "round {round} h {:.3} n {} regions {} corners {} raw {} stiff {} worst {:.1e} {} | {:?}",
                plan.grid.h,
                attempt.unknowns,
                attempt.lattice.regions.len(),
                plan.corners.len(),
                attempt.functions.corners.len() / attempt.functions.count.max(1),
                attempt.lattice.stiffening,
                attempt
                    .bars
                    .iter()
                    .map(|b| b.1 / b.0.abs())
                    .fold(0.0, f64::max),
                match &step {
                    Next::Done => "done".into(),
                    Next::Finer(f) => format!("finer {f:.2}"),
                    Next::Split(c) => format!("split {}", c.len()),
                },
                timings
            );
        }

        let insisted = wanted.cell.is_some();
        if step == Next::Done || insisted || round + 1 == attempts {
            return Ok(finish(outline, kinetic, wanted, attempt, timings));
        }
        match step {
            Next::Finer(factor) => {
                demand.round += 1;
                demand.finer *= factor;
                plan = Plan::new(outline, &demand);
                extra.clear();
            }
            Next::Split(cells) => {
                extra.extend(cells);
                for c in &extra {
                    plan.splits.split(*c);
                }
            }
            Next::Done => {}
        }
    }
    Err(SpectrumError::Numerical(
        "no lattice was good enough".into(),
    ))
}

fn finish(
    outline: &Outline,
    kinetic: f64,
    wanted: &Wanted,
    mut a: Attempt,
    timings: Timings,
) -> Spectrum {
    let beyond: Vec<f64> = a.found.beyond.iter().copied().chain(a.found.next).collect();
    sort(&mut a);
    let groups = bars::multiplicities(&a.bars, &beyond);
    let lattice = LatticeInfo {
        cell: a.lattice.trace.grid.h,
        finest: a.lattice.finest(),
        degree: a.lattice.degree,
        unknowns: a.unknowns,
        inside: a.lattice.regions.iter().map(|r| r.inside.len()).sum(),
        cut: a.lattice.regions.iter().map(|r| r.cuts.len()).sum(),
    };
    let mut modes = Modes::new(
        outline.clone(),
        Arc::new(a.lattice),
        Arc::new(a.corners),
        a.functions,
    );
    let labels = modes.settle(&groups);
    let levels: Vec<Level> = a
        .bars
        .iter()
        .enumerate()
        .map(|(k, b)| Level {
            index: a.found.first_index + k,
            energy: kinetic * b.0,
            error: kinetic * b.1,
            multiplicity: groups[k],
            residual: a.found.residuals[k],
            label: labels[k].clone(),
        })
        .collect();
    let mut notes = Vec::new();
    let worst = a.bars.iter().map(|b| b.1 / b.0.abs()).fold(0.0, f64::max);
    if worst > wanted.accuracy {
        notes.push(format!(
            "the accuracy asked for, {:.0e}, was not reached everywhere: the largest relative \
             error bar is {worst:.0e}",
            wanted.accuracy
        ));
    }
    if a.asymmetry > ASYMMETRY {
        notes.push(format!(
            "the corner functions are integrated to {:.0e} only",
            a.asymmetry
        ));
    }
    if !a.found.count.complete {
        notes.push("the count of levels could not be certified".into());
    }
    let certificate = Certificate {
        shift: kinetic * a.found.count.shift,
        below: a.found.count.below,
        found: a.found.count.found,
        complete: a.found.count.complete,
    };
    Spectrum {
        levels,
        modes,
        lattice,
        certificate,
        timings,
        notes,
    }
}

/// Puts levels in order again: the correction by η² may swap neighbours within their bars.
fn sort(a: &mut Attempt) {
    let mut order: Vec<usize> = (0..a.bars.len()).collect();
    order.sort_by(|&i, &j| a.bars[i].0.total_cmp(&a.bars[j].0));
    if order.is_sorted() {
        return;
    }
    let count = a.functions.count;
    let columns = |v: &[f64]| -> Vec<f64> {
        v.chunks_exact(count)
            .flat_map(|row| order.iter().map(|&k| row[k]))
            .collect()
    };
    for s in &mut a.functions.splines {
        *s = columns(s);
    }
    a.functions.corners = columns(&a.functions.corners);
    a.bars = order.iter().map(|&k| a.bars[k]).collect();
    a.found.residuals = order.iter().map(|&k| a.found.residuals[k]).collect();
}
