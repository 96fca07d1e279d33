//! A small job in a folder of its own, and ways to spoil it.

use std::path::PathBuf;

use spandrel_cli::job::{Job, load};
use tempfile::TempDir;

/// A job without a fault.
pub const GOOD: &str = r#"format = 1

[system]
temperature = 310.0
energy_unit = "kJ/mol"

[[axis]]
name = "z"
unit = "nm"

[series]
time = { column = 1, unit = "ps" }
columns = { z = 2 }

[[window]]
name = "left"
files = ["left.txt"]
[[window.bias]]
kind = "harmonic"
center = 0.7
force_constant = 850.0

[[window]]
name = "right"
files = ["right1.txt", "right2.txt"]
[[window.bias]]
kind = "harmonic"
center = 0.9
force_constant = 850.0

[profile]
from = 0.5
to = 1.1
bin_width = 0.05
"#;

/// A folder with the files that [`GOOD`] names.
pub struct Folder {
    folder: TempDir,
}

impl Folder {
    /// The folder, with the series of the good job.
    pub fn new() -> Self {
        let folder = Self { folder: TempDir::new().unwrap() };
        for name in ["left.txt", "right1.txt", "right2.txt"] {
            folder.write(name, "0.0 0.71\n2.0 0.74\n");
        }
        folder
    }

    /// Adds a file.
    pub fn write(&self, name: &str, text: &str) {
        let path = self.path(name);
        std::fs::create_dir_all(path.parent().unwrap()).unwrap();
        std::fs::write(path, text).unwrap();
    }

    /// Where a file is.
    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// The job of this text, or the report with paths as from inside the folder.
    pub fn load(&self, job: &str) -> Result<Job, String> {
        self.write("job.toml", job);
        self.load_file("job.toml")
    }

    /// As [`load`](Self::load), for a file that is there.
    pub fn load_file(&self, name: &str) -> Result<Job, String> {
        let prefix = format!("{}/", self.folder.path().display());
        load(&self.path(name)).map_err(|problems| {
            let text = problems.to_string();
            assert!(text.contains(&format!("{} problem", problems.count())), "{text}");
            text.replace(&prefix, "")
        })
    }

    /// The report on a job that has one.
    pub fn report(&self, job: &str) -> String {
        match self.load(job) {
            Ok(_) => panic!("no problem was found in\n{job}"),
            Err(report) => report,
        }
    }
}

/// The good job with texts replaced, each of which must be there.
pub fn with(changes: &[(&str, &str)]) -> String {
    changes.iter().fold(GOOD.to_owned(), |job, (from, to)| {
        assert!(job.contains(from), "`{from}` is not in the job");
        job.replacen(from, to, 1)
    })
}

/// The report on the good job with texts replaced.
pub fn report(changes: &[(&str, &str)]) -> String {
    Folder::new().report(&with(changes))
}
