//! The order in which people count: z2 before z10.

use std::cmp::Ordering;

/// Compares texts with every run of digits as one number; equal numbers with fewer leading zeros come first.
pub(super) fn natural_order(a: &str, b: &str) -> Ordering {
    let (mut rest_a, mut rest_b) = (a, b);
    loop {
        let (piece_a, piece_b) = (piece(rest_a), piece(rest_b));
        if piece_a.is_empty() || piece_b.is_empty() {
            return rest_a.len().cmp(&rest_b.len()).then_with(|| a.cmp(b));
        }
        let order = match (is_number(piece_a), is_number(piece_b)) {
            (true, true) => compare_numbers(piece_a, piece_b),
            _ => piece_a.cmp(piece_b),
        };
        if order != Ordering::Equal {
            return order;
        }
        rest_a = &rest_a[piece_a.len()..];
        rest_b = &rest_b[piece_b.len()..];
    }
}

/// The leading run of digits, or of anything else.
fn piece(text: &str) -> &str {
    let digits = is_number(text);
    let end = text.find(|character: char| character.is_ascii_digit() != digits);
    &text[..end.unwrap_or(text.len())]
}

fn is_number(text: &str) -> bool {
    text.starts_with(|character: char| character.is_ascii_digit())
}

fn compare_numbers(a: &str, b: &str) -> Ordering {
    let (digits_a, digits_b) = (a.trim_start_matches('0'), b.trim_start_matches('0'));
    digits_a.len().cmp(&digits_b.len()).then_with(|| digits_a.cmp(digits_b))
}

#[cfg(test)]
mod tests {
    use super::natural_order;

    fn sorted(mut names: Vec<&str>) -> Vec<&str> {
        names.sort_by(|a, b| natural_order(a, b));
        names
    }

    #[test]
    fn numbers_count_by_their_value() {
        assert_eq!(
            sorted(vec!["z10.txt", "z9.txt", "z101.txt", "z2.txt"]),
            ["z2.txt", "z9.txt", "z10.txt", "z101.txt"]
        );
    }

    #[test]
    fn later_numbers_decide_where_earlier_ones_are_equal() {
        assert_eq!(sorted(vec!["w3/part12", "w3/part4", "w12/part1"]), ["w3/part4", "w3/part12", "w12/part1"]);
    }

    #[test]
    fn leading_zeros_do_not_count_but_keep_the_order_definite() {
        assert_eq!(sorted(vec!["a007", "a7", "a08", "a06"]), ["a06", "a007", "a7", "a08"]);
    }

    #[test]
    fn numbers_too_long_for_a_machine_word_are_compared_all_the_same() {
        assert_eq!(
            sorted(vec!["r123456789012345678901234567891", "r123456789012345678901234567890"]),
            ["r123456789012345678901234567890", "r123456789012345678901234567891"]
        );
    }

    #[test]
    fn a_shorter_name_comes_before_its_continuation() {
        assert_eq!(sorted(vec!["run7b", "run7"]), ["run7", "run7b"]);
    }
}
