//! Why a line cannot be read, told from the line itself.

use crate::error::Clue;
use crate::fields::{delimited_texts, texts};
use crate::layout::Separator;
use crate::number::{is_meant_as_number, parse_number};

/// What a row with text in place of a number, or with too few columns, looks like.
///
/// `wanted` are the wanted fields, counted from 0; where they are not known, all fields have to be numbers.
#[cold]
pub(crate) fn of_row(line: &[u8], separator: Separator, wanted: &[usize]) -> Option<Clue> {
    if is_separated_by_semicolons(line) {
        return Some(Clue::Semicolons);
    }
    let present = texts(line, separator);
    if present.iter().any(|field| has_decimal_comma(field)) {
        return Some(if present.len() > 1 { Clue::DecimalCommas } else { Clue::Comma });
    }
    others(line, separator).find(|other| is_row(&texts(line, *other), wanted)).map(Clue::Separator)
}

/// What a first line without any number looks like, if it cannot be a header.
#[cold]
pub(crate) fn of_text_line(line: &[u8], separator: Separator, wanted: &[usize]) -> Option<Clue> {
    let rows = of_row(line, separator, wanted);
    rows.or_else(|| {
        let names = |fields: &[&[u8]]| fields.len() > 1 && are_names(fields);
        if names(&delimited_texts(line, b';')) {
            return Some(Clue::Semicolons);
        }
        let other = others(line, separator).find(|other| names(&texts(line, *other)));
        let begins_like_a_name = texts(line, separator).iter().any(|field| is_name(field));
        other.map(Clue::Separator).or(begins_like_a_name.then_some(Clue::Header))
    })
}

/// What a line of names looks like that does not have one name for each field of the first row.
#[cold]
pub(crate) fn of_unfit_header(header: &[u8], row: &[u8], separator: Separator, wanted: &[usize]) -> Clue {
    if delimited_texts(header, b';').len() > 1 && is_separated_by_semicolons(row) {
        return Clue::Semicolons;
    }
    let fits = |other: &Separator| {
        let (names, fields) = (texts(header, *other), texts(row, *other));
        names.len() == fields.len() && are_names(&names) && is_row(&fields, wanted)
    };
    others(row, separator).find(fits).map_or(Clue::Header, Clue::Separator)
}

/// Whether each field begins like a name of a column.
pub(crate) fn are_names(fields: &[&[u8]]) -> bool {
    fields.iter().all(|field| is_name(field) && !is_meant_as_number(field))
}

/// A name begins with a letter or an underscore, if need be behind a quote.
fn is_name(field: &[u8]) -> bool {
    let name = match field {
        [b'"' | b'\'', rest @ ..] => rest,
        _ => field,
    };
    // No character takes more than four bytes.
    let beginning = String::from_utf8_lossy(name.get(..4).unwrap_or(name));
    beginning.chars().next().is_some_and(|first| first.is_alphabetic() || first == '_')
}

/// The separators that could be right where `separator` is wrong: a single one that does occur between fields is right.
fn others(line: &[u8], separator: Separator) -> impl Iterator<Item = Separator> {
    let occurs = separator.byte().is_some_and(|byte| line.contains(&byte));
    [Separator::Comma, Separator::Tab, Separator::Whitespace]
        .into_iter()
        .filter(move |other| !occurs && *other != separator)
}

fn is_row(fields: &[&[u8]], wanted: &[usize]) -> bool {
    let is_number = |field: &&[u8]| parse_number(field).is_ok();
    fields.len() > 1
        && if wanted.is_empty() {
            fields.iter().all(is_number)
        } else {
            wanted.iter().all(|index| fields.get(*index).is_some_and(is_number))
        }
}

fn is_separated_by_semicolons(line: &[u8]) -> bool {
    let fields = delimited_texts(line, b';');
    // A semicolon may end the line as well.
    let fields = fields.strip_suffix(&[&b""[..]]).unwrap_or(&fields);
    line.contains(&b';') && fields.iter().all(|field| parse_number(field).is_ok() || has_decimal_comma(field))
}

/// Whether a field is a number but for a comma between two digits in place of its point.
fn has_decimal_comma(field: &[u8]) -> bool {
    let Some(comma) = field.iter().position(|&byte| byte == b',') else {
        return false;
    };
    let digit_at = |index: Option<usize>| index.and_then(|index| field.get(index)).is_some_and(u8::is_ascii_digit);
    if !digit_at(comma.checked_sub(1)) || !digit_at(Some(comma + 1)) {
        return false;
    }
    let mut pointed = field.to_vec();
    pointed[comma] = b'.';
    parse_number(&pointed).is_ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(line: &str, separator: Separator, wanted: &[usize]) -> Option<Clue> {
        of_row(line.as_bytes(), separator, wanted)
    }

    #[test]
    fn decimal_commas_are_told_from_commas_between_columns() {
        assert_eq!(row("0,1 -120,3 3,0", Separator::Whitespace, &[1]), Some(Clue::DecimalCommas));
        assert_eq!(row("0,1e-3\t7", Separator::Tab, &[0]), Some(Clue::DecimalCommas));
        assert_eq!(row("0.5,1.5", Separator::Whitespace, &[0, 1]), Some(Clue::Separator(Separator::Comma)));
        assert_eq!(row("3, 4, 5", Separator::Whitespace, &[0, 2]), Some(Clue::Separator(Separator::Comma)));
        assert_eq!(row("3,4", Separator::Whitespace, &[0]), Some(Clue::Comma));
    }

    #[test]
    fn semicolons_are_told_with_either_decimal_mark() {
        for line in ["0.5;1.5;7", "0,5;1,5;7;", "0,5 ; 1,5"] {
            assert_eq!(row(line, Separator::Whitespace, &[0, 1]), Some(Clue::Semicolons), "{line}");
            assert_eq!(row(line, Separator::Tab, &[0, 1]), Some(Clue::Semicolons), "{line}");
        }
    }

    #[test]
    fn another_separator_must_give_numbers_in_the_wanted_fields() {
        assert_eq!(row("run a\t0.5\tb", Separator::Whitespace, &[1]), Some(Clue::Separator(Separator::Tab)));
        assert_eq!(row("run a\t0.5\tb", Separator::Whitespace, &[2]), None);
        assert_eq!(row("0.5 1.5", Separator::Comma, &[0, 1]), Some(Clue::Separator(Separator::Whitespace)));
        assert_eq!(row("0.5 1.5", Separator::Tab, &[0, 2]), None);
    }

    #[test]
    fn a_separator_that_occurs_is_not_doubted() {
        assert_eq!(row("1.5, 2.5 3", Separator::Comma, &[1]), None);
    }

    #[test]
    fn a_name_begins_with_a_letter_of_any_script_or_an_underscore() {
        for name in ["z", "_z", "\"z", "'z'", "φ_1", "Å", "e5", "information"] {
            assert!(are_names(&[name.as_bytes()]), "{name}");
        }
        for text in ["(ps)", "2nd", "-z", "\"2", "", "\"", "%", "nan", "Infinity", "****"] {
            assert!(!are_names(&[text.as_bytes()]), "{text}");
        }
    }
}
