//! What stands under a map: the scale bar and the colour bar.

use super::map::Style;
use super::place::Area;
use super::scale::Scale;
use super::text::{Anchor, Type};
use super::theme::Palette;
use super::ticks::{decade, minus, round_below, superscript, ticks};
use super::{Show, Units};
use tiny_skia::{Color, FillRule, Paint, PathBuilder, Pixmap, Rect, Stroke, Transform};

/// Sizes that belong to a page of 1200 pixels, in its pixels.
pub const SMALL: f32 = 21.0;

/// A page being drawn: its canvas, its type and colours, and how large a unit of 1/1200 width is.
pub struct Page<'a> {
    /// The pixels.
    pub canvas: Pixmap,
    /// The typeface.
    pub face: &'a Type,
    /// The colours.
    pub palette: &'a Palette,
    /// Pixels to 1/1200 of the width.
    pub unit: f32,
}

impl Page<'_> {
    /// A line of text; size and place in pixels.
    pub fn text(&mut self, text: &str, size: f32, at: (f32, f32), anchor: Anchor, rgb: [u8; 3]) {
        self.face
            .draw(&mut self.canvas, text, size, at, anchor, rgb);
    }

    /// A filled rectangle, pixels; anti-aliased.
    pub fn fill(&mut self, left: f32, top: f32, width: f32, height: f32, rgb: [u8; 3]) {
        if let Some(rect) = Rect::from_xywh(left, top, width, height) {
            let path = PathBuilder::from_rect(rect);
            self.canvas.fill_path(
                &path,
                &paint(rgb),
                FillRule::Winding,
                Transform::identity(),
                None,
            );
        }
    }
}

/// An opaque, anti-aliased paint.
pub fn paint(rgb: [u8; 3]) -> Paint<'static> {
    let mut paint = Paint::default();
    paint.set_color(Color::from_rgba8(rgb[0], rgb[1], rgb[2], 255));
    paint.anti_alias = true;
    paint
}

/// What was modelled, left of the colour bar: smaller type before a word is lost.
pub fn model(page: &mut Page, left: f32, baseline: f32, text: &str) {
    let room = 525.0 * page.unit;
    let full = 0.88 * SMALL * page.unit;
    let fit = room / page.face.width(text, full).max(1.0);
    let size = full * fit.clamp(0.75, 1.0);
    let text = page.face.fitted(text, size, room + 1.0);
    let muted = page.palette.muted;
    page.text(&text, size, (left, baseline), Anchor::Start, muted);
}

/// A bar of a round length, at most `room` pixels long, its left end at `left`; the label above.
/// `scale` is pixels to a unit of length.
pub fn scale_bar(page: &mut Page, left: f32, baseline: f32, room: f32, scale: f64, units: &Units) {
    let length = round_below(f64::from(room) / scale);
    if length <= 0.0 {
        return;
    }
    let (u, ink) = (page.unit, page.palette.ink);
    let width = (length * scale) as f32;
    let thick = (3.0 * u).round().max(1.0);
    let top = baseline.round();
    page.fill(left, top, width, thick, ink);
    let foot = (9.0 * u).round();
    let stem = thick.min((2.5 * u).round().max(1.0));
    page.fill(left, top - foot, stem, foot + thick, ink);
    page.fill(left + width - stem, top - foot, stem, foot + thick, ink);
    let label = join(&plain(length), &units.length);
    let middle = left + width / 2.0;
    let size = SMALL * u;
    let half = page.face.width(&label, size) / 2.0;
    let x = middle.max(left + half);
    page.text(&label, size, (x, top - foot - 7.0 * u), Anchor::Middle, ink);
}

/// A length without needless zeros, with an exponent when it has become unreadable.
fn plain(x: f64) -> String {
    if (1e-4..1e7).contains(&x) {
        let digits = (-x.log10().floor()).max(0.0) as usize;
        format!("{x:.digits$}")
    } else {
        let k = x.log10().floor() as i32;
        format!("{:.0}·10{}", x / 10f64.powi(k), superscript(k))
    }
}

fn join(number: &str, unit: &str) -> String {
    if unit.is_empty() {
        number.to_owned()
    } else {
        format!("{number} {unit}")
    }
}

