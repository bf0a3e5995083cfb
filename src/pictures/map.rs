//! One mode on one page: caption above, the field in its outline, scale and colour bar below.

use super::encode::Picture;
use super::field::Field;
use super::furniture::{Page, colour_bar, model, paint, scale_bar};
use super::nodes::nodal_lines;
use super::place::{Area, View, coverage};
use super::text::{Anchor, Type, mix};
use super::{Caption, Look, Nodes, PictureError, Show, new_canvas};
use crate::modes::Modes;
use crate::spectrum::Level;
use crate::units::concise;
use tiny_skia::{LineCap, LineJoin, Stroke, Transform};

/// Lengths on a page of 1200 pixels.
const MARGIN: f64 = 60.0;
const HEADER: f64 = 128.0;
const FOOTER: f64 = 150.0;
/// Size of the title.
pub const TITLE: f32 = 33.0;
/// Size of the line under it.
pub const LINE: f32 = 25.0;
/// An outline is drawn at most this much taller than wide.
const TALLEST: f64 = 1.15;

/// The map of mode `mode` (from 0), which is the mode of `level`.
///
/// # Errors
/// [`PictureError`]: no such mode, a width that is none, an outline without extent.
pub fn map(
    modes: &Modes,
    mode: usize,
    level: &Level,
    caption: &Caption,
    look: &Look,
) -> Result<Picture, PictureError> {
    if mode >= modes.len() {
        return Err(PictureError::NoSuchMode {
            mode: mode + 1,
            count: modes.len(),
        });
    }
    let unit = f64::from(look.width) / 1200.0;
    let bounds = super::extent(modes.outline())?;
    let size = bounds.size();
    let room = f64::from(look.width) - 2.0 * MARGIN * unit;
    let tall = (room * (size.y / size.x).min(TALLEST)).round().max(1.0);
    let height = ((HEADER + FOOTER) * unit + tall).round();
    let palette = look.theme.palette();
    let face = Type::new();
    let canvas = new_canvas(look.width, height, palette.page)?;
    let mut page = Page {
        canvas,
        face: &face,
        palette: &palette,
        unit: unit as f32,
    };

    let area = Area {
        left: MARGIN * unit,
        top: HEADER * unit,
        width: room,
        height: tall,
    };
    let view = View::fit(bounds, area);
    let field = Field::sample(modes, mode, &view, look.width, page.canvas.height());
    let style = Style {
        show: look.show,
        nodes: look.nodes,
        peak: field.peak,
        line: 2.6,
        clipped: false,
    };
    paint_mode(&mut page, modes, &view, &field, &style);

    header(&mut page, level, caption);
    let foot = (area.top + tall) as f32;
    footer(&mut page, foot, &view, &style, caption);
    let mut text = super::standing_text(caption);
    text.extend(level_text(level, caption, look.show));
    Ok(Picture {
        page: page.canvas,
        text,
    })
}

/// How a field is painted.
pub struct Style {
    /// Density or wave.
    pub show: Show,
    /// Whether nodal lines are drawn.
    pub nodes: Nodes,
    /// The |ψ| that gets the end of the colour scale.
    pub peak: f64,
    /// Width of the outline, in 1/1200 of the page.
    pub line: f32,
    /// Whether some values lie beyond the end of the scale.
    pub clipped: bool,
}

/// The field in its outline, nodal lines, and the outline itself.
pub fn paint_mode(page: &mut Page, modes: &Modes, view: &View, field: &Field, style: &Style) {
    let Some(path) = view.path(modes.outline()) else {
        return;
    };
    let Some(cover) = coverage(&path, field.start, field.size) else {
        return;
    };
    paint_field(page, field, cover.data(), style);
    if style.nodes == Nodes::Drawn {
        let (x0, y0) = field.start;
        let inside = |x: usize, y: usize| {
            let (i, j) = (x - x0, y - y0);
            i < field.size.0 && j < field.size.1 && cover.data()[j * field.size.0 + i] == 255
        };
        let stroke = pen((1.5 * page.unit).max(1.0), LineJoin::Round);
        for (strength, lines) in nodal_lines(field, inside) {
            let mut colour = page.palette.page;
            for (under, over) in colour.iter_mut().zip(page.palette.node) {
                *under = mix(*under, over, strength);
            }
            page.canvas
                .stroke_path(&lines, &paint(colour), &stroke, Transform::identity(), None);
        }
    }
    let stroke = pen((style.line * page.unit).max(1.0), LineJoin::Miter);
    let colour = paint(page.palette.ink);
    page.canvas
        .stroke_path(&path, &colour, &stroke, Transform::identity(), None);
}

