//! Reads the `[[outline]]` steps.

use super::model::{Figure, Operation, Placement, Repeat, Step};
use super::near;
use super::reader::{Reader, Section, found};
use crate::geometry::{Point, pt};
use crate::intake::{Inside, MOST_VERTICES, Reading};
use crate::units::Dimension::{Angle, Length, Number};
use std::ops::Range;
use std::path::PathBuf;
use toml_edit::{Item, TableLike};

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

/// Kinds that are announced but not made yet.
const LATER: [&str; 2] = ["layout", "drawing"];

/// Keys any step may have besides those of its kind.
pub(super) const PLACING: [&str; 5] = ["move", "turn", "about", "mirror", "repeat"];

const OPERATIONS: [Operation; 3] = [Operation::Add, Operation::Cut, Operation::Keep];

/// Steps a document may have.
const MOST_STEPS: usize = 2000;
/// Copies a step may make.
const MOST_COPIES: f64 = 1000.0;

/// Reads all steps under the key `outline`.
pub(super) fn read(reader: &mut Reader<'_>, top: Section<'_>) -> Vec<Step> {
    let item = match top.get("outline") {
        Some(item) => item,
        None => {
            reader.fault(
                top.span.clone(),
                "the document has no outline",
                "add a step: [[outline]] with add = \"disc\", centre = [0, 0] and radius = 45 below it",
            );
            return Vec::new();
        }
    };
    let key = top.key_span("outline");
    let mut tables: Vec<(&dyn TableLike, Range<usize>)> = Vec::new();
    match item {
        Item::ArrayOfTables(list) => {
            for table in list {
                tables.push((table, table.span().unwrap_or_else(|| key.clone())));
            }
        }
        Item::Value(toml_edit::Value::Array(list)) => {
            for value in list {
                let span = value.span().unwrap_or_else(|| key.clone());
                match value.as_inline_table() {
                    Some(table) => tables.push((table, span)),
                    None => {
                        let what = format!(
                            "a step of the outline is {}",
                            found(&Item::Value(value.clone()))
                        );
                        reader.fault(span, what, "write it as a table: { add = \"disc\", … }");
                    }
                }
            }
        }
        other => {
            let remedy = if other.is_table_like() {
                "the outline is a list of steps: write [[outline]] with two brackets"
            } else {
                "write the steps as [[outline]] tables"
            };
            reader.fault(key, format!("`outline` is {}", found(other)), remedy);
            return Vec::new();
        }
    }
    if tables.is_empty() && reader.faults.is_empty() {
        reader.fault(
            key,
            "the outline has no steps",
            "add one: [[outline]] with add = \"disc\"",
        );
        return Vec::new();
    }
    if tables.len() > MOST_STEPS {
        let what = format!("{} steps; at most {MOST_STEPS} are accepted", tables.len());
        reader.fault(key, what, "use `repeat`, or a picture or point list");
        return Vec::new();
    }
    let mut steps = Vec::new();
    for (k, (table, span)) in tables.into_iter().enumerate() {
        let head = first_line(reader.text, span);
        if let Some(step) = read_step(reader, table, &head, k + 1) {
            steps.push(step);
        }
    }
    steps
}

/// The part of a span before its first line break: a table spans all its lines.
fn first_line(text: &str, span: Range<usize>) -> Range<usize> {
    let end = text
        .get(span.clone())
        .and_then(|t| t.find('\n'))
        .map_or(span.end, |k| span.start + k);
    span.start..end
}

fn read_step(
    reader: &mut Reader<'_>,
    table: &dyn TableLike,
    head: &Range<usize>,
    number: usize,
) -> Option<Step> {
    let title = format!("step {number}");
    let bare = Section {
        table,
        title: &title,
        span: head,
    };
    let asked: Vec<Operation> = OPERATIONS
        .into_iter()
        .filter(|o| table.contains_key(o.key()))
        .collect();
    let operation = match asked[..] {
        [one] => one,
        [] => {
            let near = table.iter().find_map(|(name, _)| {
                near::nearest(name, ["add", "cut", "keep"])
                    .filter(|_| !known_anywhere(name))
                    .map(|n| (name, n))
            });
            match near {
                Some((name, n)) => reader.fault(
                    bare.key_span(name),
                    format!("`{name}` is not a key of a step"),
                    format!("did you mean `{n}`?"),
                ),
                None => reader.fault(
                    head.clone(),
                    format!("step {number} does not say what it does"),
                    "add a line like add = \"disc\", cut = \"rectangle\" or keep = \"polygon\"",
                ),
            }
            return None;
        }
        [_, second, ..] => {
            reader.fault(
                bare.key_span(second.key()),
                format!(
                    "step {number} has both `{}` and `{}`",
                    asked[0].key(),
                    second.key()
                ),
                "make two steps of it",
            );
            return None;
        }
    };
    let span = table
        .get(operation.key())
        .and_then(Item::span)
        .unwrap_or_else(|| head.clone());
    let word = reader.string(bare, operation.key(), "disc")?;
    let Some((kind, own)) = KINDS.iter().find(|k| k.0 == word) else {
        if LATER.contains(&word) {
            reader.fault(
                span,
                format!("steps of the kind \"{word}\" come in a later version"),
                "until then export the outline as a PNG mask (\"picture\") or a point list (\"points\")",
            );
        } else {
            let kinds: Vec<&str> = KINDS.iter().map(|k| k.0).collect();
            reader.fault(
                span,
                format!(
                    "\"{}\" is not a kind of figure",
                    word.chars().take(40).collect::<String>()
                ),
                near::remedy(word, &kinds, ""),
            );
        }
        return None;
    };
    if number == 1 && operation != Operation::Add {
        reader.fault(
            bare.key_span(operation.key()),
            format!(
                "the first step is a `{}`, and there is nothing yet",
                operation.key()
            ),
            "begin with `add`",
        );
    }
    let title = format!("step {number} ({kind})");
    let section = Section {
        table,
        title: &title,
        span: &span,
    };
    let known: Vec<&str> = [operation.key()]
        .into_iter()
        .chain(own.iter().copied())
        .chain(PLACING)
        .collect();
    reader.check_keys(section, &known);
    let figure = read_figure(reader, section, kind);
    let placement = read_placement(reader, section);
    Some(Step {
        operation,
        figure: figure?,
        placement: placement?,
        span: span.clone(),
    })
}

