//! Text in DejaVu Sans, whose glyphs cover Greek, superscripts and signs.

use super::oklab::Rgb;
use ab_glyph::{Font, FontRef, PxScale, ScaleFont, point};
use tiny_skia::Pixmap;

static DEJAVU: &[u8] = include_bytes!("font/DejaVuSans.ttf");

/// Where the given x lies on a line of text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Anchor {
    /// At its start.
    Start,
    /// In its middle.
    Middle,
}

/// The typeface.
#[derive(Clone, Debug)]
pub struct Type(FontRef<'static>);

impl Type {
    /// The embedded face.
    pub fn new() -> Self {
        Self(FontRef::try_from_slice(DEJAVU).expect("the embedded font is a font, as a test shows"))
    }

    /// Width of a line in pixels, `size` being the em in pixels.
    pub fn width(&self, text: &str, size: f32) -> f32 {
        let mut end = 0.0;
        self.run(text, size, |_, _, right| end = right);
        end
    }

    /// The line, cut short with an ellipsis where it would be wider than `room` pixels.
    pub fn fitted(&self, text: &str, size: f32, room: f32) -> String {
        if self.width(text, size) <= room {
            return text.to_owned();
        }
        let mut kept: Vec<char> = text.chars().collect();
        while let Some(_gone) = kept.pop() {
            let short: String = kept.iter().collect::<String>().trim_end().to_owned() + "…";
            if self.width(&short, size) <= room {
                return short;
            }
        }
        String::new()
    }

    /// Draws a line with its baseline at `at`.
    pub fn draw(
        &self,
        canvas: &mut Pixmap,
        text: &str,
        size: f32,
        at: (f32, f32),
        anchor: Anchor,
        colour: Rgb,
    ) {
        let shift = match anchor {
            Anchor::Start => 0.0,
            Anchor::Middle => self.width(text, size) / 2.0,
        };
        let mut placed = Vec::new();
        self.run(text, size, |id, left, _| placed.push((id, left)));
        for (id, left) in placed {
            let glyph = id.with_scale_and_position(
                self.scale(size),
                // baselines on whole pixels keep the horizontals of letters crisp
                point(at.0 - shift + left, at.1.round()),
            );
            if let Some(outline) = self.0.outline_glyph(glyph) {
                let corner = outline.px_bounds().min;
                outline.draw(|x, y, cover| {
                    let (x, y) = (
                        corner.x as i64 + i64::from(x),
                        corner.y as i64 + i64::from(y),
                    );
                    blend(canvas, x, y, colour, cover);
                });
            }
        }
    }

    /// ab_glyph scales by ascent to descent, we by the em.
    fn scale(&self, em: f32) -> PxScale {
        let units = self.0.units_per_em().unwrap_or(2048.0);
        PxScale::from(em * self.0.height_unscaled() / units)
    }

    /// Hands every glyph with its left and right to `each`; kerned.
    fn run(&self, text: &str, size: f32, mut each: impl FnMut(ab_glyph::GlyphId, f32, f32)) {
        let font = self.0.as_scaled(self.scale(size));
        let mut x = 0.0;
        let mut before = None;
        for c in text.chars().filter(|c| !c.is_control()) {
            let id = font.glyph_id(c);
            if let Some(b) = before {
                x += font.kern(b, id);
            }
            let right = x + font.h_advance(id);
            each(id, x, right);
            x = right;
            before = Some(id);
        }
    }
}

/// Lays `colour` over one opaque pixel.
fn blend(canvas: &mut Pixmap, x: i64, y: i64, colour: Rgb, cover: f32) {
    let (w, h) = (i64::from(canvas.width()), i64::from(canvas.height()));
    if x < 0 || y < 0 || x >= w || y >= h {
        return;
    }
    let k = 4 * (y * w + x) as usize;
    for (under, over) in canvas.data_mut()[k..k + 3].iter_mut().zip(colour) {
        *under = mix(*under, over, cover);
    }
}

/// `under` covered to the part `cover` by `over`.
pub fn mix(under: u8, over: u8, cover: f32) -> u8 {
    let (u, o) = (f32::from(under), f32::from(over));
    (u + (o - u) * cover.clamp(0.0, 1.0)).round() as u8
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_face_has_every_glyph_we_write() {
        let t = Type::new();
        let needed = "0123456789.,()±×−+=·|/ meVnmµħψΨ²⁻⁰¹³⁴⁵⁶⁷⁸⁹…π₁₂…°–—⟨⟩∫Å";
        for c in needed.chars() {
            assert_ne!(t.0.glyph_id(c).0, 0, "no glyph for {c}");
        }
    }

    #[test]
    fn lines_are_kerned_measured_and_cut() {
        let t = Type::new();
        assert!(t.width("AV", 100.0) < t.width("A", 100.0) + t.width("V", 100.0) - 1.0);
        // digits of the face share one advance: columns of figures stand
        assert_eq!(t.width("111", 20.0), t.width("888", 20.0));
        let cut = t.fitted("a rather long title of a dot", 20.0, 120.0);
        assert!(cut.ends_with('…') && t.width(&cut, 20.0) <= 120.0, "{cut}");
        assert_eq!(t.fitted("short", 20.0, 500.0), "short");
        assert_eq!(t.fitted("W", 20.0, 1.0), "");
    }

    #[test]
    fn nothing_is_drawn_beside_the_page() {
        let mut page = Pixmap::new(8, 8).expect("a small page");
        let t = Type::new();
        t.draw(
            &mut page,
            "Wide text",
            40.0,
            (-50.0, 4.0),
            Anchor::Middle,
            [255; 3],
        );
        t.draw(
            &mut page,
            "Wide text",
            40.0,
            (1e6, -1e6),
            Anchor::Start,
            [255; 3],
        );
    }
}
