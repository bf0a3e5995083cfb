//! From samples to characters.

use super::exposure::Exposure;
use super::sight::Sight;
use super::strokes::{Strokes, bit, braille};
use crate::desk::capability::Glyphs;
use crate::desk::paint::Paint;
use crate::desk::state::Show;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Color, Style};

/// How maps are drawn.
#[derive(Clone, Copy, Debug)]
pub struct Look<'a> {
    /// With which characters.
    pub glyphs: Glyphs,
    /// In which colours.
    pub paint: &'a Paint,
    /// What of the mode.
    pub show: Show,
}

/// Letters from light to heavy; for waves the positive lobes take them.
pub const RAMP: [char; 10] = [' ', '.', ':', '-', '=', '+', '*', '#', '%', '@'];
/// Round letters from light to heavy, for the negative lobes.
pub const ROUND: [char; 10] = [' ', '.', ',', 'c', 'o', 'e', 'O', 'Q', '0', '8'];

/// Dots of a coloured density are never darker than this, or they would be lost.
pub const FAINTEST: f64 = 0.35;

/// Rows in the order in which negative lobes fill them: they look ruled, not dotted.
const RULED: [f64; 4] = [0.0, 0.5, 0.25, 0.75];

/// Whether the dot (i, j) is inked for a tone in -1..=1. Positive tones are strewn by a sequence
/// of low discrepancy (M. Roberts, 2018, from the plastic number), which shows no grid; negative
/// ones fill every other row first and never more than that, so that signs differ without colour.
pub fn inked(tone: f64, i: usize, j: usize) -> bool {
    let strewn = |i: f64, j: f64| (0.754_877_666_246_69 * i + 0.569_840_290_998_05 * j).fract();
    if tone < 0.0 {
        let row = RULED[j & 3];
        let along = strewn(i as f64, 0.0);
        return row < 0.5 && -tone > row + 0.5 * along;
    }
    // a trace of the scale's foot stays clean
    tone > 0.03 && tone > strewn(i as f64 + 0.5, j as f64)
}

/// What is drawn of a sample: 0..=1 for a density, -1..=1 for a wave.
pub fn tone(value: f32, peak: f32, show: Show) -> f64 {
    if peak <= 0.0 {
        return 0.0;
    }
    let v = f64::from(value / peak);
    match show {
        Show::Density => v * v,
        Show::Wave => v,
    }
}

/// Draws a mode with its outline, and nodal lines when given, into `area`.
pub fn develop(
    buffer: &mut Buffer,
    area: Rect,
    sight: &Sight,
    exposure: &Exposure,
    within: &[bool],
    lines: (&Strokes, Option<&Strokes>),
    look: &Look,
) {
    let (width, _) = sight.dots();
    let (outline, nodes) = lines;
    for r in 0..sight.rows.min(usize::from(area.height)) {
        for c in 0..sight.columns.min(usize::from(area.width)) {
            let cell = Cell {
                exposure,
                within,
                width,
                at: (2 * c, 4 * r),
                show: look.show,
            };
            let k = r * sight.columns + c;
            let (x, y) = (area.x + c as u16, area.y + r as u16);
            let node = nodes.filter(|n| n.dots[k] != 0);
            let Some(target) = buffer.cell_mut((x, y)) else {
                continue;
            };
            let drawn = if outline.dots[k] != 0 {
                stroke(outline, k, look, look.paint.outline(), cell.body(look))
            } else if let Some(n) = node {
                stroke(n, k, look, look.paint.node(), cell.body(look))
            } else {
                match look.glyphs {
                    Glyphs::HalfBlock => cell.halves(look),
                    Glyphs::Braille => cell.dots(look),
                    Glyphs::Plain => cell.letter(look),
                }
            };
            if let Some((symbol, style)) = drawn {
                target.set_char(symbol).set_style(style);
            }
        }
    }
}

