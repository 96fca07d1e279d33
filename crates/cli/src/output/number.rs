//! Numbers as text.

/// Digits that files carry: more than any error bar needs, fewer than rounding disturbs.
const FILE_DIGITS: usize = 10;

/// A number for a file, with at most ten significant digits and none that says nothing; empty if there is none.
pub(super) fn field(value: Option<f64>) -> String {
    match value {
        Some(value) if value.is_finite() => {
            let rounded: f64 = format!("{value:.*e}", FILE_DIGITS - 1).parse().unwrap_or(value);
            // Negative zero would look like a sign that means something.
            format!("{}", rounded + 0.0)
        }
        _ => String::new(),
    }
}

/// A number to read, with the given significant digits and without an exponent where it is not needed.
pub(super) fn readable(value: f64, digits: usize) -> String {
    let rounded: f64 = format!("{value:.*e}", digits - 1).parse().unwrap_or(value);
    format!("{}", rounded + 0.0)
}

/// Decimals that show two significant digits of an error.
pub(super) fn decimals_of(error: f64) -> usize {
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to 0..=9")]
    {
        (1.0 - error.abs().log10().floor()).clamp(0.0, 9.0) as usize
    }
}

/// A value and its error, both to two significant digits of the error.
pub(super) fn with_error(value: f64, error: f64) -> String {
    let decimals = decimals_of(error);
    format!("{value:.decimals$} ± {error:.decimals$}")
}

/// A count with its thousands apart.
pub(super) fn count(n: u64) -> String {
    let digits = n.to_string();
    let mut text = String::new();
    for (place, digit) in digits.chars().enumerate() {
        if place > 0 && (digits.len() - place).is_multiple_of(3) {
            text.push(',');
        }
        text.push(digit);
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fields_carry_ten_digits_and_no_noise() {
        assert_eq!(field(Some(0.1 + 0.2)), "0.3");
        assert_eq!(field(Some(-1.234_567_891_234e-5)), "-0.00001234567891");
        assert_eq!(field(Some(-0.0)), "0");
        assert_eq!(field(Some(f64::NAN)), "");
        assert_eq!(field(None), "");
    }

    #[test]
    fn errors_set_the_digits_of_their_values() {
        assert_eq!(with_error(21.3456, 0.874), "21.35 ± 0.87");
        assert_eq!(with_error(1234.6, 31.2), "1235 ± 31");
        assert_eq!(with_error(0.012_346, 0.000_678), "0.01235 ± 0.00068");
    }

    #[test]
    fn counts_have_their_thousands_apart() {
        assert_eq!(count(999), "999");
        assert_eq!(count(480_000), "480,000");
        assert_eq!(count(1_234_567_890), "1,234,567,890");
    }
}
