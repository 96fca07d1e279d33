//! A place in a text file.

use std::fmt;
use std::path::{Path, PathBuf};

/// A place in a text file; `Display` gives `file:line` or `file:line:character`.
#[derive(Debug, Clone, PartialEq, Eq, Hash)]
pub struct Place {
    /// The file, as given.
    pub path: PathBuf,
    /// The line, counted from 1.
    pub line: u64,
    /// The field in the line, counted from 1.
    pub column: Option<usize>,
    /// The character in the line, counted from 1.
    pub character: Option<usize>,
}

impl Place {
    pub(crate) fn line(path: &Path, line: u64) -> Self {
        Self { path: path.to_owned(), line, column: None, character: None }
    }

    /// The place of the byte at `offset` of a line's text.
    pub(crate) fn byte(path: &Path, line: u64, text: &[u8], offset: usize) -> Self {
        let before = text.get(..offset).unwrap_or(text);
        Self { character: Some(String::from_utf8_lossy(before).chars().count() + 1), ..Self::line(path, line) }
    }

    pub(crate) fn in_column(self, column: usize) -> Self {
        Self { column: Some(column), ..self }
    }
}

impl fmt::Display for Place {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{}:{}", self.path.display(), self.line)?;
        match self.character {
            Some(character) => write!(formatter, ":{character}"),
            None => Ok(()),
        }
    }
}
