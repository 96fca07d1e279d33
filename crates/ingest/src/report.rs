//! What was read, and what was worth a notice.

use std::path::PathBuf;

use serde::Serialize;

use crate::notice::Notice;
use crate::readable_path::readable_path;

/// What was read of a whole series.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SeriesReport {
    /// One for each file, in the order given.
    pub segments: Vec<SegmentReport>,
    /// All frames of the joined series; a frame written twice counts once.
    pub frames: u64,
    /// The frames left out at the start.
    pub discarded: u64,
    /// The frames handed over, after the discard and the stride.
    pub kept: u64,
    /// The time between neighbouring frames, before any stride: as stated, or from the time column.
    ///
    /// From the time column it is the mean of those among the first 1024 steps that lie within half and
    /// one and a half times their median, so neither a gap nor the rounding of printed times moves it.
    /// `None` without times or with a single frame.
    pub interval: Option<f64>,
    /// What was left out or repaired, in the order of the files.
    pub notices: Vec<Notice>,
}

/// What was read of one file.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SegmentReport {
    /// The file, as given.
    #[serde(serialize_with = "readable_path")]
    pub path: PathBuf,
    /// Its size on disk as read, in bytes; for a compressed file, of the compressed bytes.
    pub bytes: u64,
    /// The SHA-256 digest (FIPS 180-4) of those bytes, in 64 lower-case hexadecimal digits.
    pub sha256: String,
    /// Rows of data in the file.
    pub rows_read: u64,
    /// Of these, rows left out because their frame had been read before.
    pub rows_repeated: u64,
    /// Rows handed over.
    pub rows_kept: u64,
    /// Fields in every row.
    pub columns: usize,
    /// The time of the first row in the file, where times are known.
    pub first_time: Option<f64>,
    /// The time of the last row in the file, where times are known.
    pub last_time: Option<f64>,
}
