//! The axes, and the way from their names to their numbers.

use std::collections::HashSet;
use std::sync::Arc;

use spandrel_bias::Axis;
use spandrel_bias::units::PositionUnit;

use crate::job::mark::{Mark, Optional, Typed};
use crate::job::nearest::{list, nearest};
use crate::job::problem::{Problem, Problems};
use crate::job::typed::TypedAxis;

/// The axes as far as they could be read.
#[derive(Debug)]
pub(super) struct Axes {
    entries: Vec<AxisEntry>,
    /// All axes, unless one is at fault.
    pub whole: Option<Arc<[Axis]>>,
}

/// One axis.
#[derive(Debug)]
pub(super) struct AxisEntry {
    /// Its header, for remarks.
    pub mark: Mark,
    name: Option<Typed<String>>,
    /// `None` where it is at fault.
    pub unit: Option<Typed<PositionUnit>>,
    /// The period, if it has one.
    pub period: Optional<f64>,
}

impl Axes {
    /// Checks names for being different.
    pub fn check(typed: &[TypedAxis], problems: &mut Problems) -> Self {
        let mut entries: Vec<AxisEntry> = Vec::new();
        let mut whole = Some(Vec::new());
        for axis in typed {
            if let Some(name) = &axis.name {
                let first =
                    entries.iter().find_map(|entry| entry.name.as_ref().filter(|first| first.value == name.value));
                if let Some(first) = first {
                    problems.push(
                        Problem::at(
                            name.mark,
                            format!("`axis.name`: expected a name for one axis only, found `{}` again", name.value),
                        )
                        .label(first.mark, "first here")
                        .help("give each axis a name of its own"),
                    );
                    whole = None;
                }
            }
            let period = axis.period.map(|period| period.map(|period| period.value));
            let built = match (&axis.name, axis.unit, period) {
                (Some(name), Some(unit), Ok(period)) => match Axis::new(&name.value, unit.value, period) {
                    Ok(built) => Some(built),
                    Err(error) => {
                        problems.push(Problem::at(axis.mark, error.to_string()));
                        None
                    }
                },
                _ => None,
            };
            whole = whole.zip(built).map(|(mut axes, axis)| {
                axes.push(axis);
                axes
            });
            entries.push(AxisEntry { mark: axis.mark, name: axis.name.clone(), unit: axis.unit, period });
        }
        let whole = whole.filter(|axes| !axes.is_empty()).map(Arc::from);
        Self { entries, whole }
    }

    /// How many there are.
    pub fn len(&self) -> usize {
        self.entries.len()
    }

    /// The axis of this number.
    pub fn get(&self, index: usize) -> Option<&AxisEntry> {
        self.entries.get(index)
    }

    /// The axis' name as a message shows it.
    pub fn name(&self, index: usize) -> &str {
        self.entries.get(index).and_then(|entry| entry.name.as_ref()).map_or("", |name| name.value.as_str())
    }

    /// The names that could be read.
    pub fn names(&self) -> impl Iterator<Item = &str> {
        self.entries.iter().filter_map(|entry| Some(entry.name.as_ref()?.value.as_str()))
    }

    /// The number of a name; `None` and a problem where there is no such axis.
    pub fn find(&self, path: &str, name: &Typed<String>, problems: &mut Problems) -> Option<usize> {
        let found =
            self.entries.iter().position(|entry| entry.name.as_ref().is_some_and(|known| known.value == name.value));
        // With a nameless axis about, any name may be right.
        if found.is_none() && !self.entries.is_empty() && self.entries.iter().all(|entry| entry.name.is_some()) {
            problems.push(
                Problem::at(
                    name.mark,
                    format!("`{path}`: expected the name of an axis, {}, found `{}`", list(self.names()), name.value),
                )
                .suggest(nearest(&name.value, self.names())),
            );
        }
        found
    }

    /// The number of the axis that is meant where none is named.
    pub fn only(&self, path: &str, mark: Mark, problems: &mut Problems) -> Option<usize> {
        // Axes of one name are reported already, and naming one would not tell them apart.
        let distinct: HashSet<&str> = self.names().collect();
        if self.entries.len() > 1 && distinct.len() == self.names().count() {
            problems.push(
                Problem::at(mark, format!("`{path}`: expected the name of an axis, found no such key"))
                    .help(format!("with several axes, add one of {}", list(self.names()))),
            );
        }
        (self.entries.len() == 1).then_some(0)
    }
}
