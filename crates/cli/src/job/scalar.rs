//! One number, text or flag as it was typed, and its reading with a complaint where it is not what is wanted.
//!
//! What can be told from the value alone is told here: its type, its range, the spelling of a word or a unit.

use std::num::NonZeroUsize;
use std::str::FromStr;

use spandrel_bias::units::UnitError;
use spandrel_ingest::Column;

use super::mark::{Mark, Typed};
use super::nearest::{list, nearest};
use super::number::readable;
use super::problem::{Problem, Problems};

/// A value with its place and the path of its key.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Scalar {
    /// The key with its section, as in `system.temperature`.
    pub path: String,
    /// Where the value stands: in the job file, or in a cell of the table of windows.
    pub mark: Mark,
    /// The value.
    pub value: ScalarValue,
    /// For a cell, where the job asks for its column.
    pub asked_at: Option<Mark>,
}

/// What was typed.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum ScalarValue {
    /// A number with a fraction or an exponent.
    Number(f64),
    /// A whole number.
    Whole(i128),
    /// Text.
    Text(String),
    /// `true` or `false`.
    Flag(bool),
    /// What no key takes, in words: a date, or a number too large for any use.
    Other(String),
    /// A cell of the table of windows: a number or text, as the key asks.
    Cell(String),
}

/// The numbers that a key takes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Allowed {
    /// Every finite number.
    Finite,
    /// Above 0.
    Positive,
    /// 0 and above.
    NotNegative,
    /// 0 and above, below 1.
    Fraction,
    /// From the first to the second.
    Within(f64, f64),
}

impl Allowed {
    fn contains(self, number: f64) -> bool {
        number.is_finite()
            && match self {
                Self::Finite => true,
                Self::Positive => number > 0.0,
                Self::NotNegative => number >= 0.0,
                Self::Fraction => (0.0..1.0).contains(&number),
                Self::Within(lower, upper) => (lower..=upper).contains(&number),
            }
    }

    fn expected(self) -> String {
        match self {
            Self::Finite => "a finite number".to_owned(),
            Self::Positive => "a finite number above 0".to_owned(),
            Self::NotNegative => "a finite number of at least 0".to_owned(),
            Self::Fraction => "a number of at least 0 and below 1".to_owned(),
            Self::Within(lower, upper) => format!("a number from {lower:e} to {upper:e}"),
        }
    }
}

impl ScalarValue {
    /// The value as a message shows it.
    pub fn found(&self) -> String {
        match self {
            Self::Number(number) => readable(*number),
            Self::Whole(number) => number.to_string(),
            Self::Text(text) => format!("the text {}", quoted(text)),
            Self::Flag(flag) => flag.to_string(),
            Self::Other(words) => words.clone(),
            Self::Cell(text) if text.is_empty() => "an empty cell".to_owned(),
            Self::Cell(text) => quoted(text),
        }
    }
}

/// Text in backticks, shortened.
pub(super) fn quoted(text: &str) -> String {
    const LONGEST: usize = 60;
    if text.chars().count() > LONGEST {
        let beginning: String = text.chars().take(LONGEST).collect();
        format!("`{beginning}…`")
    } else {
        format!("`{text}`")
    }
}

impl Scalar {
    /// `expected` against what is here, at its place.
    pub fn problem(&self, expected: &str) -> Problem {
        self.complaint(&format!("expected {expected}, found {}", self.value.found()))
    }

    /// A problem with this value, in other words.
    pub fn complaint(&self, what: &str) -> Problem {
        let problem = Problem::at(self.mark, format!("`{}`: {what}", self.path));
        match self.asked_at {
            Some(mark) => problem.label(mark, "taken from this column"),
            None => problem,
        }
    }

    fn typed<T>(&self, value: T) -> Typed<T> {
        Typed { value, mark: self.mark }
    }

