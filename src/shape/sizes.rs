//! Named sizes: they may refer to each other in any order, but not in a circle.

use super::expression::{Expression, nameable, reserved};
use super::reader::{Reader, Section, found};
use crate::units::{Dimension, Quantity};
use std::cell::RefCell;
use std::collections::{BTreeSet, HashMap};
use std::ops::Range;
use toml_edit::Value;

/// Most sizes a document may have.
const MOST: usize = 1000;

/// A named size.
#[derive(Clone, Debug, PartialEq)]
pub struct Size {
    /// Its name.
    pub name: String,
    /// As it is written: `45` or `2*radius + neck/2`, without quotes.
    pub written: String,
    /// Its value, in canonical units.
    pub value: f64,
    /// Whether it follows from other sizes.
    pub derived: bool,
}

/// The sizes of a document while it is read.
#[derive(Default)]
pub(super) struct Sizes {
    entries: Vec<Entry>,
    index: HashMap<String, usize>,
    used: RefCell<BTreeSet<usize>>,
}

struct Entry {
    name: String,
    span: Range<usize>,
    key: Range<usize>,
    written: String,
    /// `None` after a fault.
    source: Option<Source>,
    dimension: Option<Dimension>,
    value: State,
}

enum Source {
    Number(f64),
    Text(String, Expression),
}

#[derive(Clone, Copy, PartialEq)]
enum State {
    Unknown,
    Open,
    Broken,
    Known(f64),
}

impl Sizes {
    pub(super) fn names(&self) -> impl Iterator<Item = &str> {
        self.entries.iter().map(|e| e.name.as_str())
    }

    pub(super) fn knows(&self, name: &str) -> bool {
        self.index.contains_key(name)
    }

    pub(super) fn mark_used(&self, name: &str) {
        if let Some(&k) = self.index.get(name) {
            self.used.borrow_mut().insert(k);
        }
    }

    /// The value, if the size has one.
    pub(super) fn value(&self, name: &str) -> Option<f64> {
        match self.entries[*self.index.get(name)?].value {
            State::Known(value) => Some(value),
            _ => None,
        }
    }

    /// The dimension, for a size that is a quantity with a unit.
    pub(super) fn dimension(&self, name: &str) -> Option<Dimension> {
        self.entries[*self.index.get(name)?].dimension
    }

    /// Names and keys of sizes no expression mentions.
    pub(super) fn unused(&self) -> Vec<String> {
        let used = self.used.borrow();
        (0..self.entries.len())
            .filter(|k| !used.contains(k))
            .map(|k| self.entries[k].name.clone())
            .collect()
    }

    /// The finished list.
    pub(super) fn list(&self) -> Vec<Size> {
        let known = |e: &Entry| match e.value {
            State::Known(value) => Some(value),
            _ => None,
        };
        self.entries
            .iter()
            .filter_map(|e| {
                Some(Size {
                    name: e.name.clone(),
                    written: e.written.clone(),
                    value: known(e)?,
                    derived: matches!(&e.source, Some(Source::Text(_, x)) if !x.names.is_empty()),
                })
            })
            .collect()
    }
}

