//! The two ways in which reading a series can end early.

use std::error::Error;
use std::fmt;

use super::IngestError;

/// Why a series was not read to its end.
#[derive(Debug, Clone, PartialEq)]
pub enum ReadError<E> {
    /// A file or the request is at fault.
    Ingest(IngestError),
    /// The caller's own function refused a chunk or asked to stop.
    Sink(E),
}

impl<E> From<IngestError> for ReadError<E> {
    fn from(error: IngestError) -> Self {
        Self::Ingest(error)
    }
}

impl<E: fmt::Display> fmt::Display for ReadError<E> {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Ingest(error) => error.fmt(formatter),
            Self::Sink(error) => error.fmt(formatter),
        }
    }
}

impl<E: Error + 'static> Error for ReadError<E> {
    fn source(&self) -> Option<&(dyn Error + 'static)> {
        match self {
            Self::Ingest(error) => error.source(),
            Self::Sink(error) => error.source(),
        }
    }
}
