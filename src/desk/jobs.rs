//! What happens to the desk, and what it has others do.

use super::document::Document;
use super::keys::Key;
use super::portrait::Portrait;
use super::state::{Mount, Picture, Show};
use crate::progress::Step;
use crate::spectrum::Spectrum;
use std::path::PathBuf;
use std::sync::Arc;
use std::time::Duration;

/// Everything that can change the state.
#[derive(Debug)]
pub enum Action {
    /// The desk is opened.
    Begin,
    /// A key was pressed.
    Key(Key),
    /// The screen has this size in cells; `aspect` is height over width of a cell.
    Resize {
        /// Columns.
        columns: u16,
        /// Rows.
        rows: u16,
        /// Height over width of a cell.
        aspect: f64,
    },
    /// Time since the start.
    Tick(Duration),
    /// A solve got on.
    Step {
        /// Of which solve.
        generation: u64,
        /// How far.
        step: Step,
    },
    /// A solve ended.
    Solved {
        /// Which.
        generation: u64,
        /// The levels, or why not.
        result: Result<Box<Spectrum>, String>,
    },
    /// A mode was sampled.
    Taken {
        /// Of which solve.
        generation: u64,
        /// On which mount.
        mount: Arc<Mount>,
        /// Which mode, from 0.
        mode: usize,
        /// The picture.
        picture: Box<Picture>,
    },
    /// A mode was measured.
    Measured {
        /// Of which solve.
        generation: u64,
        /// Which mode, from 0.
        mode: usize,
        /// The figures; none for a mode that is 0 everywhere.
        portrait: Option<Portrait>,
    },
    /// A picture was written, or why not.
    Exported(Result<PathBuf, String>),
    /// A worker broke down.
    Broken(String),
    /// The terminal is gone or a signal says to leave.
    Leave,
}

/// Everything the desk has others do. A new job of a kind replaces the one under way.
#[derive(Clone, Debug)]
pub enum Job {
    /// Find the levels.
    Solve {
        /// Number of the solve.
        generation: u64,
        /// Of what.
        document: Arc<Document>,
    },
    /// Sample modes for pictures, and measure them.
    Take {
        /// Number of the solve the modes are of.
        generation: u64,
        /// The modes.
        spectrum: Arc<Spectrum>,
        /// Outline as closed polylines.
        lines: Arc<Vec<Vec<crate::geometry::Point>>>,
        /// Where they fall.
        mount: Arc<Mount>,
        /// Which, from 0, in this order.
        modes: Vec<usize>,
        /// Which to measure.
        measure: Vec<usize>,
    },
    /// Write a picture.
    Export {
        /// Of what.
        document: Arc<Document>,
        /// Levels and modes.
        spectrum: Arc<Spectrum>,
        /// Which mode, from 0.
        mode: usize,
        /// What of it.
        show: Show,
        /// Whether with nodal lines.
        nodes: bool,
        /// Into which folder.
        folder: PathBuf,
    },
    /// Draw the whole screen anew.
    Redraw,
    /// Put the program to sleep.
    Suspend,
}
