//! Numbers as people write them: significant digits, and values with their error in brackets.

/// `x` with `digits` significant digits, without an exponent while it stays readable.
pub fn significant(x: f64, digits: usize) -> String {
    if x == 0.0 || !x.is_finite() {
        return if x == 0.0 { "0".into() } else { format!("{x}") };
    }
    let exponent = x.abs().log10().floor() as i32;
    if !(-4..7).contains(&exponent) {
        return format!("{x:.*e}", digits - 1);
    }
    let decimals = (digits as i32 - 1 - exponent).max(0) as usize;
    format!("{x:.decimals$}")
}

/// Value and error in the concise notation, the error rounded up to one digit: `9.63972(3)`.
pub fn concise(value: f64, error: f64) -> String {
    if !error.is_finite() || error <= 0.0 || !value.is_finite() {
        return significant(value, 8);
    }
    let mut place = error.log10().floor() as i32;
    // a hair is forgiven so that 3.0000000001e-5 is not called 4e-5
    let mut digit = (error / 10f64.powi(place) - 1e-9).ceil() as i32;
    if digit >= 10 {
        digit = 1;
        place += 1;
    }
    if place >= 0 {
        let unit = 10f64.powi(place);
        return format!(
            "{:.0}({:.0})",
            (value / unit).round() * unit,
            digit as f64 * unit
        );
    }
    let decimals = (-place).min(14) as usize;
    format!("{value:.decimals$}({})", digit.max(1))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_and_brackets() {
        assert_eq!(significant(0.012345, 3), "0.0123");
        assert_eq!(significant(12345.6, 3), "12346");
        assert_eq!(significant(1.5e9, 3), "1.50e9");
        assert_eq!(concise(9.639_723_8, 2.4e-5), "9.63972(3)");
        assert_eq!(concise(9.639_723_8, 9.7e-5), "9.6397(1)");
        assert_eq!(concise(1234.0, 30.0), "1230(30)");
        assert_eq!(concise(1.0, 0.0), "1.0000000");
    }
}
