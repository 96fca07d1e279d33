//! Reading the sections of a job, with every complaint collected and every key accounted for.
//!
//! A section is opened as a [`Table`], its keys are taken one by one, and [`Table::finish`] complains about what is left.

use toml::Spanned;
use toml::de::{DeString, DeTable, DeValue};

use super::keys::Section;
use super::mark::{Mark, SourceId};
use super::nearest::{list, nearest};
use super::problem::{Problem, Problems};
use super::scalar::{Scalar, ScalarValue, quoted};

/// A section of the job that is being read.
pub(super) struct Table<'d> {
    section: Section,
    /// The section's header, or its braces.
    pub mark: Mark,
    entries: Vec<(&'d Spanned<DeString<'d>>, &'d Spanned<DeValue<'d>>)>,
}

/// A key with its value.
pub(super) struct Field<'d> {
    /// The key with its section, as in `system.temperature`.
    pub path: String,
    /// The value's place.
    pub mark: Mark,
    value: &'d DeValue<'d>,
}

impl<'d> Table<'d> {
    /// Opens a section.
    pub fn new(section: Section, mark: Mark, table: &'d DeTable<'d>) -> Self {
        Self { section, mark, entries: table.iter().collect() }
    }

    /// Whether the key is there and has not been taken.
    pub fn has(&self, name: &str) -> bool {
        self.entries.iter().any(|(key, _)| key.get_ref() == name)
    }

    /// The place of a key that is there and has not been taken.
    pub fn key_mark(&self, name: &str) -> Option<Mark> {
        let (key, _) = self.entries.iter().find(|(key, _)| key.get_ref() == name)?;
        Some(self.place(key.span()))
    }

    /// Takes the value of a key that may be left out.
    pub fn take(&mut self, name: &str) -> Option<Field<'d>> {
        self.section.key(name)?;
        let index = self.entries.iter().position(|(key, _)| key.get_ref() == name)?;
        let (key, value) = self.entries.remove(index);
        Some(self.field(key, value))
    }

    /// Takes the value of a key that must be there.
    pub fn require(&mut self, name: &str, problems: &mut Problems) -> Option<Field<'d>> {
        let field = self.take(name);
        if field.is_none() && !self.misspelt().contains(&name) {
            problems.push(self.missing(name));
        }
        field
    }

    /// The keys that were probably meant by keys that do not exist; `finish` says so, and nobody needs to miss them as well.
    pub fn misspelt(&self) -> Vec<&'static str> {
        let unknown = self.entries.iter().filter(|(key, _)| self.section.key(key.get_ref()).is_none());
        unknown.filter_map(|(key, _)| self.nearest_key(key.get_ref())).collect()
    }

    fn nearest_key(&self, name: &str) -> Option<&'static str> {
        nearest(name, self.section.keys().map(|key| key.name))
    }

    /// A key that must be there is not.
    pub fn missing(&self, name: &str) -> Problem {
        let (takes, example) = match self.section.key(name) {
            Some(key) => (key.takes, key.example),
            None => ("a value", ""),
        };
        Problem::at(self.mark, format!("`{}`: expected {takes}, found no such key", self.path(name)))
            .note(format!("no `{name}` in {}", self.section))
            .help(format!("add it, as in `{example}`"))
    }

    /// The exactly one of these keys that is there. None or several are a problem.
    pub fn exactly_one(&self, names: &[&'static str], problems: &mut Problems) -> Option<&'static str> {
        let there: Vec<&'static str> = names.iter().copied().filter(|name| self.has(name)).collect();
        match there[..] {
            [only] => return Some(only),
            [] if self.misspelt().iter().any(|name| names.contains(name)) => {}
            [] => problems.push(
                Problem::at(
                    self.mark,
                    format!("{}: expected one of the keys {}, found none", self.section, list(names.iter().copied())),
                )
                .note(format!("none of them in {}", self.section)),
            ),
            [first, ..] => {
                let mut problem = Problem::new(format!(
                    "{}: expected only one of the keys {}, found {}",
                    self.section,
                    list(names.iter().copied()),
                    list(there.iter().copied())
                ))
                .help(format!("keep one of them, such as `{first}`"));
                for (key, _) in self.entries.iter().filter(|(key, _)| there.iter().any(|name| key.get_ref() == name)) {
                    problem = problem.label(self.place(key.span()), "");
                }
                problems.push(problem);
            }
        }
        None
    }

    /// All keys in their order, for a section whose keys are names of the job.
    pub fn take_all(&mut self) -> Vec<(String, Mark, Field<'d>)> {
        let entries = std::mem::take(&mut self.entries);
        entries
            .into_iter()
            .map(|(key, value)| (key.get_ref().to_string(), self.place(key.span()), self.field(key, value)))
            .collect()
    }

    /// Complains about every key that was not taken.
    pub fn finish(self, problems: &mut Problems) {
        for (key, _) in &self.entries {
            let name = key.get_ref();
            let problem =
                Problem::at(self.place(key.span()), format!("`{}`: unknown key in {}", self.path(name), self.section));
            problems.push(match self.nearest_key(name) {
                Some(near) => problem.suggest(Some(near)),
                None => problem.help(format!("the keys here are {}", self.section_keys())),
            });
        }
    }

    fn section_keys(&self) -> String {
        let names: Vec<String> = self.section.keys().map(|key| format!("`{}`", key.name)).collect();
        names.join(", ")
    }

    fn field(&self, key: &'d Spanned<DeString<'d>>, value: &'d Spanned<DeValue<'d>>) -> Field<'d> {
        Field { path: self.path(key.get_ref()), mark: self.place(value.span()), value: value.get_ref() }
    }

    fn path(&self, name: &str) -> String {
        match self.section.path() {
            "" => name.to_owned(),
            section => format!("{section}.{name}"),
        }
    }

    fn place(&self, range: std::ops::Range<usize>) -> Mark {
        Mark::new(self.mark.source, range)
    }
}

