//! Why a file gives no outline.

use super::grey::MOST_PIXELS;
use super::points::MOST_VERTICES;
use std::path::{Path, PathBuf};

/// Why a file gives no outline; every message says what would.
#[derive(Debug, thiserror::Error)]
pub enum IntakeError {
    /// The file cannot be opened or read.
    #[error("{}: {reason}", .path.display())]
    Unreadable {
        /// The file.
        path: PathBuf,
        /// What the machine said, and what to do.
        reason: String,
    },
    /// The file is no whole PNG.
    #[error("{}: no readable PNG: {reason}; export the picture again as a plain PNG", .path.display())]
    Damaged {
        /// The file.
        path: PathBuf,
        /// What is wrong with it.
        reason: String,
    },
    /// The picture declares more pixels than are accepted.
    #[error("{}: {width} × {height} pixels are more than {} million; crop or halve the picture", .path.display(), MOST_PIXELS >> 20)]
    TooManyPixels {
        /// The file.
        path: PathBuf,
        /// Declared width.
        width: u32,
        /// Declared height.
        height: u32,
    },
    /// All pixels look the same.
    #[error("{}: the picture is one grey all over, so it has no edge to trace; give the shape and its surroundings clearly different greys", .path.display())]
    OneGrey {
        /// The file.
        path: PathBuf,
    },
    /// Nothing but specks.
    #[error("{}: at level {level} there is nothing larger than {least} pixels to trace; choose a `level` between the greys of the shape and its surroundings", .path.display())]
    NothingTraced {
        /// The file.
        path: PathBuf,
        /// The grey level, 0 to 1.
        level: f64,
        /// Least area that counts, pixels.
        least: f64,
    },
    /// Far too many contours.
    #[error("{}: the picture falls into more than {loops} patches, so it is noise rather than a shape; smooth it first, or move `level` away from the noise", .path.display())]
    Noise {
        /// The file.
        path: PathBuf,
        /// The limit.
        loops: usize,
    },
    /// A line of a point list is wrong.
    #[error("{}:{line}: {what}\n  {line} | {text}", .path.display())]
    Line {
        /// The file.
        path: PathBuf,
        /// Line, from 1.
        line: usize,
        /// The line.
        text: String,
        /// What is wrong and what would be right.
        what: String,
    },
    /// Two edges of a point list cross.
    #[error("{}: the edge from line {} to {} crosses the edge from line {} to {} near ({:.6}, {:.6}); an outline may not cross itself: check the order of the points, or put a blank line between separate loops", .path.display(), .edges[0].0, .edges[0].1, .edges[1].0, .edges[1].1, .at[0], .at[1])]
    Crossing {
        /// The file.
        path: PathBuf,
        /// The lines of the ends of both edges.
        edges: [(usize, usize); 2],
        /// Where they cross.
        at: [f64; 2],
    },
    /// Too many vertices.
    #[error("{}: more than {MOST_VERTICES} points; thin the list out (a point every nanometre is plenty), or trace a picture instead", .path.display())]
    TooManyVertices {
        /// The file.
        path: PathBuf,
    },
    /// No points at all.
    #[error("{}: no points; write one \"x, y\" per line, at least three to a loop, and a blank line between loops", .path.display())]
    NoPoints {
        /// The file.
        path: PathBuf,
    },
}

impl IntakeError {
    /// An error of the operating system about a file.
    pub(super) fn unreadable(path: &Path, error: &std::io::Error) -> Self {
        let reason = match error.kind() {
            std::io::ErrorKind::NotFound => {
                "there is no such file; paths are relative to the folder of the document".to_owned()
            }
            std::io::ErrorKind::PermissionDenied => "no permission to read it".to_owned(),
            std::io::ErrorKind::InvalidData => "it is not text in UTF-8".to_owned(),
            _ => error.to_string(),
        };
        Self::Unreadable {
            path: path.to_owned(),
            reason,
        }
    }
}
