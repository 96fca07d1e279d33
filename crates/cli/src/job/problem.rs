//! Everything that is wrong with a job, found first and shown together.

use std::collections::HashMap;
use std::fmt;

use super::mark::{Mark, Source, SourceId};
use super::render;

/// Most problems that are shown one by one: what is wrong with a job in more places has few causes.
pub(super) const SHOWN: usize = 20;

/// One thing that is wrong: what was expected and found, where, and what to do about it.
#[derive(Debug, Clone, PartialEq, Eq, Hash)]
pub(super) struct Problem {
    /// One line: lower case, no final period, the field in backticks.
    pub title: String,
    /// The places concerned; the first is the place at fault.
    pub labels: Vec<Label>,
    /// What to do, one sentence each.
    pub help: Vec<String>,
}

/// A place with a remark.
#[derive(Debug, Clone, PartialEq, Eq, Hash)]
pub(super) struct Label {
    /// The place.
    pub mark: Mark,
    /// The remark; may be empty.
    pub text: String,
}

impl Problem {
    /// A problem without a place, such as a job file that is missing.
    pub fn new(title: impl Into<String>) -> Self {
        Self { title: title.into(), labels: Vec::new(), help: Vec::new() }
    }

    /// A problem at a place.
    pub fn at(mark: Mark, title: impl Into<String>) -> Self {
        Self::new(title).label(mark, "")
    }

    /// Adds a remark to the place at fault.
    pub fn note(mut self, text: impl Into<String>) -> Self {
        if let Some(first) = self.labels.first_mut() {
            first.text = text.into();
        }
        self
    }

    /// Adds another place.
    pub fn label(mut self, mark: Mark, text: impl Into<String>) -> Self {
        self.labels.push(Label { mark, text: text.into() });
        self
    }

    /// Adds advice.
    pub fn help(mut self, text: impl Into<String>) -> Self {
        self.help.push(text.into());
        self
    }

    /// The place at fault, where there is one.
    pub fn place(&self) -> Option<Mark> {
        self.labels.first().map(|label| label.mark)
    }

    /// Adds `did you mean` advice where there is a near name.
    pub fn suggest(self, nearest: Option<&str>) -> Self {
        match nearest {
            Some(name) => self.help(format!("did you mean `{name}`?")),
            None => self,
        }
    }
}

/// The problems found so far, and the texts that they point into.
#[derive(Debug, Default)]
pub(super) struct Problems {
    sources: Vec<Source>,
    /// Each with its place in the order in which they were found.
    found: HashMap<Problem, usize>,
}

impl Problems {
    /// Takes a text in, so that problems can point into it.
    pub fn add_source(&mut self, source: Source) -> SourceId {
        self.sources.push(source);
        SourceId(self.sources.len() - 1)
    }

    /// Takes a problem in, unless the same was found before: a bias that many windows share is then reported once.
    pub fn push(&mut self, problem: Problem) {
        let number = self.found.len();
        self.found.entry(problem).or_insert(number);
    }

    /// Whether nothing is wrong so far.
    pub fn is_empty(&self) -> bool {
        self.found.is_empty()
    }

    /// The finished report, in the order of the texts.
    pub fn into_report(self, job_name: String) -> JobProblems {
        let Self { sources, found } = self;
        let mut found: Vec<(Problem, usize)> = found.into_iter().collect();
        found.sort_by_key(|(problem, number)| (problem.place(), *number));
        let found = found.into_iter().map(|(problem, _)| problem).collect();
        JobProblems { job_name, sources, found }
    }
}

/// Everything that is wrong with a job. `Display` gives it as plain text: the first twenty problems, each with its place, an excerpt
/// and advice, how many more there are, and a last line with the count in each file.
#[derive(Debug)]
pub struct JobProblems {
    job_name: String,
    sources: Vec<Source>,
    found: Vec<Problem>,
}

impl JobProblems {
    /// How many problems there are; at least one.
    #[must_use]
    pub fn count(&self) -> usize {
        self.found.len()
    }

    /// How many problems have their place in each file, in the order of the report.
    fn counts(&self) -> Vec<(&str, usize)> {
        let mut counts: Vec<(&str, usize)> = Vec::new();
        for problem in &self.found {
            let source = problem.place().and_then(|place| self.sources.get(place.source.0));
            let name = source.map_or(self.job_name.as_str(), |source| source.name.as_str());
            match counts.last_mut() {
                Some((last, count)) if *last == name => *count += 1,
                _ => counts.push((name, 1)),
            }
        }
        counts
    }

    /// The headline of each problem, in the order of the report.
    pub fn titles(&self) -> impl Iterator<Item = &str> {
        self.found.iter().map(|problem| problem.title.as_str())
    }
}

impl fmt::Display for JobProblems {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        for problem in self.found.iter().take(SHOWN) {
            writeln!(formatter, "{}\n", render::problem(problem, &self.sources))?;
        }
        let more = self.count().saturating_sub(SHOWN);
        if more > 0 {
            writeln!(formatter, "and {more} more {}\n", plural(more))?;
        }
        write!(formatter, "{} {}", self.count(), plural(self.count()))?;
        let counts = self.counts();
        for (index, (file, count)) in counts.iter().enumerate() {
            match index {
                _ if counts.len() == 1 => write!(formatter, " in {file}")?,
                0 => write!(formatter, ": {count} in {file}")?,
                _ => write!(formatter, ", {count} in {file}")?,
            }
        }
        Ok(())
    }
}

fn plural(count: usize) -> &'static str {
    if count == 1 { "problem" } else { "problems" }
}

impl std::error::Error for JobProblems {}
