//! No command: the desk, or, without a terminal, the table and one map in characters.

use super::levels::account;
use super::open::Opened;
use super::options::Start;
use super::output::print;
use super::solve::solve;
use super::stop::Stop;
use crate::desk::{self, Capability};
use crate::report;
use crate::shape::Scale;
use std::io::IsTerminal;
use std::path::Path;

/// Columns and rows of the map in characters: half a page of a printout.
const CELLS: (u16, u16) = (78, 26);

/// Opens the shape.
///
/// # Errors
/// Faults of the shape, of the solver, of the terminal.
pub fn start(asked: &Start) -> Result<(), Stop> {
    refuse_stray_words(asked)?;
    let mut opened = Opened::read(asked.shape.as_deref(), &asked.sizes)?;
    opened.ask(&asked.asked)?;
    let capability = Capability::of_environment();
    let interactive = std::io::stdout().is_terminal() && std::io::stdin().is_terminal();
    if interactive && capability.screen {
        let settings = desk::Settings {
            glyphs: asked.glyphs,
            ..desk::Settings::default()
        };
        let opened = on_the_desk(&opened, asked.shape.as_deref());
        return desk::run(opened, settings).map_err(|e| Stop::Machine(e.into()));
    }
    let spectrum = solve(&opened)?;
    let mut page = report::text(&account(&opened, &spectrum));
    if let Some(level) = spectrum.levels.first() {
        let glyphs = asked.glyphs.unwrap_or(capability.glyphs);
        let desk = on_the_desk(&opened, asked.shape.as_deref());
        page += &format!("\ndensity of level {}\n", level.index);
        page += &desk::print_map(&desk, &spectrum, 0, glyphs, CELLS);
    }
    print(page.as_bytes())
}

/// The shape as the desk takes it.
fn on_the_desk(opened: &Opened, path: Option<&Path>) -> desk::Document {
    let stem = path.and_then(Path::file_stem).filter(|s| *s != "-");
    desk::Document {
        title: opened.document.title().to_owned(),
        about: opened.about.clone(),
        stem: stem.map_or("two-lobe".into(), |s| s.to_string_lossy().into_owned()),
        model: opened.model.clone(),
        wanted: opened.wanted.clone(),
        scale: match opened.document.scale() {
            Scale::Lab => desk::Scale::Lab,
            Scale::Reduced => desk::Scale::Reduced,
        },
    }
}

/// A second word, or a mistyped command, gets an answer that helps.
fn refuse_stray_words(asked: &Start) -> Result<(), Stop> {
    const COMMANDS: [&str; 6] = ["levels", "map", "sheet", "check", "materials", "generate"];
    let Some(first) = &asked.shape else {
        return Ok(());
    };
    let word = first.to_string_lossy();
    let near = COMMANDS
        .into_iter()
        .find(|c| strsim::damerau_levenshtein(c, &word) <= 2);
    if !first.exists()
        && let Some(command) = near
    {
        return Err(Stop::input(format!(
            "there is neither a command nor a file `{word}`; did you mean `{command}`?"
        )));
    }
    match asked.rest.first() {
        None => Ok(()),
        Some(extra) => Err(Stop::input(format!(
            "one shape at a time: `{}` is one word too many after `{word}` (dotwright --help \
             lists the commands)",
            extra.to_string_lossy()
        ))),
    }
}
