//! A value with its error in the concise notation, `9.63972(3)`.

use super::UnitError;

/// The finest digit of a double relative to its first: no decimal beyond it means anything.
const DIGITS: i32 = 17;

/// `value` ± `error` in concise notation: the digits in brackets count in the last place shown.
///
/// The rule: the error has two digits as long as they are below 30, else one. It is rounded up,
/// the rounding of the value included, so that the printed interval always covers
/// [value − error, value + error]. Values of 10⁷ and more, or below 10⁻⁴, get an exponent:
/// `1.23(4)e-9`. A zero error prints all digits of the value and `(0)`; an infinite or undefined
/// one prints `(?)`, an undefined value prints `?`.
///
/// ```
/// use dotwright::units::concise;
/// assert_eq!(concise(9.6397238, 0.00003), "9.63972(4)");
/// assert_eq!(concise(9.63972, 0.00003), "9.63972(3)");
/// assert_eq!(concise(0.3, 12.0), "0(13)");
/// assert_eq!(concise(12345.0, 300.0), "12300(400)");
/// ```
pub fn concise(value: f64, error: f64) -> String {
    if !value.is_finite() {
        return "?".to_owned();
    }
    let error = error.abs();
    if !error.is_finite() {
        return shortest(value, "(?)");
    }
    if error == 0.0 {
        return shortest(value, "(0)");
    }
    let floor = if value == 0.0 {
        i32::MIN
    } else {
        magnitude(value) - DIGITS
    };
    let mut place = (magnitude(error) - 1).max(floor).max(-320);
    let (mut digits, mut bracket) = rounded(value, error, place);
    if bracket >= 30 {
        place += 1;
        (digits, bracket) = rounded(value, error, place);
    }
    lay_out(value < 0.0, digits, bracket, place)
}

/// Reads the concise notation back: value and error. A number without brackets has error zero
/// — it is taken as exact; `(?)` is an infinite error; `1.2(0.3)`, with a point in the brackets,
/// gives the error in full.
///
/// # Errors
/// [`UnitError::NotANumber`] when the text has another form.
pub fn parse_concise(text: &str) -> Result<(f64, f64), UnitError> {
    let refuse = || UnitError::NotANumber(text.to_owned());
    let text_ = text.trim();
    let Some((head, rest)) = text_.split_once('(') else {
        let value: f64 = text_.parse().map_err(|_| refuse())?;
        return if value.is_finite() {
            Ok((value, 0.0))
        } else {
            Err(refuse())
        };
    };
    let (bracket, exponent) = rest.split_once(')').ok_or_else(refuse)?;
    let exponent: i32 = match exponent.strip_prefix(['e', 'E']) {
        Some(digits) => digits.parse().map_err(|_| refuse())?,
        None if exponent.is_empty() => 0,
        None => return Err(refuse()),
    };
    if !decimal(head.strip_prefix(['-', '+']).unwrap_or(head)) {
        return Err(refuse());
    }
    let value: f64 = format!("{head}e{exponent}").parse().map_err(|_| refuse())?;
    if bracket == "?" {
        return Ok((value, f64::INFINITY));
    }
    if !decimal(bracket) {
        return Err(refuse());
    }
    let decimals = match head.split_once('.') {
        Some((_, d)) if !bracket.contains('.') => i32::try_from(d.len()).map_err(|_| refuse())?,
        _ => 0,
    };
    let place = exponent.checked_sub(decimals).ok_or_else(refuse)?;
    let error: f64 = format!("{bracket}e{place}").parse().map_err(|_| refuse())?;
    if value.is_finite() && error.is_finite() {
        Ok((value, error))
    } else {
        Err(refuse())
    }
}

/// Digits with at most one point among them.
fn decimal(text: &str) -> bool {
    text.bytes().any(|b| b.is_ascii_digit())
        && text.bytes().all(|b| b.is_ascii_digit() || b == b'.')
        && text.bytes().filter(|&b| b == b'.').count() <= 1
}

/// The shortest digits that return the value, with `bracket` behind its mantissa.
fn shortest(value: f64, bracket: &str) -> String {
    let size = value.abs();
    if value == 0.0 {
        format!("0{bracket}")
    } else if (1e-4..1e7).contains(&size) {
        format!("{value}{bracket}")
    } else {
        let text = format!("{value:e}");
        let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
        format!("{mantissa}{bracket}e{exponent}")
    }
}

/// Decimal exponent of the first digit of a number that is not zero.
fn magnitude(x: f64) -> i32 {
    let text = format!("{x:e}");
    text.split_once('e')
        .and_then(|(_, e)| e.parse().ok())
        .unwrap_or(0)
}

/// |value| rounded to a multiple of 10^place, as that multiple, and the error that covers it.
fn rounded(value: f64, error: f64, place: i32) -> (i128, i128) {
    let digits = multiple(value.abs(), place);
    let shown: f64 = format!("{digits}e{place}").parse().unwrap_or(0.0);
    let unit: f64 = format!("1e{place}").parse().unwrap_or(f64::MIN_POSITIVE);
    let covered = (error + (value.abs() - shown).abs()) / unit;
    // A millionth of a place is the noise of the division, not an error to cover.
    (digits, ((covered - 1e-6).ceil() as i128).max(1))
}

