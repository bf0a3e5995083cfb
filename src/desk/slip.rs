//! The slip: the figures of the chosen level.

use super::document::Scale;
use super::head::shorten;
use super::notation::significant;
use super::portrait::Portrait;
use super::state::State;
use crate::spectrum::{Level, Spectrum};
use crate::units::{EnergyUnit, concise, duration};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;
use unicode_width::UnicodeWidthStr;

/// Figures further from their words than this are hard to follow.
const WIDEST: usize = 34;

/// Draws the slip.
pub fn slip(state: &State, buffer: &mut Buffer, area: Rect) {
    let Some(spectrum) = &state.solving.spectrum else {
        return;
    };
    let Some(level) = spectrum.levels.get(state.chosen) else {
        return;
    };
    let mut slip = Slip {
        state,
        width: usize::from(area.width).min(WIDEST),
        blocks: Vec::new(),
    };
    slip.name(spectrum, level);
    slip.spacings(spectrum);
    slip.nature(level);
    slip.place(state.portraits.get(&state.chosen).and_then(Option::as_ref));
    slip.proof(spectrum);
    for (k, line) in slip.fit(area.height.into()).into_iter().enumerate() {
        let row = Rect::new(area.x, area.y + k as u16, area.width, 1);
        line.render(row, buffer);
    }
}

/// Lines that stay or go together, and when they go where there is little room: the highest
/// first, 0 never before the others.
struct Block {
    turn: u8,
    lines: Vec<Line<'static>>,
}

struct Slip<'a> {
    state: &'a State,
    width: usize,
    blocks: Vec<Block>,
}

