//! Many modes on one page, all to the same scales.

use super::encode::Picture;
use super::field::Field;
use super::furniture::{Page, SMALL, colour_bar, model, scale_bar};
use super::map::{LINE, Style, TITLE, paint_mode};
use super::place::{Area, View};
use super::text::{Anchor, Type};
use super::{Caption, Look, PictureError, new_canvas};
use crate::modes::Modes;
use crate::spectrum::Level;
use crate::units::concise;

/// Lengths on a page of 1200 pixels.
const MARGIN: f64 = 60.0;
const GAP: f64 = 30.0;
const HEADER: f64 = 128.0;
const FOOTER: f64 = 126.0;
const LEGEND: f64 = 40.0;
/// Space between number and energy, in type sizes.
const APART: f32 = 0.55;
/// The common scale ends at this many times the median of the modes' peaks in |ψ|.
const LATITUDE: f64 = 1.2;
/// How far the type of legends may shrink.
const SMALLEST: f32 = 0.72;

/// A page of all `levels`, mode k belonging to the k-th.
///
/// # Errors
/// [`PictureError`]: no mode at all, a width that is none, an outline without extent.
pub fn sheet(
    modes: &Modes,
    levels: &[Level],
    caption: &Caption,
    look: &Look,
) -> Result<Picture, PictureError> {
    let count = modes.len().min(levels.len());
    if count == 0 {
        return Err(PictureError::NoSuchMode { mode: 1, count: 0 });
    }
    let unit = f64::from(look.width) / 1200.0;
    let bounds = super::extent(modes.outline())?;
    let size = bounds.size();
    let aspect = (size.y / size.x).min(1.6);
    let palette = look.theme.palette();
    let face = Type::new();
    let widest = widest_legend(&face, &levels[..count]);
    let columns = columns(count, aspect, widest);
    let rows = count.div_ceil(columns);
    let gap = GAP * unit;
    let room = f64::from(look.width) - 2.0 * MARGIN * unit;
    let wide = (room - gap * (columns - 1) as f64) / columns as f64;
    let tall = (wide * aspect).max(1.0);
    let pitch = tall + LEGEND * unit + gap;
    let height = ((HEADER + FOOTER) * unit + pitch * rows as f64).round();
    let canvas = new_canvas(look.width, height, palette.page)?;
    let mut page = Page {
        canvas,
        face: &face,
        palette: &palette,
        unit: unit as f32,
    };

    let areas: Vec<Area> = (0..count)
        .map(|k| Area {
            left: MARGIN * unit + (k % columns) as f64 * (wide + gap),
            top: HEADER * unit + (k / columns) as f64 * pitch,
            width: wide,
            height: tall,
        })
        .collect();
    let (w, h) = (look.width, page.canvas.height());
    let fields: Vec<(View, Field)> = areas
        .iter()
        .enumerate()
        .map(|(k, &area)| {
            let view = View::fit(bounds, area);
            (view, Field::sample(modes, k, &view, w, h))
        })
        .collect();
    let (peak, clipped) = exposure(fields.iter().map(|f| f.1.peak));
    let style = Style {
        show: look.show,
        nodes: look.nodes,
        peak,
        line: 1.8,
        clipped,
    };
    let type_size = SMALL * page.unit * ((wide / unit) as f32 / widest).clamp(SMALLEST, 1.0);
    for (k, (view, field)) in fields.iter().enumerate() {
        paint_mode(&mut page, modes, view, field, &style);
        legend(&mut page, &areas[k], &levels[k], type_size);
    }
    let room = wide.min(300.0 * unit) as f32;
    frame(&mut page, (fields[0].0.scale, room), &style, caption);
    head(&mut page, &levels[..count], caption);
    let mut text = super::standing_text(caption);
    text.push((
        "Levels",
        format!("{} to {}", levels[0].index, levels[count - 1].index),
    ));
    text.push(("Quantity", look.show.name().to_owned()));
    Ok(Picture {
        page: page.canvas,
        text,
    })
}

