//! A whole small file of two columns.

use std::path::{Path, PathBuf};

use serde::Serialize;

use crate::error::{IngestError, Place};
use crate::layout::{Column, Layout, Separator, TimeSource};
use crate::lines::CHUNK;
use crate::rows::{RowLayout, Rows};

/// The most rows of a table: a series given by mistake is refused before it fills the memory.
const MOST_ROWS: usize = 1_000_000;

/// The layout of a table of two columns.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TableLayout {
    /// What stands between two columns.
    pub separator: Separator,
    /// What a comment line begins with; see [`Layout::comments`].
    pub comments: Vec<String>,
    /// The two wanted columns.
    pub columns: [Column; 2],
}

/// A table of two columns.
#[derive(Debug, Clone, PartialEq)]
pub struct Table {
    /// The file, as given.
    pub path: PathBuf,
    /// The values of the first wanted column, in the order of the file.
    pub first: Vec<f64>,
    /// The values of the second wanted column.
    pub second: Vec<f64>,
    /// The line of every row, counted from 1.
    pub lines: Vec<u64>,
    /// The file's size on disk, in bytes.
    pub bytes: u64,
    /// The SHA-256 digest (FIPS 180-4) of the file's bytes, in 64 lower-case hexadecimal digits.
    pub sha256: String,
}

/// Reads a whole table of two columns, with the rules of [`read_series`](crate::read_series) for lines and numbers.
/// The order of the rows is the caller's to judge.
///
/// # Errors
/// [`IngestError`] for any fault of the file. Unlike in a series, a last row without a line end is refused, because
/// a table that lacks a row is a different table; so is a table of more than a million rows.
///
/// # Examples
/// ```
/// use std::num::NonZeroUsize;
/// use spandrel_ingest::{Column, Separator, TableLayout, read_table};
///
/// # fn main() -> Result<(), Box<dyn std::error::Error>> {
/// let folder = tempfile::tempdir()?;
/// let file = folder.path().join("table.csv");
/// std::fs::write(&file, "position,energy\n-1.5,2.25\n1.5,3.75\n")?;
///
/// let layout = TableLayout {
///     separator: Separator::Comma,
///     comments: vec!["#".into()],
///     columns: [Column::Name("position".into()), Column::Name("energy".into())],
/// };
/// let table = read_table(&file, &layout)?;
/// assert_eq!(table.first, [-1.5, 1.5]);
/// assert_eq!(table.second, [2.25, 3.75]);
/// # Ok(())
/// # }
/// ```
pub fn read_table(path: &Path, layout: &TableLayout) -> Result<Table, IngestError> {
    read_table_up_to(MOST_ROWS, path, layout)
}

fn read_table_up_to(limit: usize, path: &Path, layout: &TableLayout) -> Result<Table, IngestError> {
    let layout = Layout {
        separator: layout.separator,
        comments: layout.comments.clone(),
        columns: layout.columns.to_vec(),
        time: TimeSource::Unknown,
    };
    layout.check()?;
    let row_layout = RowLayout::new(layout.separator, &layout.comments, &layout.columns);
    let mut rows = Rows::open(path, &row_layout, true, CHUNK)?;
    let (mut first, mut second, mut lines) = (Vec::new(), Vec::new(), Vec::new());
    let mut values = [0.0; 2];
    while let Some(line) = rows.next_row(&mut values)? {
        if lines.len() == limit {
            return Err(IngestError::TableTooLong { place: Box::new(Place::line(path, line)), limit });
        }
        first.push(values[0]);
        second.push(values[1]);
        lines.push(line);
    }
    match rows.unfinished() {
        Some(unfinished) => Err(IngestError::UnfinishedTable {
            place: Box::new(Place::line(path, unfinished.line)),
            found: unfinished.text.clone(),
        }),
        None => Ok(Table { path: path.to_owned(), first, second, lines, bytes: rows.bytes(), sha256: rows.sha256() }),
    }
}