    /// A number in the allowed range. Whole numbers are numbers too; `nan` and `inf` are none.
    pub fn number(&self, allowed: Allowed, problems: &mut Problems) -> Option<Typed<f64>> {
        let number = match &self.value {
            ScalarValue::Number(number) => Some(*number),
            // A whole number of TOML has 64 bits; beyond 2^53 the nearest number is what a file would hold as well.
            #[expect(clippy::cast_precision_loss, reason = "a position or an energy has at most 53 bits")]
            ScalarValue::Whole(number) => Some(*number as f64),
            ScalarValue::Cell(text) => text.parse().ok(),
            ScalarValue::Text(_) | ScalarValue::Flag(_) | ScalarValue::Other(_) => None,
        };
        match number {
            Some(number) if allowed.contains(number) => return Some(self.typed(number)),
            _ => {}
        }
        let problem = self.problem(&allowed.expected());
        problems.push(match &self.value {
            ScalarValue::Text(text) if text.trim().parse::<f64>().is_ok() => {
                problem.help("write the number without quotes")
            }
            _ => problem,
        });
        None
    }

    /// A whole number of at least `least`.
    pub fn whole(&self, least: u32, problems: &mut Problems) -> Option<Typed<u64>> {
        let number = match self.value {
            ScalarValue::Whole(number) => u64::try_from(number).ok(),
            _ => None,
        };
        match number {
            Some(number) if number >= u64::from(least) => Some(self.typed(number)),
            _ => {
                problems.push(self.problem(&format!("a whole number of at least {least}")));
                None
            }
        }
    }

    /// Text that is not blank.
    pub fn text(&self, problems: &mut Problems) -> Option<Typed<String>> {
        match &self.value {
            ScalarValue::Text(text) | ScalarValue::Cell(text) if !text.trim().is_empty() => {
                Some(self.typed(text.clone()))
            }
            ScalarValue::Text(_) => {
                problems.push(self.complaint("expected text, found empty text"));
                None
            }
            _ => {
                problems.push(self.problem("text"));
                None
            }
        }
    }

    /// `true` or `false`.
    pub fn flag(&self, problems: &mut Problems) -> Option<Typed<bool>> {
        if let ScalarValue::Flag(flag) = self.value {
            return Some(self.typed(flag));
        }
        problems.push(self.problem("`true` or `false`"));
        None
    }

    /// One of a few words.
    pub fn word<T: Copy>(&self, words: &[(&'static str, T)], problems: &mut Problems) -> Option<Typed<T>> {
        let (ScalarValue::Text(text) | ScalarValue::Cell(text)) = &self.value else {
            problems.push(self.problem(&one_of(words)));
            return None;
        };
        if let Some((_, value)) = words.iter().find(|(word, _)| word == text) {
            return Some(self.typed(*value));
        }
        let near = nearest(text, words.iter().map(|(word, _)| *word));
        problems.push(self.problem(&one_of(words)).suggest(near));
        None
    }

    /// A unit.
    pub fn unit<U: FromStr<Err = UnitError>>(&self, problems: &mut Problems) -> Option<Typed<U>> {
        let (ScalarValue::Text(text) | ScalarValue::Cell(text)) = &self.value else {
            problems.push(self.problem("a unit, as text"));
            return None;
        };
        match text.parse() {
            Ok(unit) => Some(self.typed(unit)),
            Err(UnitError::Unknown { allowed, .. }) => {
                problems.push(self.problem(allowed));
                None
            }
            Err(other) => {
                problems.push(self.complaint(&other.to_string()));
                None
            }
        }
    }

    /// A column of a text file, by its number from 1 or its name in the header.
    pub fn column(&self, problems: &mut Problems) -> Option<Typed<Column>> {
        let number = match &self.value {
            ScalarValue::Whole(number) => usize::try_from(*number).ok(),
            ScalarValue::Cell(text) => text.parse().ok(),
            _ => None,
        };
        if let Some(number) = number.and_then(NonZeroUsize::new) {
            return Some(self.typed(Column::Number(number)));
        }
        match &self.value {
            ScalarValue::Text(name) | ScalarValue::Cell(name) if !name.trim().is_empty() && name != "0" => {
                Some(self.typed(Column::Name(name.clone())))
            }
            _ => {
                problems.push(self.problem("a column number from 1, or a name of the header"));
                None
            }
        }
    }
}

/// The words, for a message.
fn one_of<T>(words: &[(&'static str, T)]) -> String {
    match words {
        [(only, _)] => format!("`{only}`"),
        [others @ .., (last, _)] => format!("{} or `{last}`", list(others.iter().map(|(word, _)| *word))),
        [] => String::new(),
    }
}