/// The |ψ| at the end of the common scale, and whether some panels go beyond: a mode with one
/// sharp peak would make all others pale, so the scale ends near the peaks of most.
fn exposure(peaks: impl Iterator<Item = f64>) -> (f64, bool) {
    let mut peaks: Vec<f64> = peaks.collect();
    peaks.sort_by(f64::total_cmp);
    let highest = peaks.last().copied().unwrap_or(0.0);
    let end = LATITUDE * peaks.get(peaks.len() / 2).copied().unwrap_or(0.0);
    (end.min(highest), end < highest)
}

/// Columns for `count` panels of this height to width, so that the page is about as high as wide
/// and the widest legend, in pixels of a page of 1200, keeps a legible size.
fn columns(count: usize, aspect: f64, legend: f32) -> usize {
    let cell = aspect + 0.25;
    let best = (count as f64 * cell).sqrt().round() as usize;
    let room = 1200.0 - 2.0 * MARGIN + GAP;
    let legible = room / (f64::from(legend * SMALLEST) + GAP);
    best.min(legible as usize).clamp(1, count.min(8))
}

fn widest_legend(face: &Type, levels: &[Level]) -> f32 {
    let width = |l: &Level| {
        let number = face.width(&l.index.to_string(), SMALL);
        number + APART * SMALL + face.width(&concise(l.energy, l.error), SMALL)
    };
    levels.iter().map(width).fold(1.0, f32::max)
}

/// Number and energy under a panel, in type of `size` pixels.
fn legend(page: &mut Page, area: &Area, level: &Level, size: f32) {
    let (left, width) = (area.left as f32, area.width as f32);
    let y = (area.top + area.height) as f32 + 30.0 * page.unit;
    let number = level.index.to_string();
    let (ink, muted) = (page.palette.ink, page.palette.muted);
    let first = page.face.width(&number, size) + APART * size;
    let text = concise(level.energy, level.error);
    let text = page
        .face
        .fitted(&text, size, (width - first).max(0.0) + page.unit);
    let whole = first + page.face.width(&text, size);
    let x = left + (width - whole).max(0.0) / 2.0;
    page.text(&number, size, (x, y), Anchor::Start, muted);
    page.text(&text, size, (x + first, y), Anchor::Start, ink);
}

/// Title, and which levels these are.
fn head(page: &mut Page, levels: &[Level], caption: &Caption) {
    let u = page.unit;
    let (left, room) = (MARGIN as f32 * u, (1200.0 - 2.0 * MARGIN as f32) * u);
    let (ink, muted) = (page.palette.ink, page.palette.muted);
    let title = page.face.fitted(&caption.title, TITLE * u, room);
    page.text(&title, TITLE * u, (left, 56.0 * u), Anchor::Start, ink);
    let range = match levels {
        [one] => format!("Level {}", one.index),
        _ => format!(
            "Levels {} to {}",
            levels[0].index,
            levels[levels.len() - 1].index
        ),
    };
    let line = match caption.units.energy.as_str() {
        "" => range,
        unit => format!("{range}  ·  E in {unit}"),
    };
    page.text(&line, LINE * u, (left, 96.0 * u), Anchor::Start, muted);
}

fn frame(page: &mut Page, (scale, room): (f64, f32), style: &Style, caption: &Caption) {
    let u = page.unit;
    let left = MARGIN as f32 * u;
    let foot = page.canvas.height() as f32 - FOOTER as f32 * u;
    let bar = Area {
        left: f64::from((1200.0 - MARGIN as f32 - 520.0) * u),
        top: f64::from(foot + 40.0 * u),
        width: f64::from(520.0 * u),
        height: f64::from(18.0 * u),
    };
    colour_bar(page, bar, style, &caption.units);
    scale_bar(page, left, foot + 55.0 * u, room, scale, &caption.units);
    model(page, left, foot + 85.0 * u, &caption.model);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn panels_fill_the_page() {
        assert_eq!(columns(1, 1.0, 100.0), 1);
        assert_eq!(columns(20, 1.0, 100.0), 5);
        assert!(columns(20, 0.3, 100.0) <= 4 && columns(20, 1.6, 100.0) >= 6);
        assert_eq!(columns(2000, 1.0, 100.0), 8);
        assert_eq!(columns(20, 1.6, 300.0), 4);
    }
}
