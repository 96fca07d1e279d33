//! The times of a joined series: which frames are new, and whether the column can be a time at all.

use std::path::Path;

use crate::error::{IngestError, Place};
use crate::notice::Notice;

/// Falls that are looked at before a file is refused in its midst.
const FALLS_BEFORE_REFUSAL: u64 = 16;

/// A time column falls once a restart, and runs are restarted rarely; a column of anything else falls at every second
/// row, a constant one at every row. One fall in three rows lies between.
const ROWS_A_FALL: u64 = 3;

/// Stretches of repeated frames that get a notice of their own; it bounds the memory a hostile file can take.
const STRETCHES_NOTED: usize = 100;

/// Judges the times of all rows of a series, one by one.
#[derive(Default)]
pub(crate) struct Timeline {
    /// The time of the last new frame of all files.
    latest: Option<f64>,
    /// `latest` when the present file began.
    latest_before: Option<f64>,
    file: FileTimes,
    stretch: Option<Stretch>,
    notices: Vec<Notice>,
    stretches_noted: usize,
    stretches_unnoted: u64,
    rows_unnoted: u64,
}

/// The times of the present file.
#[derive(Default, Clone, Copy)]
struct FileTimes {
    first: Option<f64>,
    last: Option<f64>,
    rows: u64,
    repeated: u64,
    falls: u64,
    last_fall: Option<Fall>,
}

#[derive(Clone, Copy)]
struct Fall {
    line: u64,
    time: f64,
    previous: f64,
}

struct Stretch {
    first_line: u64,
    count: u64,
    first_time: f64,
    last_time: f64,
}

/// What was seen of one file.
pub(crate) struct FileSummary {
    pub(crate) first: Option<f64>,
    pub(crate) last: Option<f64>,
    pub(crate) repeated: u64,
}

impl Timeline {
    /// Begins the next file.
    pub(crate) fn begin_file(&mut self) {
        self.latest_before = self.latest;
        self.file = FileTimes::default();
    }

    /// Takes the time of a file's next row and says whether its frame is new; `column` is the time column, for a fault.
    #[inline]
    pub(crate) fn is_new(
        &mut self,
        path: &Path,
        line: u64,
        column: impl Fn() -> Option<usize>,
        time: f64,
    ) -> Result<bool, IngestError> {
        let file = &mut self.file;
        file.rows += 1;
        file.first.get_or_insert(time);
        if let Some(previous) = file.last.replace(time)
            && time <= previous
        {
            file.falls += 1;
            file.last_fall = Some(Fall { line, time, previous });
            if file.falls >= FALLS_BEFORE_REFUSAL {
                file.refuse_frequent_falls(path, column())?;
            }
        }
        if self.latest.is_none_or(|latest| time > latest) {
            self.latest = Some(time);
            if self.stretch.is_some() {
                self.end_stretch(path);
            }
            return Ok(true);
        }
        file.repeated += 1;
        match &mut self.stretch {
            Some(stretch) => {
                stretch.count += 1;
                stretch.last_time = time;
            }
            none => {
                *none = Some(Stretch { first_line: line, count: 1, first_time: time, last_time: time });
            }
        }
        Ok(false)
    }

    /// Ends a file: refuses times that fall too often, and a file that adds nothing to those before it.
    pub(crate) fn end_file(
        &mut self,
        path: &Path,
        column: impl Fn() -> Option<usize>,
    ) -> Result<FileSummary, IngestError> {
        self.end_stretch(path);
        let file = self.file;
        if file.falls > 1 {
            file.refuse_frequent_falls(path, column())?;
        }
        if let (Some(previous_end), Some(first_time), Some(last_time)) = (self.latest_before, file.first, file.last)
            && file.repeated == file.rows
        {
            return Err(IngestError::NotAContinuation { path: path.to_owned(), first_time, last_time, previous_end });
        }
        Ok(FileSummary { first: file.first, last: file.last, repeated: file.repeated })
    }

    /// The notices since this was last asked.
    pub(crate) fn take_notices(&mut self) -> Vec<Notice> {
        std::mem::take(&mut self.notices)
    }

    /// One notice for all stretches beyond the first hundred.
    pub(crate) fn closing_notice(&self) -> Option<Notice> {
        (self.stretches_unnoted > 0)
            .then_some(Notice::MoreRepeatedFrames { stretches: self.stretches_unnoted, count: self.rows_unnoted })
    }

    fn end_stretch(&mut self, path: &Path) {
        let Some(stretch) = self.stretch.take() else {
            return;
        };
        if self.stretches_noted < STRETCHES_NOTED {
            self.stretches_noted += 1;
            self.notices.push(Notice::RepeatedFrames {
                path: path.to_owned(),
                first_line: stretch.first_line,
                count: stretch.count,
                first_time: stretch.first_time,
                last_time: stretch.last_time,
            });
        } else {
            self.stretches_unnoted += 1;
            self.rows_unnoted += stretch.count;
        }
    }
}

impl FileTimes {
    fn refuse_frequent_falls(&self, path: &Path, column: Option<usize>) -> Result<(), IngestError> {
        match self.last_fall {
            Some(fall) if self.falls * ROWS_A_FALL > self.rows => Err(IngestError::TimeNotIncreasing {
                place: Box::new(Place { column, ..Place::line(path, fall.line) }),
                found: fall.time,
                previous: fall.previous,
                falls: self.falls,
                rows: self.rows,
            }),
            _ => Ok(()),
        }
    }
}
