//! Arithmetic over named sizes: `+ - * / ^`, brackets, functions, angles in degrees.
//!
//! Grammar, loosest first: `sum = product {(+|-) product}`, `product = signed {(*|/) signed}`,
//! `signed = (+|-) signed | power`, `power = atom [^ signed]` (so -2^2 = -4, 2^3^2 = 512),
//! `atom = number [unit] | name | function(sum, …) | (sum)`.

use super::arithmetic::evaluate;
use crate::units::{Dimension, unit};
use std::ops::Range;

/// A longer expression is refused; it also bounds the depth of the tree.
const MOST_CHARACTERS: usize = 1000;

/// Functions and the number of their arguments, 0 for any number from one.
const FUNCTIONS: [(&str, usize); 7] = [
    ("sqrt", 1),
    ("sin", 1),
    ("cos", 1),
    ("tan", 1),
    ("abs", 1),
    ("min", 0),
    ("max", 0),
];

/// Names a size cannot take.
pub(super) fn reserved(name: &str) -> bool {
    name == "pi" || FUNCTIONS.iter().any(|f| f.0 == name)
}

/// What is wrong with an expression, with the bytes of its text.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Slip {
    pub(super) range: Range<usize>,
    pub(super) what: String,
    pub(super) remedy: String,
}

/// A refusal at `range`.
pub(super) fn slip<T>(
    range: Range<usize>,
    what: impl Into<String>,
    remedy: impl Into<String>,
) -> Result<T, Slip> {
    Err(Slip {
        range,
        what: what.into(),
        remedy: remedy.into(),
    })
}

/// A parsed expression.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Expression {
    root: Node,
    /// Units written in it.
    pub(super) units: Vec<(Range<usize>, Dimension)>,
    /// Names used in it.
    pub(super) names: Vec<(Range<usize>, String)>,
}

/// A node of the tree.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Node {
    Number(f64),
    Name(String, Range<usize>),
    Negative(Box<Node>),
    Binary(u8, Box<[Node; 2]>, Range<usize>),
    Call(&'static str, Vec<Node>, Range<usize>),
}

impl Expression {
    /// Parses `text`.
    pub(super) fn parse(text: &str) -> Result<Self, Slip> {
        if text.chars().count() > MOST_CHARACTERS {
            return slip(
                0..text.len(),
                format!("an expression of more than {MOST_CHARACTERS} characters"),
                "split it over several sizes",
            );
        }
        let mut parser = Parser {
            text,
            at: 0,
            out: Self {
                root: Node::Number(0.0),
                units: Vec::new(),
                names: Vec::new(),
            },
        };
        parser.space();
        if parser.at == text.len() {
            return slip(
                0..text.len(),
                "an empty expression",
                "write a number, like 45 or \"2*radius\"",
            );
        }
        parser.out.root = parser.sum()?;
        match parser.peek() {
            None => Ok(parser.out),
            Some(')') => slip(
                parser.at..parser.at + 1,
                "a closing bracket without its opening one",
                "remove it",
            ),
            Some(c) => {
                let end = parser.at + c.len_utf8();
                slip(
                    parser.at..end,
                    format!("\"{c}\" where an operator was expected"),
                    "write + - * / or ^ between two terms",
                )
            }
        }
    }

    /// The bare name this expression consists of.
    pub(super) fn bare(&self) -> Option<&str> {
        match &self.root {
            Node::Name(name, _) => Some(name),
            _ => None,
        }
    }

    /// Its value, with the sizes looked up by `value_of`; `None` from there ends the evaluation
    /// silently, for a size whose own fault is already reported.
    pub(super) fn value(
        &self,
        value_of: &dyn Fn(&str) -> Option<f64>,
    ) -> Result<Option<f64>, Slip> {
        evaluate(&self.root, value_of)
    }
}

struct Parser<'a> {
    text: &'a str,
    at: usize,
    out: Expression,
}

impl<'a> Parser<'a> {
    fn peek(&self) -> Option<char> {
        self.text[self.at..].chars().next()
    }

    fn space(&mut self) {
        let rest = &self.text[self.at..];
        self.at += rest.len() - rest.trim_start().len();
    }

    /// Takes one of `wanted`, and the space after it.
    fn take(&mut self, wanted: &[char]) -> Option<(char, Range<usize>)> {
        let c = self.peek()?;
        if !wanted.contains(&c) {
            return None;
        }
        let range = self.at..self.at + c.len_utf8();
        self.at = range.end;
        self.space();
        Some((c, range))
    }

    fn sum(&mut self) -> Result<Node, Slip> {
        let mut left = self.product()?;
        while let Some((c, range)) = self.take(&['+', '-', '\u{2212}']) {
            let right = self.product()?;
            let operator = if c == '+' { b'+' } else { b'-' };
            left = Node::Binary(operator, Box::new([left, right]), range);
        }
        Ok(left)
    }

    fn product(&mut self) -> Result<Node, Slip> {
        let mut left = self.signed()?;
        while let Some((c, range)) = self.take(&['*', '/', '·', '×']) {
            let right = self.signed()?;
            let operator = if c == '/' { b'/' } else { b'*' };
            left = Node::Binary(operator, Box::new([left, right]), range);
        }
        Ok(left)
    }

    fn signed(&mut self) -> Result<Node, Slip> {
        match self.take(&['+', '-', '\u{2212}']) {
            Some(('+', _)) => self.signed(),
            Some(_) => Ok(Node::Negative(Box::new(self.signed()?))),
            None => self.power(),
        }
    }

