//! The help page: every key that works in the view underneath, read from the action table.

use super::actions::{ACTIONS, Entry, Place};
use super::state::{Overlay, State, View};
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::style::{Modifier, Style};
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

fn entries(state: &State) -> Vec<&'static Entry> {
    let place = match state.view {
        View::Plate => Place::Plate,
        View::Sheet => Place::Sheet,
    };
    ACTIONS
        .iter()
        .filter(|e| e.places.contains(&place))
        .collect()
}

/// Lines of the page that fit under its heading.
fn room(area: Rect) -> usize {
    usize::from(area.height.saturating_sub(2))
}

/// How far the page can be scrolled.
pub fn most_scroll(state: &State) -> usize {
    let fits = state.layout().map_or(0, |l| room(l.body));
    entries(state).len().saturating_sub(fits)
}

/// Draws the page over the view.
pub fn help(state: &State, buffer: &mut Buffer, area: Rect) {
    let Some(Overlay::Help(scroll)) = state.overlay else {
        return;
    };
    let view = match state.view {
        View::Plate => "Keys on the plate",
        View::Sheet => "Keys on the sheet",
    };
    Line::from(Span::styled(view, state.paint.accent())).render(row(area, 0), buffer);
    let all = entries(state);
    let scroll = scroll.min(most_scroll(state));
    let fits = room(area);
    for (k, e) in all.iter().skip(scroll).take(fits).enumerate() {
        let keys: Vec<String> = e.keys.iter().map(|k| k.label(state.ascii())).collect();
        let line = Line::from(vec![
            Span::styled(
                format!("{:<15}", keys.join(" ")),
                Style::new().add_modifier(Modifier::BOLD),
            ),
            Span::styled(e.text, state.paint.quiet()),
        ]);
        line.render(row(area, 2 + k as u16), buffer);
    }
    if all.len() > fits {
        let text = format!(
            "{}-{} of {}",
            scroll + 1,
            (scroll + fits).min(all.len()),
            all.len()
        );
        Line::from(Span::styled(text, state.paint.quiet()))
            .right_aligned()
            .render(row(area, 0), buffer);
    }
}

fn row(area: Rect, k: u16) -> Rect {
    Rect::new(area.x, area.y + k, area.width, 1).intersection(area)
}