/// A horizontal bar of the scale from lowest to highest value, with ticks below and a label above.
/// `area` is the bar itself; where values lie beyond the scale, its end is a point.
pub fn colour_bar(page: &mut Page, area: Area, style: &Style, units: &Units) {
    let (show, peak) = (style.show, style.peak);
    let (u, ink, muted) = (page.unit, page.palette.ink, page.palette.muted);
    let (scale, lo, hi) = match show {
        Show::Density => (page.palette.density.clone(), 0.0, peak * peak),
        Show::Wave => (page.palette.wave.clone(), -peak, peak),
    };
    strip(page, area, &scale);
    if style.clipped {
        point(page, area, area.left + area.width, scale.at(1.0));
        if show == Show::Wave {
            point(page, area, area.left, scale.at(0.0));
        }
    }
    let k = decade(hi);
    let factor = 10f64.powi(k);
    let (left, width) = (area.left as f32, area.width as f32);
    let bottom = (area.top + area.height) as f32;
    for (v, text) in ticks(lo / factor, hi / factor, 5) {
        let x = left + ((v * factor - lo) / (hi - lo)) as f32 * width;
        let thin = (1.5 * u).max(1.0);
        page.fill(x - thin / 2.0, bottom, thin, 7.0 * u, muted);
        // a sign must not push the digits off their tick
        let shift = if v < 0.0 {
            page.face.width("−", SMALL * u) / 2.0
        } else {
            0.0
        };
        let at = (x - shift, bottom + (7.0 + 20.0) * u);
        page.text(&text, SMALL * u, at, Anchor::Middle, ink);
    }
    let label = quantity(show, k, units);
    let at = (left, area.top as f32 - 11.0 * u);
    page.text(&label, SMALL * u, at, Anchor::Start, ink);
}

/// The quantity and its unit: `|ψ|² in 10⁻⁴ nm⁻²`.
fn quantity(show: Show, decade: i32, units: &Units) -> String {
    let (symbol, power) = match show {
        Show::Density => ("|ψ|²", -2),
        Show::Wave => ("ψ", -1),
    };
    let factor = match decade {
        0 => String::new(),
        k => format!("10{}", superscript(k)),
    };
    let unit = match units.length.as_str() {
        "" => String::new(),
        length => format!("{length}{}", superscript(power)),
    };
    let what = [factor, unit]
        .into_iter()
        .filter(|s| !s.is_empty())
        .collect::<Vec<_>>();
    if what.is_empty() {
        symbol.to_owned()
    } else {
        minus(&format!("{symbol} in {}", what.join(" ")))
    }
}

/// A triangle at the end `x` of a bar, pointing away from its middle.
fn point(page: &mut Page, area: Area, x: f64, colour: [u8; 3]) {
    let out = if x > area.left { 0.8 } else { -0.8 } * area.height;
    let (x, top) = (x.round() as f32, area.top.round() as f32);
    let height = area.height.round() as f32;
    let thin = (1.5 * page.unit).max(1.0);
    // the base reaches into the bar and hides its frame
    let base = x - out.signum() as f32 * 2.0 * thin;
    let mut builder = PathBuilder::new();
    builder.move_to(base, top);
    builder.line_to(x, top);
    builder.line_to(x + out as f32, top + height / 2.0);
    builder.line_to(x, top + height);
    builder.line_to(base, top + height);
    let Some(path) = builder.finish() else {
        return;
    };
    let whole = Transform::identity();
    let stroke = Stroke {
        width: 2.0 * thin,
        ..Stroke::default()
    };
    let edge = paint(page.palette.muted);
    page.canvas.stroke_path(&path, &edge, &stroke, whole, None);
    page.canvas
        .fill_path(&path, &paint(colour), FillRule::Winding, whole, None);
}

/// The colours themselves, column by column, in a thin frame.
fn strip(page: &mut Page, area: Area, scale: &Scale) {
    let thin = (1.5 * page.unit).max(1.0);
    let muted = page.palette.muted;
    let (l, t) = (area.left.round() as f32, area.top.round() as f32);
    let (w, h) = (area.width.round() as f32, area.height.round() as f32);
    page.fill(l - thin, t - thin, w + 2.0 * thin, h + 2.0 * thin, muted);
    for x in 0..w as usize {
        let colour = scale.at((x as f64 + 0.5) / f64::from(w));
        page.fill(l + x as f32, t, 1.0, h, colour);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn labels_read_as_written_by_hand() {
        let nm = Units {
            energy: "meV".into(),
            length: "nm".into(),
        };
        let none = Units {
            energy: String::new(),
            length: String::new(),
        };
        assert_eq!(quantity(Show::Density, -4, &nm), "|ψ|² in 10⁻⁴ nm⁻²");
        assert_eq!(quantity(Show::Wave, 0, &nm), "ψ in nm⁻¹");
        assert_eq!(quantity(Show::Density, 0, &none), "|ψ|²");
        assert_eq!(
            (plain(20.0), plain(0.05), plain(2e-7)),
            ("20".into(), "0.05".into(), "2·10⁻⁷".into())
        );
    }
}
