//! The outline of a document, step by step.

use super::fault::Fault;
use super::figure;
use super::model::{Operation, Step};
use super::read::Model;
use crate::geometry::{self, GeometryError, Outline, Remark};
use crate::intake::{IntakeError, Taken};
use std::collections::HashMap;
use std::ops::Range;
use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::SystemTime;

/// The outline of a document, and remarks on how it came about.
#[derive(Clone, Debug, PartialEq)]
pub struct ShapeOutline {
    /// The outline.
    pub outline: Outline,
    /// Remarks for the reader.
    pub notes: Vec<String>,
}

/// Makes the outline: every step in turn, then rounding, then growing.
pub(super) fn outline(
    model: &Model,
    folder: &Path,
    traces: &Traces,
) -> Result<ShapeOutline, Vec<Fault>> {
    let mut faults = Vec::new();
    let mut notes = Vec::new();
    let mut figures = Vec::new();
    for (k, step) in model.steps.iter().enumerate() {
        match figure::placed(step, folder, traces, &mut notes) {
            Ok(figure) => figures.push(figure),
            Err(error) => faults.push(fault(&title(k, step), step.span.clone(), &error)),
        }
    }
    if !faults.is_empty() {
        return Err(faults);
    }
    let mut whole = Outline::default();
    for (k, (step, figure)) in model.steps.iter().zip(&figures).enumerate() {
        let operation = match step.operation {
            Operation::Add => geometry::Operation::Add,
            Operation::Cut => geometry::Operation::Cut,
            Operation::Keep => geometry::Operation::Keep,
        };
        let (next, remark) = whole
            .combined(operation, figure)
            .map_err(|e| vec![fault(&title(k, step), step.span.clone(), &e.into())])?;
        // Whether parts remain apart is said of the finished outline: a later step may join them.
        if let Some(remark) = remark.filter(|r| *r != Remark::AddedApart) {
            notes.push(format!("{}: {remark}", title(k, step)));
        }
        whole = next;
    }
    let finish = &model.finish;
    if finish.round > 0.0 {
        whole = whole
            .rounded(finish.round)
            .map_err(|e| vec![fault("rounding", model.round.clone(), &e.into())])?;
    }
    if finish.grow != 0.0 {
        whole = whole
            .grown(finish.grow)
            .map_err(|e| vec![fault("growing", model.grow.clone(), &e.into())])?;
    }
    let parts = whole.components().len();
    if parts > 1 {
        notes.push(format!(
            "the outline falls into {parts} separate parts; their levels are listed together"
        ));
    }
    Ok(ShapeOutline {
        outline: whole,
        notes,
    })
}

/// "step 2 (ring)".
fn title(k: usize, step: &Step) -> String {
    format!("step {} ({})", k + 1, step.figure.word())
}

/// Why a figure cannot be made.
#[derive(Debug, thiserror::Error)]
pub(super) enum FigureError {
    #[error(transparent)]
    Geometry(#[from] GeometryError),
    #[error("{0}")]
    File(String),
    #[error("{copies} copies of {pieces} pieces are more than {most}")]
    TooMany {
        copies: usize,
        pieces: usize,
        most: usize,
    },
}

fn fault(title: &str, span: Range<usize>, error: &FigureError) -> Fault {
    let remedy = match error {
        FigureError::Geometry(e) => match e {
            GeometryError::NothingLeft { .. } => "check its place and size, or remove the step",
            GeometryError::EdgesCross { .. } | GeometryError::DuplicatePoints { .. } => {
                "list every vertex once, in order along the edge"
            }
            GeometryError::NoArea => "the points must span an area",
            GeometryError::NoRoomToRound { .. } => "choose a smaller radius",
            _ => "",
        },
        FigureError::TooMany { .. } => "repeat less, or simplify the figure",
        FigureError::File(_) => "",
    };
    Fault {
        span: Some(span),
        what: format!("{title}: {error}"),
        remedy: remedy.to_owned(),
    }
}

/// Traces of pictures and point lists, kept as long as their files do not change: the desk makes
/// the outline anew after every key.
#[derive(Clone, Debug, Default)]
pub(super) struct Traces(Arc<Mutex<HashMap<Key, (Stamp, Taken)>>>);

/// A file, and how it was read.
type Key = (PathBuf, String);
/// Time of the last change, and size.
type Stamp = (Option<SystemTime>, u64);

impl Traces {
    /// The trace of `path` read as `how`, made by `make` unless it is here already.
    pub(super) fn get(
        &self,
        path: &Path,
        how: &str,
        make: impl FnOnce() -> Result<Taken, IntakeError>,
    ) -> Result<Taken, FigureError> {
        let stamp = std::fs::metadata(path).map_or((None, 0), |m| (m.modified().ok(), m.len()));
        let key = (path.to_owned(), how.to_owned());
        let lock = || self.0.lock().unwrap_or_else(PoisonError::into_inner);
        if let Some((known, taken)) = lock().get(&key)
            && *known == stamp
        {
            return Ok(taken.clone());
        }
        let taken = make().map_err(|e| FigureError::File(e.to_string()))?;
        lock().insert(key, (stamp, taken.clone()));
        Ok(taken)
    }
}
