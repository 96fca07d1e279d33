//! Paths in what is written out.

use std::path::Path;

use serde::Serializer;

/// Writes a path that is not valid Unicode with replacement characters instead of failing.
pub(crate) fn readable_path<S: Serializer>(path: &Path, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(&path.to_string_lossy())
}
