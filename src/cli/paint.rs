//! `map` and `sheet`: pictures.

use super::open::Opened;
use super::options::{Drawing, Map, Sheet};
use super::output::{note, print};
use super::solve::solve;
use super::stop::Stop;
use crate::pictures::{self, Picture};
use std::path::Path;

/// Levels solved beyond the one drawn, so that a degenerate group is not cut in two.
const BEYOND: usize = 3;

/// Solves and draws one level.
///
/// # Errors
/// Faults of the shape, of the solver, of the output.
pub fn map(asked: &Map) -> Result<(), Stop> {
    let look = asked.drawing.look()?;
    judge_target(&asked.drawing, &asked.shape)?;
    let mut opened = Opened::read(Some(&asked.shape), &asked.sizes)?;
    opened.ask_accuracy(&asked.accuracy);
    opened.wanted.count = asked.mode + BEYOND;
    let spectrum = solve(&opened)?;
    let found = spectrum.levels.iter().position(|l| l.index == asked.mode);
    let Some(mode) = found else {
        let count = spectrum.levels.len();
        return Err(pictures::PictureError::NoSuchMode {
            mode: asked.mode,
            count,
        }
        .into());
    };
    let level = &spectrum.levels[mode];
    let picture = pictures::map(&spectrum.modes, mode, level, &opened.caption(), &look)?;
    deliver(&picture, &asked.drawing, &opened.notes)
}

/// Solves and draws many levels.
///
/// # Errors
/// Faults of the shape, of the solver, of the output.
pub fn sheet(asked: &Sheet) -> Result<(), Stop> {
    let look = asked.drawing.look()?;
    judge_target(&asked.drawing, &asked.shape)?;
    let mut opened = Opened::read(Some(&asked.shape), &asked.sizes)?;
    opened.ask(&asked.asked)?;
    let spectrum = solve(&opened)?;
    let picture = pictures::sheet(&spectrum.modes, &spectrum.levels, &opened.caption(), &look)?;
    deliver(&picture, &asked.drawing, &opened.notes)
}

/// Finds out before the solve what would fail after it.
fn judge_target(drawing: &Drawing, shape: &Path) -> Result<(), Stop> {
    let target = &drawing.output;
    if target == Path::new("-") {
        return Ok(());
    }
    let show = target.display();
    let foreign = target
        .extension()
        .is_some_and(|e| !e.eq_ignore_ascii_case("png"));
    if foreign {
        return Err(Stop::input(format!(
            "{show}: pictures are written as PNG, so name the file .png"
        )));
    }
    let same = |a: &Path, b: &Path| matches!((a.canonicalize(), b.canonicalize()), (Ok(a), Ok(b)) if a == b);
    if same(target, shape) {
        return Err(Stop::input(format!(
            "{show}: this is the shape document, which a picture must not replace"
        )));
    }
    let could_not = |why: &str| Err(Stop::Machine(anyhow::anyhow!("{show}: {why}")));
    if target.is_dir() {
        return could_not("this is a folder; name a file in it");
    }
    match target.parent() {
        Some(p) if !p.as_os_str().is_empty() && !p.is_dir() => {
            could_not("there is no such folder; make it first")
        }
        _ => Ok(()),
    }
}

fn deliver(picture: &Picture, drawing: &Drawing, notes: &[String]) -> Result<(), Stop> {
    for remark in notes {
        note(remark);
    }
    if drawing.output == Path::new("-") {
        print(&picture.png()?)
    } else {
        Ok(picture.save(&drawing.output)?)
    }
}
