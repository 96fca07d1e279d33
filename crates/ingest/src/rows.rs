//! The rows of one file: comments, blank lines and the header passed over, every row checked.

use std::path::Path;

use crate::error::{IngestError, Place};
use crate::excerpt::excerpt;
use crate::fields::{Wanted, is_blank, read_row, texts};
use crate::header::Headers;
use crate::layout::{Column, Separator};
use crate::lines::{Line, Lines};
use crate::number::is_meant_as_number;

/// What is wanted from a file, ready for reading.
#[derive(Clone)]
pub(crate) struct RowLayout<'l> {
    separator: Separator,
    /// Longest first.
    prefixes: Vec<&'l [u8]>,
    /// Whether a prefix begins with this byte: for nearly every row one look settles that it is no comment.
    begins_prefix: [bool; 256],
    columns: Vec<&'l Column>,
}

impl<'l> RowLayout<'l> {
    pub(crate) fn new(
        separator: Separator,
        comments: &'l [String],
        columns: impl IntoIterator<Item = &'l Column>,
    ) -> Self {
        let mut prefixes: Vec<&[u8]> = comments.iter().map(String::as_bytes).collect();
        prefixes.sort_by_key(|prefix| std::cmp::Reverse(prefix.len()));
        let mut begins_prefix = [false; 256];
        for first in prefixes.iter().filter_map(|prefix| prefix.first()) {
            begins_prefix[usize::from(*first)] = true;
        }
        Self { separator, prefixes, begins_prefix, columns: columns.into_iter().collect() }
    }

    #[inline]
    fn content<'a>(&self, text: &'a [u8]) -> Content<'a> {
        let Some(begin) = text.iter().position(|&byte| !is_blank(byte)) else {
            return Content::Nothing;
        };
        let trimmed = &text[begin..];
        if self.begins_prefix[usize::from(trimmed[0])] {
            for prefix in &self.prefixes {
                if let Some(comment) = trimmed.strip_prefix(*prefix) {
                    return Content::Comment(comment);
                }
            }
        }
        Content::Data(text)
    }

    fn has_names(&self) -> bool {
        self.columns.iter().any(|column| matches!(column, Column::Name(_)))
    }
}

/// A last line that was left out because it has no line end.
pub(crate) struct Unfinished {
    pub(crate) line: u64,
    pub(crate) text: String,
}

/// Reads the rows of one file one by one.
pub(crate) struct Rows<'l> {
    lines: Lines<'l>,
    layout: &'l RowLayout<'l>,
    headers: Headers,
    wants_header: bool,
    shape: Option<Shape>,
    unfinished: Option<Unfinished>,
    count: u64,
}

/// What the first row has settled.
struct Shape {
    first_line: u64,
    fields: usize,
    wanted: Vec<Wanted>,
}

enum Content<'a> {
    Nothing,
    Comment(&'a [u8]),
    Data(&'a [u8]),
}

impl<'l> Rows<'l> {
    pub(crate) fn open(
        path: &'l Path,
        layout: &'l RowLayout<'l>,
        digest: bool,
        chunk: usize,
    ) -> Result<Self, IngestError> {
        Ok(Self {
            lines: Lines::open(path, digest, chunk)?,
            layout,
            headers: Headers::default(),
            wants_header: layout.has_names(),
            shape: None,
            unfinished: None,
            count: 0,
        })
    }

    /// Puts the wanted values of the next row into `values` and gives its line, or `None` at the end of the file.
    ///
    /// A file without a complete row is refused at its end.
    #[inline]
    pub(crate) fn next_row(&mut self, values: &mut [f64]) -> Result<Option<u64>, IngestError> {
        let path = self.lines.path();
        let separator = self.layout.separator;
        while self.lines.advance()? {
            let line = self.lines.line();
            let text = match self.layout.content(line.text) {
                Content::Nothing => continue,
                Content::Comment(text) => {
                    if line.is_complete && self.wants_header && self.shape.is_none() {
                        self.headers.add_comment(line.number, text, separator);
                    }
                    continue;
                }
                Content::Data(text) => text,
            };
            if !line.is_complete {
                self.unfinished = Some(Unfinished { line: line.number, text: excerpt(text) });
                break;
            }
            line.refuse_invalid_text(path)?;
            let shape = match &mut self.shape {
                Some(shape) => shape,
                empty => {
                    let fields = texts(line.text, separator);
                    if !self.headers.has_line() && is_header(&fields) {
                        self.headers.set_line(line.number, &fields);
                        continue;
                    }
                    let first = Shape::new(self.layout, &self.headers, path, line.number, fields.len())?;
                    empty.insert(first)
                }
            };
            shape.read(line, separator, path, values)?;
            self.count += 1;
            return Ok(Some(line.number));
        }
        if self.count == 0 {
            return Err(IngestError::NoRows {
                path: path.to_owned(),
                lines: self.lines.count(),
                unfinished_line: self.unfinished.as_ref().map(|unfinished| unfinished.line),
            });
        }
        Ok(None)
    }

    /// Rows given so far.
    pub(crate) const fn count(&self) -> u64 {
        self.count
    }

    /// Fields in every row, 0 before the first.
    pub(crate) fn fields(&self) -> usize {
        self.shape.as_ref().map_or(0, |shape| shape.fields)
    }

    /// Where the wanted column of this place in the result stands in the rows, counted from 1.
    pub(crate) fn column_of(&self, slot: usize) -> Option<usize> {
        let shape = self.shape.as_ref()?;
        let wanted = shape.wanted.iter().find(|wanted| wanted.slot == slot)?;
        Some(wanted.field + 1)
    }

    /// The last line, if it was left out.
    pub(crate) const fn unfinished(&self) -> Option<&Unfinished> {
        self.unfinished.as_ref()
    }

    pub(crate) fn bytes(&self) -> u64 {
        self.lines.source().bytes()
    }

    pub(crate) fn sha256(&self) -> String {
        self.lines.source().sha256()
    }
}

impl Shape {
    fn new(
        layout: &RowLayout<'_>,
        headers: &Headers,
        path: &Path,
        line: u64,
        fields: usize,
    ) -> Result<Self, IngestError> {
        let mut wanted = Vec::with_capacity(layout.columns.len());
        for (slot, column) in layout.columns.iter().enumerate() {
            let field = headers.resolve(column, path, line, fields)?;
            wanted.push(Wanted { field, slot });
        }
        wanted.sort_unstable();
        Ok(Self { first_line: line, fields, wanted })
    }

    #[inline]
    fn read(&self, line: Line<'_>, separator: Separator, path: &Path, values: &mut [f64]) -> Result<(), IngestError> {
        match read_row(line.text, separator, &self.wanted, values) {
            Ok(fields) if fields == self.fields => Ok(()),
            Ok(fields) => Err(IngestError::Ragged {
                place: Box::new(Place::line(path, line.number)),
                expected: self.fields,
                found: fields,
                first_line: self.first_line,
            }),
            Err(bad) => Err(IngestError::BadNumber {
                place: Box::new(Place::byte(path, line.number, line.text, bad.offset).in_column(bad.field + 1)),
                found: excerpt(bad.text),
                problem: bad.problem,
            }),
        }
    }
}

/// A header has some text and no field that is, or was meant as, a number.
fn is_header(fields: &[&[u8]]) -> bool {
    fields.iter().any(|field| !field.is_empty()) && !fields.iter().any(|field| is_meant_as_number(field))
}
