//! The value of a parsed expression.

use super::expression::{Node, Slip, slip};

/// The value of a node; `None` when a name in it has none.
pub(super) fn evaluate(
    node: &Node,
    value_of: &dyn Fn(&str) -> Option<f64>,
) -> Result<Option<f64>, Slip> {
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
    use super::super::expression::Expression;
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
