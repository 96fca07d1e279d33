//! Files that are not there, and the files that were probably meant.
//!
//! They are held back until all files in use are known: a file that another window uses is not what was meant.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};

use super::natural::natural_order;
use crate::job::nearest::nearest;
use crate::job::problem::{Problem, Problems, SHOWN};

/// A path at which there is nothing.
#[derive(Debug)]
pub(super) struct Missing {
    problem: Problem,
    path: PathBuf,
    typed: String,
}

impl Missing {
    /// A problem with this path, which the job gives as `typed`.
    pub fn new(problem: Problem, path: PathBuf, typed: &str) -> Self {
        Self { problem, path, typed: typed.to_owned() }
    }
}

/// A path in a form in which two spellings of one file are equal.
pub(super) fn identity(path: &Path) -> PathBuf {
    path.canonicalize().unwrap_or_else(|_| path.to_owned())
}

/// Reports all missing files, with advice.
pub(super) fn report(mut missing: Vec<Missing>, in_use: &HashSet<PathBuf>, problems: &mut Problems) {
    missing.sort_by_key(|missing| missing.problem.place());
    let mut folders = HashMap::new();
    for (number, Missing { mut problem, path, typed }) in missing.into_iter().enumerate() {
        // Looking for near names takes long in large folders, and no more problems are shown.
        if number < SHOWN {
            let near = near_file(&path, &typed, in_use, &mut folders);
            problem = match missing_folder(&path, &typed) {
                Some(folder) => problem.help(format!("there is no folder `{folder}`")),
                None => problem.suggest(near.as_deref()),
            };
        }
        problems.push(problem.help("paths are relative to the folder of the job"));
    }
}

/// The first folder on the way to a path that is not there, as the job would write it.
fn missing_folder(path: &Path, typed: &str) -> Option<String> {
    let ways = path.ancestors().skip(1).zip(Path::new(typed).ancestors().skip(1));
    let absent = ways.filter(|(folder, typed)| !typed.as_os_str().is_empty() && !folder.exists());
    absent.last().map(|(_, typed)| typed.display().to_string())
}

/// A file of a similar name beside the one that is missing, and not in use, as the job would write it.
fn near_file(
    path: &Path,
    typed: &str,
    in_use: &HashSet<PathBuf>,
    folders: &mut HashMap<PathBuf, Vec<String>>,
) -> Option<String> {
    let wanted = path.file_name()?.to_str()?;
    let folder = match path.parent()? {
        folder if folder.as_os_str().is_empty() => Path::new("."),
        folder => folder,
    };
    let names = folders.entry(folder.to_owned()).or_insert_with(|| free_files(folder, in_use));
    let near = nearest(wanted, names.iter().map(String::as_str).filter(|name| *name != wanted))?;
    Some(format!("{}{near}", typed.strip_suffix(wanted)?))
}

/// The files of a folder that are not in use, in natural order.
fn free_files(folder: &Path, in_use: &HashSet<PathBuf>) -> Vec<String> {
    let entries = folder.read_dir().into_iter().flatten().filter_map(Result::ok);
    let free = entries.filter(|entry| {
        let path = entry.path();
        path.is_file() && !in_use.contains(&identity(&path))
    });
    let mut names: Vec<String> = free.filter_map(|entry| entry.file_name().into_string().ok()).collect();
    names.sort_by(|a, b| natural_order(a, b));
    names
}
