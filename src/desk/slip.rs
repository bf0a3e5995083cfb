//! The slip: the figures of the chosen level.

use super::document::Scale;
use super::notation::{concise, significant};
use super::state::State;
use crate::spectrum::{Level, Spectrum};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

/// GHz in one meV: 1/h (CODATA 2022, exact).
const GHZ: f64 = 241.798_924_208_491_8;
/// Kelvin in one meV: 1/k_B (CODATA 2022, exact).
const KELVIN: f64 = 11.604_518_121_550_083;

/// A line of the slip, and how much it is worth when there is little room: 0 stays to the end.
type Row = (u8, Line<'static>);

/// Draws the slip.
pub fn slip(state: &State, buffer: &mut Buffer, area: Rect) {
    let Some(spectrum) = &state.solving.spectrum else {
        return;
    };
    let Some(level) = spectrum.levels.get(state.chosen) else {
        return;
    };
    let width = usize::from(area.width);
    let mut rows = Vec::new();
    name(state, spectrum, level, &mut rows);
    spacings(state, spectrum, width, &mut rows);
    nature(state, level, width, &mut rows);
    place(state, width, &mut rows);
    proof(state, spectrum, width, &mut rows);
    for (k, line) in fit(rows, area.height.into()).into_iter().enumerate() {
        line.render(Rect::new(area.x, area.y + k as u16, area.width, 1), buffer);
    }
}

/// Leaves out what is worth least until the rest fits.
fn fit(mut rows: Vec<Row>, height: usize) -> Vec<Line<'static>> {
    while rows.len() > height {
        let worst = rows.iter().map(|r| r.0).max().unwrap_or(0);
        match rows.iter().rposition(|r| r.0 == worst) {
            Some(k) => rows.remove(k),
            None => break,
        };
    }
    rows.into_iter().map(|r| r.1).collect()
}

fn blank() -> Row {
    (9, Line::default())
}

fn name(state: &State, spectrum: &Spectrum, level: &Level, rows: &mut Vec<Row>) {
    let last = spectrum.levels.last().map_or(0, |l| l.index);
    rows.push((
        0,
        Line::from(vec![
            Span::styled(format!("level {}", level.index), state.paint.accent()),
            Span::styled(format!(" of {last}"), state.paint.quiet()),
        ]),
    ));
    let energy = concise(level.energy, level.error);
    rows.push((
        0,
        Line::from(vec![
            Span::styled(energy, Style::new().add_modifier(Modifier::BOLD)),
            Span::raw(state.document.scale.energy()),
        ]),
    ));
    rows.push(blank());
}

/// Spacing to the next distinct levels, a column each.
fn spacings(state: &State, spectrum: &Spectrum, width: usize, rows: &mut Vec<Row>) {
    let levels = &spectrum.levels;
    let group = state.group(state.chosen);
    let here = levels[state.chosen].energy;
    let above = levels.get(group.end).map(|l| l.energy - here);
    let below = group.start.checked_sub(1).map(|k| here - levels[k].energy);
    let wide = (width.saturating_sub(8) / 2).min(12);
    let heads = format!("{:<8}{:>wide$}{:>wide$}", "spacing", "above", "below");
    rows.push((1, Line::styled(heads, state.paint.quiet())));
    let units: &[(&str, f64)] = match state.document.scale {
        Scale::Lab => &[("meV", 1.0), ("GHz", GHZ), ("K", KELVIN)],
        Scale::Reduced => &[("E", 1.0)],
    };
    for (k, (unit, factor)) in units.iter().enumerate() {
        let write = |x: Option<f64>| x.map_or("-".into(), |x| significant(x * factor, 4));
        let line = Line::from(vec![
            Span::styled(format!("{unit:<8}"), state.paint.quiet()),
            Span::raw(format!("{:>wide$}{:>wide$}", write(above), write(below))),
        ]);
        rows.push((1 + k as u8, line));
    }
    rows.push(blank());
}

fn pair(state: &State, word: &str, text: String) -> Line<'static> {
    Line::from(vec![
        Span::styled(format!("{word:<9}"), state.paint.quiet()),
        Span::raw(text),
    ])
}

