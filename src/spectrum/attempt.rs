//! One solve on one lattice.

use super::bars;
use super::system::System;
use super::tail::Tail;
use super::{SpectrumError, Timings};
use crate::eigen::{self, Found, Problem, Settings, Window};
use crate::geometry::Outline;
use crate::lattice::{CornerSpace, Lattice, Plan};
use crate::operators::{self, Border, Functions, Pair, Residual, assemble, residual};
use crate::progress::Watch;
use std::time::Instant;

/// What one lattice gave.
pub struct Attempt {
    /// The lattice.
    pub lattice: Lattice,
    /// Corner functions used.
    pub corners: Vec<CornerSpace>,
    /// From the eigensolver.
    pub found: Found<f64>,
    /// The modes, ∫u² = 1.
    pub functions: Functions,
    /// Residuals.
    pub residual: Residual,
    /// Value and error of each level, λ.
    pub bars: Vec<(f64, f64)>,
    /// Unknowns in all.
    pub unknowns: usize,
    /// |S − Sᵀ|/|S| of the corner functions.
    pub asymmetry: f64,
}

/// The penalty is raised up to this factor where the form is not coercive.
const STIFFEST: f64 = 30.0;
/// Above this the quadrature of the corner functions is not to be trusted.
pub const ASYMMETRY: f64 = 1e-8;
/// Largest factor, bytes.
const MEMORY: u64 = 12_000_000_000;
/// Relative residual the eigensolver stops at; the level's error is of its square.
const TOLERANCE: f64 = 1e-7;

impl Attempt {
    /// Assembles and solves.
    pub fn new(
        outline: &Outline,
        plan: Plan,
        window: Window,
        guess: f64,
        timings: &mut Timings,
        watch: &Watch,
    ) -> Result<Self, SpectrumError> {
        let clock = Instant::now();
        let mut lattice = Lattice::new(outline, plan.grid, plan.degree, &plan.splits)?;
        let places = lattice.places();
        timings.lattice += ms(clock);
        let (border, tail, system, found) = loop {
            let clock = Instant::now();
            let pair = assemble(&lattice, watch)?;
            let border = operators::border(&lattice, plan.corners.clone());
            timings.operators += ms(clock);
            let clock = Instant::now();
            // without corner functions the count of levels shows whether the form is coercive
            let known = border.is_empty() && matches!(window, Window::Lowest(_));
            let (mut coercive, tail) = if known {
                (true, Tail::default())
            } else {
                prepare(&pair, &border, &places)?
            };
            timings.factor += ms(clock);
            if coercive {
                let (system, found) = levels(pair, &tail, &places, window, guess, timings, watch)?;
                let sound = found.count.complete && found.values.iter().all(|&v| v > 0.0);
                if known && !sound {
                    coercive =
                        eigen::with_inverse(&system.stiffness, &places, MEMORY, |below, _| {
                            below == 0
                        })?;
                }
                if coercive {
                    break (border, tail, system, found);
                }
            }
            if lattice.stiffening > STIFFEST {
                return Err(SpectrumError::Numerical(
                    "the wall could not be held on this lattice; a smaller [solve] cell would help"
                        .into(),
                ));
            }
            lattice.stiffening *= 2.0;
        };
        let clock = Instant::now();
        let functions = system.functions(&lattice, &tail, &found.vectors);
        let residual = residual(&lattice, &border.corners, &functions, &found.values);
        let bars = (0..found.values.len())
            .map(|i| bars::bar(found.values[i], residual.total[i], found.residuals[i]))
            .collect();
        timings.solve += ms(clock);
        Ok(Self {
            unknowns: system.places.len(),
            corners: border.corners,
            asymmetry: border.asymmetry,
            lattice,
            found,
            functions,
            residual,
            bars,
        })
    }
}

/// The eigenvalue problem of a lattice, and its levels.
fn levels(
    pair: Pair,
    tail: &Tail,
    places: &[[f64; 2]],
    window: Window,
    guess: f64,
    timings: &mut Timings,
    watch: &Watch,
) -> Result<(System, Found<f64>), SpectrumError> {
    let clock = Instant::now();
    let system = System::new(pair, tail, places.to_vec());
    timings.operators += ms(clock);
    let problem = Problem {
        stiffness: &system.stiffness,
        mass: &system.mass,
        places: &system.places,
        tail: system.tail,
    };
    let settings = Settings {
        tolerance: TOLERANCE,
        guess: Some(guess),
        memory: MEMORY,
        ..Settings::new(window)
    };
    let found = eigen::solve(&problem, &settings, watch)?;
    timings.factor += found.effort.plan_ms + found.effort.factor_ms;
    timings.solve += found.effort.solve_ms;
    Ok((system, found))
}

/// Whether the stiffness is positive definite, and the corner functions made orthogonal by it.
fn prepare(
    pair: &Pair,
    border: &Border,
    places: &[[f64; 2]],
) -> Result<(bool, Tail), SpectrumError> {
    let shape = (pair.len(), pair.len());
    let k = sprs::CsMat::new(
        shape,
        pair.starts.clone(),
        pair.columns.clone(),
        pair.stiffness.clone(),
    );
    let tail = eigen::with_inverse(&k, places, MEMORY, |negative, solve| {
        if negative > 0 {
            return Ok((false, Tail::default()));
        }
        let tail = Tail::new(pair, border, |b, count| {
            solve(b, count);
            Ok(())
        })?;
        Ok::<_, eigen::EigenError>((true, tail))
    })??;
    Ok(tail)
}

fn ms(since: Instant) -> f64 {
    since.elapsed().as_secs_f64() * 1e3
}
