//! Reads where the figure of a step is put: `move`, `turn`, `about`, `mirror`, `repeat`.

use super::model::{Placement, Repeat};
use super::reader::{Reader, Section, found};
use crate::geometry::Point;
use crate::units::Dimension::{Angle, Number};
use toml_edit::Item;

/// Keys any step may have besides those of its kind.
pub(super) const PLACING: [&str; 5] = ["move", "turn", "about", "mirror", "repeat"];

/// Copies a step may make.
const MOST_COPIES: f64 = 1000.0;

/// Reads where the figure of a step is put.
pub(super) fn read(reader: &mut Reader<'_>, section: Section<'_>) -> Option<Placement> {
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
