//! Numeric text columns in, chunks of checked rows out.
//!
//! The way of the bytes, one module a step:
//!
//! ```text
//! source   a file's bytes, digested as they come from the disk, decompressed
//! lines    lines, found in large pieces
//! fields   the fields of a line; number: a field as a number
//! rows     rows of wanted numbers; header: where named columns stand; clue: why a line cannot be read
//! join     the segments of a run as one series of frames; timeline: frames written twice
//! picker   the frames that are kept, in chunks
//! ```
//!
//! [`read_series`] goes the whole way, [`read_table`] as far as the rows. Values are plain numbers: units are the caller's.
//! Nothing is passed over in silence: a file is read, refused with an [`IngestError`] that names the place,
//! or read with a [`Notice`] of what was left out.

mod chunk;
mod clue;
mod error;
mod excerpt;
mod fields;
mod first_line;
mod header;
mod interval;
mod join;
mod layout;
mod lines;
mod notice;
mod number;
mod picker;
mod readable_number;
mod readable_path;
mod report;
mod rows;
mod selection;
mod series;
mod source;
mod table;
mod timeline;

pub use chunk::Chunk;
pub use error::{Clue, IngestError, NumberProblem, Place, ReadError, TextProblem};
pub use layout::{Column, Layout, Separator, TimeSource};
pub use notice::Notice;
pub use report::{SegmentReport, SeriesReport};
pub use selection::{Discard, Selection};
pub use series::read_series;
pub use table::{Table, TableLayout, read_table};
