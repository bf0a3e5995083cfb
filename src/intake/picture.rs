//! Outlines from a PNG mask.

use super::fit::Trace;
use super::grey::GreyMap;
use super::trace::{area, contours};
use super::{IntakeError, Taken, loops};
use crate::geometry::Outline;
use std::path::Path;

/// Contours of a smaller area, in pixels, are specks.
const LEAST_AREA: f64 = 6.0;
/// More contours than this are noise.
const MOST_LOOPS: usize = 5_000;

/// How a mask is to be read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading {
    /// Side of a pixel, in units of length.
    pub pixel: f64,
    /// Grey at the edge: 0 is the darkest of the picture, 1 the brightest.
    pub level: f64,
    /// Which side is the shape.
    pub inside: Inside,
    /// How far the outline may keep from the traced edge, in pixels; `None`: 0.1 for a mask with
    /// grey levels at its edges, 0.9 for one of black and white only.
    pub smooth: Option<f64>,
}

/// Which side of the grey level is the shape.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Inside {
    /// What is brighter.
    Bright,
    /// What is darker.
    Dark,
}

/// The outline in a PNG mask: its lower left corner is the origin, y points up.
///
/// # Errors
/// See [`IntakeError`].
pub fn picture(path: &Path, reading: &Reading) -> Result<Taken, IntakeError> {
    let mut map = GreyMap::read(path)?;
    if reading.inside == Inside::Dark {
        map = map.inverted();
    }
    let noise = || IntakeError::Noise {
        path: path.to_owned(),
        loops: MOST_LOOPS,
    };
    let level = match reading.inside {
        Inside::Bright => reading.level,
        Inside::Dark => 1.0 - reading.level,
    };
    let mut found = contours(&map, level).ok_or_else(noise)?;
    let all = found.len();
    found.retain(|c| area(c).abs() >= LEAST_AREA);
    let specks = all - found.len();
    if found.len() > MOST_LOOPS {
        return Err(noise());
    }
    if !found.iter().any(|c| area(c) > 0.0) {
        return Err(IntakeError::NothingTraced {
            path: path.to_owned(),
            level: reading.level,
            least: LEAST_AREA,
        });
    }
    let mut notes = Vec::new();
    if specks > 0 {
        notes.push(format!(
            "{}: {specks} speck(s) smaller than {LEAST_AREA} pixels left out",
            path.display()
        ));
    }
    let length: f64 = found.iter().map(|c| c.len() as f64).sum();
    // An edge of grey pixels has about one of them per pixel of length; on edges along the axes
    // they may all be full or empty, and need none.
    let grey = map.between() as f64 > 0.2 * length;
    if !grey {
        notes.push(format!(
            "{}: black and white only, so the edge is known to about half a pixel ({} units)",
            path.display(),
            0.5 * reading.pixel
        ));
    }
    let mut trace = if grey { Trace::GREY } else { Trace::STEPS };
    if let Some(tolerance) = reading.smooth {
        trace = trace.loosened(tolerance);
    }
    let fitted = loops::fitted(&found, &trace);
    notes.extend(
        fitted
            .notes
            .iter()
            .map(|n| format!("{}: {n}", path.display())),
    );
    let outline = Outline {
        loops: fitted
            .outline
            .loops
            .iter()
            .map(|l| loops::scaled(l, reading.pixel))
            .collect(),
    };
    Ok(Taken { outline, notes })
}
