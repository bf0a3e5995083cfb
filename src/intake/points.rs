//! Point lists: "x, y" per line, a blank line between loops.

use super::crossing::crossing;
use super::{IntakeError, Taken, loops};
use crate::geometry::{Point, pt};
use std::path::Path;

/// Most vertices a point list may have.
pub const MOST_VERTICES: usize = 100_000;

/// A longer text has more points than are accepted, or is no point list.
const MOST_BYTES: u64 = 16 << 20;

/// The polygon of a point list; with `smooth`, curves fitted within that distance instead, for
/// long traces with many tiny bends. Lengths are those of the file.
///
/// Columns are separated by comma, semicolon, tab or spaces; further columns are ignored. `#`
/// begins a comment; the first line may be a header. A loop closes itself; it may run either way
/// round; a loop inside another is a hole.
///
/// # Errors
/// A line that is no point, a loop of fewer than three points, more than [`MOST_VERTICES`] points,
/// and edges that cross, all with their lines.
pub fn points(path: &Path, smooth: Option<f64>) -> Result<Taken, IntakeError> {
    let size = std::fs::metadata(path)
        .map_err(|e| IntakeError::unreadable(path, &e))?
        .len();
    if size > MOST_BYTES {
        return Err(IntakeError::TooManyVertices {
            path: path.to_owned(),
        });
    }
    let text = std::fs::read_to_string(path).map_err(|e| IntakeError::unreadable(path, &e))?;
    let listed = read(path, &text)?;
    let plain: Vec<Vec<Point>> = listed
        .iter()
        .map(|l| l.iter().map(|v| v.at).collect())
        .collect();
    if let Some(c) = crossing(&plain) {
        let lines: Vec<(usize, usize)> = listed
            .iter()
            .flat_map(|l| (0..l.len()).map(|k| (l[k].line, l[(k + 1) % l.len()].line)))
            .collect();
        return Err(IntakeError::Crossing {
            path: path.to_owned(),
            edges: c.edges.map(|e| lines[e]),
            at: [c.at.x, c.at.y],
        });
    }
    Ok(loops::taken(plain, smooth))
}

struct Vertex {
    at: Point,
    line: usize,
}

fn read(path: &Path, text: &str) -> Result<Vec<Vec<Vertex>>, IntakeError> {
    let mut loops: Vec<Vec<Vertex>> = Vec::new();
    let mut open: Vec<Vertex> = Vec::new();
    let (mut count, mut header) = (0, true);
    for (number, raw) in text.trim_start_matches('\u{feff}').lines().enumerate() {
        let refuse = |what: String| IntakeError::Line {
            path: path.to_owned(),
            line: number + 1,
            text: raw.chars().take(120).collect(),
            what,
        };
        let line = raw.split('#').next().unwrap_or("").trim();
        if line.is_empty() {
            // A line that is all comment separates nothing.
            if raw.trim().is_empty() {
                close(path, text, &mut loops, &mut open)?;
            }
            continue;
        }
        let fields: Vec<&str> = line
            .split([',', ';', '\t', ' '])
            .filter(|f| !f.is_empty())
            .collect();
        let numbers: Vec<Option<f64>> = fields
            .iter()
            .take(2)
            .map(|f| f.parse::<f64>().ok())
            .collect();
        match numbers[..] {
            [Some(x), Some(y)] if x.abs() < 1e12 && y.abs() < 1e12 => {
                open.push(Vertex {
                    at: pt(x, y),
                    line: number + 1,
                });
            }
            [Some(_), Some(_)] => {
                return Err(refuse(
                    "a coordinate must be a finite number below 1e12".to_owned(),
                ));
            }
            [Some(_)] => return Err(refuse("one number; a point needs two: \"x, y\"".to_owned())),
            [] => return Err(refuse("no number; a point is \"x, y\"".to_owned())),
            [None, ..] if header && numbers.iter().all(Option::is_none) => {}
            _ => {
                let bad = fields[numbers.iter().position(Option::is_none).unwrap_or(0)];
                return Err(refuse(format!(
                    "\"{bad}\" is not a number; a line is \"x, y\""
                )));
            }
        }
        header = false;
        count += 1;
        if count > MOST_VERTICES + 1 {
            return Err(IntakeError::TooManyVertices {
                path: path.to_owned(),
            });
        }
    }
    close(path, text, &mut loops, &mut open)?;
    if loops.is_empty() {
        return Err(IntakeError::NoPoints {
            path: path.to_owned(),
        });
    }
    Ok(loops)
}

/// Ends the loop that is open, if any: repeated points go, three must remain.
fn close(
    path: &Path,
    text: &str,
    loops: &mut Vec<Vec<Vertex>>,
    open: &mut Vec<Vertex>,
) -> Result<(), IntakeError> {
    let mut points = std::mem::take(open);
    let Some(line) = points.first().map(|v| v.line) else {
        return Ok(());
    };
    points.dedup_by(|a, b| a.at == b.at);
    while points.len() > 1 && points.first().map(|v| v.at) == points.last().map(|v| v.at) {
        points.pop();
    }
    if points.len() < 3 {
        return Err(IntakeError::Line {
            path: path.to_owned(),
            line,
            text: text
                .lines()
                .nth(line - 1)
                .unwrap_or("")
                .chars()
                .take(120)
                .collect(),
            what: format!(
                "the loop that begins here has {} different point(s); a loop needs at least three",
                points.len()
            ),
        });
    }
    loops.push(points);
    Ok(())
}
