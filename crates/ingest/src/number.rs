//! Numbers as programs write them.

use crate::error::NumberProblem;

/// The longest number whose exponent is rewritten; anything longer in that style is text.
const LONGEST_REWRITTEN: usize = 1024;

/// Reads the number that `text` begins with, if it is an everyday one: a finite decimal number with or without
/// an exponent marked by `e` or `E`. Gives the value and how many bytes it takes; what follows is not looked at.
///
/// The value has the same bits as `str::parse::<f64>` gives.
#[inline]
pub(crate) fn leading_number(text: &[u8]) -> Option<(f64, usize)> {
    match fast_float2::parse_partial::<f64, _>(text) {
        Ok((value, length)) if value.is_finite() => Some((value, length)),
        _ => None,
    }
}

/// Reads a whole field, without blanks at its ends, as a finite number.
///
/// Beside everyday numbers it reads Fortran's `1.0D+03` and `1.0+103`, whose exponent has no letter.
pub(crate) fn parse_number(field: &[u8]) -> Result<f64, NumberProblem> {
    if field.is_empty() {
        return Err(NumberProblem::Empty);
    }
    if let Some(value) = whole_number(field) {
        return value;
    }
    if field.iter().all(|&byte| byte == b'*') {
        return Err(NumberProblem::Asterisks);
    }
    if is_spelled_not_finite(field) {
        return Err(NumberProblem::NotFinite);
    }
    rewrite_exponent(field).and_then(|rewritten| whole_number(&rewritten)).unwrap_or(Err(NumberProblem::Text))
}

/// Whether a field is, or was meant as, a number; a header has no such field.
pub(crate) fn is_meant_as_number(field: &[u8]) -> bool {
    match parse_number(field) {
        Ok(_) | Err(NumberProblem::NotFinite | NumberProblem::Asterisks | NumberProblem::TooLarge) => true,
        Err(NumberProblem::Text | NumberProblem::Empty | NumberProblem::UnclosedQuote) => false,
    }
}

/// `None` if the field is not a number of the everyday form from end to end.
fn whole_number(field: &[u8]) -> Option<Result<f64, NumberProblem>> {
    let value: f64 = fast_float2::parse(field).ok()?;
    Some(if value.is_finite() {
        Ok(value)
    } else if field.iter().any(u8::is_ascii_digit) {
        Err(NumberProblem::TooLarge)
    } else {
        Err(NumberProblem::NotFinite)
    })
}

/// Spellings of NaN and infinity that C and Fortran libraries write: `-nan`, `nan(0x8…)`, `NaNQ`, `1.#IND`, `1.#INF`…
fn is_spelled_not_finite(field: &[u8]) -> bool {
    let unsigned = match field {
        [b'+' | b'-', rest @ ..] => rest,
        _ => field,
    };
    let lower = unsigned.to_ascii_lowercase();
    if lower.starts_with(b"1.#ind")
        || lower.starts_with(b"1.#inf")
        || lower.starts_with(b"1.#qnan")
        || lower.starts_with(b"1.#snan")
    {
        return true;
    }
    match lower.strip_prefix(b"nan") {
        Some(rest) => matches!(rest, [] | b"q" | b"s") || rest.starts_with(b"("),
        None => matches!(lower.as_slice(), b"inf" | b"infinity"),
    }
}

/// Puts an `e` in place of a Fortran `D`, or before the sign of an exponent that has no letter.
///
/// Fortran leaves the letter out when the exponent takes three digits, and always writes a point; to ask for both keeps
/// dates and ranges such as `2024-01` from being taken for numbers.
fn rewrite_exponent(field: &[u8]) -> Option<Vec<u8>> {
    if field.len() > LONGEST_REWRITTEN {
        return None;
    }
    let mantissa_end = 1 + field.iter().skip(1).position(|byte| matches!(byte, b'd' | b'D' | b'+' | b'-'))?;
    let (mantissa, exponent) = field.split_at(mantissa_end);
    let exponent = match exponent {
        [b'd' | b'D', rest @ ..] => rest,
        [_, digits @ ..] if digits.len() == 3 && mantissa.contains(&b'.') => exponent,
        _ => return None,
    };
    // `1.0e5d3` or `1.0e+5` must not slip through: the mantissa is plain digits with at most one sign and one point.
    let plain = mantissa.iter().enumerate().all(|(index, byte)| byte.is_ascii_digit() || *byte == b'.' || index == 0);
    if !plain {
        return None;
    }
    let mut rewritten = Vec::with_capacity(field.len() + 1);
    rewritten.extend_from_slice(mantissa);
    rewritten.push(b'e');
    rewritten.extend_from_slice(exponent);
    Some(rewritten)
}

#[cfg(test)]
#[expect(clippy::unwrap_used, reason = "a test may panic")]
mod tests {
    use proptest::prelude::*;

    use super::{NumberProblem, is_meant_as_number, leading_number, parse_number};

