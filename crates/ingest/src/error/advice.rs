//! What to do about a fault.

use super::{Clue, IngestError, NumberProblem, TextProblem};
use crate::layout::Separator;

impl IngestError {
    /// What to do about it, as one sentence without a final period.
    #[must_use]
    pub fn advice(&self) -> &'static str {
        match self {
            Self::Missing { .. } => "check the path; a relative path is taken from where the request says",
            Self::Directory { .. } => "name the file inside the directory, or a pattern that matches it",
            Self::Unreadable { .. } => "check that the file can be read by you and that its disk is sound",
            Self::NoRows { unfinished_line: Some(_), .. } => {
                "let the run write at least one whole row; if the line is complete, end it with a line break"
            }
            Self::NoRows { .. } => {
                "leave the file out, or check that it is the right one and that its rows are not taken for comments"
            }
            Self::NotText { problem: TextProblem::ZeroByte, .. } => {
                "give a file of plain or gzip-compressed text; a binary file must be converted first"
            }
            Self::NotText { problem: TextProblem::InvalidByte(_) | TextProblem::WideCharacters, .. } => {
                "save the file as UTF-8 or plain ASCII text"
            }
            Self::LoneReturns { .. } => {
                "convert the line ends to line feeds, as `tr '\\r' '\\n'` does, or save the file with those of your system"
            }
            Self::LineTooLong { .. } => "check that the file is text with one row a line",
            Self::GzipCutShort { .. } => {
                "copy the file again or wait until it is finished; what can be saved may be decompressed by hand and given as plain text"
            }
            Self::GzipCorrupt { .. } => "copy the file again from where it came",
            Self::BadNumber { problem: NumberProblem::Text, clue: Some(clue), .. }
            | Self::MissingColumn { clue: Some(clue), .. } => clue_advice(*clue),
            Self::BadNumber { problem, found, .. } => number_advice(*problem, found),
            Self::Ragged { .. } => {
                "repair or remove the line; if it is a comment, add its beginning to the comment prefixes"
            }
            Self::MissingColumn { .. } => "count the columns from 1, and check that the separator is the right one",
            Self::UnknownName { names, .. } if names.len() == 1 && names[0].contains([',', ';', '\t']) => {
                "the header seems to hold several names: set the separator to the one that stands between them"
            }
            Self::UnknownName { .. } => "use one of the names of the header, or give the column by its number",
            Self::RepeatedName { .. } => "give the column by its number",
            Self::NoHeader { candidate: None, .. } => {
                "give the column by its number, or add a header line with one name for each column"
            }
            Self::NoHeader { candidate: Some(_), .. } => {
                "write one name for each column, or give the column by its number; if words stand before the names in a comment, add them to the comment prefix"
            }
            Self::TimeNotIncreasing { .. } => {
                "check that this is the time column and that it is written with enough digits"
            }
            Self::NotAContinuation { .. } => {
                "list the file as a replica if it is an independent start; else put the segments in the order of their times or leave it out"
            }
            Self::AllDiscarded { .. } => "discard less, or leave the series out",
            Self::TimeUnknown { .. } => {
                "give a time column or the interval between frames, or discard a number of frames or a fraction"
            }
            Self::Setting { .. } => "change the setting to a value that is allowed",
            Self::UnfinishedTable { .. } => "check that the row is complete, and end it with a line break",
            Self::TableTooLong { .. } => "check that this is the table and not a series",
        }
    }
}

fn clue_advice(clue: Clue) -> &'static str {
    match clue {
        Clue::Separator(Separator::Comma) => "commas stand between the columns: set the separator to comma",
        Clue::Separator(Separator::Tab) => "tabs stand between the columns: set the separator to tab",
        Clue::Separator(Separator::Whitespace) => "blanks stand between the columns: set the separator to whitespace",
        Clue::Semicolons => {
            "semicolons stand between the columns: replace them by tabs and set the separator to tab; write points in place of decimal commas"
        }
        Clue::DecimalCommas => "write points in place of decimal commas",
        Clue::Comma => EITHER_COMMA,
        Clue::Header => {
            "if the line holds the names of the columns, write one name for each, beginning with a letter, or make the line a comment"
        }
        Clue::SecondHeader => {
            "a comment before the line names the columns already: remove the line, or make it a comment"
        }
    }
}

const EITHER_COMMA: &str =
    "if commas separate the columns, set the separator to comma; if they are decimal commas, write points";

fn number_advice(problem: NumberProblem, found: &str) -> &'static str {
    match problem {
        NumberProblem::Text if found.contains(',') => EITHER_COMMA,
        NumberProblem::Text => {
            "repair the field, choose another column, or add the beginning of the line to the comment prefixes"
        }
        NumberProblem::Empty => "fill the field, choose another column, or remove the row",
        NumberProblem::NotFinite => {
            "find out why the run wrote it; remove the row only if the rest of the run is sound"
        }
        NumberProblem::Asterisks => "write the column again with more digits",
        NumberProblem::TooLarge => "repair the number, or choose another column",
        NumberProblem::UnclosedQuote => "close the quotes or remove them",
    }
}
