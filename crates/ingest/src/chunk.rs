//! A stretch of kept rows, as it is handed to the caller.

use std::path::Path;

use crate::error::Place;

/// Up to 4096 kept rows of one file, in the order of the file.
///
/// Where the chunks of a series begin and end depends on its rows only. Now and then a chunk is empty:
/// it gives the caller the chance to stop, or to show progress, while many frames in a row are left out.
#[derive(Debug, Clone, Copy)]
pub struct Chunk<'a> {
    pub(crate) path: &'a Path,
    pub(crate) segment: usize,
    pub(crate) n_columns: usize,
    pub(crate) values: &'a [f64],
    pub(crate) times: Option<&'a [f64]>,
    pub(crate) lines: &'a [u64],
    pub(crate) bytes_read: u64,
}

impl<'a> Chunk<'a> {
    /// The number of rows.
    #[must_use]
    pub const fn len(&self) -> usize {
        self.lines.len()
    }

    /// Whether there is no row.
    #[must_use]
    pub const fn is_empty(&self) -> bool {
        self.lines.is_empty()
    }

    /// The number of values a row: one for each wanted column.
    #[must_use]
    pub const fn n_columns(&self) -> usize {
        self.n_columns
    }

    /// All values, row after row, each in the order of the wanted columns.
    #[must_use]
    pub const fn values(&self) -> &'a [f64] {
        self.values
    }

    /// The values of one row, or `None` beyond the last.
    #[must_use]
    pub fn row(&self, row: usize) -> Option<&'a [f64]> {
        if row >= self.len() {
            return None;
        }
        self.values.get(row * self.n_columns..(row + 1) * self.n_columns)
    }

    /// The rows one by one.
    #[must_use]
    pub fn rows(&self) -> impl ExactSizeIterator<Item = &'a [f64]> + use<'a> {
        let (values, n_columns) = (self.values, self.n_columns);
        (0..self.len()).map(move |row| &values[row * n_columns..(row + 1) * n_columns])
    }

    /// The time of every row, where times are known.
    #[must_use]
    pub const fn times(&self) -> Option<&'a [f64]> {
        self.times
    }

    /// Which of the series' segments the rows come from, counted from 0.
    #[must_use]
    pub const fn segment(&self) -> usize {
        self.segment
    }

    /// The file the rows come from.
    #[must_use]
    pub const fn path(&self) -> &'a Path {
        self.path
    }

    /// The line of every row in its file, counted from 1.
    #[must_use]
    pub const fn lines(&self) -> &'a [u64] {
        self.lines
    }

    /// Where one row stands, for a fault that only the caller can see; `None` beyond the last row.
    #[must_use]
    pub fn place(&self, row: usize) -> Option<Place> {
        self.lines.get(row).map(|&line| Place { path: self.path.to_owned(), line, column: None, character: None })
    }

    /// How many bytes of the file have been taken from the disk so far. For progress only: it runs ahead of the rows.
    #[must_use]
    pub const fn bytes_read(&self) -> u64 {
        self.bytes_read
    }
}