fn pen(width: f32, line_join: LineJoin) -> Stroke {
    Stroke {
        width,
        line_join,
        line_cap: LineCap::Round,
        ..Stroke::default()
    }
}

fn paint_field(page: &mut Page, field: &Field, cover: &[u8], style: &Style) {
    let w = page.canvas.width() as usize;
    let (scale, peak) = match style.show {
        Show::Density => (&page.palette.density, style.peak * style.peak),
        Show::Wave => (&page.palette.wave, style.peak),
    };
    let inverse = if peak > 0.0 { 1.0 / peak } else { 0.0 };
    let mut row = Vec::new();
    for (j, cover) in cover.chunks(field.size.0).enumerate() {
        field.row(j, &mut row);
        let first = (field.start.1 + j) * w + field.start.0;
        let pixels = &mut page.canvas.data_mut()[4 * first..4 * (first + field.size.0)];
        for ((pixel, &cover), &psi) in pixels.chunks_exact_mut(4).zip(cover).zip(&row) {
            if cover == 0 {
                continue;
            }
            let psi = f64::from(psi);
            let t = match style.show {
                Show::Density => psi * psi * inverse,
                Show::Wave => 0.5 + 0.5 * psi * inverse,
            };
            let part = f32::from(cover) / 255.0;
            for (under, over) in pixel.iter_mut().zip(scale.at(t)) {
                *under = mix(*under, over, part);
            }
        }
    }
}

fn header(page: &mut Page, level: &Level, caption: &Caption) {
    let u = page.unit;
    let (left, room) = (MARGIN as f32 * u, (1200.0 - 2.0 * MARGIN as f32) * u);
    let title = page.face.fitted(&caption.title, TITLE * u, room);
    page.text(
        &title,
        TITLE * u,
        (left, 56.0 * u),
        Anchor::Start,
        page.palette.ink,
    );
    let line = page
        .face
        .fitted(&level_line(level, caption), LINE * u, room);
    page.text(
        &line,
        LINE * u,
        (left, 96.0 * u),
        Anchor::Start,
        page.palette.muted,
    );
}

/// `Level 3 · E = 9.63972(3) meV · twofold · m = ±1`.
fn level_line(level: &Level, caption: &Caption) -> String {
    let mut parts = vec![
        format!("Level {}", level.index),
        format!("E = {}", energy(level, caption)),
    ];
    if level.multiplicity > 1 {
        parts.push(fold(level.multiplicity));
    }
    if let Some(label) = level.label.as_deref().filter(|l| !l.is_empty()) {
        parts.push(super::ticks::minus(label));
    }
    parts.join("  ·  ")
}

/// How often a level occurs, in a word.
fn fold(multiplicity: usize) -> String {
    match multiplicity {
        2 => "twofold".into(),
        3 => "threefold".into(),
        4 => "fourfold".into(),
        n => format!("{n}-fold"),
    }
}

/// Energy and error in the concise notation, with the unit.
fn energy(level: &Level, caption: &Caption) -> String {
    let number = concise(level.energy, level.error);
    format!("{number} {}", caption.units.energy)
        .trim_end()
        .to_owned()
}

fn footer(page: &mut Page, foot: f32, view: &View, style: &Style, caption: &Caption) {
    let u = page.unit;
    let left = MARGIN as f32 * u;
    let bar = Area {
        left: f64::from((1200.0 - MARGIN as f32 - 520.0) * u),
        top: f64::from(foot + 62.0 * u),
        width: f64::from(520.0 * u),
        height: f64::from(18.0 * u),
    };
    colour_bar(page, bar, style, &caption.units);
    scale_bar(
        page,
        left,
        foot + 77.0 * u,
        300.0 * u,
        view.scale,
        &caption.units,
    );
    model(page, left, foot + 107.0 * u, &caption.model);
}

fn level_text(level: &Level, caption: &Caption, show: Show) -> Vec<(&'static str, String)> {
    let unit = |v: f64| {
        format!("{v:e} {}", caption.units.energy)
            .trim_end()
            .to_owned()
    };
    let mut all = vec![
        ("Level", level.index.to_string()),
        ("Energy", energy(level, caption)),
        ("Error", unit(level.error)),
        ("Multiplicity", level.multiplicity.to_string()),
        ("Quantity", show.name().to_owned()),
    ];
    if let Some(label) = &level.label {
        all.push(("Symmetry", label.clone()));
    }
    all
}