    fn power(&mut self) -> Result<Node, Slip> {
        let base = self.atom()?;
        match self.take(&['^']) {
            Some((_, range)) => {
                let exponent = self.signed()?;
                Ok(Node::Binary(b'^', Box::new([base, exponent]), range))
            }
            None => Ok(base),
        }
    }

    fn atom(&mut self) -> Result<Node, Slip> {
        match self.peek() {
            None => slip(
                self.text
                    .trim_end()
                    .char_indices()
                    .next_back()
                    .map_or(0, |c| c.0)..self.text.len(),
                "the expression breaks off here",
                "add the missing term, or remove the last operator",
            ),
            Some('(') => {
                let open = self.at..self.at + 1;
                self.take(&['(']);
                let inner = self.sum()?;
                self.close(open)?;
                Ok(inner)
            }
            Some(c) if c.is_ascii_digit() || c == '.' => self.number(),
            Some(c) if starts_name(c) => self.name(),
            Some(c) => slip(
                self.at..self.at + c.len_utf8(),
                format!("\"{c}\" does not belong in an expression"),
                "allowed are numbers, names of sizes, + - * / ^, brackets and sqrt sin cos tan abs min max pi",
            ),
        }
    }

    fn close(&mut self, open: Range<usize>) -> Result<(), Slip> {
        match self.take(&[')']) {
            Some(_) => Ok(()),
            None if self.at == self.text.len() => slip(
                open,
                "a bracket that is not closed",
                "add the closing bracket",
            ),
            None => {
                let end = self.at + self.peek().map_or(0, char::len_utf8);
                slip(
                    self.at..end,
                    format!(
                        "\"{}\" where an operator or a closing bracket was expected",
                        &self.text[self.at..end]
                    ),
                    "write + - * / or ^ between two terms",
                )
            }
        }
    }

    fn number(&mut self) -> Result<Node, Slip> {
        let start = self.at;
        let bytes = self.text.as_bytes();
        let digits = |mut k: usize| {
            while bytes.get(k).is_some_and(u8::is_ascii_digit) {
                k += 1;
            }
            k
        };
        let mut end = digits(start);
        if bytes.get(end) == Some(&b'.') {
            end = digits(end + 1);
        }
        if matches!(bytes.get(end), Some(b'e' | b'E')) {
            let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
            // "3 eV" and "2e" have no exponent.
            if digits(end + 1 + sign) > end + 1 + sign {
                end = digits(end + 1 + sign);
            }
        }
        self.at = end;
        let Ok(value) = self.text[start..end].parse::<f64>() else {
            return slip(
                start..end.max(start + 1),
                "a point without digits",
                "write a number, like 0.5",
            );
        };
        self.space();
        let unit_start = self.at;
        let word = self.word();
        if word.is_empty() {
            return Ok(Node::Number(value));
        }
        let range = unit_start..self.at;
        self.space();
        if self.peek() == Some('(') || reserved(word) {
            return slip(
                range,
                format!("\"{word}\" right after a number"),
                "write the product with *",
            );
        }
        match unit(word) {
            Ok(one) => {
                self.out.units.push((start..range.end, one.dimension));
                Ok(Node::Number(value * one.value))
            }
            Err(error) => slip(
                range,
                format!("{error}"),
                format!(
                    "a product is written with *, like {}*{word}",
                    &self.text[start..end]
                ),
            ),
        }
    }

    /// Takes the letters, digits and underscores from here on.
    fn word(&mut self) -> &'a str {
        let rest = &self.text[self.at..];
        let mut end = 0;
        for (k, c) in rest.char_indices() {
            if !(starts_name(c) || (k > 0 && (c.is_alphanumeric()))) {
                break;
            }
            end = k + c.len_utf8();
        }
        self.at += end;
        &rest[..end]
    }

    fn name(&mut self) -> Result<Node, Slip> {
        let start = self.at;
        let name = self.word().to_owned();
        let range = start..self.at;
        self.space();
        let function = FUNCTIONS.iter().find(|f| f.0 == name);
        if self.peek() == Some('(') {
            let Some(&(name, arguments)) = function else {
                let known: Vec<&str> = FUNCTIONS.iter().map(|f| f.0).collect();
                return slip(
                    range,
                    format!("\"{name}\" is not a function"),
                    super::near::remedy(&name, &known, ""),
                );
            };
            let open = self.at..self.at + 1;
            self.take(&['(']);
            let mut list = vec![self.sum()?];
            while self.take(&[',']).is_some() {
                list.push(self.sum()?);
            }
            self.close(open)?;
            if arguments != 0 && list.len() != arguments {
                return slip(
                    range,
                    format!("{name} with {} arguments", list.len()),
                    "it takes one",
                );
            }
            return Ok(Node::Call(name, list, range));
        }
        if function.is_some() {
            return slip(
                range,
                format!("{name} without its argument"),
                format!("write {name}(…)"),
            );
        }
        if name == "pi" {
            return Ok(Node::Number(std::f64::consts::PI));
        }
        self.out.names.push((range.clone(), name.clone()));
        Ok(Node::Name(name, range))
    }
}

fn starts_name(c: char) -> bool {
    c.is_alphabetic() || c == '_' || c == '°' || c == '%'
}

/// Whether `name` can be written in an expression.
pub(super) fn nameable(name: &str) -> bool {
    let mut chars = name.chars();
    chars.next().is_some_and(|c| c.is_alphabetic() || c == '_')
        && chars.all(|c| c.is_alphanumeric() || c == '_')
}
