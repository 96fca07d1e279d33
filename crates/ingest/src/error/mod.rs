//! Everything that can be wrong with a file, with its place and the values at fault.

mod advice;
mod message;
mod place;
mod read_error;

use std::path::{Path, PathBuf};

pub use place::Place;
pub use read_error::ReadError;

use crate::layout::Separator;

/// Why a field is not a usable number.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum NumberProblem {
    /// It is text.
    Text,
    /// It is empty.
    Empty,
    /// It is a NaN or an infinity, in any of their spellings.
    NotFinite,
    /// It consists of asterisks, as written when a number did not fit its width.
    Asterisks,
    /// It is larger than a 64-bit floating-point number can be.
    TooLarge,
    /// It begins with a double quote that is not closed before the next separator.
    UnclosedQuote,
}

/// Why a file is not text.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum TextProblem {
    /// It holds a zero byte.
    ZeroByte,
    /// A row holds this byte, which is not part of valid UTF-8.
    InvalidByte(u8),
    /// It begins with the byte-order mark of UTF-16 or UTF-32.
    WideCharacters,
}

/// What the line at fault looks like, where that tells the cause.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Clue {
    /// The line can be read with this separator in place of the one that is set.
    Separator(Separator),
    /// Semicolons stand between the columns, which no setting reads.
    Semicolons,
    /// Its numbers have commas in place of points.
    DecimalCommas,
    /// Two numbers and a comma: two columns, or one number with a decimal comma.
    Comma,
    /// Words that may be a header, but not one name for each column.
    Header,
    /// A header, but a comment before it names the columns already.
    SecondHeader,
}