/// x/10^place rounded to an integer, by exact decimal digits.
fn multiple(x: f64, place: i32) -> i128 {
    if x == 0.0 {
        return 0;
    }
    let decimals = magnitude(x) - place;
    if decimals < -1 {
        return 0;
    }
    if decimals == -1 {
        let text = format!("{x:e}");
        return i128::from(text.as_bytes().first().is_some_and(|&b| b >= b'5'));
    }
    let text = format!("{x:.*e}", decimals as usize);
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let digits: i128 = mantissa.replace('.', "").parse().unwrap_or(0);
    let exponent: i32 = exponent.parse().unwrap_or(0);
    // Rounding 9.99 up to 10.0 lengthens the number by one place.
    if exponent - place > decimals {
        digits * 10
    } else {
        digits
    }
}

/// Writes `digits`·10^place with `bracket` counting in the last place.
fn lay_out(negative: bool, digits: i128, bracket: i128, place: i32) -> String {
    let sign = if negative && digits != 0 { "-" } else { "" };
    let first = |n: i128| n.to_string().len() as i32 - 1 + place;
    let top = if digits == 0 {
        first(bracket)
    } else {
        first(digits).max(first(bracket))
    };
    if !(-4..7).contains(&top) {
        let decimals = (top - place).max(0);
        return format!(
            "{sign}{}({bracket})e{top}",
            pointed(digits, decimals as usize)
        );
    }
    if place >= 0 {
        let scale = 10i128.pow(place as u32);
        return format!("{sign}{}({})", digits * scale, bracket * scale);
    }
    format!("{sign}{}({bracket})", pointed(digits, -place as usize))
}

/// `digits` with a point before the last `decimals` of them.
fn pointed(digits: i128, decimals: usize) -> String {
    let text = format!("{digits:0>width$}", width = decimals + 1);
    let (whole, fraction) = text.split_at(text.len() - decimals);
    if fraction.is_empty() {
        whole.to_owned()
    } else {
        format!("{whole}.{fraction}")
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn errors_of_all_sizes() {
        let mut wrong = Vec::new();
        for (value, error, text) in [
            (9.63972, 3e-5, "9.63972(3)"),
            (9.639720, 2.6e-5, "9.639720(26)"),
            (9.63972384, 2.6e-5, "9.639724(27)"),
            (0.0, 1e-3, "0.0000(10)"),
            (1.0, 0.5, "1.0(5)"),
            (0.3, 12.0, "0(13)"),
            (12345.0, 300.0, "12300(400)"),
            (12300.0, 300.0, "12300(300)"),
            (-0.04, 3.0, "0(4)"),
            (-9.96, 0.3, "-10.0(4)"),
            (1.2345e-9, 4e-12, "1.235(5)e-9"),
            (1.2345e-9, 4.5e-12, "1.235(5)e-9"),
            (6.02214076e23, 3e15, "6.02214076(3)e23"),
            (99999999.0, 2.0, "9.99999990(20)e7"),
            (2.0, 0.0, "2(0)"),
            (1e-12, 0.0, "1(0)e-12"),
            (1.5, f64::INFINITY, "1.5(?)"),
            (f64::NAN, 1.0, "?"),
            (2.5, 1e-30, "2.50000000000000000(1)"),
            (5e-324, 1e-320, "0(2)e-320"),
        ] {
            if concise(value, error) != text {
                wrong.push((concise(value, error), text));
            }
        }
        assert!(wrong.is_empty(), "{wrong:?}");
    }

    #[test]
    fn the_notation_reads_back() {
        assert_eq!(parse_concise("9.63972(3)").unwrap(), (9.63972, 3e-5));
        assert_eq!(parse_concise("12300(300)").unwrap(), (12300.0, 300.0));
        assert_eq!(parse_concise("-1.23(4)e-9").unwrap(), (-1.23e-9, 4e-11));
        assert_eq!(parse_concise("1.2(0.3)").unwrap(), (1.2, 0.3));
        assert_eq!(parse_concise("1.25").unwrap(), (1.25, 0.0));
        assert_eq!(parse_concise("1.5(?)").unwrap(), (1.5, f64::INFINITY));
        for bad in [
            "",
            "()",
            "1(",
            "1(2",
            "1(a)",
            "x(1)",
            "1(2)3",
            "1.2.3(4)",
            "1(2)e9999999999",
        ] {
            assert!(parse_concise(bad).is_err(), "{bad}");
        }
    }

    fn sized() -> impl Strategy<Value = f64> {
        (-9.999f64..9.999, -40i32..40).prop_map(|(m, e)| m * 10f64.powi(e))
    }

    proptest! {
        #[test]
        fn what_is_printed_covers_what_was_meant(value in sized(), error in sized()) {
            let error = error.abs();
            let text = concise(value, error);
            let (v, e) = parse_concise(&text).unwrap();
            let slack = 2e-6 * e + 4.0 * f64::EPSILON * value.abs();
            prop_assert!(v - e <= value - error + slack, "{text}");
            prop_assert!(v + e >= value + error - slack, "{text}");
            // Never more than 1.5 places wider than asked: 30 to 45 → one digit is the worst case.
            prop_assert!(e <= 1.5 * error + 4e-16 * value.abs(), "{text} for {error}");
        }

        #[test]
        fn printing_again_changes_nothing(value in sized(), error in sized()) {
            let once = concise(value, error);
            let (v, e) = parse_concise(&once).unwrap();
            prop_assert_eq!(concise(v, e), once);
        }

        #[test]
        fn no_text_panics(text in "[-+0-9.()eE?x ]{0,16}") {
            let _ = parse_concise(&text);
        }
    }
}
