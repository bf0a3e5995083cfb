//! Arithmetic over named sizes: `+ - * / ^`, brackets, functions, angles in degrees.
//!
//! Grammar, loosest first: `sum = product {(+|-) product}`, `product = signed {(*|/) signed}`,
//! `signed = (+|-) signed | power`, `power = atom [^ signed]` (so -2^2 = -4, 2^3^2 = 512),
//! `atom = number [unit] | name | function(sum, …) | (sum)`.

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

fn slip<T>(
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

#[derive(Clone, Debug, PartialEq)]
enum Node {
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

fn evaluate(node: &Node, value_of: &dyn Fn(&str) -> Option<f64>) -> Result<Option<f64>, Slip> {
    let (value, range) = match node {
        Node::Number(value) => return Ok(Some(*value)),
        Node::Name(name, _) => return Ok(value_of(name)),
        Node::Negative(inner) => return Ok(evaluate(inner, value_of)?.map(|x| -x)),
        Node::Binary(operator, sides, range) => {
            let (left, right) = (
                evaluate(&sides[0], value_of)?,
                evaluate(&sides[1], value_of)?,
            );
            let (Some(a), Some(b)) = (left, right) else {
                return Ok(None);
            };
            let value = match operator {
                b'+' => a + b,
                b'-' => a - b,
                b'*' => a * b,
                b'/' if b == 0.0 => {
                    return slip(
                        range.clone(),
                        "division by zero",
                        "the divisor here comes out as 0",
                    );
                }
                b'/' => a / b,
                _ if a < 0.0 && b.fract() != 0.0 => {
                    return slip(
                        range.clone(),
                        format!("{a} to the power {b} is not a real number"),
                        "the base of a broken power must not be negative",
                    );
                }
                _ => a.powf(b),
            };
            (value, range)
        }
        Node::Call(name, list, range) => {
            let mut values = Vec::with_capacity(list.len());
            for argument in list {
                match evaluate(argument, value_of)? {
                    Some(x) => values.push(x),
                    None => return Ok(None),
                }
            }
            let x = values[0];
            let value = match *name {
                "sqrt" if x < 0.0 => {
                    return slip(
                        range.clone(),
                        format!("the square root of {x}"),
                        "its argument must not be negative",
                    );
                }
                "sqrt" => x.sqrt(),
                "sin" => sine(x),
                "cos" => sine(x + 90.0),
                "tan" if sine(x + 90.0) == 0.0 => {
                    return slip(
                        range.clone(),
                        format!("tan({x}) is infinite"),
                        "angles are in degrees; keep off 90",
                    );
                }
                "tan" => sine(x) / sine(x + 90.0),
                "abs" => x.abs(),
                "min" => values.iter().fold(x, |a, &b| a.min(b)),
                _ => values.iter().fold(x, |a, &b| a.max(b)),
            };
            (value, range)
        }
    };
    if value.is_finite() {
        Ok(Some(value))
    } else {
        slip(
            range.clone(),
            "the result is too large for a number",
            "check the sizes that enter here",
        )
    }
}

/// Sine of an angle in degrees, exact at multiples of 90° and at 30°.
fn sine(degrees: f64) -> f64 {
    let a = degrees.rem_euclid(360.0);
    let (sign, a) = if a >= 180.0 {
        (-1.0, a - 180.0)
    } else {
        (1.0, a)
    };
    let a = if a > 90.0 { 180.0 - a } else { a };
    sign * match a {
        0.0 => 0.0,
        30.0 => 0.5,
        90.0 => 1.0,
        a => a.to_radians().sin(),
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn value(text: &str) -> Result<f64, String> {
        let look = |name: &str| Some(if name == "radius" { 45.0 } else { 18.0 });
        Expression::parse(text)
            .and_then(|e| e.value(&look))
            .map(|v| v.unwrap())
            .map_err(|s| format!("{} [{}]", s.what, &text[s.range]))
    }

    #[test]
    fn arithmetic_as_on_paper() {
        for (text, expected) in [
            ("2*radius + neck/2", 99.0),
            ("-2^2", -4.0),
            ("2^3^2", 512.0),
            ("2^-1", 0.5),
            ("(1+2)*3", 9.0),
            ("10-4-3", 3.0),
            ("8/4/2", 1.0),
            ("sqrt(16)", 4.0),
            ("sin(30)+cos(60)", 1.0),
            ("cos(90)", 0.0),
            ("tan(45)", 1.0),
            ("sin(-90)", -1.0),
            ("min(3, 2, 5) + max(1, 7)", 9.0),
            ("abs(-3)", 3.0),
            ("2*pi", std::f64::consts::TAU),
            ("- -3", 3.0),
            ("1e3 + 2E-1", 1000.2),
            ("3 eV", 3000.0),
            ("2*(0.5 um) - 12A*10", 988.0),
        ] {
            let got = value(text).unwrap();
            assert!(
                (got - expected).abs() < 1e-12 * expected.abs().max(1.0),
                "{text} = {got}"
            );
        }
    }

    #[test]
    fn slips_point_at_the_place() {
        for (text, expected) in [
            ("2*", "breaks off here [*]"),
            ("(1+2", "not closed [(]"),
            ("1+2)", "closing bracket without its opening one [)]"),
            ("radius neck", "operator was expected [n]"),
            ("1/0", "division by zero [/]"),
            ("1/(neck-18)", "division by zero [/]"),
            ("sqrt(-1)", "square root of -1 [sqrt]"),
            ("(-8)^0.5", "not a real number [^]"),
            ("10^400", "too large for a number [^]"),
            ("tan(90)", "infinite [tan]"),
            ("sine(30)", "is not a function [sine]"),
            ("sin + 1", "without its argument [sin]"),
            ("sqrt(1, 2)", "with 2 arguments [sqrt]"),
            ("5 radius", "not a unit known here"),
            ("5 $", "operator was expected [$]"),
            ("$", "does not belong in an expression [$]"),
            ("  ", "an empty expression"),
        ] {
            let got = value(text).unwrap_err();
            assert!(got.contains(expected), "{text}: {got}");
        }
    }

    proptest! {
        #[test]
        fn no_text_panics(text in "\\PC{0,40}") {
            let _ = value(&text);
        }

        #[test]
        fn no_likely_text_panics(text in "([-+*/^(),. ]|[0-9]{1,3}|radius|sin|min|e|nm|pi){0,30}") {
            let _ = value(&text);
        }
    }
}
