//! `check`: what a shape is, judged without solving.

use super::open::Opened;
use super::options::Check;
use super::output::print;
use super::stop::Stop;
use crate::geometry::{Corner, Outline, Point, Symmetry};
use crate::report::CAUTION;
use crate::spectrum::weyl;
use std::f64::consts::PI;

/// Joints that turn by less, radians, are smooth to the eye and to the solver.
const SMOOTH: f64 = 1e-6;
/// Corners listed one by one.
const LISTED: usize = 12;

/// Prints the judgement.
///
/// # Errors
/// Faults of the shape, of the output.
pub fn check(asked: &Check) -> Result<(), Stop> {
    let opened = Opened::read(Some(&asked.shape), &asked.sizes)?;
    let below = match &asked.below {
        Some(text) => Some(opened.energy("--below", text)?),
        None => None,
    };
    let mut page = Page::new(
        opened.document.units().length,
        opened.model.outline.bounds().diagonal(),
    );
    page.text += &format!("{}\n{}\n\n", opened.document.title(), opened.about);
    sizes(&mut page, &opened);
    outline(&mut page, &opened.model.outline);
    count(&mut page, &opened, below);
    page.text.push('\n');
    for remark in &opened.notes {
        page.text += &format!("note: {remark}\n");
    }
    page.text += &format!("caution: {CAUTION}\n");
    print(page.text.as_bytes())
}

/// Lines of a name and what is said of it.
struct Page {
    text: String,
    unit: &'static str,
    /// Coordinates closer to zero are zero: roundoff of an outline of this size.
    grain: f64,
}

impl Page {
    fn new(unit: &'static str, size: f64) -> Self {
        Self {
            text: String::new(),
            unit,
            grain: 1e-9 * size,
        }
    }

    fn line(&mut self, name: &str, value: &str) {
        self.text += &format!("{name:18}{value}\n");
    }

    /// A length, or with `power` 2 an area, to six digits.
    fn measure(&self, x: f64, power: usize) -> String {
        let number = significant(x);
        match (self.unit, power) {
            ("", _) => number,
            (unit, 2) => format!("{number} {unit}²"),
            (unit, _) => format!("{number} {unit}"),
        }
    }

    fn place(&self, p: Point) -> String {
        let clean = |x: f64| {
            if x.abs() < self.grain {
                "0".to_owned()
            } else {
                significant(x)
            }
        };
        format!("({}, {})", clean(p.x), clean(p.y))
    }
}

/// Six significant digits without an exponent while that is readable.
fn significant(x: f64) -> String {
    if x == 0.0 {
        return "0".into();
    }
    let top = x.abs().log10().floor() as i32;
    if !(-5..9).contains(&top) {
        return format!("{x:.5e}");
    }
    let decimals = (5 - top).clamp(0, 12) as usize;
    let text = format!("{x:.decimals$}");
    if text.contains('.') {
        let short = text.trim_end_matches('0').trim_end_matches('.');
        return if short == "-0" {
            "0".into()
        } else {
            short.to_owned()
        };
    }
    text
}

/// Three significant digits.
fn rounded(x: f64) -> f64 {
    let step = 10f64.powf(x.abs().max(1e-300).log10().floor() - 2.0);
    (x / step).round() * step
}

fn sizes(page: &mut Page, opened: &Opened) {
    for size in opened.document.sizes() {
        let mut value = significant(size.value);
        if size.derived {
            value += &format!("   = {}", size.written);
        }
        page.line(&format!("size {}", size.name), &value);
    }
    if !opened.document.sizes().is_empty() {
        page.text.push('\n');
    }
}

