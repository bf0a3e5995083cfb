//! Typed access to the tables of a document, collecting faults on the way.

use super::fault::Fault;
use super::near;
use super::sizes::Sizes;
use crate::geometry::{Point, pt};
use crate::units::Dimension;
use std::ops::Range;
use toml_edit::{Item, TableLike, Value};

/// Where values are read from: the text, what is known so far, and the faults found.
pub(super) struct Reader<'a> {
    pub(super) text: &'a str,
    /// Laboratory units; otherwise lengths are pure numbers.
    pub(super) lab: bool,
    pub(super) sizes: Sizes,
    pub(super) faults: Vec<Fault>,
}

/// A table, and how it is called in messages ("[solve]", "step 2 (disc)").
#[derive(Clone, Copy)]
pub(super) struct Section<'t> {
    pub(super) table: &'t dyn TableLike,
    pub(super) title: &'t str,
    /// What a fault of the whole table points at.
    pub(super) span: &'t Range<usize>,
}

impl<'t> Section<'t> {
    pub(super) fn get(&self, key: &str) -> Option<&'t Item> {
        self.table.get(key)
    }

    /// The bytes of a key, or of the table's head when it is absent.
    pub(super) fn key_span(&self, key: &str) -> Range<usize> {
        self.table
            .get_key_value(key)
            .and_then(|(k, _)| k.span())
            .unwrap_or_else(|| self.span.clone())
    }
}

/// What an item is, for "found …".
pub(super) fn found(item: &Item) -> String {
    match item {
        Item::None => "nothing".to_owned(),
        Item::Table(_) => "a table".to_owned(),
        Item::ArrayOfTables(_) => "a list of tables".to_owned(),
        Item::Value(value) => match value {
            Value::String(s) => format!("the text \"{}\"", clip(s.value())),
            Value::Integer(n) => format!("the number {}", n.value()),
            Value::Float(x) => format!("the number {}", x.value()),
            Value::Boolean(b) => format!("{}", b.value()),
            Value::Datetime(_) => "a date".to_owned(),
            Value::Array(_) => "a list".to_owned(),
            Value::InlineTable(_) => "a table".to_owned(),
        },
    }
}

pub(super) fn clip(text: &str) -> String {
    if text.chars().count() > 40 {
        text.chars().take(40).chain(['…']).collect()
    } else {
        text.to_owned()
    }
}

