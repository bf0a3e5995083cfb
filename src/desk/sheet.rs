//! The sheet: many small plates, to find a mode by its look.

use super::notation::significant;
use super::plate::{develop, outline_only};
use super::state::State;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

/// Draws the page of plates that holds the chosen one.
pub fn sheet(state: &State, buffer: &mut Buffer, area: Rect) {
    let (Some(tiles), Some(mount)) = (state.tiles(), &state.small) else {
        return;
    };
    let look = state.look();
    let first = state.chosen / tiles.page() * tiles.page();
    for k in 0..tiles.page().min(state.count().saturating_sub(first)) {
        let mode = first + k;
        let place = tiles.place(area, k);
        let plate = Rect::new(place.x, place.y, place.width, place.height - 1);
        match state.thumbs.get(&mode) {
            Some(p) => {
                let nodes = state.nodes.then_some(&p.nodes);
                let lines = (&mount.outline, nodes);
                develop(
                    buffer,
                    plate,
                    &mount.sight,
                    &p.exposure,
                    &mount.within,
                    lines,
                    &look,
                );
            }
            None => outline_only(buffer, plate, &mount.sight, &mount.outline, &look),
        }
        label(
            state,
            buffer,
            Rect::new(place.x, place.bottom() - 1, place.width, 1),
            mode,
        );
    }
}

fn label(state: &State, buffer: &mut Buffer, area: Rect, mode: usize) {
    let Some(level) = state
        .solving
        .spectrum
        .as_ref()
        .and_then(|s| s.levels.get(mode))
    else {
        return;
    };
    let energy = significant(level.energy, 4);
    let (sign, style) = match (mode == state.chosen, state.ascii()) {
        (false, _) => (" ", state.paint.quiet()),
        (true, true) => (">", state.paint.accent()),
        (true, false) => ("▸", state.paint.accent()),
    };
    let text = format!("{sign}{}  {energy}", level.index);
    Line::from(Span::styled(text, style))
        .centered()
        .render(area, buffer);
}
