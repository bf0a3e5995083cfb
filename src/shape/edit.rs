//! Changes to single values of a document's text that leave everything else as it was written.

use super::kinds::KINDS;
use super::near;
use super::placing::PLACING;
use super::read::{FINISH, LATER, MATERIAL, SOLVE};
use toml_edit::{DocumentMut, Item, Table, TableLike, Value};

/// What is wrong, and what would be right.
type Refusal = (String, String);

/// Keys whose value is text, whatever it looks like.
const TEXTS: [&str; 8] = [
    "title", "scale", "name", "file", "inside", "add", "cut", "keep",
];

/// The text with all changes made.
pub(super) fn apply(text: &str, changes: &[(&str, &str)]) -> Result<String, Refusal> {
    let mut document: DocumentMut = text
        .parse()
        .map_err(|e: toml_edit::TomlError| (e.message().to_owned(), String::new()))?;
    for (path, value) in changes {
        change(&mut document, path.trim(), value.trim())?;
    }
    Ok(document.to_string())
}

/// The value at a path, without quotes.
pub(super) fn written(text: &str, path: &str) -> Option<String> {
    let mut document: DocumentMut = text.parse().ok()?;
    let place = locate(&mut document, path.trim(), false).ok()?;
    match place {
        Place::Value(Value::String(s)) => Some(s.value().clone()),
        Place::Value(value) => Some(value.to_string().trim().to_owned()),
        Place::Missing(..) => None,
    }
}

/// Where a path leads.
enum Place<'d> {
    /// A value that is there.
    Value(&'d mut Value),
    /// A known key that is not there, and its table.
    Missing(&'d mut dyn TableLike, String),
}

fn change(document: &mut DocumentMut, path: &str, text: &str) -> Result<(), Refusal> {
    if text.is_empty() {
        return Err((format!("no value for {path}"), format!("write {path}=20")));
    }
    let key = path.rsplit('.').next().unwrap_or(path).to_owned();
    let value = value_from(&key, text);
    match locate(document, path, true)? {
        Place::Value(old) => {
            let mut value = value;
            *value.decor_mut() = old.decor().clone();
            *old = value;
        }
        Place::Missing(table, key) => {
            table.insert(&key, Item::Value(value));
        }
    }
    Ok(())
}

/// A TOML value as typed; what is no TOML is a text, which is how expressions and quantities and
/// names are written.
fn value_from(key: &str, text: &str) -> Value {
    match text.parse::<Value>() {
        Ok(Value::String(s)) => Value::String(s),
        Ok(value) if !TEXTS.contains(&key) => value,
        _ => Value::from(text),
    }
}

fn locate<'d>(
    document: &'d mut DocumentMut,
    path: &str,
    create: bool,
) -> Result<Place<'d>, Refusal> {
    let parts: Vec<&str> = path.split('.').map(str::trim).collect();
    let sizes: Vec<String> = names(document.get("sizes"));
    let nowhere = |parts: &[&str]| {
        let mut known: Vec<String> = sizes.clone();
        known.extend(["title", "scale"].map(str::to_owned));
        for (table, keys) in [
            ("solve", &SOLVE[..]),
            ("finish", &FINISH),
            ("material", &MATERIAL),
        ] {
            known.extend(keys.iter().map(|k| format!("{table}.{k}")));
        }
        let word = parts.join(".");
        let all: Vec<&str> = known.iter().map(String::as_str).collect();
        let last = |k: &str| k.rsplit('.').next().unwrap_or_default().to_owned();
        // A key without its table: `accuracy` for solve.accuracy.
        let leaves: Vec<String> = known.iter().map(|k| last(k)).collect();
        let by_key = near::nearest(&word, leaves.iter().map(String::as_str))
            .and_then(|leaf| known.iter().find(|k| last(k) == leaf));
        let remedy = match by_key {
            Some(k) => format!("did you mean `{k}`?"),
            None => near::remedy(&word, &all, ""),
        };
        (
            format!("there is no size and no key `{}`", clip(&word)),
            remedy,
        )
    };
    match parts[..] {
        [name] if sizes.iter().any(|s| s == name) => {
            size(document, name).ok_or_else(|| nowhere(&parts))
        }
        [name @ ("title" | "scale")] => child(document.as_table_mut(), name, &parts),
        ["sizes", name] if sizes.iter().any(|s| s == name) => {
            size(document, name).ok_or_else(|| nowhere(&parts))
        }
        [table @ ("solve" | "finish" | "material"), key] => {
            let known: &[&str] = match table {
                "solve" => &SOLVE,
                "finish" => &FINISH,
                _ => &MATERIAL,
            };
            if !known.contains(&key) {
                return Err((
                    format!("`{}` is not a key of [{table}]", clip(key)),
                    near::remedy(key, known, ""),
                ));
            }
            if create && document.get(table).is_none() {
                let mut fresh = Table::new();
                fresh.decor_mut().set_prefix("\n");
                document.insert(table, Item::Table(fresh));
            }
            match document.get_mut(table).and_then(Item::as_table_like_mut) {
                Some(t) => child(t, key, &parts),
                None => Err(nowhere(&parts)),
            }
        }
        [table, ..] if LATER.iter().any(|l| l.0 == table) => Err((
            format!("`{table}` comes in a later version"),
            "this version solves hard walls without potential and field".to_owned(),
        )),
        ["outline", number, key, ref rest @ ..] => step(document, number, key, rest, &parts),
        _ => Err(nowhere(&parts)),
    }
}