/// Draws the outline alone, while there is no mode yet.
pub fn outline_only(
    buffer: &mut Buffer,
    area: Rect,
    sight: &Sight,
    outline: &Strokes,
    look: &Look,
) {
    for r in 0..sight.rows.min(usize::from(area.height)) {
        for c in 0..sight.columns.min(usize::from(area.width)) {
            let k = r * sight.columns + c;
            if let Some((symbol, style)) = stroke(outline, k, look, look.paint.outline(), None)
                && let Some(cell) = buffer.cell_mut((area.x + c as u16, area.y + r as u16))
            {
                cell.set_char(symbol).set_style(style);
            }
        }
    }
}

type Drawn = Option<(char, Style)>;

fn stroke(s: &Strokes, k: usize, look: &Look, style: Style, under: Option<Color>) -> Drawn {
    let symbol = match look.glyphs {
        Glyphs::Plain => s.letters[k]?,
        _ if s.dots[k] == 0 => return None,
        _ => braille(s.dots[k]),
    };
    Some((symbol, under.map_or(style, |c| style.bg(c))))
}

/// The eight dots of one character.
struct Cell<'a> {
    exposure: &'a Exposure,
    within: &'a [bool],
    width: usize,
    at: (usize, usize),
    show: Show,
}

impl Cell<'_> {
    fn tone(&self, i: usize, j: usize) -> Option<f64> {
        let k = (self.at.1 + j) * self.width + self.at.0 + i;
        self.within[k].then(|| tone(self.exposure.values[k], self.exposure.peak, self.show))
    }

    /// Mean tone of some rows of dots, with the share of dots that are inside.
    fn mean(&self, rows: std::ops::Range<usize>) -> Option<(f64, f64)> {
        let all = 2 * rows.len();
        let (mut sum, mut n) = (0.0, 0);
        for j in rows {
            for i in 0..2 {
                if let Some(t) = self.tone(i, j) {
                    sum += t;
                    n += 1;
                }
            }
        }
        (n > 0).then(|| (sum / f64::from(n), f64::from(n) / all as f64))
    }

    fn colour(&self, tone: f64, look: &Look) -> Color {
        match self.show {
            Show::Density => look.paint.density(tone),
            Show::Wave => look.paint.wave(tone),
        }
    }

    /// The ground under a line: the body of the dot where the cell is nearly all inside, so
    /// that no shade shows beyond the line.
    fn body(&self, look: &Look) -> Option<Color> {
        let (tone, share) = self.mean(0..4)?;
        (look.glyphs == Glyphs::HalfBlock && share > 0.8).then(|| self.colour(tone, look))
    }

    fn halves(&self, look: &Look) -> Drawn {
        let half = |rows| self.mean(rows).map(|m| self.colour(m.0, look));
        match (half(0..2), half(2..4)) {
            (None, None) => None,
            (Some(up), None) => Some(('▀', Style::new().fg(up))),
            (None, Some(low)) => Some(('▄', Style::new().fg(low))),
            (Some(up), Some(low)) if up == low => Some((' ', Style::new().bg(up))),
            (Some(up), Some(low)) => Some(('▀', Style::new().fg(up).bg(low))),
        }
    }

    fn dots(&self, look: &Look) -> Drawn {
        let (mean, _) = self.mean(0..4)?;
        let mut bits = 0;
        for j in 0..4 {
            for i in 0..2 {
                let (x, y) = (self.at.0 + i, self.at.1 + j);
                if self.tone(i, j).is_some_and(|t| inked(t, x, y)) {
                    bits |= bit(i, j);
                }
            }
        }
        let style = match self.show {
            _ if !look.paint.coloured() => Style::new(),
            Show::Wave => look.paint.lobe(mean > 0.0),
            Show::Density if look.paint.shades() => {
                Style::new().fg(look.paint.density(mean.max(FAINTEST)))
            }
            Show::Density => Style::new(),
        };
        (bits != 0).then(|| (braille(bits), style))
    }

    fn letter(&self, look: &Look) -> Drawn {
        let (tone, _) = self.mean(0..4)?;
        let ramp = if tone < 0.0 { &ROUND } else { &RAMP };
        let last = ramp.len() - 1;
        let symbol = ramp[((tone.abs() * last as f64).round() as usize).min(last)];
        let style = match self.show {
            Show::Wave if look.paint.coloured() => look.paint.lobe(tone > 0.0),
            _ => Style::new(),
        };
        (symbol != ' ').then_some((symbol, style))
    }
}
