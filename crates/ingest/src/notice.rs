//! Things that were left out while reading, as data.

use std::fmt;
use std::path::PathBuf;

use serde::Serialize;

use crate::readable_number::readable_number;
use crate::readable_path::readable_path;

/// Something that was left out of a series and that its owner should know of.
///
/// `Display` gives the fact, [`advice`](Self::advice) what to do about it.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Notice {
    /// The last line has no line end, so the run may have been stopped while writing it; it was left out.
    UnfinishedLastLine {
        /// The file.
        #[serde(serialize_with = "readable_path")]
        path: PathBuf,
        /// The line, counted from 1.
        line: u64,
        /// The beginning of its text.
        text: String,
    },
    /// A stretch of rows whose frames had been read before, as after a restart; the first copy was kept.
    RepeatedFrames {
        /// The file of the second copy.
        #[serde(serialize_with = "readable_path")]
        path: PathBuf,
        /// The first line left out, counted from 1.
        first_line: u64,
        /// How many rows were left out.
        count: u64,
        /// The time of the first of them.
        first_time: f64,
        /// The time of the last of them.
        last_time: f64,
    },
    /// Further stretches like [`RepeatedFrames`](Self::RepeatedFrames), once a series has shown 100 of them.
    MoreRepeatedFrames {
        /// How many further stretches.
        stretches: u64,
        /// How many rows were left out in all of them.
        count: u64,
    },
}

impl Notice {
    /// What to do about it, as one sentence.
    #[must_use]
    pub const fn advice(&self) -> &'static str {
        match self {
            Self::UnfinishedLastLine { .. } => {
                "nothing if the run was stopped or is still going on; if the line is complete, end it with a line break"
            }
            Self::RepeatedFrames { .. } | Self::MoreRepeatedFrames { .. } => {
                "nothing if the run was restarted from an earlier point; if the file is an independent start, list it as a replica"
            }
        }
    }
}

impl fmt::Display for Notice {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::UnfinishedLastLine { path, line, text } => {
                write!(formatter, "{}:{line}: the last line has no line end and was left out: `{text}`", path.display())
            }
            Self::RepeatedFrames { path, first_line, count, first_time, last_time } => write!(
                formatter,
                "{}:{first_line}: {count} rows from time {} to {} repeat earlier frames and were left out",
                path.display(),
                readable_number(*first_time),
                readable_number(*last_time)
            ),
            Self::MoreRepeatedFrames { stretches, count } => write!(
                formatter,
                "{count} rows in {stretches} further stretches repeat earlier frames and were left out"
            ),
        }
    }
}
