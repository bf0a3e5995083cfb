//! The ladder: all levels at their true height on an energy axis.

use super::document::Scale;
use super::notation::significant;
use super::plate::{bit, braille};
use super::round::ticks;
use super::state::{State, groups};
use crate::spectrum::Level;
use crate::units::constants::MEV_PER_KELVIN;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::Style;
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

/// The energy axis on rows of four dots.
#[derive(Clone, Copy, Debug)]
struct Axis {
    low: f64,
    high: f64,
    dots: usize,
}

impl Axis {
    /// From the floor where that costs less than half the height, with a little air.
    fn over(levels: &[Level], rows: usize) -> Option<Self> {
        let (first, last) = (levels.first()?.energy, levels.last()?.energy);
        let span = (last - first).max(1e-9 * last.abs()).max(f64::MIN_POSITIVE);
        let low = if first > 0.0 && first < 0.5 * last || levels.len() == 1 {
            first.min(0.0)
        } else {
            first - 0.06 * span
        };
        let high = last + 0.03 * (last - low);
        (high > low && (high - low).is_finite()).then_some(Self {
            low,
            high,
            dots: 4 * rows,
        })
    }

    /// Dots from the top, not rounded.
    fn down(&self, energy: f64) -> f64 {
        (self.high - energy) / (self.high - self.low) * (self.dots as f64 - 1.0)
    }

    fn dot(&self, energy: f64) -> usize {
        self.down(energy).round().clamp(0.0, self.dots as f64 - 1.0) as usize
    }
}

/// Draws the ladder with its axis, and the kT bar beside the chosen level.
pub fn ladder(state: &State, buffer: &mut Buffer, area: Rect) {
    let Some(spectrum) = &state.solving.spectrum else {
        return;
    };
    let levels = &spectrum.levels;
    // first row: the unit; last row: what the kT bar means
    let rows = usize::from(area.height.saturating_sub(2));
    let Some(axis) = Axis::over(levels, rows) else {
        return;
    };
    let body = Rect::new(area.x, area.y + 1, area.width, rows as u16);
    let left = marks(state, buffer, body, &axis);
    let unit = match state.document.scale {
        Scale::Lab => "meV",
        Scale::Reduced => "E",
    };
    let at = left.saturating_sub(unit.len()) as u16;
    buffer.set_string(area.x + at, area.y, unit, state.paint.quiet());

    let numbers = if area.width >= 22 { 6 } else { 2 };
    let start = left + 2;
    let width = usize::from(area.width).saturating_sub(start + 2 + numbers);
    let bars = Bars {
        body,
        axis,
        start,
        width: width.max(3),
    };
    let mut canvas = Canvas::new(bars.width + 1, rows);
    for group in groups(levels.iter().map(|l| l.multiplicity)) {
        let chosen = group.contains(&state.chosen);
        for (k, level) in levels[group.clone()].iter().enumerate() {
            let mark = if group.start + k == state.chosen {
                Ink::Chosen
            } else if chosen {
                Ink::Sibling
            } else {
                Ink::Other
            };
            bars.level(&mut canvas, level, (k, group.len()), mark);
        }
    }
    if let Some(chosen) = levels.get(state.chosen) {
        thermal(state, buffer, area, &bars, &mut canvas, chosen.energy);
    }
    canvas.draw(state, buffer, body, start);
    name_levels(state, buffer, &bars, levels);
}

