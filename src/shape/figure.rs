//! The figure of one step, put in its place.

use super::build::{FigureError, Traces};
use super::model::{Figure, Placement, Step};
use crate::geometry::{GeometryError, Outline, Point, Similarity};
use crate::intake;
use std::path::Path;

/// Pieces the copies of a figure may have together.
const MOST_PIECES: usize = 50_000;

/// The figure of a step, mirrored, turned, moved and repeated.
pub(super) fn placed(
    step: &Step,
    folder: &Path,
    traces: &Traces,
    notes: &mut Vec<String>,
) -> Result<Outline, FigureError> {
    let plain = plain(&step.figure, folder, traces, notes)?;
    let place = &step.placement;
    let one = plain.transformed(&similarity(place, middle(&step.figure, &plain)));
    let Some(repeat) = place.repeat else {
        return Ok(one);
    };
    let pieces = one.pieces().count();
    if pieces * repeat.count > MOST_PIECES {
        return Err(FigureError::TooMany {
            copies: repeat.count,
            pieces,
            most: MOST_PIECES,
        });
    }
    let copies = (0..repeat.count).map(|k| {
        let k = k as f64;
        let step = Similarity::turned(repeat.about, (k * repeat.turn).to_radians())
            .then(&Similarity::moved(repeat.shift * k));
        one.transformed(&step)
    });
    Ok(union(copies.collect())?)
}

/// The union of all, in pairs, pairs of pairs and so on: every copy is handled a logarithm of
/// their number of times.
fn union(mut parts: Vec<Outline>) -> Result<Outline, GeometryError> {
    while parts.len() > 1 {
        let mut pairs = Vec::with_capacity(parts.len().div_ceil(2));
        for pair in parts.chunks(2) {
            pairs.push(match pair {
                [a, b] => a.add(b)?,
                rest => rest[0].clone(),
            });
        }
        parts = pairs;
    }
    Ok(parts.pop().unwrap_or_default())
}

/// Mirror, then turn, then move.
fn similarity(place: &Placement, middle: Point) -> Similarity {
    let mut all = Similarity::IDENTITY;
    if let Some(angle) = place.mirror {
        let on_line = place.about.unwrap_or_default();
        all = all.then(&Similarity::mirrored(on_line, angle.to_radians()));
    }
    if place.turn != 0.0 {
        let pivot = place.about.unwrap_or_else(|| all.apply(middle));
        all = all.then(&Similarity::turned(pivot, place.turn.to_radians()));
    }
    all.then(&Similarity::moved(place.shift))
}

/// The point a figure turns about: its `centre`, or the middle of its box.
fn middle(figure: &Figure, outline: &Outline) -> Point {
    match figure {
        Figure::Disc { centre, .. }
        | Figure::Ellipse { centre, .. }
        | Figure::Sector { centre, .. }
        | Figure::Ring { centre, .. }
        | Figure::Stadium { centre, .. } => *centre,
        _ => outline.bounds().centre(),
    }
}

fn plain(
    figure: &Figure,
    folder: &Path,
    traces: &Traces,
    notes: &mut Vec<String>,
) -> Result<Outline, FigureError> {
    let outline = match figure {
        Figure::Disc { centre, radius } => Outline::disc(*centre, *radius)?,
        Figure::Ellipse { centre, half_axes } => Outline::ellipse(*centre, *half_axes, 0.0)?,
        Figure::Rectangle { corner, size } => Outline::rectangle(*corner, *size)?,
        Figure::Polygon { points } => Outline::polygon(points)?,
        Figure::Sector {
            centre,
            radius,
            from,
            to,
        } => Outline::sector(*centre, *radius, from.to_radians(), to.to_radians())?,
        Figure::Ring {
            centre,
            inner,
            outer,
        } => Outline::ring(*centre, *inner, *outer)?,
        Figure::Stadium {
            centre,
            radius,
            straight,
        } => Outline::stadium(*centre, *radius, *straight, 0.0)?,
        Figure::Track { points, width } => Outline::track(points, *width)?,
        Figure::Picture { file, reading } => {
            let path = folder.join(file);
            let how = format!("{reading:?}");
            let taken = traces.get(&path, &how, || intake::picture(&path, reading))?;
            notes.extend(taken.notes);
            taken.outline
        }
        Figure::Points { file, smooth } => {
            let path = folder.join(file);
            let how = format!("{smooth:?}");
            let taken = traces.get(&path, &how, || intake::points(&path, *smooth))?;
            notes.extend(taken.notes);
            taken.outline
        }
    };
    Ok(outline)
}