/// Reads `[sizes]` into `reader.sizes`, reporting what is wrong with them.
pub(super) fn read(reader: &mut Reader<'_>, section: Section<'_>) {
    for (name, item) in section.table.iter() {
        let key = section.key_span(name);
        if reader.sizes.entries.len() == MOST {
            reader.fault(
                key,
                format!("more than {MOST} sizes"),
                "drop the ones that are not used",
            );
            break;
        }
        if reserved(name) {
            reader.fault(
                key,
                format!("a size cannot be called `{name}`"),
                "that name is taken; choose another",
            );
            continue;
        }
        if !nameable(name) {
            let better: String = name
                .chars()
                .map(|c| if c.is_alphanumeric() { c } else { '_' })
                .collect();
            reader.fault(
                key,
                format!("`{name}` cannot be used in an expression"),
                format!(
                    "use letters, digits and underscores, like {}",
                    better.trim_start_matches(|c: char| c.is_ascii_digit())
                ),
            );
            continue;
        }
        let span = item.span().unwrap_or_else(|| key.clone());
        let mut entry = Entry {
            name: name.to_owned(),
            written: String::new(),
            source: None,
            dimension: None,
            value: State::Unknown,
            span: span.clone(),
            key,
        };
        match item.as_value() {
            Some(Value::Integer(n)) => {
                entry.written = n.value().to_string();
                entry.source = Some(Source::Number(*n.value() as f64));
            }
            Some(Value::Float(x)) if x.value().is_finite() => {
                entry.written = x.value().to_string();
                entry.source = Some(Source::Number(*x.value()));
            }
            Some(Value::Float(x)) => {
                reader.fault(
                    span,
                    format!("the size `{name}` is {}", x.value()),
                    "write a finite number",
                );
            }
            Some(Value::String(text)) => {
                let text = text.value().clone();
                entry.written.clone_from(&text);
                entry.dimension = text
                    .parse::<Quantity>()
                    .ok()
                    .map(|q| q.dimension)
                    .filter(|&d| d != Dimension::Number);
                match Expression::parse(&text) {
                    Ok(x) => entry.source = Some(Source::Text(text, x)),
                    // Reports the slip, or takes a quantity that is no expression.
                    Err(_) => {
                        entry.source = reader.evaluated(&text, &span, None).map(Source::Number)
                    }
                }
            }
            _ => reader.fault(
                span,
                format!(
                    "the size `{name}` wants a number, and this is {}",
                    found(item)
                ),
                "write a number like 45 or an expression like \"2*radius\"",
            ),
        }
        reader
            .sizes
            .index
            .insert(name.to_owned(), reader.sizes.entries.len());
        reader.sizes.entries.push(entry);
    }
    for k in 0..reader.sizes.entries.len() {
        resolve(reader, k, &mut Vec::new());
    }
}

/// Values size `k` after those it refers to; `chain` are the sizes being valued.
fn resolve(reader: &mut Reader<'_>, k: usize, chain: &mut Vec<usize>) {
    let entry = &mut reader.sizes.entries[k];
    match entry.value {
        State::Unknown => {}
        State::Open => return circle(reader, k, chain),
        State::Known(_) | State::Broken => return,
    }
    entry.value = State::Open;
    let source = entry.source.take();
    let span = entry.span.clone();
    let value = match &source {
        None => None,
        Some(Source::Number(x)) => Some(*x),
        Some(Source::Text(text, expression)) => {
            chain.push(k);
            for (_, name) in &expression.names {
                if let Some(&other) = reader.sizes.index.get(name) {
                    resolve(reader, other, chain);
                }
            }
            chain.pop();
            if reader.sizes.entries[k].value == State::Broken {
                None
            } else {
                reader.evaluated(text, &span, None)
            }
        }
    };
    let entry = &mut reader.sizes.entries[k];
    entry.source = source;
    entry.value = value.map_or(State::Broken, State::Known);
}

/// Reports a circle that closes at size `k`, and breaks every size in it.
fn circle(reader: &mut Reader<'_>, k: usize, chain: &[usize]) {
    let from = chain.iter().position(|&c| c == k).unwrap_or(0);
    let members = &chain[from..];
    let mut names: Vec<&str> = members
        .iter()
        .map(|&c| reader.sizes.entries[c].name.as_str())
        .collect();
    names.push(names[0]);
    let shown = if names.len() > 12 {
        format!(
            "{} → … → {}",
            names[..8].join(" → "),
            names[names.len() - 1]
        )
    } else {
        names.join(" → ")
    };
    let key = reader.sizes.entries[k].key.clone();
    for &c in members {
        reader.sizes.entries[c].value = State::Broken;
    }
    reader.fault(
        key,
        format!("the sizes go round in a circle: {shown}"),
        "give one of them a number of its own",
    );
}
