//! A whole series, from its files to chunks of kept rows.

use std::path::PathBuf;

use crate::chunk::Chunk;
use crate::error::{IngestError, ReadError};
use crate::join::{Joined, Pass, for_each_frame};
use crate::layout::{Layout, TimeSource};
use crate::lines::CHUNK;
use crate::picker::{Picker, Start};
use crate::report::SeriesReport;
use crate::selection::{Discard, Selection};

/// Reads the segments of one continuous run as one series and hands the kept rows, checked, to `sink`.
///
/// Segments are joined in the order given. With a time column, a row whose time does not exceed that of every row before it
/// repeats a frame written before a restart: the first copy is kept, and the report has a notice. Then the selection is
/// applied to the joined series. The files may be gzip-compressed, also with several members, whatever their names.
///
/// Read as numbers are, beside everyday ones, Fortran's `1.0D+03` and `1.0+103`. A last line without a line end is left out
/// with a notice, even if it could be read. Windows line ends, a UTF-8 byte-order mark, blank lines and comments are passed over.
///
/// Memory does not grow with the length of the files. Each file is read once, and twice for [`Discard::Fraction`];
/// `sink` then gets empty chunks during the first reading, so that it can stop it.
///
/// # Errors
/// [`ReadError::Ingest`] for the first fault of a setting or a file; rows before it may have been handed over.
/// [`ReadError::Sink`] with whatever `sink` returned; nothing is read after that.
///
/// # Examples
/// ```
/// use std::num::NonZeroUsize;
/// use spandrel_ingest::{Column, Layout, Selection, TimeSource, read_series};
///
/// # fn main() -> Result<(), Box<dyn std::error::Error>> {
/// let folder = tempfile::tempdir()?;
/// let file = folder.path().join("run.txt");
/// std::fs::write(&file, "# time z\n0.0 1.25\n0.5 1.50\n")?;
///
/// let layout = Layout {
///     columns: vec![Column::Name("z".into())],
///     time: TimeSource::Column(Column::Number(NonZeroUsize::MIN)),
///     ..Layout::default()
/// };
/// let mut positions = Vec::new();
/// let report = read_series::<std::convert::Infallible>(&[file], &layout, &Selection::default(), &mut |chunk| {
///     positions.extend_from_slice(chunk.values());
///     Ok(())
/// })?;
/// assert_eq!(positions, [1.25, 1.5]);
/// assert_eq!(report.interval, Some(0.5));
/// # Ok(())
/// # }
/// ```
pub fn read_series<E>(
    segments: &[PathBuf],
    layout: &Layout,
    selection: &Selection,
    sink: &mut dyn FnMut(&Chunk<'_>) -> Result<(), E>,
) -> Result<SeriesReport, ReadError<E>> {
    read_in_pieces(segments, layout, selection, CHUNK, sink)
}

/// The same with `chunk` bytes taken from the disk at once, which changes nothing else.
pub(crate) fn read_in_pieces<E>(
    segments: &[PathBuf],
    layout: &Layout,
    selection: &Selection,
    chunk: usize,
    sink: &mut dyn FnMut(&Chunk<'_>) -> Result<(), E>,
) -> Result<SeriesReport, ReadError<E>> {
    layout.check()?;
    selection.check()?;
    let start = match selection.discard {
        Discard::Nothing => Start::Frame(0),
        Discard::Frames(frames) => Start::Frame(frames),
        Discard::Time(time) if layout.time == TimeSource::Unknown => {
            return Err(IngestError::TimeUnknown { discard: time }.into());
        }
        Discard::Time(time) => Start::Time(time),
        Discard::Fraction(fraction) => {
            let frames = if fraction > 0.0 { count_frames(segments, layout, chunk, sink)? } else { 0 };
            Start::Frame(part_of(fraction, frames))
        }
    };
    let stride = selection.stride.get();
    let mut picker = Picker::new(segments, layout.columns.len(), start, stride, sink);
    let pass = Pass { digest: true, chunk };
    let joined = for_each_frame(segments, layout, pass, |frame| picker.take(frame))?;
    let picked = picker.finish()?;
    let Joined { segments: mut reports, frames, interval, notices } = joined;
    for (report, &kept) in reports.iter_mut().zip(&picked.kept) {
        report.rows_kept = kept;
    }
    let kept = picked.kept.iter().sum();
    match segments.first() {
        Some(path) if kept == 0 => Err(ReadError::Ingest(IngestError::AllDiscarded { path: path.clone(), frames })),
        _ => Ok(SeriesReport { segments: reports, frames, discarded: picked.discarded, kept, interval, notices }),
    }
}

/// Counts the frames of a joined series, reading no more of each row than that takes.
fn count_frames<E>(
    segments: &[PathBuf],
    layout: &Layout,
    chunk: usize,
    sink: &mut dyn FnMut(&Chunk<'_>) -> Result<(), E>,
) -> Result<u64, ReadError<E>> {
    let layout = Layout { columns: Vec::new(), ..layout.clone() };
    let pass = Pass { digest: false, chunk };
    // A picker whose start is never reached hands over empty chunks only.
    let mut picker = Picker::new(segments, 0, Start::Frame(u64::MAX), 1, sink);
    let joined = for_each_frame(segments, &layout, pass, |frame| picker.take(frame))?;
    Ok(joined.frames)
}

/// A fraction of a count, rounded down unless it is a whole number up to rounding.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the fraction is in 0..1 and counts are below 2^53"
)]
fn part_of(fraction: f64, count: u64) -> u64 {
    (fraction * count as f64 * (1.0 + 4.0 * f64::EPSILON)).floor() as u64
}

#[cfg(test)]
mod tests;