/// A file, or a request about it, that cannot be used.
///
/// `Display` gives place, expectation and finding in one line; [`advice`](Self::advice) says what to do about it.
/// Places are boxed, which keeps every result that may hold a fault small.
#[derive(Debug, Clone, PartialEq)]
pub enum IngestError {
    /// There is no such file.
    Missing {
        /// The file.
        path: PathBuf,
    },
    /// The path is a directory.
    Directory {
        /// The path.
        path: PathBuf,
    },
    /// The operating system refused to open or read the file.
    Unreadable {
        /// The file.
        path: PathBuf,
        /// The operating system's reason.
        reason: String,
    },
    /// The file holds no complete row of data.
    NoRows {
        /// The file.
        path: PathBuf,
        /// How many complete lines (blank, comment or header) it holds.
        lines: u64,
        /// The number of a last line that was left out because it has no line end.
        unfinished_line: Option<u64>,
    },
    /// The file is not text.
    NotText {
        /// Where this shows.
        place: Box<Place>,
        /// What was found.
        problem: TextProblem,
    },
    /// Lines end in a carriage return alone, so that the whole file is one line.
    LoneReturns {
        /// The first of them.
        place: Box<Place>,
    },
    /// A line is longer than any row of numbers.
    LineTooLong {
        /// The line.
        place: Box<Place>,
        /// The longest line allowed, in bytes.
        limit: usize,
    },
    /// A gzip file ends before its compressed data do.
    GzipCutShort {
        /// The file.
        path: PathBuf,
        /// How many complete lines could be read.
        lines: u64,
    },
    /// A gzip file fails its own checks.
    GzipCorrupt {
        /// The file.
        path: PathBuf,
        /// How many complete lines could be read.
        lines: u64,
        /// What the check said.
        reason: String,
    },
    /// A wanted field is not a usable number.
    BadNumber {
        /// The field.
        place: Box<Place>,
        /// The beginning of its text.
        found: String,
        /// What is wrong with it.
        problem: NumberProblem,
        /// What its line looks like.
        clue: Option<Clue>,
    },
    /// A row has more or fewer fields than the first row.
    Ragged {
        /// The row.
        place: Box<Place>,
        /// Fields in the first row.
        expected: usize,
        /// Fields in this row.
        found: usize,
        /// The line of the first row.
        first_line: u64,
    },
    /// A wanted column lies beyond the end of the rows.
    MissingColumn {
        /// The first row.
        place: Box<Place>,
        /// The wanted column, counted from 1.
        column: usize,
        /// Fields in the row.
        fields: usize,
        /// What the row looks like.
        clue: Option<Clue>,
    },
    /// A wanted column name is not in the header.
    UnknownName {
        /// The header.
        place: Box<Place>,
        /// The wanted name.
        name: String,
        /// Names like it, nearest first.
        nearest: Vec<String>,
        /// All names of the header.
        names: Vec<String>,
    },
    /// A wanted column name stands more than once in the header.
    RepeatedName {
        /// The header.
        place: Box<Place>,
        /// The wanted name.
        name: String,
        /// The columns that bear it, counted from 1.
        columns: Vec<usize>,
    },
    /// A column is wanted by name, but the file has no header with as many names as its rows have fields.
    NoHeader {
        /// The first row.
        place: Box<Place>,
        /// The wanted name.
        name: String,
        /// Fields in the row.
        fields: usize,
        /// The nearest thing to a header: its line and its number of names.
        candidate: Option<(u64, usize)>,
    },
    /// The times fall too often to be times of a run with restarts.
    TimeNotIncreasing {
        /// The latest fall.
        place: Box<Place>,
        /// The time found.
        found: f64,
        /// The time of the row before.
        previous: f64,
        /// How many rows of this file do not come after the row before.
        falls: u64,
        /// How many rows of this file have been read.
        rows: u64,
    },
    /// Every frame of a segment lies at or before the end of what came before it.
    NotAContinuation {
        /// The segment.
        path: PathBuf,
        /// Its first time.
        first_time: f64,
        /// Its last time.
        last_time: f64,
        /// The last time of the segments before.
        previous_end: f64,
    },
    /// No frame is left after the discard.
    AllDiscarded {
        /// The first file of the series.
        path: PathBuf,
        /// All frames of the series.
        frames: u64,
    },
    /// A time is to be discarded, but the times are not known.
    TimeUnknown {
        /// The time to be discarded.
        discard: f64,
    },
    /// A setting has a value outside what is allowed.
    Setting {
        /// The setting.
        setting: &'static str,
        /// What is allowed.
        expected: &'static str,
        /// The value.
        found: String,
    },
    /// The last line of a table has no line end, so it may have been cut.
    UnfinishedTable {
        /// The line.
        place: Box<Place>,
        /// The beginning of its text.
        found: String,
    },
    /// A table is too long to be one.
    TableTooLong {
        /// The first row too many.
        place: Box<Place>,
        /// The largest number of rows.
        limit: usize,
    },
}

impl IngestError {
    pub(crate) fn lone_returns(place: Place) -> Self {
        Self::LoneReturns { place: Box::new(place) }
    }

    /// The file at fault, where one is.
    #[must_use]
    pub fn path(&self) -> Option<&Path> {
        match self {
            Self::Missing { path }
            | Self::Directory { path }
            | Self::Unreadable { path, .. }
            | Self::NoRows { path, .. }
            | Self::GzipCutShort { path, .. }
            | Self::GzipCorrupt { path, .. }
            | Self::NotAContinuation { path, .. }
            | Self::AllDiscarded { path, .. } => Some(path),
            _ => self.place().map(|place| place.path.as_path()),
        }
    }

    /// The place of the fault, where it is in a line.
    #[must_use]
    pub const fn place(&self) -> Option<&Place> {
        match self {
            Self::NotText { place, .. }
            | Self::LoneReturns { place }
            | Self::LineTooLong { place, .. }
            | Self::BadNumber { place, .. }
            | Self::Ragged { place, .. }
            | Self::MissingColumn { place, .. }
            | Self::UnknownName { place, .. }
            | Self::RepeatedName { place, .. }
            | Self::NoHeader { place, .. }
            | Self::TimeNotIncreasing { place, .. }
            | Self::UnfinishedTable { place, .. }
            | Self::TableTooLong { place, .. } => Some(place),
            _ => None,
        }
    }
}

impl std::error::Error for IngestError {}
