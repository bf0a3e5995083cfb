//! The two lines at the bottom: messages and questions, and the keys that work here.

use super::actions::{ACTIONS, Deed, Entry};
use super::head::shorten;
use super::state::{Overlay, Question, Show, State};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

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
        Line::styled(text, style).render(area, buffer);
    }
}

/// Draws the keys.
pub fn keys(state: &State, buffer: &mut Buffer, area: Rect) {
    let place = state.place();
    let here: Vec<&Entry> = ACTIONS
        .iter()
        .filter(|e| e.places.contains(&place) && !e.hint.is_empty())
        .collect();
    let mut spans = Vec::new();
    let mut used = 0;
    for group in here.chunk_by(|a, b| a.hint == b.hint) {
        let labels: Vec<String> = group
            .iter()
            .filter_map(|e| e.keys.first())
            .map(|k| k.label(state.ascii()))
            .collect();
        let one_cell = labels.iter().all(|l| l.chars().count() == 1);
        let label = labels.join(if one_cell { "" } else { "/" });
        let word = word(state, group[0]);
        let long = label.chars().count() + 1 + word.len();
        let before = if used == 0 { 0 } else { 3 };
        if used + before + long > usize::from(area.width) {
            break;
        }
        spans.push(Span::raw(" ".repeat(before)));
        spans.push(Span::styled(
            label,
            Style::new().add_modifier(Modifier::BOLD),
        ));
        spans.push(Span::styled(format!(" {word}"), state.paint.quiet()));
        used += before + long;
    }
    Line::from(spans).render(area, buffer);
}

/// The word beside a key; for a switch, what it would switch to.
fn word(state: &State, entry: &Entry) -> &'static str {
    match (entry.deed, state.show) {
        (Deed::Show, Show::Wave) => "density",
        _ => entry.hint,
    }
}
