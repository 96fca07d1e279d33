//! A line of text where the first row, or a header, is expected: what is wrong with it.

use std::path::Path;

use crate::clue;
use crate::error::{Clue, IngestError, NumberProblem, Place};
use crate::excerpt::excerpt;
use crate::fields::{Wanted, read_row, texts};
use crate::header::{Headers, NameLine};
use crate::layout::Column;
use crate::lines::Line;
use crate::number::is_meant_as_number;
use crate::rows::RowLayout;

/// Whether a line has some text and no field that is, or was meant as, a number.
pub(crate) fn is_text(fields: &[&[u8]]) -> bool {
    fields.iter().any(|field| !field.is_empty()) && !fields.iter().any(|field| is_meant_as_number(field))
}

/// A line of text in place of the first row: at fault in its first wanted column, or as a whole where it does not reach that far.
#[cold]
pub(crate) fn text_line(
    path: &Path,
    number: u64,
    text: &[u8],
    layout: &RowLayout<'_>,
    clue: Option<Clue>,
) -> IngestError {
    let separator = layout.separator;
    let fields = texts(text, separator).len();
    let column = layout.numbered_fields().into_iter().find(|field| *field < fields);
    let wanted = Wanted { field: column.unwrap_or(0), slot: 0 };
    let (offset, found, problem) = match read_row(text, separator, &[wanted], &mut [0.0]) {
        Err(bad) => (bad.offset, bad.text, bad.problem),
        // Text is no number, so that this does not come up.
        Ok(_) => (0, text, NumberProblem::Text),
    };
    let place = Place::byte(path, number, text, offset);
    IngestError::BadNumber {
        place: Box::new(match column {
            Some(column) => place.in_column(column + 1),
            None => place,
        }),
        found: excerpt(found),
        problem,
        clue,
    }
}

/// A line of names that turns out at the first row not to be a header.
#[cold]
pub(crate) fn no_header(
    path: &Path,
    row: Line<'_>,
    fields: usize,
    names: &NameLine,
    headers: &Headers,
    layout: &RowLayout<'_>,
) -> IngestError {
    let clue = if names.follows_comment {
        Clue::SecondHeader
    } else {
        clue::of_unfit_header(&names.text, row.text, layout.separator, &layout.numbered_fields())
    };
    let wanted_name = layout.columns.iter().find_map(|column| match column {
        Column::Name(name) => Some(name.trim()),
        Column::Number(_) => None,
    });
    match wanted_name {
        // The line is all there is to find the name in.
        Some(name) if !headers.has_comment(fields) && clue == Clue::Header => {
            match headers.resolve(name, path, row.number, fields) {
                Err(error) => error,
                Ok(_) => text_line(path, names.number(), &names.text, layout, Some(clue)),
            }
        }
        _ => text_line(path, names.number(), &names.text, layout, Some(clue)),
    }
}
