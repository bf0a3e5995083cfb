//! Reads the figure of a step.

use super::model::Figure;
use super::reader::{Reader, Section, found};
use crate::geometry::{Point, pt};
use crate::intake::{Inside, MOST_VERTICES, Reading};
use crate::units::Dimension::{Angle, Length, Number};
use std::path::PathBuf;
use toml_edit::Item;

/// Kinds of figures and their own keys.
pub(super) const KINDS: [(&str, &[&str]); 10] = [
    ("disc", &["centre", "radius"]),
    ("ellipse", &["centre", "half_axes"]),
    ("rectangle", &["centre", "corner", "size"]),
    ("polygon", &["points"]),
    ("sector", &["centre", "radius", "from", "to"]),
    ("ring", &["centre", "inner", "outer"]),
    ("stadium", &["centre", "radius", "straight"]),
    ("track", &["points", "width"]),
    ("picture", &["file", "pixel", "level", "inside", "smooth"]),
    ("points", &["file", "smooth"]),
];

/// Reads the figure of a step. Everything is read before it is judged, so that all faults of a step are reported.
pub(super) fn read(reader: &mut Reader<'_>, section: Section<'_>, kind: &str) -> Option<Figure> {
    match kind {
        "disc" => {
            let centre = centre(reader, section);
            let radius = reader.positive(section, "radius", Length);
            Some(Figure::Disc {
                centre: centre?,
                radius: radius?,
            })
        }
        "ellipse" => {
            let centre = centre(reader, section);
            let half_axes = positive_pair(reader, section, "half_axes");
            Some(Figure::Ellipse {
                centre: centre?,
                half_axes: half_axes?,
            })
        }
        "rectangle" => {
            let size = positive_pair(reader, section, "size");
            if section.get("corner").is_some() {
                if section.get("centre").is_some() {
                    reader.fault(
                        section.key_span("corner"),
                        format!("{} has both `centre` and `corner`", section.title),
                        "keep one of them",
                    );
                }
                let corner = reader.point(section, "corner");
                return Some(Figure::Rectangle {
                    corner: corner?,
                    size: size?,
                });
            }
            let centre = centre(reader, section);
            let size = size?;
            Some(Figure::Rectangle {
                corner: centre? - size * 0.5,
                size,
            })
        }
        "polygon" => Some(Figure::Polygon {
            points: points(reader, section, 3)?,
        }),
        "sector" => {
            let centre = centre(reader, section);
            let radius = reader.positive(section, "radius", Length);
            let from = reader.required(section, "from", Angle);
            let to = reader.required(section, "to", Angle);
            let (from, to) = (from?, to?);
            if to <= from || to - from >= 360.0 {
                reader.fault(
                    section
                        .get("to")
                        .and_then(Item::span)
                        .unwrap_or_else(|| section.span.clone()),
                    format!("{} runs from {from}° to {to}°", section.title),
                    "`to` must be above `from` by less than 360 (use \"disc\" for the whole)",
                );
                return None;
            }
            Some(Figure::Sector {
                centre: centre?,
                radius: radius?,
                from,
                to,
            })
        }
        "ring" => {
            let centre = centre(reader, section);
            let inner = reader.positive(section, "inner", Length);
            let outer = reader.positive(section, "outer", Length);
            let (inner, outer) = (inner?, outer?);
            if inner >= outer {
                reader.fault(
                    section
                        .get("inner")
                        .and_then(Item::span)
                        .unwrap_or_else(|| section.span.clone()),
                    format!(
                        "{} has its inner radius {inner} not below its outer radius {outer}",
                        section.title
                    ),
                    "make `inner` smaller than `outer`",
                );
                return None;
            }
            Some(Figure::Ring {
                centre: centre?,
                inner,
                outer,
            })
        }
        "stadium" => {
            let centre = centre(reader, section);
            let radius = reader.positive(section, "radius", Length);
            let straight = reader.positive(section, "straight", Length);
            Some(Figure::Stadium {
                centre: centre?,
                radius: radius?,
                straight: straight?,
            })
        }
        "track" => {
            let points = points(reader, section, 2);
            let width = reader.positive(section, "width", Length);
            Some(Figure::Track {
                points: points?,
                width: width?,
            })
        }
        "picture" => read_picture(reader, section),
        _ => {
            let file = file(reader, section, "edge.csv");
            let smooth = smooth(reader, section);
            Some(Figure::Points {
                file: file?,
                smooth: smooth?,
            })
        }
    }
}

