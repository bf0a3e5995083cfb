//! `levels`: the table.

use super::open::Opened;
use super::options::{Format, Levels};
use super::output::{note, print};
use super::solve::solve;
use super::stop::Stop;
use crate::report::{self, Account};
use crate::spectrum::Spectrum;

/// Solves and prints.
///
/// # Errors
/// Faults of the shape, of the solver, of the output.
pub fn levels(asked: &Levels) -> Result<(), Stop> {
    let mut opened = Opened::read(Some(&asked.shape), &asked.sizes)?;
    opened.ask(&asked.asked)?;
    let spectrum = solve(&opened)?;
    let account = account(&opened, &spectrum);
    let table = match asked.format {
        Format::Text => report::text(&account),
        Format::Csv => report::csv(&account),
        Format::Json => report::json(&account),
    };
    if asked.format == Format::Csv {
        // the one format that has no room for these
        let units = opened.document.units();
        note(&report::certificate(
            &spectrum.certificate,
            &spectrum.levels,
            units.energy,
        ));
        for remark in opened.notes.iter().chain(&spectrum.notes) {
            note(remark);
        }
    }
    print(table.as_bytes())
}

/// What a report needs.
pub fn account<'a>(opened: &'a Opened, spectrum: &'a Spectrum) -> Account<'a> {
    let units = opened.document.units();
    Account {
        title: opened.document.title(),
        model: &opened.about,
        energy: units.energy,
        length: units.length,
        spectrum,
        notes: &opened.notes,
    }
}
