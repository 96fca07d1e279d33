//! What is left out.

use std::collections::HashSet;

use super::axes::Axes;
use super::candidate::Candidate;
use crate::job::mark::Typed;
use crate::job::model::{Excluded, ExcludedReplica, Stretch};
use crate::job::nearest::{list, nearest};
use crate::job::number::readable;
use crate::job::problem::{Problem, Problems};
use crate::job::typed::{TypedExclude, TypedStretch};

/// Which candidates and replicas are left out.
#[derive(Debug, Default)]
pub(super) struct Exclusion {
    /// Numbers of candidates, from 0.
    windows: HashSet<usize>,
    /// Numbers of candidates, from 0, and of replicas, from 1.
    replicas: HashSet<(usize, usize)>,
    /// In plain words.
    pub excluded: Excluded,
}

impl Exclusion {
    /// Checks `[exclude]` and the windows' own wishes. A window all of whose replicas are left out is left out.
    pub fn check(typed: &TypedExclude, candidates: &[Candidate], axes: &Axes, problems: &mut Problems) -> Self {
        let mut exclusion = Self::default();
        exclusion
            .windows
            .extend(candidates.iter().enumerate().filter(|(_, window)| window.exclude).map(|(index, _)| index));
        for pattern in &typed.windows {
            exclusion.exclude_windows(pattern, candidates, problems);
        }
        for entry in &typed.replicas {
            exclusion.exclude_replica(entry, candidates, problems);
        }
        for (index, window) in candidates.iter().enumerate() {
            let replicas = 1..=window.replicas.len();
            if !replicas.is_empty() && replicas.clone().all(|number| exclusion.replicas.contains(&(index, number))) {
                exclusion.windows.insert(index);
            }
            let Some(name) = &window.name else { continue };
            if exclusion.windows.contains(&index) {
                exclusion.excluded.windows.push(name.value.clone());
                continue;
            }
            for replica in replicas.filter(|number| exclusion.replicas.contains(&(index, *number))) {
                exclusion.excluded.replicas.push(ExcludedReplica { window: name.value.clone(), replica });
            }
        }
        exclusion.excluded.stretches =
            typed.stretches.iter().filter_map(|stretch| check_stretch(stretch, axes, problems)).collect();
        exclusion
    }

    /// Whether a candidate is left out.
    pub fn window(&self, index: usize) -> bool {
        self.windows.contains(&index)
    }

    /// Whether a replica, counted from 1, is left out.
    pub fn replica(&self, index: usize, number: usize) -> bool {
        self.replicas.contains(&(index, number))
    }

    fn exclude_windows(&mut self, pattern: &Typed<String>, candidates: &[Candidate], problems: &mut Problems) {
        let matching: Vec<usize> =
            named(candidates).filter(|(_, name)| matches(&pattern.value, name)).map(|(index, _)| index).collect();
        if matching.is_empty() && all_named(candidates) {
            let what =
                if pattern.value.contains('*') { "a pattern that fits a window" } else { "the name of a window" };
            problems.push(no_such_window("exclude.windows", what, pattern, &pattern.value, candidates));
        }
        self.windows.extend(matching);
    }

    fn exclude_replica(&mut self, entry: &Typed<String>, candidates: &[Candidate], problems: &mut Problems) {
        let path = "exclude.replicas";
        let split =
            entry.value.rsplit_once('/').and_then(|(name, number)| Some((name, number.trim().parse::<usize>().ok()?)));
        let Some((name, number)) = split else {
            problems.push(
                Problem::at(
                    entry.mark,
                    format!("`{path}`: expected a window and the number of a replica, found `{}`", entry.value),
                )
                .help("write them as `name/number`, counted from 1, as in `z00/2`"),
            );
            return;
        };
        let Some((index, _)) = named(candidates).find(|(_, known)| *known == name.trim()) else {
            if all_named(candidates) {
                problems.push(no_such_window(path, "the name of a window", entry, name, candidates));
            }
            return;
        };
        let count = candidates.get(index).map_or(0, |window| window.replicas.len());
        if (1..=count).contains(&number) {
            self.replicas.insert((index, number));
        } else if count > 0 {
            problems.push(Problem::at(
                entry.mark,
                format!("`{path}`: expected a replica of window `{name}` from 1 to {count}, found {number}"),
            ));
        }
    }
}

fn named(candidates: &[Candidate]) -> impl Iterator<Item = (usize, &str)> {
    candidates.iter().enumerate().filter_map(|(index, window)| Some((index, window.name.as_ref()?.value.as_str())))
}

/// With a nameless window about, any name may be right.
fn all_named(candidates: &[Candidate]) -> bool {
    !candidates.is_empty() && candidates.iter().all(|window| window.name.is_some())
}

fn no_such_window(path: &str, what: &str, entry: &Typed<String>, name: &str, candidates: &[Candidate]) -> Problem {
    let names = || named(candidates).map(|(_, name)| name);
    Problem::at(entry.mark, format!("`{path}`: expected {what}, found `{name}`"))
        .suggest(nearest(name, names()))
        .help(format!("the windows are {}", list(names())))
}

fn check_stretch(typed: &TypedStretch, axes: &Axes, problems: &mut Problems) -> Option<Stretch> {
    let axis = match &typed.axis {
        Some(name) => axes.find("exclude.stretches.axis", name, problems),
        None => axes.only("exclude.stretches.axis", typed.mark, problems),
    };
    let (from, to) = (typed.from?, typed.to?);
    let length = to.value - from.value;
    if length <= 0.0 {
        problems.push(super::profile::not_above("exclude.stretches", from, to));
        return None;
    }
    let axis = axis?;
    let period = axes.get(axis)?.period.ok()?;
    if let Some(period) = period.filter(|&period| length >= period) {
        problems.push(Problem::at(
            to.mark,
            format!(
                "`exclude.stretches.to`: expected a stretch shorter than the period, {}, found {}",
                readable(period),
                readable(length)
            ),
        ));
        return None;
    }
    Some(Stretch { axis, from: from.value, to: to.value })
}

/// Whether `name` fits `pattern`, in which `*` stands for any text.
fn matches(pattern: &str, name: &str) -> bool {
    let Some((first, others)) = pattern.split_once('*') else {
        return pattern == name;
    };
    let Some(mut rest) = name.strip_prefix(first) else {
        return false;
    };
    let mut pieces: Vec<&str> = others.split('*').collect();
    let last = pieces.pop().unwrap_or("");
    for piece in pieces {
        match rest.find(piece) {
            Some(index) => rest = &rest[index + piece.len()..],
            None => return false,
        }
    }
    rest.ends_with(last)
}

#[cfg(test)]
mod tests {
    use super::matches;

    #[test]
    fn a_star_stands_for_any_text() {
        assert!(matches("z*", "z07"));
        assert!(matches("*7", "z07"));
        assert!(matches("a*b*c", "a--b-bc"));
        assert!(matches("z*", "z"));
    }

    #[test]
    fn text_around_a_star_must_be_there_and_must_not_overlap() {
        assert!(!matches("ab*ba", "aba"));
        assert!(!matches("a*b*c", "a-c"));
        assert!(!matches("z*", "yz"));
    }

    #[test]
    fn other_signs_stand_for_themselves() {
        assert!(matches("z[1]?", "z[1]?"));
        assert!(!matches("z?", "z1"));
    }
}
