//! The frames that are kept, gathered into chunks.

use std::path::PathBuf;

use crate::chunk::Chunk;
use crate::error::ReadError;
use crate::join::Frame;

/// Rows a chunk at most: large enough that handing it over costs nothing, small enough to stay in the cache.
pub(crate) const ROWS_A_CHUNK: usize = 4096;

/// Frames in a row that may be left out before the caller gets an empty chunk, and so a chance to stop.
const FRAMES_A_PULSE: u64 = 65_536;

/// Where the kept frames begin.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Start {
    /// At this frame, counted from 0.
    Frame(u64),
    /// At the first frame at least this much after the first.
    Time(f64),
}

/// Picks frames by start and stride, and hands them over in chunks of one file each.
pub(crate) struct Picker<'a, E> {
    segments: &'a [PathBuf],
    n_columns: usize,
    start: Start,
    stride: u64,
    sink: &'a mut dyn FnMut(&Chunk<'_>) -> Result<(), E>,
    first_time: Option<f64>,
    seen: u64,
    discarded: u64,
    until_next: u64,
    since_chunk: u64,
    kept: Vec<u64>,
    segment: usize,
    bytes_read: u64,
    values: Vec<f64>,
    times: Vec<f64>,
    has_times: bool,
    lines: Vec<u64>,
}

/// How many frames were left out and handed over.
pub(crate) struct Picked {
    pub(crate) discarded: u64,
    /// One count for each segment.
    pub(crate) kept: Vec<u64>,
}

impl<'a, E> Picker<'a, E> {
    pub(crate) fn new(
        segments: &'a [PathBuf],
        n_columns: usize,
        start: Start,
        stride: u64,
        sink: &'a mut dyn FnMut(&Chunk<'_>) -> Result<(), E>,
    ) -> Self {
        Self {
            segments,
            n_columns,
            start,
            stride,
            sink,
            first_time: None,
            seen: 0,
            discarded: 0,
            until_next: 0,
            since_chunk: 0,
            kept: vec![0; segments.len()],
            segment: 0,
            bytes_read: 0,
            values: Vec::with_capacity(n_columns * ROWS_A_CHUNK),
            times: Vec::with_capacity(ROWS_A_CHUNK),
            has_times: false,
            lines: Vec::with_capacity(ROWS_A_CHUNK),
        }
    }

    /// Takes the next frame of the series.
    #[inline]
    pub(crate) fn take(&mut self, frame: &Frame<'_>) -> Result<(), ReadError<E>> {
        if frame.segment != self.segment {
            self.hand_over_rest()?;
            self.segment = frame.segment;
        }
        self.bytes_read = frame.bytes_read;
        if self.is_kept(frame.time) {
            self.values.extend_from_slice(frame.values);
            self.lines.push(frame.line);
            self.has_times = frame.time.is_some();
            self.times.extend(frame.time);
            self.kept[self.segment] += 1;
        }
        self.since_chunk += 1;
        if self.lines.len() == ROWS_A_CHUNK || self.since_chunk == FRAMES_A_PULSE {
            self.hand_over()?;
        }
        Ok(())
    }

    /// Hands over what remains.
    pub(crate) fn finish(mut self) -> Result<Picked, ReadError<E>> {
        self.hand_over_rest()?;
        Ok(Picked { discarded: self.discarded, kept: self.kept })
    }

    fn is_kept(&mut self, time: Option<f64>) -> bool {
        let frame = self.seen;
        self.seen += 1;
        let is_before_start = match self.start {
            Start::Frame(first) => frame < first,
            Start::Time(after) => time.is_some_and(|time| {
                let first = *self.first_time.get_or_insert(time);
                is_earlier(time, first, after)
            }),
        };
        if is_before_start {
            self.discarded += 1;
            return false;
        }
        if self.until_next > 0 {
            self.until_next -= 1;
            return false;
        }
        self.until_next = self.stride - 1;
        true
    }

    fn hand_over_rest(&mut self) -> Result<(), ReadError<E>> {
        if self.lines.is_empty() { Ok(()) } else { self.hand_over() }
    }

    fn hand_over(&mut self) -> Result<(), ReadError<E>> {
        let chunk = Chunk {
            path: &self.segments[self.segment],
            segment: self.segment,
            n_columns: self.n_columns,
            values: &self.values,
            times: self.has_times.then_some(self.times.as_slice()),
            lines: &self.lines,
            bytes_read: self.bytes_read,
        };
        (self.sink)(&chunk).map_err(ReadError::Sink)?;
        self.values.clear();
        self.times.clear();
        self.lines.clear();
        self.since_chunk = 0;
        Ok(())
    }
}

/// Whether `time` is earlier than `first + after` by more than the rounding of these numbers.
fn is_earlier(time: f64, first: f64, after: f64) -> bool {
    let start = first + after;
    let rounding = 4.0 * f64::EPSILON * first.abs().max(start.abs());
    time < start - rounding
}

#[cfg(test)]
mod tests {
    use super::is_earlier;

    #[test]
    fn a_time_that_differs_by_rounding_is_not_earlier() {
        // 0.1 + 0.2 is 0.30000000000000004 in binary.
        assert!(!is_earlier(0.3, 0.1, 0.2));
        assert!(is_earlier(0.299_999_999_9, 0.1, 0.2));
        assert!(is_earlier(5e6 - 0.001, 2e6, 3e6));
    }
}
