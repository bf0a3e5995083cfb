//! The screen, drawn from the state. Pure: nothing here changes anything or takes long.

use super::foot;
use super::head::head;
use super::help::help;
use super::ladder::ladder;
use super::layout::{Layout, SMALLEST};
use super::plate::{develop, legend, outline_only, scale_bar};
use super::sheet::sheet;
use super::slip::slip;
use super::state::{Overlay, State, View};
use ratatui::Frame;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::{Line, Span};
use ratatui::widgets::Widget;

/// Draws the desk.
pub fn view(state: &State, frame: &mut Frame<'_>) {
    let area = frame.area();
    let buffer = frame.buffer_mut();
    match state.layout() {
        // between a change of the screen and its message the sizes may differ for one frame
        Some(layout) if area.width >= state.size.0 && area.height >= state.size.1 => {
            draw(state, buffer, &layout);
        }
        _ => too_small(state, buffer, area),
    }
    if state.ascii() {
        to_ascii(buffer);
    }
}

fn draw(state: &State, buffer: &mut Buffer, layout: &Layout) {
    head(state, buffer, layout.head);
    match (&state.overlay, state.view) {
        (Some(Overlay::Help(_)), _) => help(state, buffer, layout.body),
        (_, View::Plate) => {
            ladder(state, buffer, layout.ladder);
            plate(state, buffer, layout);
            slip(state, buffer, layout.slip);
        }
        (_, View::Sheet) => sheet(state, buffer, layout.body),
    }
    foot::notice(state, buffer, layout.notice);
    foot::keys(state, buffer, layout.foot);
}

fn plate(state: &State, buffer: &mut Buffer, layout: &Layout) {
    let Some(mount) = &state.mount else {
        return;
    };
    let look = state.look();
    let sight = &mount.sight;
    let area = layout.plate;
    if let Some(p) = state.picture() {
        let nodes = state.nodes.then_some(&p.nodes);
        let lines = (&mount.outline, nodes);
        develop(
            buffer,
            area,
            sight,
            &p.exposure,
            &mount.within,
            lines,
            &look,
        );
    } else {
        outline_only(buffer, area, sight, &mount.outline, &look);
    }
    let room = usize::from(layout.caption.width);
    let bar = Line::from(scale_bar(sight, state.document.scale.length(), room, &look));
    let bar_width = bar.width();
    bar.render(layout.caption, buffer);
    // the words at both ends of the legend, and a gap, take ten cells; below six the shades say
    // little, and lengths matter more
    let cells = room.saturating_sub(bar_width + 10).min(24);
    if cells >= 6 && state.count() > 0 {
        let ramp = Line::from(legend(cells.min(room / 3), &look));
        ramp.right_aligned().render(layout.caption, buffer);
    }
}

fn too_small(state: &State, buffer: &mut Buffer, area: Rect) {
    let lines = [
        format!("{} x {} is too small", area.width, area.height),
        format!("{} x {} is enough", SMALLEST.0, SMALLEST.1),
        "q leaves".into(),
    ];
    let top = area.y + area.height.saturating_sub(3) / 2;
    for (k, text) in lines.iter().enumerate() {
        let row = Rect::new(area.x, top + k as u16, area.width, 1).intersection(area);
        let style = if k == 0 {
            state.paint.accent()
        } else {
            state.paint.quiet()
        };
        if row.height == 1 {
            Line::from(Span::styled(text.as_str(), style))
                .centered()
                .render(row, buffer);
        }
    }
}

/// Last guard of a seven-bit screen: titles and labels come from outside.
fn to_ascii(buffer: &mut Buffer) {
    for cell in &mut buffer.content {
        if !cell.symbol().is_ascii() {
            let plain = match cell.symbol() {
                "²" => "2",
                "³" => "3",
                "×" => "x",
                "–" | "—" | "−" => "-",
                "’" | "‘" => "'",
                "“" | "”" => "\"",
                "µ" | "μ" => "u",
                _ => "?",
            };
            cell.set_symbol(plain);
        }
    }
}