impl<'d> Field<'d> {
    /// The value as a number, text or flag; anything else is a problem.
    pub fn scalar(&self, problems: &mut Problems) -> Option<Scalar> {
        if let Some(value) = scalar_value(self.value) {
            return Some(Scalar { path: self.path.clone(), mark: self.mark, value, asked_at: None });
        }
        problems.push(self.problem("a single value"));
        None
    }

    /// The value as a section of its own.
    pub fn table(&self, section: Section, problems: &mut Problems) -> Option<Table<'d>> {
        let DeValue::Table(table) = self.value else {
            problems.push(self.problem("a table"));
            return None;
        };
        Some(Table::new(section, self.mark, table))
    }

    /// Whether the value is a table.
    pub fn is_table(&self) -> bool {
        self.value.is_table()
    }

    /// Whether the value is a list.
    pub fn is_list(&self) -> bool {
        self.value.is_array()
    }

    /// The value as a list; anything else is a problem.
    pub fn list(&self, what: &str, problems: &mut Problems) -> Option<Vec<Field<'d>>> {
        let DeValue::Array(array) = self.value else {
            problems.push(self.problem(what));
            return None;
        };
        let entry = |value: &'d Spanned<DeValue<'d>>| Field {
            path: self.path.clone(),
            mark: Mark::new(self.mark.source, value.span()),
            value: value.get_ref(),
        };
        Some(array.iter().map(entry).collect())
    }

    /// The value as a list of sections.
    pub fn tables(&self, section: Section, problems: &mut Problems) -> Vec<Table<'d>> {
        if self.value.is_table() {
            problems.push(
                self.problem("a list of tables")
                    .help(format!("write the header with two brackets, `[[{}]]`", self.path)),
            );
            return Vec::new();
        }
        let fields = self.list("a list of tables", problems).unwrap_or_default();
        fields.iter().filter_map(|field| field.table(section, problems)).collect()
    }

    /// The value as a list of texts.
    pub fn texts(&self, what: &str, problems: &mut Problems) -> Option<Vec<super::mark::Typed<String>>> {
        let fields = self.list(what, problems)?;
        Some(fields.iter().filter_map(|field| field.scalar(problems)?.text(problems)).collect())
    }

    /// `expected` against what is here.
    pub fn problem(&self, expected: &str) -> Problem {
        let found = match self.value {
            DeValue::Array(array) if array.is_empty() => "an empty list".to_owned(),
            DeValue::Array(_) => "a list".to_owned(),
            DeValue::Table(_) => "a table".to_owned(),
            value => scalar_value(value).map_or_else(String::new, |scalar| scalar.found()),
        };
        Problem::at(self.mark, format!("`{}`: expected {expected}, found {found}", self.path))
    }
}

/// The scalar of a TOML value; `None` for lists and tables.
fn scalar_value(value: &DeValue<'_>) -> Option<ScalarValue> {
    match value {
        DeValue::String(text) => Some(ScalarValue::Text(text.to_string())),
        DeValue::Integer(number) => {
            // TOML's own numbers of more than 128 bits have no other reading than a float.
            let whole = i128::from_str_radix(number.as_str(), number.radix());
            Some(
                whole.map_or_else(
                    |_| ScalarValue::Number(number.as_str().parse().unwrap_or(f64::NAN)),
                    ScalarValue::Whole,
                ),
            )
        }
        DeValue::Float(number) => Some(match number.as_str().parse::<f64>() {
            Ok(value) if value.is_infinite() && !number.as_str().contains("inf") => {
                ScalarValue::Other(format!("{}, which is too large", quoted(number.as_str())))
            }
            value => ScalarValue::Number(value.unwrap_or(f64::NAN)),
        }),
        DeValue::Boolean(flag) => Some(ScalarValue::Flag(*flag)),
        DeValue::Datetime(date) => Some(ScalarValue::Other(format!("the date {date}"))),
        DeValue::Array(_) | DeValue::Table(_) => None,
    }
}

/// The whole job as a section; its place is the beginning of the file.
pub(super) fn top<'d>(source: SourceId, table: &'d DeTable<'d>) -> Table<'d> {
    Table::new(Section::Top, Mark::new(source, 0..0), table)
}