fn nature(state: &State, level: &Level, width: usize, rows: &mut Vec<Row>) {
    let copies = match level.multiplicity {
        0 | 1 => "single".to_string(),
        2 => "double".into(),
        n => format!("{n}-fold"),
    };
    rows.push((3, pair(state, "levels", copies)));
    if let Some(label) = &level.label {
        let text = super::head::shorten(label, width.saturating_sub(9), state.ascii());
        rows.push((2, pair(state, "symmetry", text)));
    }
    rows.push(blank());
}

fn place(state: &State, width: usize, rows: &mut Vec<Row>) {
    let Some(Some(p)) = state.portraits.get(&state.chosen) else {
        // the lines keep their place while the figures are on their way
        for word in ["centre", "spread", "left", "lower", "spans"] {
            rows.push((4, pair(state, word, String::new())));
        }
        rows.push(blank());
        return;
    };
    let unit = state.document.scale.length();
    let size = state.bounds.diagonal();
    // what is below a ten-thousandth of the shape is sampling, not place
    let steady = |x: f64| if x.abs() < 1e-4 * size { 0.0 } else { x };
    let decimals = (3.0 - size.log10().floor()).clamp(0.0, 8.0) as usize;
    let (x, y) = (steady(p.centroid.x), steady(p.centroid.y));
    rows.push((
        4,
        pair(
            state,
            "centre",
            format!("{x:.decimals$}, {y:.decimals$}{unit}"),
        ),
    ));
    rows.push((
        5,
        pair(
            state,
            "spread",
            format!("{}{unit}", significant(p.spread, 3)),
        ),
    ));
    let share = |s: f64, a: &str, b: &str| {
        format!("{:.1} % {a}, {:.1} % {b}", 100.0 * s, 100.0 * (1.0 - s))
    };
    let long = width >= 36;
    let halves = |s: f64, a: &str, b: &str| {
        if long {
            share(s, a, b)
        } else {
            format!("{:.1} %", 100.0 * s)
        }
    };
    rows.push((
        4,
        pair(
            state,
            "left",
            halves(p.left, "left", "right").replace("left, ", "left, "),
        ),
    ));
    rows.push((5, pair(state, "lower", halves(p.lower, "lower", "upper"))));
    let square = match (unit.is_empty(), state.ascii()) {
        (true, _) => String::new(),
        (false, true) => format!("{unit}^2"),
        (false, false) => format!("{unit}²"),
    };
    let part = 100.0 * p.area / state.area;
    let text = format!("{}{square}, {part:.0} %", significant(p.area, 3));
    rows.push((4, pair(state, "spans", text)));
    rows.push(blank());
}

fn proof(state: &State, spectrum: &Spectrum, width: usize, rows: &mut Vec<Row>) {
    let c = &spectrum.certificate;
    let unit = state.document.scale.energy();
    let shift = significant(c.shift, 4);
    let sentence = if c.complete {
        format!(
            "{} counted below {shift}{unit}, {} found: none is missing.",
            c.below, c.found
        )
    } else if c.below != c.found {
        format!(
            "{} counted below {shift}{unit}, {} found: some are missing.",
            c.below, c.found
        )
    } else {
        format!("The count below {shift}{unit} could not be proven.")
    };
    let style = if c.complete {
        Style::new()
    } else {
        state.paint.alarm()
    };
    for line in wrap(&sentence, width) {
        rows.push((1, Line::styled(line, style)));
    }
    rows.push(blank());
    let l = &spectrum.lattice;
    let cell = significant(l.cell, 3);
    let lattice = format!(
        "{} unknowns, cells of {cell}{}, degree {}",
        l.unknowns,
        state.document.scale.length(),
        l.degree
    );
    for line in wrap(&lattice, width) {
        rows.push((6, Line::styled(line, state.paint.quiet())));
    }
    let t = &spectrum.timings;
    let all = t.lattice + t.operators + t.factor + t.solve;
    if all > 0.0 {
        let line = format!("solved in {} ms", significant(all, 3));
        rows.push((7, Line::styled(line, state.paint.quiet())));
    }
    for note in &spectrum.notes {
        for line in wrap(note, width) {
            rows.push((8, Line::styled(line, state.paint.quiet())));
        }
    }
}

/// Words on lines of at most `width` characters; longer words are left long.
pub fn wrap(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        match lines.last_mut() {
            Some(l) if l.chars().count() + 1 + word.chars().count() <= width => {
                l.push(' ');
                l.push_str(word);
            }
            _ => lines.push(word.to_string()),
        }
    }
    lines
}
