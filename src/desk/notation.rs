//! Numbers without an error, as people write them.

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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits() {
        assert_eq!(significant(0.012345, 3), "0.0123");
        assert_eq!(significant(12345.6, 3), "12346");
        assert_eq!(significant(1.5e9, 3), "1.50e9");
    }
}
