//! The level table for people.

use super::{Account, CAUTION};
use crate::spectrum::{Certificate, Level};
use crate::units::{concise, duration};
use std::fmt::Write;

/// Title, table, and what is known about its truth; one line each, ending in a line feed.
pub fn text(account: &Account) -> String {
    let mut out = String::new();
    let mut line = |text: &str| {
        out.push_str(text.trim_end());
        out.push('\n');
    };
    line(&one_line(account.title));
    if !account.model.is_empty() {
        line(&one_line(account.model));
    }
    line("");
    for row in table(account) {
        line(&row);
    }
    line("");
    let s = account.spectrum;
    line(&certificate(&s.certificate, &s.levels, account.energy));
    line(&lattice(account));
    if let Some(time) = time(account) {
        line(&time);
    }
    for note in account.remarks() {
        line(&format!("note: {}", one_line(note)));
    }
    line(&format!("caution: {CAUTION}"));
    out
}

/// A text of the person's, on one line and without control characters.
fn one_line(text: &str) -> String {
    text.chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect()
}

fn table(account: &Account) -> Vec<String> {
    let levels = &account.spectrum.levels;
    let unit = |name: &str| match account.energy {
        "" => name.to_owned(),
        unit => format!("{name} / {unit}"),
    };
    let labelled = levels.iter().any(|l| l.label.is_some());
    let mut columns = vec![
        right("level", levels.iter().map(|l| l.index.to_string())),
        pointed(
            &unit("energy"),
            levels.iter().map(|l| concise(l.energy, l.error)),
        ),
        pointed(
            &unit("to next"),
            (0..levels.len()).map(|k| spacing(levels, k)),
        ),
        right("fold", levels.iter().map(|l| l.multiplicity.to_string())),
    ];
    if labelled {
        let label = |l: &Level| one_line(l.label.as_deref().unwrap_or(""));
        let mut column = vec!["symmetry".to_owned()];
        column.extend(levels.iter().map(label));
        columns.push(column);
    }
    let rows = columns[0].len();
    (0..rows)
        .map(|r| {
            columns
                .iter()
                .map(|c| c[r].as_str())
                .collect::<Vec<_>>()
                .join("   ")
        })
        .collect()
}

/// Distance to the next level, its error the sum of both; 0 where both may be one level, a dash
/// after the last.
fn spacing(levels: &[Level], k: usize) -> String {
    match levels.get(k + 1) {
        Some(next) => {
            let here = &levels[k];
            let (gap, error) = (next.energy - here.energy, next.error + here.error);
            if gap <= error {
                return "0".to_owned();
            }
            concise(gap, error)
        }
        None => "-".to_owned(),
    }
}

/// A column set flush right under its name.
fn right(name: &str, cells: impl Iterator<Item = String>) -> Vec<String> {
    let mut all = vec![name.to_owned()];
    all.extend(cells);
    let width = all.iter().map(|c| c.chars().count()).max().unwrap_or(0);
    all.into_iter().map(|c| format!("{c:>width$}")).collect()
}

/// A column whose decimal points stand under each other.
fn pointed(name: &str, cells: impl Iterator<Item = String>) -> Vec<String> {
    let cells: Vec<String> = cells.collect();
    let whole = |c: &str| c.find(['.', '(']).unwrap_or(c.len());
    let before = cells.iter().map(|c| whole(c)).max().unwrap_or(0);
    let mut all: Vec<String> = cells
        .iter()
        .map(|c| format!("{}{c}", " ".repeat(before - whole(c))))
        .collect();
    let width = all.iter().map(|c| c.chars().count()).max().unwrap_or(0);
    all.insert(0, format!("{name:>width$}"));
    let width = width.max(all[0].chars().count());
    all.into_iter().map(|c| format!("{c:width$}")).collect()
}

