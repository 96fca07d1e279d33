//! The fields of a line.

use crate::error::NumberProblem;
use crate::layout::Separator;
use crate::number::{leading_number, parse_number};

/// A wanted field: which field of the row, counted from 0, goes to which place of the result.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(crate) struct Wanted {
    pub(crate) field: usize,
    pub(crate) slot: usize,
}

/// A wanted field that is not a usable number.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct BadField<'l> {
    /// Counted from 0.
    pub(crate) field: usize,
    /// Where it begins in the line, in bytes.
    pub(crate) offset: usize,
    pub(crate) text: &'l [u8],
    pub(crate) problem: NumberProblem,
}

/// Puts the wanted fields of a row, in ascending order of their place in the row, into `values` and counts all fields.
#[inline]
pub(crate) fn read_row<'l>(
    line: &'l [u8],
    separator: Separator,
    wanted: &[Wanted],
    values: &mut [f64],
) -> Result<usize, BadField<'l>> {
    match separator.byte() {
        None => read_blank_separated(line, wanted, values),
        Some(byte) => read_delimited(line, byte, wanted, values),
    }
}

/// The texts of all fields, without blanks and quotes around them.
pub(crate) fn texts(line: &[u8], separator: Separator) -> Vec<&[u8]> {
    match separator.byte() {
        None => line.split(|&byte| is_blank(byte)).filter(|field| !field.is_empty()).collect(),
        Some(byte) => delimited_texts(line, byte),
    }
}

/// The texts of all fields between single bytes of a kind.
pub(crate) fn delimited_texts(line: &[u8], delimiter: u8) -> Vec<&[u8]> {
    let mut fields = Vec::new();
    let mut at = 0;
    loop {
        let field = delimited_field(line, at, delimiter);
        fields.push(field.text);
        if field.end == line.len() {
            return fields;
        }
        at = field.end + 1;
    }
}

pub(crate) const fn is_blank(byte: u8) -> bool {
    matches!(byte, b' ' | b'\t')
}

/// Takes the wanted fields that stand at `field` off the front of `wanted` and stores `value` for each.
#[inline]
fn store(wanted: &mut &[Wanted], field: usize, value: f64, values: &mut [f64]) {
    while let [first, rest @ ..] = *wanted {
        if first.field != field {
            break;
        }
        values[first.slot] = value;
        *wanted = rest;
    }
}

fn read_blank_separated<'l>(line: &'l [u8], mut wanted: &[Wanted], values: &mut [f64]) -> Result<usize, BadField<'l>> {
    let mut at = 0;
    let mut field = 0;
    loop {
        while at < line.len() && is_blank(line[at]) {
            at += 1;
        }
        if at == line.len() {
            return Ok(field);
        }
        if wanted.first().is_some_and(|first| first.field == field) {
            let (value, end) = match leading_number(&line[at..]) {
                Some((value, length)) if line.get(at + length).is_none_or(|&byte| is_blank(byte)) => {
                    (value, at + length)
                }
                _ => {
                    let end = blank_after(line, at);
                    let text = &line[at..end];
                    let value = parse_number(text).map_err(|problem| BadField { field, offset: at, text, problem })?;
                    (value, end)
                }
            };
            store(&mut wanted, field, value, values);
            at = end;
        } else {
            at = blank_after(line, at);
        }
        field += 1;
    }
}

fn blank_after(line: &[u8], at: usize) -> usize {
    line[at..].iter().position(|&byte| is_blank(byte)).map_or(line.len(), |length| at + length)
}

fn read_delimited<'l>(
    line: &'l [u8],
    delimiter: u8,
    mut wanted: &[Wanted],
    values: &mut [f64],
) -> Result<usize, BadField<'l>> {
    let mut at = 0;
    let mut field = 0;
    loop {
        let is_wanted = wanted.first().is_some_and(|first| first.field == field);
        let everyday = if is_wanted { everyday_number(line, at, delimiter) } else { None };
        let end = if let Some((value, end)) = everyday {
            store(&mut wanted, field, value, values);
            end
        } else {
            let found = delimited_field(line, at, delimiter);
            if is_wanted {
                let parsed = if found.is_closed { parse_number(found.text) } else { Err(NumberProblem::UnclosedQuote) };
                let value =
                    parsed.map_err(|problem| BadField { field, offset: found.offset, text: found.text, problem })?;
                store(&mut wanted, field, value, values);
            }
            found.end
        };
        field += 1;
        if end == line.len() {
            return Ok(field);
        }
        at = end + 1;
    }
}

/// The number that fills the field at `at`, and where the field ends, when it is written plainly.
#[inline]
fn everyday_number(line: &[u8], at: usize, delimiter: u8) -> Option<(f64, usize)> {
    let begin = skip_blanks(line, at, delimiter);
    let (value, length) = leading_number(&line[begin..])?;
    let end = skip_blanks(line, begin + length, delimiter);
    line.get(end).is_none_or(|&byte| byte == delimiter).then_some((value, end))
}

fn skip_blanks(line: &[u8], mut at: usize, delimiter: u8) -> usize {
    while at < line.len() && is_blank(line[at]) && line[at] != delimiter {
        at += 1;
    }
    at
}

struct DelimitedField<'l> {
    /// Where the text begins.
    offset: usize,
    /// Without blanks and quotes around it.
    text: &'l [u8],
    /// The place of the delimiter behind the field, or the end of the line.
    end: usize,
    /// Whether a quote at its beginning is closed at its end.
    is_closed: bool,
}

