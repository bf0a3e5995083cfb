//! What shades and lengths mean: the line under the plate.

use super::develop::{FAINTEST, Look, RAMP, ROUND, inked};
use super::sight::Sight;
use super::strokes::{bit, braille};
use crate::desk::capability::Glyphs;
use crate::desk::notation::significant;
use crate::desk::round::round_below;
use crate::desk::state::Show;
use ratatui::style::Style;
use ratatui::text::Span;

/// A bar of a round length, with that length beside it; at most `room` cells in all.
pub fn scale_bar(sight: &Sight, unit: &str, room: usize, look: &Look) -> Vec<Span<'static>> {
    let target = (room / 3).min(sight.columns / 3).max(2);
    let length = round_below(target as f64 * sight.cell());
    let cells = ((length / sight.cell()).round() as usize).max(1);
    let bar = match (look.glyphs, cells) {
        (Glyphs::Plain, 1) => "|".into(),
        (Glyphs::Plain, n) => format!("|{}|", "-".repeat(n - 2)),
        (_, 1) => "│".into(),
        (_, n) => format!("├{}┤", "─".repeat(n - 2)),
    };
    let text = format!(" {}{unit}", plain_number(length));
    if cells + text.len() > room {
        return Vec::new();
    }
    vec![
        Span::styled(bar, look.paint.outline()),
        Span::styled(text, look.paint.quiet()),
    ]
}

fn plain_number(x: f64) -> String {
    let s = significant(x, 1);
    if s.contains('e') || x < 1.0 {
        s
    } else {
        format!("{x:.0}")
    }
}

/// The ramp from nothing to most, `cells` wide, with words at both ends.
pub fn legend(cells: usize, look: &Look) -> Vec<Span<'static>> {
    let (first, last) = match look.show {
        Show::Density => ("0 ", " most"),
        Show::Wave => ("- ", " +"),
    };
    let mut spans = vec![Span::styled(first, look.paint.quiet())];
    for k in 0..cells {
        let t = (k as f64 + 0.5) / cells as f64;
        let tone = match look.show {
            Show::Density => t,
            Show::Wave => 2.0 * t - 1.0,
        };
        spans.push(swatch(tone, k, look));
    }
    spans.push(Span::styled(last, look.paint.quiet()));
    spans
}

fn swatch(tone: f64, k: usize, look: &Look) -> Span<'static> {
    match look.glyphs {
        Glyphs::HalfBlock => {
            let colour = match look.show {
                Show::Density => look.paint.density(tone),
                Show::Wave => look.paint.wave(tone),
            };
            Span::styled(" ", Style::new().bg(colour))
        }
        Glyphs::Braille => {
            let mut bits = 0;
            for j in 0..4 {
                for i in 0..2 {
                    if inked(tone, 2 * k + i, j) {
                        bits |= bit(i, j);
                    }
                }
            }
            let style = match look.show {
                Show::Wave if look.paint.coloured() => look.paint.lobe(tone > 0.0),
                Show::Density if look.paint.shades() => {
                    Style::new().fg(look.paint.density(tone.max(FAINTEST)))
                }
                _ => Style::new(),
            };
            Span::styled(braille(bits).to_string(), style)
        }
        Glyphs::Plain => {
            let ramp = if tone < 0.0 { &ROUND } else { &RAMP };
            let last = ramp.len() - 1;
            let letter = ramp[((tone.abs() * last as f64).round() as usize).min(last)];
            let style = match look.show {
                Show::Wave if look.paint.coloured() => look.paint.lobe(tone > 0.0),
                _ => Style::new(),
            };
            Span::styled(letter.to_string(), style)
        }
    }
}