fn names(item: Option<&Item>) -> Vec<String> {
    item.and_then(Item::as_table_like)
        .map(|t| t.iter().map(|(k, _)| k.to_owned()).collect())
        .unwrap_or_default()
}

fn size<'d>(document: &'d mut DocumentMut, name: &str) -> Option<Place<'d>> {
    document
        .get_mut("sizes")?
        .as_table_like_mut()?
        .get_mut(name)?
        .as_value_mut()
        .map(Place::Value)
}

/// The value under `key`, or its empty place.
fn child<'d>(
    table: &'d mut dyn TableLike,
    key: &str,
    parts: &[&str],
) -> Result<Place<'d>, Refusal> {
    if table.get(key).is_none() {
        return Ok(Place::Missing(table, key.to_owned()));
    }
    match table.get_mut(key).and_then(Item::as_value_mut) {
        Some(value) => Ok(Place::Value(value)),
        None => Err((
            format!("`{}` is a table", parts.join(".")),
            "name one of its keys".to_owned(),
        )),
    }
}

fn step<'d>(
    document: &'d mut DocumentMut,
    number: &str,
    key: &str,
    rest: &[&str],
    parts: &[&str],
) -> Result<Place<'d>, Refusal> {
    let tables: Vec<&mut dyn TableLike> = match document.get_mut("outline") {
        Some(Item::ArrayOfTables(list)) => {
            list.iter_mut().map(|t| t as &mut dyn TableLike).collect()
        }
        Some(Item::Value(Value::Array(list))) => list
            .iter_mut()
            .filter_map(|v| v.as_inline_table_mut().map(|t| t as &mut dyn TableLike))
            .collect(),
        _ => Vec::new(),
    };
    let count = tables.len();
    let index = number
        .parse::<usize>()
        .ok()
        .filter(|n| (1..=count).contains(n));
    let Some(table) = index.and_then(|n| tables.into_iter().nth(n - 1)) else {
        return Err((
            format!("there is no step {} in the outline", clip(number)),
            format!(
                "its steps are numbered 1 to {count}, like outline.1.{}",
                clip(key)
            ),
        ));
    };
    let operation = ["add", "cut", "keep"].into_iter().find_map(|o| {
        table
            .get(o)
            .and_then(Item::as_str)
            .map(|kind| (o, kind.to_owned()))
    });
    let own = operation
        .as_ref()
        .and_then(|(_, kind)| KINDS.iter().find(|k| k.0 == kind))
        .map_or(&[][..], |k| k.1);
    let known: Vec<&str> = operation
        .iter()
        .map(|o| o.0)
        .chain(own.iter().copied())
        .chain(PLACING)
        .collect();
    if !known.contains(&key) {
        let kind = operation.as_ref().map_or("", |o| o.1.as_str());
        return Err((
            format!("`{}` is not a key of step {number} ({kind})", clip(key)),
            near::remedy(key, &known, ""),
        ));
    }
    let mut place = child(table, key, parts)?;
    for part in rest {
        let whole = parts.join(".");
        place = match place {
            Place::Missing(..) => {
                return Err((
                    format!("step {number} has no `{key}`"),
                    format!("set outline.{number}.{key} as a whole"),
                ));
            }
            Place::Value(value) => entry(value, part, &whole)?,
        };
    }
    Ok(place)
}

/// An entry of a list, by number from 1 or by x and y, or of a table by its key.
fn entry<'d>(value: &'d mut Value, part: &str, whole: &str) -> Result<Place<'d>, Refusal> {
    match value {
        Value::Array(list) => {
            let count = list.len();
            let index = match part {
                "x" => Some(1),
                "y" => Some(2),
                number => number.parse().ok(),
            };
            index
                .filter(|n| (1..=count).contains(n))
                .and_then(|n| list.get_mut(n - 1))
                .map(Place::Value)
                .ok_or_else(|| {
                    (
                        format!("`{}` has no entry {}", clip(whole), clip(part)),
                        format!(
                            "its entries are numbered 1 to {count}; those of a point are x and y"
                        ),
                    )
                })
        }
        Value::InlineTable(table) => child(table, part, &[whole]),
        _ => Err((
            format!("`{}` goes beyond a single value", clip(whole)),
            "leave the last part out".to_owned(),
        )),
    }
}

fn clip(text: &str) -> String {
    text.chars().take(60).collect()
}
