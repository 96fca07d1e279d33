//! The files of the windows: patterns are expanded, missing files are named, no file counts twice.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};

use glob::{MatchOptions, Pattern};

use super::missing::{Missing, identity};
use super::natural::natural_order;
use crate::job::mark::{Mark, Typed};
use crate::job::paths::JobFolder;
use crate::job::problem::{Problem, Problems};

/// As in a shell: `*` stays within a folder and passes hidden files by.
const MATCHING: MatchOptions =
    MatchOptions { case_sensitive: true, require_literal_separator: true, require_literal_leading_dot: true };

/// The files that are in use.
#[derive(Debug)]
pub(super) struct Files<'a> {
    folder: &'a JobFolder,
    used: HashMap<PathBuf, Mark>,
    /// Files of what is left out.
    set_aside: HashSet<PathBuf>,
    missing: Vec<Missing>,
    repeats: Vec<Repeat>,
}

/// Files that two entries of the job have in common.
#[derive(Debug)]
struct Repeat {
    first: Mark,
    again: Mark,
    names: Vec<String>,
}

impl<'a> Files<'a> {
    /// No file yet.
    pub fn new(folder: &'a JobFolder) -> Self {
        Self { folder, used: HashMap::new(), set_aside: HashSet::new(), missing: Vec::new(), repeats: Vec::new() }
    }

    /// The files of one replica, in the order of its list; those of a pattern in natural order.
    pub fn segments(&mut self, patterns: &[Typed<String>], problems: &mut Problems) -> Vec<PathBuf> {
        let mut segments = Vec::new();
        for pattern in patterns {
            let expanded = self.expand(pattern, problems);
            for path in &expanded {
                self.note_use(path, pattern.mark);
            }
            segments.extend(expanded);
        }
        segments
    }

    /// Takes note of the files of a replica that is left out; whether they are there does not matter.
    pub fn set_aside(&mut self, patterns: &[Typed<String>]) {
        for pattern in patterns {
            let path = self.folder.join(&pattern.value);
            if path.exists() {
                self.set_aside.insert(identity(&path));
            } else {
                let found = self.matches(&pattern.value).unwrap_or_default();
                self.set_aside.extend(found.iter().map(|path| identity(path)));
            }
        }
    }

    /// Complains about the files that were used twice, and gives those that are missing and all that belong to a window.
    pub fn finish(self, problems: &mut Problems) -> (Vec<Missing>, HashSet<PathBuf>) {
        for Repeat { first, again, names } in self.repeats {
            let Some(name) = names.first() else { continue };
            let more = match names.len() - 1 {
                0 => String::new(),
                more => format!(" and {more} more"),
            };
            let problem = Problem::at(again, format!("`files`: expected every file once, found `{name}`{more} again"))
                .help("a file belongs to one replica of one window, and to one place in it");
            problems.push(if first == again { problem } else { problem.label(first, "first here") });
        }
        let mut in_use = self.set_aside;
        in_use.extend(self.used.into_keys());
        (self.missing, in_use)
    }

    fn note_use(&mut self, path: &Path, mark: Mark) {
        // Two spellings or a link may mean the same file.
        let identity = identity(path);
        let Some(&first) = self.used.get(&identity) else {
            self.used.insert(identity, mark);
            return;
        };
        let name = self.folder.shown(path);
        match self.repeats.iter_mut().find(|repeat| repeat.first == first && repeat.again == mark) {
            Some(repeat) => repeat.names.push(name),
            None => self.repeats.push(Repeat { first, again: mark, names: vec![name] }),
        }
    }

    fn expand(&mut self, pattern: &Typed<String>, problems: &mut Problems) -> Vec<PathBuf> {
        let path = self.folder.join(&pattern.value);
        if path.is_dir() {
            problems.push(
                Problem::at(pattern.mark, format!("`files`: expected a file, found the folder `{}`", pattern.value))
                    .help(format!("name the files in it, as in `{}/*.txt`", pattern.value.trim_end_matches('/'))),
            );
            return Vec::new();
        }
        if path.exists() {
            return vec![path];
        }
        if !pattern.value.contains(['*', '?', '[']) {
            let problem =
                Problem::at(pattern.mark, format!("`files`: expected a file, found nothing at `{}`", pattern.value));
            self.missing.push(Missing::new(problem, path, &pattern.value));
            return Vec::new();
        }
        match self.matches(&pattern.value) {
            Ok(found) if found.is_empty() => {
                problems.push(
                    Problem::at(
                        pattern.mark,
                        format!("`files`: expected files that match `{}`, found none", pattern.value),
                    )
                    .help("paths are relative to the folder of the job; `*` does not reach into folders"),
                );
                Vec::new()
            }
            Ok(found) => found,
            Err(reason) => {
                problems.push(Problem::at(
                    pattern.mark,
                    format!("`files`: expected a pattern that can be expanded, found `{}`: {reason}", pattern.value),
                ));
                Vec::new()
            }
        }
    }

    fn matches(&self, pattern: &str) -> Result<Vec<PathBuf>, String> {
        // The folder of the job is no pattern, whatever characters it holds.
        let full = if Path::new(pattern).is_absolute() || self.folder.path().as_os_str().is_empty() {
            pattern.to_owned()
        } else {
            let folder = self.folder.path().to_str().ok_or("the folder of the job has a name that is not UTF-8")?;
            Path::new(&Pattern::escape(folder)).join(pattern).to_string_lossy().into_owned()
        };
        let paths = glob::glob_with(&full, MATCHING).map_err(|error| error.to_string())?;
        let mut found = Vec::new();
        for path in paths {
            let path = path.map_err(|error| error.to_string())?;
            if !path.is_dir() {
                found.push(path);
            }
        }
        found.sort_by(|a, b| natural_order(&a.to_string_lossy(), &b.to_string_lossy()));
        Ok(found)
    }
}