/// The field that begins at `at`. In quotes, a delimiter is part of the text and a doubled quote stands for itself.
fn delimited_field(line: &[u8], at: usize, delimiter: u8) -> DelimitedField<'_> {
    let begin = skip_blanks(line, at, delimiter);
    if line.get(begin) == Some(&b'"')
        && let Some(close) = closing_quote(line, begin + 1)
    {
        let end = skip_blanks(line, close + 1, delimiter);
        if line.get(end).is_none_or(|&byte| byte == delimiter) {
            return DelimitedField {
                offset: begin + 1,
                text: line[begin + 1..close].trim_ascii(),
                end,
                is_closed: true,
            };
        }
    }
    let end = memchr::memchr(delimiter, &line[begin..]).map_or(line.len(), |length| begin + length);
    let text = line[begin..end].trim_ascii_end();
    DelimitedField { offset: begin, text, end, is_closed: !text.starts_with(b"\"") }
}

fn closing_quote(line: &[u8], mut at: usize) -> Option<usize> {
    loop {
        let quote = at + memchr::memchr(b'"', line.get(at..)?)?;
        if line.get(quote + 1) != Some(&b'"') {
            return Some(quote);
        }
        at = quote + 2;
    }
}

#[cfg(test)]
mod tests {
    use super::{NumberProblem, Separator, Wanted, read_row, texts};

    fn numbers(
        line: &str,
        separator: Separator,
        fields: &[usize],
    ) -> Result<(usize, Vec<f64>), (usize, usize, NumberProblem)> {
        let wanted: Vec<Wanted> = fields.iter().enumerate().map(|(slot, &field)| Wanted { field, slot }).collect();
        let mut values = vec![f64::NAN; fields.len()];
        match read_row(line.as_bytes(), separator, &wanted, &mut values) {
            Ok(count) => Ok((count, values)),
            Err(bad) => Err((bad.field, bad.offset, bad.problem)),
        }
    }

    #[test]
    fn blanks_around_fields_mean_nothing() {
        assert_eq!(
            numbers(" \t2.5   -3 text\t7e1 ", Separator::Whitespace, &[0, 1, 3]),
            Ok((4, vec![2.5, -3.0, 70.0]))
        );
        assert_eq!(numbers("  2.5 ,\t-3, text ,7e1\t", Separator::Comma, &[0, 1, 3]), Ok((4, vec![2.5, -3.0, 70.0])));
        assert_eq!(numbers(" 2.5 \t-3\ttext\t 7e1", Separator::Tab, &[0, 1, 3]), Ok((4, vec![2.5, -3.0, 70.0])));
    }

    #[test]
    fn one_field_can_be_wanted_twice() {
        assert_eq!(numbers("4 5 6", Separator::Whitespace, &[1, 1, 2]), Ok((3, vec![5.0, 5.0, 6.0])));
        assert_eq!(numbers("4,5,6", Separator::Comma, &[1, 1, 2]), Ok((3, vec![5.0, 5.0, 6.0])));
    }

    #[test]
    fn a_number_may_stand_in_quotes() {
        assert_eq!(numbers("\"2.5\", \" -3D2 \" ,4", Separator::Comma, &[0, 1, 2]), Ok((3, vec![2.5, -300.0, 4.0])));
    }

    #[test]
    fn a_delimiter_in_quotes_is_text() {
        assert_eq!(numbers("\"a,\"\"b\"\",c\",6.5", Separator::Comma, &[1]), Ok((2, vec![6.5])));
    }

    #[test]
    fn neighboring_delimiters_hold_an_empty_field() {
        assert_eq!(numbers("3,,4", Separator::Comma, &[1]), Err((1, 2, NumberProblem::Empty)));
        assert_eq!(numbers("3\t \t4", Separator::Tab, &[1]), Err((1, 3, NumberProblem::Empty)));
        assert_eq!(numbers("3,4,", Separator::Comma, &[2]), Err((2, 4, NumberProblem::Empty)));
        assert_eq!(numbers("3,,4,", Separator::Comma, &[2]), Ok((4, vec![4.0])));
    }

    #[test]
    fn a_quote_that_is_not_closed_before_the_delimiter_is_a_fault() {
        assert_eq!(numbers("1,\"2,3", Separator::Comma, &[1]), Err((1, 2, NumberProblem::UnclosedQuote)));
        assert_eq!(numbers("1,\"2\"x,3", Separator::Comma, &[1]), Err((1, 2, NumberProblem::UnclosedQuote)));
    }

    #[test]
    fn a_number_glued_to_other_text_is_a_fault_with_its_place() {
        assert_eq!(numbers("1.5 2.5.3", Separator::Whitespace, &[1]), Err((1, 4, NumberProblem::Text)));
        assert_eq!(numbers("1.5, 2.5 3", Separator::Comma, &[1]), Err((1, 5, NumberProblem::Text)));
    }

    #[test]
    fn the_texts_of_a_line_come_without_blanks_and_quotes() {
        assert_eq!(texts(b"  a bc\td ", Separator::Whitespace), [&b"a"[..], b"bc", b"d"]);
        assert_eq!(texts(b"\"a, b\", c d ,", Separator::Comma), [&b"a, b"[..], b"c d", b""]);
        assert_eq!(texts(b"a b\t\tc", Separator::Tab), [&b"a b"[..], b"", b"c"]);
        assert_eq!(texts(b"", Separator::Comma), [&b""[..]]);
    }
}