fn known_anywhere(name: &str) -> bool {
    PLACING.contains(&name) || KINDS.iter().any(|k| k.1.contains(&name))
}

/// Reads everything before judging, so that all faults of a step are reported.
fn read_figure(reader: &mut Reader<'_>, section: Section<'_>, kind: &str) -> Option<Figure> {
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

fn read_placement(reader: &mut Reader<'_>, section: Section<'_>) -> Option<Placement> {
    let about = reader.point(section, "about");
    if section.get("about").is_some()
        && section.get("turn").is_none()
        && section.get("mirror").is_none()
    {
        reader.fault(
            section.key_span("about"),
            format!("`about` of {} has nothing to hold", section.title),
            "it is the fixed point of `turn` or `mirror`; give one of them",
        );
    }
    let mirror = match section.get("mirror") {
        None => None,
        Some(item) => match item.as_str() {
            Some("x") => Some(0.0),
            Some("y") => Some(90.0),
            _ => Some(reader.number(section, "mirror", Angle)?),
        },
    };
    let turn = match section.get("turn") {
        None => 0.0,
        Some(_) => reader.number(section, "turn", Angle)?,
    };
    let shift = match section.get("move") {
        None => Point::default(),
        Some(_) => reader.point(section, "move")?,
    };
    let repeat = match section.get("repeat") {
        None => None,
        Some(_) => Some(read_repeat(reader, section)?),
    };
    if section.get("about").is_some() && about.is_none() {
        return None;
    }
    Some(Placement {
        mirror,
        turn,
        about,
        shift,
        repeat,
    })
}

fn read_repeat(reader: &mut Reader<'_>, outer: Section<'_>) -> Option<Repeat> {
    let span = outer.key_span("repeat");
    let Some(table) = outer.get("repeat").and_then(Item::as_table_like) else {
        let what = outer.get("repeat").map(found).unwrap_or_default();
        reader.fault(
            span,
            format!("`repeat` of {} is {what}", outer.title),
            "write repeat = { count = 6, turn = 60 } or { count = 3, move = [40, 0] }",
        );
        return None;
    };
    let title = format!("`repeat` of {}", outer.title);
    let section = Section {
        table,
        title: &title,
        span: &span,
    };
    reader.check_keys(section, &["count", "turn", "about", "move"]);
    let count = reader.required(section, "count", Number);
    let turn = reader.number(section, "turn", Angle);
    let about = reader.point(section, "about");
    let shift = reader.point(section, "move");
    if section.get("turn").is_none() && section.get("move").is_none() {
        reader.fault(
            section.span.clone(),
            format!("{title} does not say where the copies go"),
            "add turn = 60 (degrees from copy to copy) or move = [40, 0]",
        );
        return None;
    }
    let count = count?;
    if !(1.0..=MOST_COPIES).contains(&count) || count.fract() != 0.0 {
        reader.fault(
            section
                .get("count")
                .and_then(Item::span)
                .unwrap_or_else(|| section.span.clone()),
            format!("`count` of {title} is {count}"),
            format!("write a whole number from 1 to {MOST_COPIES}"),
        );
        return None;
    }
    for key in ["turn", "about", "move"] {
        let read = match key {
            "turn" => turn.is_some(),
            "about" => about.is_some(),
            _ => shift.is_some(),
        };
        if section.get(key).is_some() && !read {
            return None;
        }
    }
    Some(Repeat {
        count: count as usize,
        turn: turn.unwrap_or(0.0),
        about: about.unwrap_or_default(),
        shift: shift.unwrap_or_default(),
    })
}
