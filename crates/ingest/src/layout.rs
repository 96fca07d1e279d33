//! How a text file is laid out, and which of its columns are wanted.

use std::fmt;
use std::num::NonZeroUsize;

use serde::Serialize;

use crate::error::IngestError;
use crate::readable_number::readable_number;

/// What stands between two columns.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Separator {
    /// Any run of spaces and tabs; blanks at either end of a line mean nothing.
    #[default]
    Whitespace,
    /// One comma; blanks around it mean nothing, and a field may stand in double quotes.
    Comma,
    /// One tab; spaces around it mean nothing, and a field may stand in double quotes.
    Tab,
}

impl Separator {
    /// The single byte between two fields, or `None` for runs of blanks.
    pub(crate) const fn byte(self) -> Option<u8> {
        match self {
            Self::Whitespace => None,
            Self::Comma => Some(b','),
            Self::Tab => Some(b'\t'),
        }
    }
}

impl fmt::Display for Separator {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(match self {
            Self::Whitespace => "whitespace",
            Self::Comma => "comma",
            Self::Tab => "tab",
        })
    }
}

/// One column of a file.
#[derive(Debug, Clone, PartialEq, Eq, Hash, Serialize)]
#[serde(untagged)]
pub enum Column {
    /// By its place in the row, counted from 1.
    Number(NonZeroUsize),
    /// By its name in the file's header, matched exactly.
    ///
    /// The header is the last comment line before the first row that has, behind its comment prefix, as many fields as the row.
    /// It may also be the first line that is not a comment, if no comment before it is a header: it then has as many fields as the
    /// row, none of them a number and each beginning with a letter or an underscore. Any other line of text is refused.
    Name(String),
}

impl fmt::Display for Column {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Number(number) => write!(formatter, "{number}"),
            Self::Name(name) => formatter.write_str(name),
        }
    }
}

/// Where the time of a frame comes from. Times are plain numbers in the caller's unit.
#[derive(Debug, Clone, PartialEq, Default, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum TimeSource {
    /// The times are not known.
    #[default]
    Unknown,
    /// A column of the file holds them; only then can frames that were written twice be told.
    Column(Column),
    /// Frame `i` of the joined series, counted from 0, has the time `i * interval`; finite and above 0.
    Interval(f64),
}

/// The layout of every file of a series.
///
/// Only the wanted columns and the time have to be numbers; other columns may hold text.
/// Every row of a file must have the same number of fields.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Layout {
    /// What stands between two columns.
    pub separator: Separator,
    /// What a comment line begins with, after any blanks; none may be empty. Where several fit, the longest is taken off
    /// before a header is looked for, so that words which always stand before the column names can be part of a prefix.
    pub comments: Vec<String>,
    /// The wanted columns, in the order in which a chunk gives them; a column may be wanted more than once.
    pub columns: Vec<Column>,
    /// Where the times come from.
    pub time: TimeSource,
}

impl Default for Layout {
    /// Columns between blanks, comments behind `#`, no column wanted, no time.
    fn default() -> Self {
        Self {
            separator: Separator::default(),
            comments: vec!["#".to_owned()],
            columns: Vec::new(),
            time: TimeSource::default(),
        }
    }
}

impl Layout {
    /// Refuses empty prefixes and names, and an interval that is not finite and above 0.
    ///
    /// # Errors
    /// [`IngestError::Setting`] with the setting at fault.
    pub fn check(&self) -> Result<(), IngestError> {
        if self.comments.iter().any(String::is_empty) {
            return Err(IngestError::Setting {
                setting: "comments",
                expected: "prefixes of at least one character",
                found: "an empty prefix".to_owned(),
            });
        }
        let time_column = match &self.time {
            TimeSource::Column(column) => Some(column),
            TimeSource::Unknown | TimeSource::Interval(_) => None,
        };
        if self
            .columns
            .iter()
            .chain(time_column)
            .any(|column| matches!(column, Column::Name(name) if name.trim().is_empty()))
        {
            return Err(IngestError::Setting {
                setting: "column",
                expected: "a number from 1 or a name",
                found: "an empty name".to_owned(),
            });
        }
        match self.time {
            TimeSource::Interval(interval) if !(interval > 0.0 && interval.is_finite()) => Err(IngestError::Setting {
                setting: "interval",
                expected: "a finite number above 0",
                found: readable_number(interval),
            }),
            _ => Ok(()),
        }
    }
}
