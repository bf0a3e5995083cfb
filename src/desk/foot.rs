//! The two lines at the bottom: messages and questions, and the keys that work here.

use super::actions::{ACTIONS, Deed, Entry};
use super::head::shorten;
use super::state::{Overlay, Question, Show, State};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;
use unicode_width::UnicodeWidthStr;

/// Draws the line of messages and questions.
pub fn notice(state: &State, buffer: &mut Buffer, area: Rect) {
    if let Some(Overlay::Question(question, typed)) = &state.overlay {
        let words = match question {
            Question::Level => "level number, or energy with a point: ",
            Question::Temperature => "temperature in kelvin: ",
        };
        Line::from(vec![
            Span::styled(words, state.paint.quiet()),
            Span::styled(typed.clone(), state.paint.accent()),
            Span::styled(" ", Style::new().add_modifier(Modifier::REVERSED)),
        ])
        .render(area, buffer);
    } else if let Some(m) = &state.message {
        let style = if m.alarm {
            state.paint.alarm()
        } else {
            state.paint.accent()
        };
        let text = shorten(&m.text, area.width.into(), state.ascii());
        Line::from(Span::styled(text, style)).render(area, buffer);
    }
}

/// A place on the line of keys.
struct Hint {
    label: String,
    word: &'static str,
}

impl Hint {
    fn width(&self) -> usize {
        self.label.width() + 1 + self.word.width()
    }
}

/// Draws the keys. Where they do not all fit, those before the last three (back, help, quit) go.
pub fn keys(state: &State, buffer: &mut Buffer, area: Rect) {
    let room = usize::from(area.width);
    let mut hints = hints(state);
    let width = |hints: &[Hint], gap: usize| {
        let all: usize = hints.iter().map(Hint::width).sum();
        all + gap * hints.len().saturating_sub(1)
    };
    let gap = if width(&hints, 3) <= room { 3 } else { 2 };
    while width(&hints, gap) > room && hints.len() > 3 {
        hints.remove(hints.len() - 4);
    }
    let mut spans = Vec::new();
    for (k, hint) in hints.into_iter().enumerate() {
        spans.push(Span::raw(" ".repeat(if k == 0 { 0 } else { gap })));
        spans.push(Span::styled(
            hint.label,
            Style::new().add_modifier(Modifier::BOLD),
        ));
        spans.push(Span::styled(format!(" {}", hint.word), state.paint.quiet()));
    }
    Line::from(spans).render(area, buffer);
}

fn hints(state: &State) -> Vec<Hint> {
    let place = state.place();
    let here: Vec<&Entry> = ACTIONS
        .iter()
        .filter(|e| e.places.contains(&place) && !e.hint.is_empty())
        .collect();
    here.chunk_by(|a, b| a.hint == b.hint)
        .map(|group| {
            let first = group.iter().filter_map(|e| e.keys.first());
            let labels: Vec<String> = first.map(|k| k.label(state.ascii())).collect();
            let one_cell = labels.iter().all(|l| l.width() == 1);
            Hint {
                label: labels.join(if one_cell { "" } else { "/" }),
                word: word(state, group[0]),
            }
        })
        .collect()
}

/// The word beside a key; for a switch, what it would switch to.
fn word(state: &State, entry: &Entry) -> &'static str {
    match (entry.deed, state.show) {
        (Deed::Show, Show::Wave) => "density",
        _ => entry.hint,
    }
}