impl Reader<'_> {
    pub(super) fn fault(
        &mut self,
        span: Range<usize>,
        what: impl Into<String>,
        remedy: impl Into<String>,
    ) {
        self.faults.push(Fault {
            span: Some(span),
            what: what.into(),
            remedy: remedy.into(),
        });
    }

    /// Reports every key of the section that is not in `known`.
    pub(super) fn check_keys(&mut self, section: Section<'_>, known: &[&str]) {
        for (name, _) in section.table.iter() {
            if !known.contains(&name) {
                self.fault(
                    section.key_span(name),
                    format!("`{}` is not a key of {}", clip(name), section.title),
                    near::remedy(name, known, "remove it"),
                );
            }
        }
    }

    /// The table behind `key` of `section`, written as `[key]`, `key = {…}` or dotted keys.
    pub(super) fn table<'t>(
        &mut self,
        section: Section<'t>,
        key: &str,
    ) -> Option<&'t dyn TableLike> {
        let item = section.get(key)?;
        let table = item.as_table_like();
        if table.is_none() {
            let remedy =
                format!("write it as a table: {key} = {{ … }}, or [{key}] with its keys below");
            self.fault(
                section.key_span(key),
                format!("`{key}` is {}", found(item)),
                remedy,
            );
        }
        table
    }

    /// A text.
    pub(super) fn string<'t>(
        &mut self,
        section: Section<'t>,
        key: &str,
        example: &str,
    ) -> Option<&'t str> {
        let item = section.get(key)?;
        let text = item.as_str();
        if text.is_none() {
            let span = item.span().unwrap_or_else(|| section.key_span(key));
            let what = format!(
                "`{key}` of {} wants a text, and this is {}",
                section.title,
                found(item)
            );
            self.fault(
                span,
                what,
                format!("write it in quotes, like {key} = \"{example}\""),
            );
        }
        text
    }

    /// A number of `dimension` at `key`; absent gives `None` without a fault.
    pub(super) fn number(
        &mut self,
        section: Section<'_>,
        key: &str,
        dimension: Dimension,
    ) -> Option<f64> {
        let item = section.get(key)?;
        let span = item.span().unwrap_or_else(|| section.key_span(key));
        match item.as_value() {
            Some(value) => self.scalar(value, &span, &format!("`{key}`"), dimension),
            None => {
                self.not_a_number(span, &format!("`{key}`"), item);
                None
            }
        }
    }

    /// A number that must be there.
    pub(super) fn required(
        &mut self,
        section: Section<'_>,
        key: &str,
        dimension: Dimension,
    ) -> Option<f64> {
        if section.get(key).is_none() {
            self.missing(section, key, "45");
        }
        self.number(section, key, dimension)
    }

    /// A number that must be there and be above zero.
    pub(super) fn positive(
        &mut self,
        section: Section<'_>,
        key: &str,
        dimension: Dimension,
    ) -> Option<f64> {
        let value = self.required(section, key, dimension)?;
        self.above_zero(section, key, value)
    }

    /// Reports a value that is not above zero.
    pub(super) fn above_zero(
        &mut self,
        section: Section<'_>,
        key: &str,
        value: f64,
    ) -> Option<f64> {
        if value > 0.0 {
            return Some(value);
        }
        let span = section
            .get(key)
            .and_then(Item::span)
            .unwrap_or_else(|| section.key_span(key));
        self.fault(
            span,
            format!("`{key}` of {} is {value}", section.title),
            format!("`{key}` must be greater than zero"),
        );
        None
    }

    pub(super) fn missing(&mut self, section: Section<'_>, key: &str, example: &str) {
        self.fault(
            section.span.clone(),
            format!("{} has no `{key}`", section.title),
            format!("add a line like {key} = {example}"),
        );
    }

    /// A point `[x, y]` at `key`.
    pub(super) fn point(&mut self, section: Section<'_>, key: &str) -> Option<Point> {
        let [x, y] = self.pair(section, key, Dimension::Length)?;
        Some(pt(x, y))
    }

    /// A pair of numbers at `key`; absent gives `None` without a fault.
    pub(super) fn pair(
        &mut self,
        section: Section<'_>,
        key: &str,
        dimension: Dimension,
    ) -> Option<[f64; 2]> {
        let item = section.get(key)?;
        let span = item.span().unwrap_or_else(|| section.key_span(key));
        match item.as_value() {
            Some(value) => self.pair_of(value, &span, key, dimension),
            None => {
                self.not_a_pair(span, key, &found(item));
                None
            }
        }
    }

    /// The two numbers of a list.
    pub(super) fn pair_of(
        &mut self,
        value: &Value,
        span: &Range<usize>,
        key: &str,
        dimension: Dimension,
    ) -> Option<[f64; 2]> {
        let Some(array) = value.as_array() else {
            self.not_a_pair(span.clone(), key, &found(&Item::Value(value.clone())));
            return None;
        };
        let (Some(x), Some(y), 2) = (array.get(0), array.get(1), array.len()) else {
            self.not_a_pair(span.clone(), key, &format!("a list of {}", array.len()));
            return None;
        };
        let name = format!("`{key}`");
        let x = self.scalar(
            x,
            &x.span().unwrap_or_else(|| span.clone()),
            &name,
            dimension,
        );
        let y = self.scalar(
            y,
            &y.span().unwrap_or_else(|| span.clone()),
            &name,
            dimension,
        );
        Some([x?, y?])
    }

    fn not_a_pair(&mut self, span: Range<usize>, key: &str, found: &str) {
        self.fault(
            span,
            format!("`{key}` wants two numbers, and this is {found}"),
            format!("write {key} = [0, 0]"),
        );
    }

    fn not_a_number(&mut self, span: Range<usize>, name: &str, item: &Item) {
        self.fault(
            span,
            format!("{name} wants a number, and this is {}", found(item)),
            "write a number like 45, an expression like \"2*radius\" or a quantity like \"45 nm\"",
        );
    }

    /// The value of a number, an expression or a quantity.
    pub(super) fn scalar(
        &mut self,
        value: &Value,
        span: &Range<usize>,
        name: &str,
        dimension: Dimension,
    ) -> Option<f64> {
        match value {
            Value::Integer(n) => Some(*n.value() as f64),
            Value::Float(x) if x.value().is_finite() => Some(*x.value()),
            Value::Float(x) => {
                self.fault(
                    span.clone(),
                    format!("{name} is {}", x.value()),
                    "write a finite number",
                );
                None
            }
            Value::String(text) => self.evaluated(text.value(), span, Some(dimension)),
            other => {
                self.not_a_number(span.clone(), name, &Item::Value(other.clone()));
                None
            }
        }
    }
}