fn outline(page: &mut Page, outline: &Outline) {
    let bounds = outline.bounds();
    let size = bounds.size();
    let extent = format!("{} by {}", page.measure(size.x, 1), page.measure(size.y, 1));
    page.line(
        "box",
        &format!("{extent}, lower left {}", page.place(bounds.lo)),
    );
    page.line("area", &page.measure(outline.area(), 2));
    page.line("perimeter", &page.measure(outline.perimeter(), 1));
    let (parts, holes) = (outline.components().len(), outline.holes());
    page.line(
        "parts",
        &format!("{parts}, with {holes} {}", plural(holes, "hole")),
    );
    if let Some((radius, at)) = outline.min_radius() {
        let text = format!("{} at {}", page.measure(radius, 1), page.place(at));
        page.line("smallest radius", &text);
    }
    let narrow = outline.narrowest();
    for (name, gap) in [
        ("narrowest neck", narrow.neck),
        ("narrowest slot", narrow.slot),
    ] {
        if let Some(gap) = gap {
            // found by rays, to a few parts in a thousand
            let width = page.measure(rounded(gap.width), 1);
            page.line(name, &format!("about {width} at {}", page.place(gap.at)));
        }
    }
    corners(page, &outline.corners(SMOOTH));
    let text = symmetry(page, &outline.symmetries());
    page.line("symmetry", &text);
}

/// Mirrors and rotations in words.
fn symmetry(page: &Page, found: &Symmetry) -> String {
    let centre = page.place(found.centre);
    if found.circle {
        return format!("every turn and every mirror, about {centre}");
    }
    let mut parts = Vec::new();
    if found.rotation > 1 {
        parts.push(format!("{}-fold turns", found.rotation));
    }
    match &found.mirrors[..] {
        [] => {}
        [one] => parts.push(format!(
            "a mirror axis at {}°",
            significant(one.to_degrees())
        )),
        many => {
            let angle = |a: &f64| format!("{}°", significant(a.to_degrees()));
            let angles: Vec<String> = many.iter().take(LISTED).map(angle).collect();
            parts.push(format!(
                "{} mirror axes at {}",
                many.len(),
                angles.join(", ")
            ));
        }
    }
    match parts.is_empty() {
        true => "none".to_owned(),
        false => format!("{}, about {centre}", parts.join(" and ")),
    }
}

fn plural(count: usize, word: &str) -> String {
    if count == 1 {
        word.into()
    } else {
        format!("{word}s")
    }
}

fn corners(page: &mut Page, corners: &[Corner]) {
    let inner = corners.iter().filter(|c| c.angle > PI).count();
    let text = match (corners.len(), inner) {
        (0, _) => "none".to_owned(),
        (n, 0) => format!("{n}, all convex"),
        (n, k) => format!("{n}, of which {k} re-entrant"),
    };
    page.line("corners", &text);
    for corner in corners.iter().take(LISTED) {
        let angle = format!("{:.2}°", corner.angle.to_degrees());
        page.line("", &format!("{angle:>8} at {}", page.place(corner.at)));
    }
    if corners.len() > LISTED {
        page.line("", &format!("… and {} more", corners.len() - LISTED));
    }
}

/// How many levels to expect (Weyl's two-term law).
fn count(page: &mut Page, opened: &Opened, below: Option<f64>) {
    let (area, perimeter) = (
        opened.model.outline.area(),
        opened.model.outline.perimeter(),
    );
    let kinetic = opened.document.kinetic();
    let energy =
        below.unwrap_or_else(|| kinetic * weyl::level(area, perimeter, opened.wanted.count as f64));
    let levels = weyl::count(area, perimeter, energy / kinetic);
    let unit = opened.document.units().energy;
    let at = format!("{} {unit}", significant(energy));
    let text = format!(
        "about {levels:.0} {} below {}",
        plural(levels.round() as usize, "level"),
        at.trim_end()
    );
    page.line(
        "expected",
        &format!("{text} (Weyl's law, by area and perimeter)"),
    );
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_short_and_true() {
        for (x, text) in [
            (26.0, "26"),
            (0.1 + 0.2, "0.3"),
            (8123.456789, "8123.46"),
            (-0.00123456789, "-0.00123457"),
            (1234567.0, "1234567"),
            (1e-12, "1.00000e-12"),
        ] {
            assert_eq!(significant(x), text);
        }
    }
}