fn read_picture(reader: &mut Reader<'_>, section: Section<'_>) -> Option<Figure> {
    let file = file(reader, section, "mask.png");
    let pixel = reader.positive(section, "pixel", Length);
    let level = reader.number(section, "level", Number);
    if let Some(level) = level
        && !(level > 0.0 && level < 1.0)
    {
        reader.fault(
            section.get("level").and_then(Item::span).unwrap_or_else(|| section.span.clone()),
            format!("`level` of {} is {level}", section.title),
            "write a number between 0 (the darkest grey of the picture) and 1 (the brightest), like 0.5",
        );
        return None;
    }
    let inside = match section.get("inside") {
        None => Inside::Bright,
        Some(item) => match reader.string(section, "inside", "bright")? {
            "bright" => Inside::Bright,
            "dark" => Inside::Dark,
            other => {
                let span = item.span().unwrap_or_else(|| section.span.clone());
                reader.fault(
                    span,
                    format!("`inside` is \"{other}\""),
                    "write \"bright\" or \"dark\"",
                );
                return None;
            }
        },
    };
    let smooth = smooth(reader, section)?;
    let pixel = pixel?;
    Some(Figure::Picture {
        file: file?,
        reading: Reading {
            pixel,
            level: level.unwrap_or(0.5),
            inside,
            smooth: smooth.map(|s| s / pixel),
        },
    })
}

/// The tolerance `smooth`: absent is `Some(None)`.
fn smooth(reader: &mut Reader<'_>, section: Section<'_>) -> Option<Option<f64>> {
    if section.get("smooth").is_none() {
        return Some(None);
    }
    reader.positive(section, "smooth", Length).map(Some)
}

/// The `centre`; the origin when absent.
fn centre(reader: &mut Reader<'_>, section: Section<'_>) -> Option<Point> {
    if section.get("centre").is_none() {
        return Some(Point::default());
    }
    reader.point(section, "centre")
}

fn file(reader: &mut Reader<'_>, section: Section<'_>, example: &str) -> Option<PathBuf> {
    if section.get("file").is_none() {
        reader.missing(section, "file", &format!("\"{example}\""));
        return None;
    }
    let text = reader.string(section, "file", example)?;
    if text.is_empty() || text.contains('\0') {
        let span = section
            .get("file")
            .and_then(Item::span)
            .unwrap_or_else(|| section.span.clone());
        reader.fault(
            span,
            "`file` names no file",
            format!("write file = \"{example}\""),
        );
        return None;
    }
    Some(PathBuf::from(text))
}

fn positive_pair(reader: &mut Reader<'_>, section: Section<'_>, key: &str) -> Option<Point> {
    if section.get(key).is_none() {
        reader.missing(section, key, "[60, 40]");
        return None;
    }
    let [x, y] = reader.pair(section, key, Length)?;
    let (x, y) = (
        reader.above_zero(section, key, x),
        reader.above_zero(section, key, y),
    );
    Some(pt(x?, y?))
}

/// The `points` of a polygon or track.
fn points(reader: &mut Reader<'_>, section: Section<'_>, least: usize) -> Option<Vec<Point>> {
    let Some(item) = section.get("points") else {
        reader.missing(section, "points", "[[0, 0], [40, 0], [40, 30]]");
        return None;
    };
    let span = item.span().unwrap_or_else(|| section.key_span("points"));
    let Some(array) = item.as_array() else {
        let what = format!("`points` of {} is {}", section.title, found(item));
        reader.fault(span, what, "write points = [[0, 0], [40, 0], [40, 30]]");
        return None;
    };
    if array.len() > MOST_VERTICES {
        reader.fault(
            section.key_span("points"),
            format!(
                "{} has {} points; at most {MOST_VERTICES} are accepted",
                section.title,
                array.len()
            ),
            "thin them out, or draw the shape as a PNG mask and use \"picture\"",
        );
        return None;
    }
    let mut all = Some(Vec::with_capacity(array.len()));
    for value in array {
        let place = value.span().unwrap_or_else(|| span.clone());
        let pair = reader.pair_of(value, &place, "points", Length);
        match (pair, &mut all) {
            (Some([x, y]), Some(list)) => list.push(pt(x, y)),
            _ => all = None,
        }
    }
    if let Some(list) = &all
        && list.len() < least
    {
        reader.fault(
            span,
            format!("{} has {} points", section.title, list.len()),
            format!("give at least {least} points"),
        );
        return None;
    }
    all
}