/// What the count proves, in a sentence: `20 levels below 12.1 meV counted, 20 found: none
/// missing`.
pub fn certificate(c: &Certificate, levels: &[Level], unit: &str) -> String {
    let shift = format!("{} {unit}", apart(c.shift, levels));
    let shift = shift.trim_end();
    let (first, last) = match levels {
        [first, .., last] => (first.index, last.index),
        [one] => (one.index, one.index),
        [] => return format!("no level below {shift}"),
    };
    if !c.complete {
        return format!(
            "NOT PROVEN COMPLETE: {} levels counted below {shift}, {} found",
            c.below, c.found
        );
    }
    if first == 1 {
        format!(
            "{} levels below {shift} counted, {} found: none missing",
            c.below, c.found
        )
    } else {
        format!(
            "{} levels below {shift} counted, these are numbers {first} to {last}: none missing",
            c.below
        )
    }
}

/// The shift with as few digits as keep it on its side of every level.
fn apart(shift: f64, levels: &[Level]) -> String {
    let below = |x: f64| levels.iter().filter(|l| l.energy < x).count();
    let size = if shift == 0.0 {
        0
    } else {
        shift.abs().log10().floor() as i32
    };
    for digits in 3..17 {
        let decimals = (digits - 1 - size).clamp(0, 30) as usize;
        let text = format!("{shift:.decimals$}");
        let read: f64 = text.parse().unwrap_or(shift);
        if below(read) == below(shift) {
            return text;
        }
    }
    format!("{shift}")
}

fn lattice(account: &Account) -> String {
    let l = &account.spectrum.lattice;
    let unit = account.length;
    let mut cell = format!("{:.3} {unit}", l.cell).trim_end().to_owned();
    if l.finest < 0.999 * l.cell {
        let _ = write!(cell, ", finest {:.3} {unit}", l.finest);
    }
    format!(
        "lattice: {} unknowns, splines of degree {}, {} cells inside and {} cut, cell {}",
        l.unknowns,
        l.degree,
        l.inside,
        l.cut,
        cell.trim_end()
    )
}

fn time(account: &Account) -> Option<String> {
    let t = &account.spectrum.timings;
    let parts = [
        ("lattice", t.lattice),
        ("operators", t.operators),
        ("factor", t.factor),
        ("solve", t.solve),
    ];
    let total: f64 = parts.iter().map(|p| p.1).sum();
    if total <= 0.0 {
        return None;
    }
    let split: Vec<String> = parts
        .iter()
        .map(|(name, ms)| format!("{name} {}", duration(ms / 1e3)))
        .collect();
    Some(format!(
        "time: {} ({})",
        duration(total / 1e3),
        split.join(", ")
    ))
}

#[cfg(test)]
mod tests {
    use super::super::example;
    use super::*;

    fn account(spectrum: &crate::spectrum::Spectrum) -> Account<'_> {
        Account {
            title: "Square\u{1b}[2J dot",
            model: "one electron, hard wall",
            energy: "meV",
            length: "nm",
            spectrum,
            notes: &[],
        }
    }

    #[test]
    fn the_points_stand_under_each_other() {
        let spectrum = example::spectrum(12);
        let page = text(&account(&spectrum));
        let rows: Vec<&str> = page.lines().skip(4).take(12).collect();
        let point = |row: &str| row.find('.').expect("a point");
        assert!(rows.iter().all(|r| point(r) == point(rows[0])), "{page}");
        assert!(!page.contains('\u{1b}'), "control characters stay out");
        assert!(page.contains(" levels below "), "{page}");
        assert!(page.contains("none missing\n") && page.contains("note: drawn by hand\n"));
    }

    #[test]
    fn the_sentence_names_what_is_not_proven() {
        let spectrum = example::spectrum(3);
        let mut c = spectrum.certificate.clone();
        assert!(certificate(&c, &spectrum.levels, "meV").ends_with("3 found: none missing"));
        c.complete = false;
        assert!(certificate(&c, &spectrum.levels, "").starts_with("NOT PROVEN"));
        // the shift printed must not fall on the other side of a level
        c.shift = spectrum.levels[2].energy * (1.0 + 1e-9);
        let said = apart(c.shift, &spectrum.levels)
            .parse::<f64>()
            .expect("a number");
        assert!(said > spectrum.levels[2].energy);
    }
}
