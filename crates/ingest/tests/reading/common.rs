//! Small files for the tests, and what reading them gave.

use std::convert::Infallible;
use std::io::Write;
use std::num::NonZeroUsize;
use std::path::PathBuf;

use flate2::{Compression, write::GzEncoder};
use spandrel_ingest::{Column, IngestError, Layout, ReadError, Selection, SeriesReport, TimeSource, read_series};
use tempfile::TempDir;

/// A folder of files that is gone after the test.
pub struct Files {
    pub folder: TempDir,
}

impl Files {
    pub fn new() -> Self {
        Self { folder: TempDir::new().unwrap() }
    }

    pub fn add(&self, name: &str, content: impl AsRef<[u8]>) -> PathBuf {
        let path = self.folder.path().join(name);
        std::fs::write(&path, content).unwrap();
        path
    }

    /// A message without the folder's name, which differs from run to run.
    pub fn relative(&self, message: &str) -> String {
        message.replace(&format!("{}/", self.folder.path().display()), "")
    }
}

/// All rows of a series, as they were handed over.
#[derive(Debug, PartialEq, Default)]
pub struct Rows {
    pub values: Vec<Vec<f64>>,
    pub times: Vec<f64>,
    pub places: Vec<(usize, u64)>,
    pub chunk_lengths: Vec<usize>,
}

pub fn number(column: usize) -> Column {
    Column::Number(NonZeroUsize::new(column).unwrap())
}

pub fn name(column: &str) -> Column {
    Column::Name(column.to_owned())
}

/// Column 2 with the times of column 1.
pub fn timed() -> Layout {
    Layout { columns: vec![number(2)], time: TimeSource::Column(number(1)), ..Layout::default() }
}

/// These columns, without times.
pub fn columns(columns: &[Column]) -> Layout {
    Layout { columns: columns.to_vec(), ..Layout::default() }
}

pub fn read(paths: &[PathBuf], layout: &Layout, selection: &Selection) -> Result<(SeriesReport, Rows), IngestError> {
    let mut rows = Rows::default();
    let report = read_series::<Infallible>(paths, layout, selection, &mut |chunk| {
        for (row, values) in chunk.rows().enumerate() {
            assert_eq!(chunk.row(row), Some(values));
            rows.values.push(values.to_vec());
            let place = chunk.place(row).unwrap();
            assert_eq!(place.path, paths[chunk.segment()]);
            rows.places.push((chunk.segment(), place.line));
        }
        assert_eq!(chunk.values().len(), chunk.len() * chunk.n_columns());
        rows.times.extend(chunk.times().unwrap_or_default());
        rows.chunk_lengths.push(chunk.len());
        Ok(())
    });
    match report {
        Ok(report) => Ok((report, rows)),
        Err(ReadError::Ingest(error)) => Err(error),
    }
}

pub fn gzip(content: &[u8]) -> Vec<u8> {
    let mut encoder = GzEncoder::new(Vec::new(), Compression::default());
    encoder.write_all(content).unwrap();
    encoder.finish().unwrap()
}
