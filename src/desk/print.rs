//! One map as text, for a run without a terminal.

use super::capability::{Background, Colours, Glyphs};
use super::document::Document;
use super::paint::Paint;
use super::plate::{Exposure, Look, develop, flatten, legend, scale_bar};
use super::state::{Mount, Show};
use crate::spectrum::Spectrum;
use ratatui::buffer::Buffer;
use ratatui::layout::Rect;
use ratatui::text::Line;
use ratatui::widgets::Widget;

/// The density of mode `mode` (from 0) inside its outline, at most `cells` columns and rows, with
/// a scale bar and a legend under it. No colours, no control characters; empty when there is no
/// such mode.
pub fn print_map(
    document: &Document,
    spectrum: &Spectrum,
    mode: usize,
    glyphs: Glyphs,
    cells: (u16, u16),
) -> String {
    let lines = flatten(&document.model.outline);
    let (columns, rows) = (cells.0.clamp(4, 500), cells.1.clamp(4, 300));
    let plate = Rect::new(0, 0, columns, rows - 2);
    let size = (usize::from(plate.width), usize::from(plate.height));
    let bounds = document.model.outline.bounds();
    let Some(mount) = Mount::new(&lines, bounds, size, 2.0) else {
        return String::new();
    };
    if mode >= spectrum.modes.len() {
        return String::new();
    }
    let paint = Paint::new(Colours::None, Background::Dark, 0);
    let look = Look {
        glyphs: match glyphs {
            Glyphs::Plain => Glyphs::Plain,
            _ => Glyphs::Braille,
        },
        paint: &paint,
        show: Show::Density,
    };
    let exposure = Exposure::take(&spectrum.modes, mode, &mount.sight);
    let mut buffer = Buffer::empty(Rect::new(0, 0, columns, rows));
    develop(
        &mut buffer,
        plate,
        &mount.sight,
        &exposure,
        &mount.within,
        (&mount.outline, None),
        &look,
    );
    let caption = Rect::new(0, rows - 1, columns, 1);
    let ramp = Line::from(legend(10, &look));
    let left = usize::from(columns).saturating_sub(ramp.width() + 2);
    let bar = scale_bar(&mount.sight, document.scale.length(), left, &look);
    Line::from(bar).render(caption, &mut buffer);
    ramp.right_aligned().render(caption, &mut buffer);
    text_of(&buffer)
}

/// The characters of a buffer, line by line, without trailing blanks.
pub fn text_of(buffer: &Buffer) -> String {
    let width = usize::from(buffer.area.width).max(1);
    let mut out = String::new();
    for row in buffer.content.chunks(width) {
        let line: String = row.iter().map(|c| c.symbol()).collect();
        out.push_str(line.trim_end());
        out.push('\n');
    }
    out
}