    /// Every way of writing a finite number that `str::parse` knows, from random digits.
    fn written_number() -> impl Strategy<Value = String> {
        prop_oneof![
            any::<f64>().prop_filter("finite", |value| value.is_finite()).prop_map(|value| format!("{value:e}")),
            (-1e6..1e6_f64, 0..20_usize).prop_map(|(value, digits)| format!("{value:.digits$}")),
            (-1e6..1e6_f64, 0..20_usize).prop_map(|(value, digits)| format!("{value:.digits$E}")),
            "[+-]?[0-9]{1,40}(\\.[0-9]{0,40})?([eE][+-]?[0-9]{1,3})?",
            "[+-]?\\.[0-9]{1,800}([eE][+-]?[0-9]{1,2})?",
        ]
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(4000))]

        #[test]
        fn a_number_has_the_bits_of_the_standard_library(text in written_number()) {
            let expected: f64 = text.parse().unwrap();
            if expected.is_finite() {
                prop_assert_eq!(parse_number(text.as_bytes()).unwrap().to_bits(), expected.to_bits());
                let (value, length) = leading_number(format!("{text} 7").as_bytes()).unwrap();
                prop_assert_eq!(value.to_bits(), expected.to_bits());
                prop_assert_eq!(length, text.len());
            } else {
                prop_assert_eq!(parse_number(text.as_bytes()), Err(NumberProblem::TooLarge));
            }
        }

        #[test]
        fn a_fortran_exponent_means_the_same_as_an_e(
            mantissa in "[+-]?[0-9]{1,9}\\.[0-9]{0,9}",
            letter in "[dD]",
            sign in "[+-]",
            exponent in 0..250_u32,
        ) {
            let expected: f64 = format!("{mantissa}e{sign}{exponent}").parse().unwrap();
            for text in [format!("{mantissa}{letter}{sign}{exponent}"), format!("{mantissa}{sign}{exponent:03}")] {
                prop_assert_eq!(parse_number(text.as_bytes()).unwrap().to_bits(), expected.to_bits(), "{}", text);
            }
        }

        #[test]
        fn text_without_digits_is_never_a_number(text in "[^0-9]{0,12}") {
            prop_assert!(parse_number(text.as_bytes()).is_err());
        }
    }

    #[test]
    fn a_fortran_exponent_may_lack_its_sign_only_behind_a_letter() {
        assert_eq!(parse_number(b"2.5d2"), Ok(250.0));
        assert_eq!(parse_number(b".5D1"), Ok(5.0));
    }

    #[test]
    fn every_spelling_of_a_value_that_is_not_finite_is_told() {
        for text in [
            "nan",
            "NaN",
            "-nan",
            "+NAN",
            "NaNQ",
            "nan(0x8000)",
            "inf",
            "-Inf",
            "+Infinity",
            "INFINITY",
            "1.#IND",
            "-1.#INF",
            "1.#QNAN",
        ] {
            assert_eq!(parse_number(text.as_bytes()), Err(NumberProblem::NotFinite), "{text}");
            assert!(is_meant_as_number(text.as_bytes()), "{text}");
        }
    }

    #[test]
    fn a_number_beyond_the_range_is_too_large_in_either_style() {
        for text in ["1e999", "-1e999", "1.0D+999", "3.0+400"] {
            assert_eq!(parse_number(text.as_bytes()), Err(NumberProblem::TooLarge), "{text}");
        }
    }

    #[test]
    fn a_number_below_the_range_is_zero_as_in_the_standard_library() {
        assert_eq!(parse_number(b"3e-400").unwrap().to_bits(), 0);
        assert_eq!(parse_number(b"-3.0D-400").unwrap().to_bits(), (-0.0_f64).to_bits());
    }

    #[test]
    fn what_only_begins_like_a_number_is_text() {
        for text in [
            "1.0.0",
            "1,5",
            "12abc",
            "1e",
            "1e+",
            "1.0D",
            "1.0D+",
            "D5",
            "+",
            "-",
            ".",
            "e5",
            "1.0e5d3",
            "1e5+3",
            "1+2+3",
            "1d5d6",
            "0x10",
            "1_000",
            "--1",
            "+-1",
            "information",
            "nano",
            "1 2",
            "1-5",
            "2024-01",
            "12.5-3",
            "7-103",
            "d",
            "-d5",
            "5*",
        ] {
            assert_eq!(parse_number(text.as_bytes()), Err(NumberProblem::Text), "{text}");
            assert!(!is_meant_as_number(text.as_bytes()), "{text}");
        }
    }

    #[test]
    fn asterisks_of_any_width_are_told_from_text() {
        assert_eq!(parse_number(b"*"), Err(NumberProblem::Asterisks));
        assert_eq!(parse_number(b"********"), Err(NumberProblem::Asterisks));
    }

    #[test]
    fn an_empty_field_is_told_from_text() {
        assert_eq!(parse_number(b""), Err(NumberProblem::Empty));
    }
}