impl Slip<'_> {
    /// The lines that fit.
    fn fit(mut self, height: usize) -> Vec<Line<'static>> {
        while self.blocks.iter().map(|b| b.lines.len()).sum::<usize>() > height {
            let first_to_go = self.blocks.iter().map(|b| b.turn).max().unwrap_or(0);
            match self.blocks.iter().rposition(|b| b.turn == first_to_go) {
                Some(k) => self.blocks.remove(k),
                None => break,
            };
        }
        self.blocks.into_iter().flat_map(|b| b.lines).collect()
    }

    fn line(&mut self, turn: u8, spans: Vec<Span<'static>>) {
        let lines = vec![Line::from(spans)];
        self.blocks.push(Block { turn, lines });
    }

    fn blank(&mut self) {
        self.line(7, Vec::new());
    }

    /// A word on the left, its figure on the right.
    fn pair(&mut self, turn: u8, word: &str, text: String) {
        let room = self.width.saturating_sub(word.len() + 1);
        let text = shorten(&text, room, self.state.ascii());
        let gap = self.width.saturating_sub(word.len() + text.width());
        let word = format!("{word}{}", " ".repeat(gap));
        let quiet = self.state.paint.quiet();
        self.line(turn, vec![Span::styled(word, quiet), Span::raw(text)]);
    }

    fn paragraph(&mut self, turn: u8, text: &str, style: Style) {
        let lines = wrap(text, self.width)
            .into_iter()
            .map(|l| Line::from(Span::styled(l, style)))
            .collect();
        self.blocks.push(Block { turn, lines });
    }

    fn name(&mut self, spectrum: &Spectrum, level: &Level) {
        let paint = &self.state.paint;
        let last = spectrum.levels.last().map_or(0, |l| l.index);
        let name = format!("level {}", level.index);
        let of = format!(" of {last}");
        let line = vec![
            Span::styled(name, paint.accent()),
            Span::styled(of, paint.quiet()),
        ];
        self.line(0, line);
        let energy = concise(level.energy, level.error);
        let bold = Style::new().add_modifier(Modifier::BOLD);
        let unit = self.state.document.scale.energy();
        self.line(0, vec![Span::styled(energy, bold), Span::raw(unit)]);
        self.blank();
    }

    /// Spacing to the next distinct levels, a column each.
    fn spacings(&mut self, spectrum: &Spectrum) {
        let levels = &spectrum.levels;
        let group = self.state.group(self.state.chosen);
        let here = levels[self.state.chosen].energy;
        let above = levels.get(group.end).map(|l| l.energy - here);
        let below = group.start.checked_sub(1).map(|k| here - levels[k].energy);
        let quiet = self.state.paint.quiet();
        let first = 7;
        let each = (self.width - first) / 2;
        let first = self.width - 2 * each;
        let heads = format!("{:<first$}{:>each$}{:>each$}", "spacing", "above", "below");
        self.line(1, vec![Span::styled(heads, quiet)]);
        let lab = [
            EnergyUnit::Millielectronvolt,
            EnergyUnit::Gigahertz,
            EnergyUnit::Kelvin,
        ];
        let units = match self.state.document.scale {
            Scale::Lab => lab.map(|u| (u.symbol(), u.per_mev())).to_vec(),
            Scale::Reduced => vec![("E", 1.0)],
        };
        for (turn, (unit, factor)) in (1..).zip(units) {
            let write = |x: Option<f64>| x.map_or("-".into(), |x| significant(x * factor, 4));
            let unit = Span::styled(format!("{unit:<first$}"), quiet);
            let figures = format!("{:>each$}{:>each$}", write(above), write(below));
            self.line(turn, vec![unit, Span::raw(figures)]);
        }
        self.blank();
    }

    fn nature(&mut self, level: &Level) {
        self.pair(3, "multiplicity", level.multiplicity.max(1).to_string());
        if let Some(label) = &level.label {
            self.pair(2, "symmetry", label.clone());
        }
    }

    fn place(&mut self, portrait: Option<&Portrait>) {
        let unit = self.state.document.scale.length();
        let size = self.state.bounds.diagonal();
        let write = |f: &dyn Fn(&Portrait) -> String| portrait.map_or(String::new(), f);
        // what is below a ten-thousandth of the shape is sampling, not place
        let steady = |x: f64| if x.abs() < 1e-4 * size { 0.0 } else { x };
        let decimals = (3.0 - size.log10()).round().clamp(0.0, 8.0) as usize;
        let centre = write(&|p| {
            let (x, y) = (steady(p.centroid.x), steady(p.centroid.y));
            format!("{x:.decimals$}, {y:.decimals$}{unit}")
        });
        let square = match (unit.is_empty(), self.state.ascii()) {
            (true, _) => "",
            (false, true) => " nm^2",
            (false, false) => " nm²",
        };
        let spread = write(&|p| format!("{}{unit}", significant(p.spread, 3)));
        let halves = write(&|p| format!("{:.1} %, {:.1} %", 100.0 * p.left, 100.0 * p.lower));
        let spans = write(&|p| {
            let part = 100.0 * p.area / self.state.area;
            format!("{}{square}, {part:.0} %", significant(p.area, 3))
        });
        self.pair(4, "centre", centre);
        self.pair(5, "spread", spread);
        self.pair(4, "left, low", halves);
        self.pair(4, "spans", spans);
        self.blank();
    }

    fn proof(&mut self, spectrum: &Spectrum) {
        let c = &spectrum.certificate;
        let unit = self.state.document.scale.energy();
        let shift = significant(c.shift, 4);
        let (sentence, style) = if c.complete {
            let text = format!("{} counted below {shift}{unit}: none is missing.", c.below);
            (text, Style::new())
        } else if c.below != c.found {
            let text = format!(
                "{} counted below {shift}{unit}, {} found.",
                c.below, c.found
            );
            (text, self.state.paint.alarm())
        } else {
            let text = format!("The count below {shift}{unit} is not proven.");
            (text, self.state.paint.alarm())
        };
        self.paragraph(1, &sentence, style);
        let quiet = self.state.paint.quiet();
        for note in &spectrum.notes {
            self.blank();
            self.paragraph(6, note, quiet);
        }
        self.blank();
        let l = &spectrum.lattice;
        let cell = significant(l.cell, 3);
        let length = self.state.document.scale.length();
        let lattice = format!(
            "{} unknowns, degree {}, cells of {cell}{length}",
            l.unknowns, l.degree
        );
        self.paragraph(8, &lattice, quiet);
        let t = &spectrum.timings;
        let all = t.lattice + t.operators + t.factor + t.solve;
        if all > 0.0 {
            self.paragraph(9, &format!("solved in {}", duration(1e-3 * all)), quiet);
        }
    }
}

/// Words on lines of at most `width` characters; longer words are left long.
fn wrap(text: &str, width: usize) -> Vec<String> {
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
