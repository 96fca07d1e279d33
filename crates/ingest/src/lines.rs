//! The lines of a file, found in large pieces of it.

use std::path::Path;

use crate::error::{IngestError, Place, TextProblem};
use crate::source::Source;

/// The longest line that can be a row of numbers, in bytes.
pub(crate) const LONGEST_LINE: usize = 1 << 20;

/// How many bytes are taken at once: large enough that the calls cost nothing, small enough to stay in the cache.
pub(crate) const CHUNK: usize = 256 * 1024;

/// Reads lines one by one; memory is bounded by the piece size and the longest line.
pub(crate) struct Lines<'p> {
    path: &'p Path,
    source: Source,
    chunk: usize,
    buffer: Vec<u8>,
    /// Where the next line begins in `buffer`.
    start: usize,
    /// Where the bytes in `buffer` end.
    end: usize,
    /// No line end lies between `start` and here.
    searched: usize,
    /// Up to here `buffer` is valid text without zero bytes. It stops at the first fault, so beyond it
    /// every line is looked at by itself.
    sound: usize,
    /// Complete lines given so far.
    count: u64,
    at_end: bool,
    /// The line that was moved to.
    present: Present,
}

/// Where a line lies in the buffer, and what is known of it.
#[derive(Default)]
struct Present {
    start: usize,
    end: usize,
    is_complete: bool,
    is_sound: bool,
}

/// One line without its line end.
#[derive(Clone, Copy)]
pub(crate) struct Line<'a> {
    pub(crate) number: u64,
    pub(crate) text: &'a [u8],
    /// Whether the line has a line end; only the last one of a file can lack it.
    pub(crate) is_complete: bool,
    /// Whether the line is known to be valid UTF-8; if not it may still be.
    pub(crate) is_sound: bool,
}

impl<'p> Lines<'p> {
    pub(crate) fn open(path: &'p Path, digest: bool, chunk: usize) -> Result<Self, IngestError> {
        let source = Source::open(path, digest, chunk)?;
        let mut lines = Self {
            path,
            source,
            chunk,
            buffer: Vec::new(),
            start: 0,
            end: 0,
            searched: 0,
            sound: 0,
            count: 0,
            at_end: false,
            present: Present::default(),
        };
        lines.pass_byte_order_mark()?;
        Ok(lines)
    }

