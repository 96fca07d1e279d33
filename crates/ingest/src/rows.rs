//! The rows of one file: comments, blank lines and the header passed over, every row checked.

use std::path::Path;

use crate::clue::{self, are_names};
use crate::error::{IngestError, Place};
use crate::excerpt::excerpt;
use crate::fields::{BadField, Wanted, is_blank, read_row, texts};
use crate::first_line::{is_text, no_header, text_line};
use crate::header::Headers;
use crate::layout::{Column, Separator};
use crate::lines::{Line, Lines, refuse_lone_returns};

/// What is wanted from a file, ready for reading.
#[derive(Clone)]
pub(crate) struct RowLayout<'l> {
    pub(crate) separator: Separator,
    /// Longest first.
    prefixes: Vec<&'l [u8]>,
    /// Whether a prefix begins with this byte: for nearly every row one look settles that it is no comment.
    begins_prefix: [bool; 256],
    pub(crate) columns: Vec<&'l Column>,
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

    /// The wanted fields, counted from 0 and in ascending order; none unless all are given by number.
    pub(crate) fn numbered_fields(&self) -> Vec<usize> {
        let number = |column: &&Column| match column {
            Column::Number(number) => Some(number.get() - 1),
            Column::Name(_) => None,
        };
        let mut fields: Vec<usize> = self.columns.iter().map(number).collect::<Option<_>>().unwrap_or_default();
        fields.sort_unstable();
        fields
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
    /// Where a comment before the first row holds a carriage return: it may hold the rows as well.
    lone_return: Option<Place>,
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
            lone_return: None,
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
                    if self.shape.is_none() {
                        if let Err(place) = refuse_lone_returns(path, line) {
                            self.lone_return = Some(place);
                        } else if line.is_complete {
                            self.headers.add_comment(line.number, text, separator);
                        }
                    }
                    continue;
                }
                Content::Data(text) => text,
            };
            if !line.is_complete {
                refuse_lone_returns(path, line).map_err(IngestError::lone_returns)?;
                self.unfinished = Some(Unfinished { line: line.number, text: excerpt(text) });
                break;
            }
            line.refuse_invalid_text(path)?;
            let shape = match &mut self.shape {
                Some(shape) => shape,
                empty => {
                    refuse_lone_returns(path, line).map_err(IngestError::lone_returns)?;
                    let fields = texts(line.text, separator);
                    match self.headers.line() {
                        None if is_text(&fields) && are_names(&fields) => {
                            self.headers.set_line(line.number, line.text, &fields);
                            continue;
                        }
                        None if is_text(&fields) => {
                            let clue = clue::of_text_line(line.text, separator, &self.layout.numbered_fields());
                            return Err(text_line(path, line.number, line.text, self.layout, clue));
                        }
                        Some(names) if !names.fits(fields.len()) => {
                            return Err(no_header(path, line, fields.len(), names, &self.headers, self.layout));
                        }
                        _ => empty.insert(Shape::new(self.layout, &self.headers, path, line, fields.len())?),
                    }
                }
            };
            shape.read(line, separator, path, values)?;
            self.count += 1;
            return Ok(Some(line.number));
        }
        if self.count == 0 {
            if let Some(place) = self.lone_return.take() {
                return Err(IngestError::lone_returns(place));
            }
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
        line: Line<'_>,
        fields: usize,
    ) -> Result<Self, IngestError> {
        let mut wanted = Vec::with_capacity(layout.columns.len());
        for (slot, column) in layout.columns.iter().enumerate() {
            let field = match column {
                Column::Number(number) if number.get() <= fields => number.get() - 1,
                Column::Number(number) => {
                    return Err(IngestError::MissingColumn {
                        place: Box::new(Place::line(path, line.number)),
                        column: number.get(),
                        fields,
                        clue: clue::of_row(line.text, layout.separator, &layout.numbered_fields()),
                    });
                }
                Column::Name(name) => headers.resolve(name.trim(), path, line.number, fields)?,
            };
            wanted.push(Wanted { field, slot });
        }
        wanted.sort_unstable();
        Ok(Self { first_line: line.number, fields, wanted })
    }

    #[inline]
    fn read(&self, line: Line<'_>, separator: Separator, path: &Path, values: &mut [f64]) -> Result<(), IngestError> {
        match read_row(line.text, separator, &self.wanted, values) {
            Ok(fields) if fields == self.fields => Ok(()),
            found => Err(self.fault(line, separator, path, found)),
        }
    }

    #[cold]
    fn fault(
        &self,
        line: Line<'_>,
        separator: Separator,
        path: &Path,
        found: Result<usize, BadField<'_>>,
    ) -> IngestError {
        if let Err(place) = refuse_lone_returns(path, line) {
            return IngestError::lone_returns(place);
        }
        match found {
            Ok(fields) => IngestError::Ragged {
                place: Box::new(Place::line(path, line.number)),
                expected: self.fields,
                found: fields,
                first_line: self.first_line,
            },
            Err(bad) => {
                let wanted: Vec<usize> = self.wanted.iter().map(|wanted| wanted.field).collect();
                IngestError::BadNumber {
                    place: Box::new(Place::byte(path, line.number, line.text, bad.offset).in_column(bad.field + 1)),
                    found: excerpt(bad.text),
                    problem: bad.problem,
                    clue: clue::of_row(line.text, separator, &wanted),
                }
            }
        }
    }
}
