//! The segments of one run as one series of frames.

use std::path::PathBuf;

use crate::error::{IngestError, ReadError};
use crate::interval::UsualStep;
use crate::layout::{Layout, TimeSource};
use crate::notice::Notice;
use crate::report::SegmentReport;
use crate::rows::{RowLayout, Rows};
use crate::timeline::Timeline;

/// One frame of a joined series.
pub(crate) struct Frame<'a> {
    pub(crate) segment: usize,
    pub(crate) line: u64,
    pub(crate) time: Option<f64>,
    pub(crate) values: &'a [f64],
    /// Bytes of the file taken from the disk.
    pub(crate) bytes_read: u64,
}

/// What was seen of a joined series.
pub(crate) struct Joined {
    /// Without the rows kept, which only the caller knows.
    pub(crate) segments: Vec<SegmentReport>,
    pub(crate) frames: u64,
    pub(crate) interval: Option<f64>,
    pub(crate) notices: Vec<Notice>,
}

/// How the files are gone through.
#[derive(Clone, Copy)]
pub(crate) struct Pass {
    /// Whether the files are digested on the way.
    pub(crate) digest: bool,
    /// Bytes taken at once.
    pub(crate) chunk: usize,
}

/// Shows every frame of the joined segments to `visit`, in order; the second copy of a frame is left out.
pub(crate) fn for_each_frame<E>(
    segments: &[PathBuf],
    layout: &Layout,
    pass: Pass,
    mut visit: impl FnMut(&Frame<'_>) -> Result<(), ReadError<E>>,
) -> Result<Joined, ReadError<E>> {
    if segments.is_empty() {
        return Err(ReadError::Ingest(IngestError::Setting {
            setting: "segments",
            expected: "at least one file",
            found: "none".to_owned(),
        }));
    }
    let time_column = match &layout.time {
        TimeSource::Column(column) => Some(column),
        TimeSource::Unknown | TimeSource::Interval(_) => None,
    };
    let row_layout = RowLayout::new(layout.separator, &layout.comments, layout.columns.iter().chain(time_column));
    // The time, where it is a column, stands behind the wanted values.
    let n_columns = layout.columns.len();
    let mut values = vec![0.0; n_columns + usize::from(time_column.is_some())];
    let mut timeline = Timeline::default();
    let mut usual_step = UsualStep::default();
    let mut joined =
        Joined { segments: Vec::with_capacity(segments.len()), frames: 0, interval: None, notices: Vec::new() };
    for (segment, path) in segments.iter().enumerate() {
        let mut rows = Rows::open(path, &row_layout, pass.digest, pass.chunk)?;
        timeline.begin_file();
        let first_frame = joined.frames;
        while let Some(line) = rows.next_row(&mut values)? {
            let time = match layout.time {
                TimeSource::Unknown => None,
                TimeSource::Interval(interval) => Some(joined.frames as f64 * interval),
                TimeSource::Column(_) => {
                    let time = values[n_columns];
                    if !timeline.is_new(path, line, || rows.column_of(n_columns), time)? {
                        continue;
                    }
                    usual_step.add(time);
                    Some(time)
                }
            };
            joined.frames += 1;
            visit(&Frame { segment, line, time, values: &values[..n_columns], bytes_read: rows.bytes() })?;
        }
        let times = timeline.end_file(path, || rows.column_of(n_columns))?;
        let (first_time, last_time) = match layout.time {
            TimeSource::Interval(interval) => {
                (Some(first_frame as f64 * interval), Some((joined.frames - 1) as f64 * interval))
            }
            TimeSource::Unknown | TimeSource::Column(_) => (times.first, times.last),
        };
        joined.notices.append(&mut timeline.take_notices());
        joined.notices.extend(rows.unfinished().map(|unfinished| Notice::UnfinishedLastLine {
            path: path.clone(),
            line: unfinished.line,
            text: unfinished.text.clone(),
        }));
        joined.segments.push(SegmentReport {
            path: path.clone(),
            bytes: rows.bytes(),
            sha256: rows.sha256(),
            rows_read: rows.count(),
            rows_repeated: times.repeated,
            rows_kept: 0,
            columns: rows.fields(),
            first_time,
            last_time,
        });
    }
    joined.notices.extend(timeline.closing_notice());
    joined.interval = match layout.time {
        TimeSource::Unknown => None,
        TimeSource::Interval(interval) => Some(interval),
        TimeSource::Column(_) => usual_step.find(),
    };
    Ok(joined)
}
