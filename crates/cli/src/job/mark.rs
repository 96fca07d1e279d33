//! Places in the text of the job file and of the table of windows.

use std::ops::Range;
use std::sync::Arc;

/// A text that problems point into: the job file, or the table of windows.
#[derive(Debug, Clone)]
pub(super) struct Source {
    /// The path as it is shown.
    pub name: String,
    /// The whole text.
    pub text: Arc<str>,
}

/// Number of a [`Source`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(super) struct SourceId(pub usize);

/// A stretch of a source, in bytes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub(super) struct Mark {
    /// The text it lies in.
    pub source: SourceId,
    /// The first byte.
    pub start: usize,
    /// The byte after the last.
    pub end: usize,
}

impl Mark {
    /// The bytes `range` of `source`.
    pub fn new(source: SourceId, range: Range<usize>) -> Self {
        Self { source, start: range.start, end: range.end }
    }

    /// The bytes in the source.
    pub fn range(self) -> Range<usize> {
        self.start..self.end
    }
}

/// A value as it was typed, and where.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Typed<T> {
    /// The value.
    pub value: T,
    /// Where it stands.
    pub mark: Mark,
}

/// A value is not what it should be, and the problem is reported.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Faulty;

/// The value of a key that may be left out: there, absent, or there and at fault.
pub(super) type Optional<T> = Result<Option<T>, Faulty>;

/// The value of a key that may be left out, from its field (if there is one) and the way to read it.
pub(super) fn optional<F, T>(field: Option<F>, read: impl FnOnce(F) -> Option<T>) -> Optional<T> {
    field.map(|field| read(field).ok_or(Faulty)).transpose()
}
