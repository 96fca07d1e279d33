//! The folder of the results.

use std::path::{Path, PathBuf};

use crate::job::mark::Mark;
use crate::job::paths::JobFolder;
use crate::job::problem::{Problem, Problems};
use crate::job::typed::TypedOutput;

/// The folder: as given, or named after the job.
pub(super) fn check(
    typed: &TypedOutput,
    job: &Path,
    folder: &JobFolder,
    top: Mark,
    problems: &mut Problems,
) -> PathBuf {
    let (path, mark) = if let Some(given) = &typed.folder {
        (folder.join(&given.value), given.mark)
    } else {
        let stem = job.file_stem().unwrap_or_default().to_string_lossy();
        (folder.join(&format!("{stem}-result")), top)
    };
    let shown = folder.shown(&path);
    if path.exists() && !path.is_dir() {
        problems.push(
            Problem::at(mark, format!("`output.folder`: expected a folder, found the file `{shown}`"))
                .help("name another folder, or move the file away"),
        );
    }
    let job_folder = if folder.path().as_os_str().is_empty() { Path::new(".") } else { folder.path() };
    if let (Ok(output), Ok(job_folder)) = (path.canonicalize(), job_folder.canonicalize())
        && job_folder.starts_with(&output)
    {
        problems.push(
            Problem::at(
                mark,
                format!("`output.folder`: expected a folder of its own, found `{shown}`, which holds the job"),
            )
            .help("results replace the whole folder; name one for them alone, such as `result`"),
        );
    }
    path
}