    pub(crate) const fn path(&self) -> &'p Path {
        self.path
    }

    pub(crate) const fn source(&self) -> &Source {
        &self.source
    }

    /// How many complete lines have been given.
    pub(crate) const fn count(&self) -> u64 {
        self.count
    }

    /// Moves to the next line and says whether there is one. A zero byte anywhere and a line that is too long are refused.
    #[inline]
    pub(crate) fn advance(&mut self) -> Result<bool, IngestError> {
        let found = loop {
            let fresh = &self.buffer[self.searched..self.end];
            if let Some(offset) = memchr::memchr(b'\n', fresh) {
                break Some(self.searched + offset);
            }
            self.searched = self.end;
            if self.end - self.start > LONGEST_LINE {
                return Err(self.too_long(self.end));
            }
            if self.at_end {
                break None;
            }
            self.fill()?;
        };
        let (line_end, next) = match found {
            Some(position) => (position, position + 1),
            None if self.start == self.end => return Ok(false),
            None => (self.end, self.end),
        };
        if line_end - self.start > LONGEST_LINE {
            return Err(self.too_long(line_end));
        }
        let is_sound = line_end <= self.sound;
        if !is_sound {
            self.refuse_zero_byte(line_end)?;
        }
        self.present = Present { start: self.start, end: line_end, is_complete: found.is_some(), is_sound };
        self.start = next;
        self.searched = next;
        self.count += u64::from(found.is_some());
        Ok(true)
    }

    /// The line that was last moved to.
    #[inline]
    pub(crate) fn line(&self) -> Line<'_> {
        let Present { start, end, is_complete, is_sound } = self.present;
        let mut text = &self.buffer[start..end];
        while let [rest @ .., b'\r'] = text {
            text = rest;
        }
        Line { number: self.count + u64::from(!is_complete), text, is_complete, is_sound }
    }

    fn pass_byte_order_mark(&mut self) -> Result<(), IngestError> {
        while self.end < 3 && !self.at_end {
            self.fill()?;
        }
        match &self.buffer[..self.end] {
            [0xef, 0xbb, 0xbf, ..] => {
                self.start = 3;
                self.searched = 3;
                Ok(())
            }
            [0xff, 0xfe, ..] | [0xfe, 0xff, ..] => Err(IngestError::NotText {
                place: Box::new(Place::byte(self.path, 1, &[], 0)),
                problem: TextProblem::WideCharacters,
            }),
            _ => Ok(()),
        }
    }

    /// Moves the unfinished line to the front and takes more bytes behind it.
    #[cold]
    fn fill(&mut self) -> Result<(), IngestError> {
        self.buffer.copy_within(self.start..self.end, 0);
        self.end -= self.start;
        self.searched -= self.start;
        self.sound = self.sound.saturating_sub(self.start);
        self.start = 0;
        if self.buffer.len() < self.end + self.chunk {
            self.buffer.resize(self.end + self.chunk, 0);
        }
        let free = &mut self.buffer[self.end..self.end + self.chunk];
        let length = self.source.read(free, self.path, self.count)?;
        self.at_end = length == 0;
        self.end += length;
        let unchecked = &self.buffer[self.sound..self.end];
        let text_end = match std::str::from_utf8(unchecked) {
            Ok(text) => text.len(),
            Err(error) => error.valid_up_to(),
        };
        self.sound += memchr::memchr(0, &unchecked[..text_end]).unwrap_or(text_end);
        Ok(())
    }

    fn too_long(&self, line_end: usize) -> IngestError {
        let seen = line_end.min(self.start + LONGEST_LINE);
        if let Err(error) = self.refuse_zero_byte(seen) {
            return error;
        }
        let number = self.count + 1;
        let line = Line { number, text: &self.buffer[self.start..seen], is_complete: false, is_sound: false };
        match refuse_lone_returns(self.path, line) {
            Err(place) => IngestError::lone_returns(place),
            Ok(()) => IngestError::LineTooLong { place: Box::new(Place::line(self.path, number)), limit: LONGEST_LINE },
        }
    }

    fn refuse_zero_byte(&self, line_end: usize) -> Result<(), IngestError> {
        let text = &self.buffer[self.start..line_end];
        match memchr::memchr(0, text) {
            Some(offset) => Err(IngestError::NotText {
                place: Box::new(Place::byte(self.path, self.count + 1, text, offset)),
                problem: TextProblem::ZeroByte,
            }),
            None => Ok(()),
        }
    }
}

/// Gives the place of the first carriage return inside a line, where it ends a line of a system that writes no line feeds.
#[inline]
pub(crate) fn refuse_lone_returns(path: &Path, line: Line<'_>) -> Result<(), Place> {
    match memchr::memchr(b'\r', line.text) {
        Some(offset) => Err(Place::byte(path, line.number, line.text, offset)),
        None => Ok(()),
    }
}

impl Line<'_> {
    /// Refuses text that is not valid UTF-8.
    #[inline]
    pub(crate) fn refuse_invalid_text(&self, path: &Path) -> Result<(), IngestError> {
        if self.is_sound { Ok(()) } else { self.find_invalid_text(path) }
    }

    #[cold]
    fn find_invalid_text(&self, path: &Path) -> Result<(), IngestError> {
        match std::str::from_utf8(self.text) {
            Ok(_) => Ok(()),
            Err(error) => {
                let offset = error.valid_up_to();
                Err(IngestError::NotText {
                    place: Box::new(Place::byte(path, self.number, self.text, offset)),
                    problem: TextProblem::InvalidByte(self.text.get(offset).copied().unwrap_or_default()),
                })
            }
        }
    }
}