/// Round numbers down the left side; gives the column after them.
fn marks(state: &State, buffer: &mut Buffer, body: Rect, axis: &Axis) -> usize {
    let most = usize::from(body.height / 4).clamp(3, 12);
    let (all, decimals) = ticks(axis.low, axis.high, most);
    let labels: Vec<String> = all.iter().map(|t| format!("{t:.decimals$}")).collect();
    let wide = labels.iter().map(String::len).max().unwrap_or(0).max(3);
    let dash = if state.ascii() { "-" } else { "╶" };
    for (t, label) in all.iter().zip(&labels) {
        let y = body.y + (axis.dot(*t) / 4) as u16;
        let text = format!("{label:>wide$}{dash}");
        buffer.set_string(body.x, y, text, state.paint.quiet());
    }
    wide
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
enum Ink {
    None,
    Thermal,
    Other,
    Sibling,
    Chosen,
}

/// Where the bars of the levels stand.
struct Bars {
    body: Rect,
    axis: Axis,
    start: usize,
    width: usize,
}

impl Bars {
    /// Columns of copy `k` of `of`.
    fn columns(&self, (k, of): (usize, usize)) -> std::ops::Range<usize> {
        let each = ((self.width + 1) / of.max(1)).saturating_sub(1).max(1);
        let from = (k * (each + 1)).min(self.width - 1);
        from..(from + each).min(self.width)
    }

    fn level(&self, canvas: &mut Canvas, level: &Level, place: (usize, usize), ink: Ink) {
        let columns = self.columns(place);
        let y = self.axis.dot(level.energy);
        for c in columns.clone() {
            canvas.dot(2 * c, y, ink);
            canvas.dot(2 * c + 1, y, ink);
        }
        // the chosen bar stands out, so that it is known from one close by without colour
        if ink == Ink::Chosen && columns.end == self.width {
            canvas.dot(2 * self.width, y, ink);
            canvas.dot(2 * self.width + 1, y, ink);
        }
        let (top, low) = (
            self.axis.dot(level.energy + level.error),
            self.axis.dot(level.energy - level.error),
        );
        if low > top + 1 {
            let middle = columns.start + columns.end;
            for j in top..=low {
                canvas.dot(middle, j, ink);
            }
        }
    }
}

/// The bar from the chosen level up to kT above it, and its line of words.
fn thermal(
    state: &State,
    buffer: &mut Buffer,
    area: Rect,
    bars: &Bars,
    canvas: &mut Canvas,
    energy: f64,
) {
    if state.document.scale == Scale::Reduced {
        return;
    }
    let kt = MEV_PER_KELVIN * state.temperature;
    let (from, to) = (bars.axis.dot(energy), bars.axis.dot(energy + kt));
    for j in to..from {
        canvas.dot(2 * bars.width + 1, j, Ink::Thermal);
    }
    let text = format!(
        "kT {} at {} K",
        significant(kt, 2),
        significant(state.temperature, 2)
    );
    let short = format!("kT {} K", significant(state.temperature, 2));
    let text = if text.len() <= area.width.into() {
        text
    } else {
        short
    };
    Line::from(Span::styled(text, state.paint.quiet()))
        .render(Rect::new(area.x, area.bottom() - 1, area.width, 1), buffer);
}

/// Numbers beside the bars where there is room, the chosen one always.
fn name_levels(state: &State, buffer: &mut Buffer, bars: &Bars, levels: &[Level]) {
    let x = bars.body.x + (bars.start + bars.width + 2) as u16;
    let room = usize::from(bars.body.right().saturating_sub(x));
    let mut taken = vec![false; usize::from(bars.body.height)];
    let all = groups(levels.iter().map(|l| l.multiplicity));
    let (chosen, others): (Vec<_>, Vec<_>) =
        all.into_iter().partition(|g| g.contains(&state.chosen));
    for (g, is_chosen) in chosen
        .into_iter()
        .map(|g| (g, true))
        .chain(others.into_iter().map(|g| (g, false)))
    {
        let row = bars.axis.dot(levels[g.start].energy) / 4;
        if taken[row] || (!is_chosen && room < 5) {
            continue;
        }
        taken[row] = true;
        let (a, b) = (levels[g.start].index, levels[g.end - 1].index);
        let text = if is_chosen {
            levels[state.chosen].index.to_string()
        } else if a == b {
            a.to_string()
        } else {
            format!("{a}-{b}")
        };
        let style = if is_chosen {
            state.paint.accent()
        } else {
            state.paint.quiet()
        };
        let y = bars.body.y + row as u16;
        buffer.set_stringn(x, y, &text, room, style);
        if is_chosen {
            let sign = if state.ascii() { ">" } else { "▸" };
            let x = bars.body.x + bars.start as u16 - 1;
            buffer.set_string(x, y, sign, style);
        }
    }
}

/// Dots with one ink a cell, the strongest winning.
struct Canvas {
    width: usize,
    dots: Vec<u8>,
    inks: Vec<Ink>,
}

impl Canvas {
    fn new(width: usize, rows: usize) -> Self {
        Self {
            width,
            dots: vec![0; width * rows],
            inks: vec![Ink::None; width * rows],
        }
    }

    fn dot(&mut self, x: usize, y: usize, ink: Ink) {
        let (c, k) = (x / 2, (y / 4) * self.width + x / 2);
        if c < self.width && k < self.dots.len() {
            self.dots[k] |= bit(x, y);
            self.inks[k] = self.inks[k].max(ink);
        }
    }

    fn draw(&self, state: &State, buffer: &mut Buffer, body: Rect, start: usize) {
        for (k, (&dots, &ink)) in self.dots.iter().zip(&self.inks).enumerate() {
            if dots == 0 {
                continue;
            }
            let style = match ink {
                Ink::Chosen => state.paint.accent(),
                Ink::Sibling | Ink::Other => Style::new(),
                _ => state.paint.quiet(),
            };
            let (i, j) = (k % self.width, k / self.width);
            let symbol = if state.ascii() {
                letter(dots, ink)
            } else {
                braille(dots)
            };
            let at = (body.x + (start + i) as u16, body.y + j as u16);
            if let Some(cell) = buffer.cell_mut(at) {
                cell.set_char(symbol).set_style(style);
            }
        }
    }
}

/// One letter for up to four bars in a cell.
fn letter(dots: u8, ink: Ink) -> char {
    if ink == Ink::Thermal {
        return '|';
    }
    let lines = [0x09u8, 0x12, 0x24, 0xC0]
        .iter()
        .filter(|row| dots & **row != 0)
        .count();
    match lines {
        0 | 1 if dots & 0xC0 != 0 => '_',
        0 | 1 => '-',
        _ => '=',
    }
}
