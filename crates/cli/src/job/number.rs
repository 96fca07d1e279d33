//! Numbers in messages.

/// Significant digits of a number that was typed or read: more than anyone types, fewer than rounding disturbs.
const DIGITS: usize = 10;

/// Significant digits of a number that is to be compared by eye, or typed.
const ROUGH_DIGITS: usize = 6;

/// A number that was typed, or read from a file, or follows from such numbers exactly.
pub(super) fn readable(number: f64) -> String {
    with_digits(number, DIGITS)
}

/// A number that was calculated.
pub(super) fn rough(number: f64) -> String {
    with_digits(number, ROUGH_DIGITS)
}

/// At most so many significant digits, and an exponent where the zeros would be more than they.
fn with_digits(number: f64, digits: usize) -> String {
    if number.is_nan() {
        // As TOML writes it.
        return "nan".to_owned();
    }
    if number.is_infinite() {
        return number.to_string();
    }
    // A sum with 0 takes the sign off a negative zero.
    let rounded = format!("{number:.*e}", digits - 1).parse().unwrap_or(number) + 0.0;
    let magnitude = f64::abs(rounded);
    if magnitude == 0.0 || (1e-5..1e10).contains(&magnitude) { rounded.to_string() } else { format!("{rounded:e}") }
}

#[cfg(test)]
mod tests {
    use super::{readable, rough};

    #[test]
    fn digits_that_rounding_left_are_not_shown() {
        assert_eq!(readable(1.493_750_000_000_000_1), "1.49375");
        assert_eq!(readable(0.1 + 0.2), "0.3");
        assert_eq!(readable(-0.0), "0");
        assert_eq!(rough(2.0 / 3.0), "0.666667");
    }

    #[test]
    fn very_small_and_very_large_numbers_have_an_exponent() {
        assert_eq!(readable(-0.000_000_000_045), "-4.5e-11");
        assert_eq!(readable(1e300), "1e300");
        assert_eq!(rough(1.234_567_8e12), "1.23457e12");
    }

    #[test]
    fn what_was_typed_is_shown_as_it_was_typed() {
        for text in ["310.15", "-0.00012", "123456.75", "1234567890", "0.1234567891"] {
            assert_eq!(text.parse().map(readable), Ok(text.to_owned()));
        }
    }

    #[test]
    fn what_is_not_finite_is_written_as_in_a_job() {
        assert_eq!([f64::NAN, f64::INFINITY, f64::NEG_INFINITY].map(readable), ["nan", "inf", "-inf"]);
    }
}
