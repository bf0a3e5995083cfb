//! The top line: what lies on the desk, and how sure its levels are.

use super::state::{Running, State};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;
use std::time::Duration;
use unicode_width::UnicodeWidthStr;

/// A job shorter than this needs no gauge.
const PATIENCE: Duration = Duration::from_millis(500);

/// Draws the top line.
pub fn head(state: &State, buffer: &mut Buffer, area: Rect) {
    let right = status(state);
    let room = usize::from(area.width).saturating_sub(right.width() + 2);
    let title = shorten(&state.document.title, room, state.ascii());
    let style = Style::new().add_modifier(Modifier::BOLD);
    Line::from(Span::styled(title, style)).render(area, buffer);
    right.right_aligned().render(area, buffer);
}

/// Text cut to `room` cells, with a sign that something is missing, and without control
/// characters.
pub fn shorten(text: &str, room: usize, ascii: bool) -> String {
    let clean: String = text
        .chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect();
    if clean.width() <= room {
        return clean;
    }
    let sign = if ascii { "..." } else { "…" };
    let mut out = String::new();
    for c in clean.chars() {
        let mut longer = out.clone();
        longer.push(c);
        if longer.width() + sign.width() > room {
            break;
        }
        out = longer;
    }
    out + sign
}

fn status(state: &State) -> Line<'static> {
    let paint = &state.paint;
    if let Some(r) = &state.solving.running {
        return gauge(state, "solving", r);
    }
    if let Some(since) = state.exporting {
        return gauge(
            state,
            "writing the picture",
            &Running {
                since,
                step: None,
                stage: since,
            },
        );
    }
    if state.solving.failure.is_some() {
        return Line::from(Span::styled("no levels", paint.alarm()));
    }
    let Some(s) = &state.solving.spectrum else {
        return Line::default();
    };
    let n = s.levels.len();
    let levels = if n == 1 { "level" } else { "levels" };
    if s.certificate.complete {
        Line::from(Span::styled(
            format!("{n} {levels}, none missing"),
            paint.quiet(),
        ))
    } else {
        Line::from(Span::styled(
            format!("{n} {levels}, count not proven"),
            paint.alarm(),
        ))
    }
}

/// Words for a job under way; a bar, a percentage and the time left once it takes a while.
fn gauge(state: &State, word: &str, running: &Running) -> Line<'static> {
    let paint = &state.paint;
    let elapsed = state.now.saturating_sub(running.since);
    let mut spans = vec![Span::styled(word.to_string(), paint.quiet())];
    let Some(step) = running.step.filter(|s| s.of > 0) else {
        if elapsed > PATIENCE {
            spans.push(Span::styled(
                format!("  {} s", elapsed.as_secs()),
                paint.quiet(),
            ));
        }
        return Line::from(spans);
    };
    if elapsed <= PATIENCE {
        return Line::from(spans);
    }
    let part = (step.done as f64 / step.of as f64).clamp(0.0, 1.0);
    spans.push(Span::styled(format!(", {}  ", step.what), paint.quiet()));
    const CELLS: usize = 12;
    let full = (part * CELLS as f64).round() as usize;
    let (on, off) = if state.ascii() {
        ("#", ".")
    } else {
        ("━", "─")
    };
    spans.push(Span::styled(on.repeat(full), paint.accent()));
    spans.push(Span::styled(off.repeat(CELLS - full), paint.quiet()));
    spans.push(Span::raw(format!(" {:>3.0} %", 100.0 * part)));
    if part > 0.05 {
        let spent = state.now.saturating_sub(running.stage).as_secs_f64();
        let left = spent * (1.0 - part) / part;
        if left >= 1.0 {
            let text = format!("  {left:.0} s left");
            spans.push(Span::styled(text, paint.quiet()));
        }
    }
    Line::from(spans)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn titles_are_cut_by_cells_not_bytes() {
        assert_eq!(shorten("Zwei\tPunkte", 20, false), "Zwei Punkte");
        assert_eq!(shorten("αβγδε", 4, false), "αβγ…");
        assert_eq!(shorten("量子点量子点", 7, false), "量子点…");
        assert_eq!(shorten("abcdef", 5, true), "ab...");
    }
}
