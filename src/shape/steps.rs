//! Reads the `[[outline]]` steps.

use super::kinds::{self, KINDS};
use super::model::{Operation, Step};
use super::near;
use super::placing::{self, PLACING};
use super::reader::{Reader, Section, found};
use std::ops::Range;
use toml_edit::{Item, TableLike};

/// Kinds that are announced but not made yet.
const LATER: [&str; 2] = ["layout", "drawing"];

const OPERATIONS: [Operation; 3] = [Operation::Add, Operation::Cut, Operation::Keep];

/// Steps a document may have.
const MOST_STEPS: usize = 2000;
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
    let figure = kinds::read(reader, section, kind);
    let placement = placing::read(reader, section);
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
