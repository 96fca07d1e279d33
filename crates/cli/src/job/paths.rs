//! Paths of a job: found from its folder, shown relative to it.

use std::path::{Component, Path, PathBuf};

/// The folder of the job file, to which the job's paths are relative.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct JobFolder {
    path: PathBuf,
}

impl JobFolder {
    /// The folder as it was given; empty for the current one.
    pub fn new(path: PathBuf) -> Self {
        Self { path }
    }

    /// The folder.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Where a path of the job is.
    pub fn join(&self, path: &str) -> PathBuf {
        self.path.join(path)
    }

    /// A path relative to the folder, with `/` between its parts, so that a result names no place on a machine.
    pub fn shown(&self, path: &Path) -> String {
        let parts = match path.strip_prefix(&self.path) {
            Ok(inside) if inside.is_relative() => inside.components().collect(),
            _ => return relative(&self.path, path),
        };
        joined(parts)
    }
}

/// The way from `folder` to `path`; the file name alone where there is none.
fn relative(folder: &Path, path: &Path) -> String {
    let folder = if folder.as_os_str().is_empty() { Path::new(".") } else { folder };
    let (Ok(folder), Ok(absolute)) = (std::path::absolute(folder), std::path::absolute(path)) else {
        return file_name(path);
    };
    let folder: Vec<Component<'_>> = folder.components().collect();
    let target: Vec<Component<'_>> = absolute.components().collect();
    let shared = folder.iter().zip(&target).take_while(|(a, b)| a == b).count();
    if shared == 0 {
        return file_name(path);
    }
    let ups = folder.iter().skip(shared).map(|_| Component::ParentDir);
    joined(ups.chain(target.iter().skip(shared).copied()).collect())
}

fn file_name(path: &Path) -> String {
    path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default()
}

fn joined(parts: Vec<Component<'_>>) -> String {
    let parts: Vec<_> = parts
        .into_iter()
        .filter(|part| *part != Component::CurDir)
        .map(|part| part.as_os_str().to_string_lossy().into_owned())
        .collect();
    if parts.is_empty() { ".".to_owned() } else { parts.join("/") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_path_inside_the_folder_is_shown_from_there() {
        let folder = JobFolder::new(PathBuf::from("jobs/pore"));
        assert_eq!(folder.shown(&folder.join("./run/z3.txt")), "run/z3.txt");
        assert_eq!(folder.shown(&folder.join("../run/z3.txt")), "../run/z3.txt");
    }

    #[test]
    fn an_absolute_path_is_shown_as_the_way_there() {
        let root = std::path::absolute("somewhere").unwrap_or_default();
        let folder = JobFolder::new(root.join("jobs"));
        assert_eq!(folder.shown(&root.join("runs").join("z3.txt")), "../runs/z3.txt");
    }

    #[test]
    fn the_folder_itself_is_a_dot() {
        assert_eq!(JobFolder::new(PathBuf::from("jobs")).shown(Path::new("jobs")), ".");
    }
}
