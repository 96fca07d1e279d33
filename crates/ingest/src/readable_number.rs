//! Numbers in messages.

/// Significant digits shown: enough to tell neighboring frames of a long run apart, fewer than rounding disturbs.
const DIGITS: usize = 10;

/// A number with at most ten significant digits, and with an exponent where the zeros would be more than the digits.
pub(crate) fn readable_number(number: f64) -> String {
    if !number.is_finite() {
        return number.to_string();
    }
    // A sum with 0 takes the sign off a negative zero.
    let rounded = format!("{number:.*e}", DIGITS - 1).parse().unwrap_or(number) + 0.0;
    let magnitude = f64::abs(rounded);
    if magnitude == 0.0 || (1e-5..1e10).contains(&magnitude) { rounded.to_string() } else { format!("{rounded:e}") }
}

#[cfg(test)]
mod tests {
    use super::readable_number;

    #[test]
    fn digits_that_rounding_left_are_not_shown() {
        assert_eq!(readable_number(1.493_750_000_000_000_1), "1.49375");
        assert_eq!(readable_number(0.1 + 0.2), "0.3");
        assert_eq!(readable_number(-0.0), "0");
    }

    #[test]
    fn very_small_and_very_large_numbers_have_an_exponent() {
        assert_eq!(readable_number(-0.000_000_000_045), "-4.5e-11");
        assert_eq!(readable_number(1e300), "1e300");
        // Rounding to ten digits carries over into the eleventh place.
        assert_eq!(readable_number(9_999_999_999.9), "1e10");
    }

    #[test]
    fn times_of_a_long_run_keep_their_digits() {
        assert_eq!(readable_number(123_456_789.5), "123456789.5");
        assert_eq!(readable_number(0.000_012_5), "0.0000125");
    }

    #[test]
    fn what_is_not_finite_is_named() {
        assert_eq!(readable_number(f64::NAN), "NaN");
        assert_eq!(readable_number(f64::NEG_INFINITY), "-inf");
    }
}
