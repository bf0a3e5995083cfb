//! Placeholder of the solve loop: box modes on the bounding box, until the rooms below stand.

use super::level::{Certificate, LatticeInfo, Level, Spectrum, Timings, Wanted};
use crate::geometry::Outline;
use crate::modes::Modes;
use crate::progress::{Cancelled, Watch};

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

/// The levels of `outline`; `kinetic` is ħ²/2m in energy × length², 1 for reduced shapes.
/// `warm`: a spectrum of a similar outline, whose modes speed up the solve.
///
/// # Errors
/// See [`SpectrumError`].
pub fn solve(
    outline: &Outline,
    kinetic: f64,
    wanted: &Wanted,
    warm: Option<&Spectrum>,
    watch: &Watch,
) -> Result<Spectrum, SpectrumError> {
    let _ = warm;
    watch.step(0, 1, "levels")?;
    let b = outline.bounds();
    let (w, h) = (b.size().x, b.size().y);
    let mut all = Vec::new();
    for i in 1..=wanted.count {
        for j in 1..=wanted.count {
            let (a, c) = (i as f64 / w, j as f64 / h);
            all.push((
                kinetic * std::f64::consts::PI.powi(2) * (a * a + c * c),
                i,
                j,
            ));
        }
    }
    all.sort_by(|a, b| a.0.total_cmp(&b.0));
    all.truncate(wanted.count);
    Ok(Spectrum {
        levels: all
            .iter()
            .enumerate()
            .map(|(k, &(energy, i, j))| Level {
                index: k + 1,
                energy,
                error: 1e-7 * energy,
                multiplicity: 1,
                residual: 1e-12,
                label: Some(format!("nx={i} ny={j}")),
            })
            .collect(),
        modes: Modes::placeholder(outline.clone(), all.iter().map(|a| (a.1, a.2)).collect()),
        lattice: LatticeInfo {
            cell: w / 20.0,
            finest: w / 20.0,
            degree: 5,
            unknowns: 625,
            inside: 400,
            cut: 80,
        },
        certificate: Certificate {
            shift: all.last().map_or(0.0, |a| a.0) * 1.01,
            below: wanted.count,
            found: wanted.count,
            complete: true,
        },
        timings: Timings::default(),
        notes: vec!["placeholder".into()],
    })
}

/// Quick levels after a small edit, from the modes of the outline before it (relative error about
/// 1e-5, no certificate).
///
/// # Errors
/// See [`SpectrumError`].
pub fn draft(
    outline: &Outline,
    kinetic: f64,
    wanted: &Wanted,
    before: &Spectrum,
    watch: &Watch,
) -> Result<Spectrum, SpectrumError> {
    solve(outline, kinetic, wanted, Some(before), watch)
}
