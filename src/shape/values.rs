//! Values of expressions and quantities in a document, with their faults put in place.

use super::expression::{Expression, Slip};
use super::near;
use super::reader::{Reader, clip};
use crate::units::{Dimension, Quantity};
use std::ops::Range;

impl Reader<'_> {
    /// The value of an expression or a quantity; `wanted` is `None` for sizes, which may be any.
    pub(super) fn evaluated(
        &mut self,
        text: &str,
        span: &Range<usize>,
        wanted: Option<Dimension>,
    ) -> Option<f64> {
        // Wavenumbers, "8 cm-1" and "8 1/cm", would read as arithmetic.
        if let Ok(quantity) = text.parse::<Quantity>()
            && quantity.dimension != Dimension::Number
        {
            let whole = 0..text.len();
            return self
                .units_fit(&[(whole, quantity.dimension)], text, span, wanted)
                .then_some(quantity.value);
        }
        let expression = match Expression::parse(text) {
            Ok(expression) => expression,
            Err(slip) => {
                self.slipped(slip, text, span);
                return None;
            }
        };
        let fits = self.units_fit(&expression.units, text, span, wanted);
        let mut known = self.names_known(&expression, text, span) && fits;
        if let (Some(name), Some(wanted)) = (expression.bare(), wanted)
            && let Some(dimension) = self.sizes.dimension(name)
            && dimension != wanted
        {
            self.fault(
                span.clone(),
                format!(
                    "the size `{name}` is {}, and {} is wanted here",
                    dimension.words(),
                    wanted.words()
                ),
                format!("use {}", wanted.examples()),
            );
            known = false;
        }
        if !known {
            return None;
        }
        match expression.value(&|name| self.sizes.value(name)) {
            Ok(value) => value,
            Err(slip) => {
                self.slipped(slip, text, span);
                None
            }
        }
    }

    /// Reports names that are no sizes; remembers the others as used.
    pub(super) fn names_known(
        &mut self,
        expression: &Expression,
        text: &str,
        span: &Range<usize>,
    ) -> bool {
        let mut all = true;
        for (range, name) in &expression.names {
            if self.sizes.knows(name) {
                self.sizes.mark_used(name);
                continue;
            }
            all = false;
            let known: Vec<&str> = self.sizes.names().collect();
            let remedy = near::remedy(name, &known, "define it under [sizes]");
            let place = self.inside(text, span, range);
            self.fault(place, format!("there is no size `{}`", clip(name)), remedy);
        }
        all
    }

    fn units_fit(
        &mut self,
        units: &[(Range<usize>, Dimension)],
        text: &str,
        span: &Range<usize>,
        wanted: Option<Dimension>,
    ) -> bool {
        let mut all = true;
        for (range, dimension) in units {
            let (what, remedy) = match wanted {
                _ if !self.lab
                    && *dimension != Dimension::Angle
                    && *dimension != Dimension::Number =>
                {
                    (
                        format!("{} in a shape of reduced scale", dimension.words()),
                        "write a pure number, or set scale = \"lab\" at the top".to_owned(),
                    )
                }
                Some(wanted) if wanted != *dimension && *dimension != Dimension::Number => (
                    format!(
                        "this is {}, and {} is wanted here",
                        dimension.words(),
                        wanted.words()
                    ),
                    format!("use {}", wanted.examples()),
                ),
                _ => continue,
            };
            all = false;
            let place = self.inside(text, span, range);
            self.fault(place, what, remedy);
        }
        all
    }

    fn slipped(&mut self, slip: Slip, text: &str, span: &Range<usize>) {
        let place = self.inside(text, span, &slip.range);
        self.fault(place, slip.what, slip.remedy);
    }

    /// The bytes of the document that `range` of a string value stands at: exact for strings
    /// without escapes, the whole string otherwise.
    fn inside(&self, text: &str, span: &Range<usize>, range: &Range<usize>) -> Range<usize> {
        let raw = self.text.get(span.clone()).unwrap_or("");
        let exact = raw.len() == text.len() + 2 && raw.get(1..raw.len() - 1) == Some(text);
        if exact && !range.is_empty() {
            span.start + 1 + range.start..span.start + 1 + range.end
        } else {
            span.clone()
        }
    }
}
