//! The one-line messages of faults.

use std::fmt;

use super::{IngestError, NumberProblem, TextProblem};
use crate::readable_number::readable_number;

/// How many column names a message lists.
const LISTED_NAMES: usize = 20;

impl fmt::Display for IngestError {
    #[expect(clippy::too_many_lines, reason = "one arm a message; all wording is in one place")]
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Missing { path } => {
                write!(formatter, "{}: expected a file, found nothing by this name", path.display())
            }
            Self::Directory { path } => {
                write!(formatter, "{}: expected a file, found a directory", path.display())
            }
            Self::Unreadable { path, reason } => {
                write!(formatter, "{}: expected a readable file, found: {reason}", path.display())
            }
            Self::NoRows { path, lines, unfinished_line } => {
                write!(formatter, "{}: expected rows of numbers, found no complete row", path.display())?;
                match (unfinished_line, lines) {
                    (Some(line), _) => write!(formatter, ": line {line} has no line end"),
                    (None, 0) => formatter.write_str(": the file is empty"),
                    (None, lines) => {
                        write!(formatter, " in {lines} {}", plural(*lines, "line", "lines"))
                    }
                }
            }
            Self::NotText { place, problem } => {
                write!(formatter, "{place}: expected UTF-8 text, found {}", TextFinding(*problem))
            }
            Self::LoneReturns { place } => {
                write!(formatter, "{place}: expected lines that end in a line feed, found a carriage return alone")
            }
            Self::LineTooLong { place, limit } => {
                write!(formatter, "{place}: expected lines of at most {limit} bytes, found a longer one")
            }
            Self::GzipCutShort { path, lines } => {
                write!(
                    formatter,
                    "{}: expected complete gzip data, found that they break off after line {lines}",
                    path.display()
                )
            }
            Self::GzipCorrupt { path, lines, reason } => {
                write!(
                    formatter,
                    "{}: expected valid gzip data, found a fault after line {lines}: {reason}",
                    path.display()
                )
            }
            Self::BadNumber { place, found, problem, .. } => {
                write!(formatter, "{place}: expected a number")?;
                if let Some(column) = place.column {
                    write!(formatter, " in column {column}")?;
                }
                formatter.write_str(", found ")?;
                match problem {
                    NumberProblem::Text => write!(formatter, "`{found}`"),
                    NumberProblem::Empty => formatter.write_str("an empty field"),
                    NumberProblem::NotFinite => write!(formatter, "`{found}`, which is not finite"),
                    NumberProblem::Asterisks => {
                        write!(formatter, "`{found}`, written where a number did not fit its width")
                    }
                    NumberProblem::TooLarge => write!(formatter, "`{found}`, which is too large"),
                    NumberProblem::UnclosedQuote => {
                        write!(formatter, "`{found}`, a quoted field that is not closed")
                    }
                }
            }
            Self::Ragged { place, expected, found, first_line } => write!(
                formatter,
                "{place}: expected {expected} {} as in line {first_line}, found {found}",
                plural(*expected as u64, "field", "fields")
            ),
            Self::MissingColumn { place, column, fields, .. } => write!(
                formatter,
                "{place}: expected a column {column}, found {fields} {}",
                plural(*fields as u64, "column", "columns")
            ),
            Self::UnknownName { place, name, nearest, names } => {
                write!(formatter, "{place}: expected a column named `{name}`, found ")?;
                write_names(formatter, names)?;
                if nearest.is_empty() {
                    return Ok(());
                }
                formatter.write_str("; did you mean ")?;
                for (index, name) in nearest.iter().enumerate() {
                    let joint = if index == 0 { "" } else { " or " };
                    write!(formatter, "{joint}`{name}`")?;
                }
                formatter.write_str("?")
            }
            Self::RepeatedName { place, name, columns } => {
                write!(formatter, "{place}: expected one column named `{name}`, found columns ")?;
                for (index, column) in columns.iter().enumerate() {
                    let joint = if index == 0 { "" } else { ", " };
                    write!(formatter, "{joint}{column}")?;
                }
                Ok(())
            }
            Self::NoHeader { place, name, fields, candidate } => {
                write!(
                    formatter,
                    "{place}: expected a header of {fields} {} with `{name}` before this row, found ",
                    plural(*fields as u64, "name", "names")
                )?;
                match candidate {
                    Some((line, names)) => {
                        write!(formatter, "{names} {} in line {line}", plural(*names as u64, "name", "names"))
                    }
                    None => formatter.write_str("none"),
                }
            }
            Self::TimeNotIncreasing { place, found, previous, falls, rows } => {
                write!(formatter, "{place}: expected times that increase")?;
                if let Some(column) = place.column {
                    write!(formatter, " in column {column}")?;
                }
                write!(
                    formatter,
                    ", found {} after {}: {falls} of {rows} rows do not come after the row before",
                    readable_number(*found),
                    readable_number(*previous)
                )
            }
            Self::NotAContinuation { path, first_time, last_time, previous_end } => write!(
                formatter,
                "{}: expected frames after time {}, where the segments before end, found times {} to {}",
                path.display(),
                readable_number(*previous_end),
                readable_number(*first_time),
                readable_number(*last_time)
            ),
            Self::AllDiscarded { path, frames } => write!(
                formatter,
                "{}: expected frames after the `discard`, found that it takes all {frames} of the series",
                path.display()
            ),
            Self::TimeUnknown { discard } => write!(
                formatter,
                "expected known times for a `discard` of time {}, found neither a time column nor an interval",
                readable_number(*discard)
            ),
            Self::Setting { setting, expected, found } => {
                write!(formatter, "`{setting}`: expected {expected}, found {found}")
            }
            Self::UnfinishedTable { place, found } => {
                write!(formatter, "{place}: expected a line end after the last row, found `{found}` without one")
            }
            Self::TableTooLong { place, limit } => {
                write!(formatter, "{place}: expected a table of at most {limit} rows, found more")
            }
        }
    }
}

struct TextFinding(TextProblem);

impl fmt::Display for TextFinding {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.0 {
            TextProblem::ZeroByte => formatter.write_str("a zero byte"),
            TextProblem::InvalidByte(byte) => write!(formatter, "the byte 0x{byte:02x}"),
            TextProblem::WideCharacters => formatter.write_str("UTF-16 or UTF-32 text"),
        }
    }
}

fn write_names(formatter: &mut fmt::Formatter<'_>, names: &[String]) -> fmt::Result {
    for (index, name) in names.iter().take(LISTED_NAMES).enumerate() {
        let joint = if index == 0 { "" } else { ", " };
        write!(formatter, "{joint}`{name}`")?;
    }
    match names.len().saturating_sub(LISTED_NAMES) {
        0 => Ok(()),
        more => write!(formatter, " and {more} more"),
    }
}

const fn plural(count: u64, one: &'static str, many: &'static str) -> &'static str {
    if count == 1 { one } else { many }
}
