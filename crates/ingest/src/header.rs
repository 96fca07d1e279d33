//! Column names, and where they are found.

use std::collections::BTreeMap;
use std::path::Path;

use crate::error::{IngestError, Place};
use crate::fields::texts;
use crate::layout::Separator;

/// Names are near when at most this part of their characters differs.
const NEAR: f64 = 0.6;

/// How many near names are offered.
const OFFERED: usize = 3;

/// The lines before the first row that may hold the column names.
#[derive(Default)]
pub(crate) struct Headers {
    /// A first line of names that is not a comment. Whether it is a header is only known at the first row.
    line: Option<NameLine>,
    /// The last comment line for each number of fields; which number counts is only known at the first row.
    comments: BTreeMap<usize, Header>,
}

struct Header {
    line: u64,
    names: Vec<String>,
}

/// A line of names that is not a comment.
pub(crate) struct NameLine {
    header: Header,
    /// The line itself, for a fault.
    pub(crate) text: Vec<u8>,
    /// Whether a comment before it has as many names.
    pub(crate) follows_comment: bool,
}

impl NameLine {
    /// Its number in the file.
    pub(crate) const fn number(&self) -> u64 {
        self.header.line
    }

    /// Whether it is the header of rows with this many fields.
    pub(crate) fn fits(&self, fields: usize) -> bool {
        self.header.names.len() == fields && !self.follows_comment
    }
}

impl Headers {
    /// The line of names that is not a comment.
    pub(crate) const fn line(&self) -> Option<&NameLine> {
        self.line.as_ref()
    }

    /// Whether a comment has this many names.
    pub(crate) fn has_comment(&self, fields: usize) -> bool {
        self.comments.contains_key(&fields)
    }

    /// Keeps a line of names that is not a comment.
    pub(crate) fn set_line(&mut self, number: u64, text: &[u8], fields: &[&[u8]]) {
        self.line = Some(NameLine {
            header: Header::new(number, fields),
            text: text.to_vec(),
            follows_comment: self.has_comment(fields.len()),
        });
    }

    /// Keeps a comment, given without its prefix.
    pub(crate) fn add_comment(&mut self, number: u64, text: &[u8], separator: Separator) {
        if !text.trim_ascii().is_empty() {
            let fields = texts(text, separator);
            self.comments.insert(fields.len(), Header::new(number, &fields));
        }
    }

    /// The place in the rows, counted from 0, of the column of this name. `row` is the line of the first row, `fields` the number
    /// of its fields.
    pub(crate) fn resolve(&self, name: &str, path: &Path, row: u64, fields: usize) -> Result<usize, IngestError> {
        let line = self.line.as_ref().map(|line| &line.header);
        let fitting = line.filter(|header| header.names.len() == fields).or_else(|| self.comments.get(&fields));
        let Some(header) = fitting else {
            let last_comment = self.comments.values().max_by_key(|header| header.line);
            return Err(IngestError::NoHeader {
                place: Box::new(Place::line(path, row)),
                name: name.to_owned(),
                fields,
                candidate: line.or(last_comment).map(|header| (header.line, header.names.len())),
            });
        };
        header.find(name, path)
    }
}

impl Header {
    fn new(line: u64, fields: &[&[u8]]) -> Self {
        let names = fields.iter().map(|field| String::from_utf8_lossy(field).into_owned()).collect();
        Self { line, names }
    }

    fn find(&self, name: &str, path: &Path) -> Result<usize, IngestError> {
        let mut bearers = self.names.iter().enumerate().filter(|(_, other)| *other == name).map(|(index, _)| index);
        match (bearers.next(), bearers.next()) {
            (Some(only), None) => Ok(only),
            (Some(first), Some(second)) => Err(IngestError::RepeatedName {
                place: Box::new(Place::line(path, self.line)),
                name: name.to_owned(),
                columns: [first, second].into_iter().chain(bearers).map(|index| index + 1).collect(),
            }),
            (None, _) => Err(IngestError::UnknownName {
                place: Box::new(Place::line(path, self.line)),
                name: name.to_owned(),
                nearest: self.nearest(name),
                names: self.names.clone(),
            }),
        }
    }

    fn nearest(&self, name: &str) -> Vec<String> {
        let wanted = name.to_lowercase();
        let mut near: Vec<(f64, &String)> = self
            .names
            .iter()
            .map(|other| (strsim::normalized_damerau_levenshtein(&wanted, &other.to_lowercase()), other))
            .filter(|(likeness, _)| *likeness >= NEAR)
            .collect();
        near.sort_by(|(a, _), (b, _)| b.total_cmp(a));
        near.into_iter().take(OFFERED).map(|(_, other)| other.clone()).collect()
    }
}
