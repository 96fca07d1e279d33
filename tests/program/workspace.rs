//! A folder with a small job of two windows, and the program to run on it.

use std::fmt::Write as _;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};
use tempfile::TempDir;

/// The root of the repository.
pub fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Runs the program.
pub fn spandrel(arguments: &[&str]) -> Output {
    command(arguments).output().unwrap()
}

/// The program, not yet started.
pub fn command(arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_spandrel"));
    command.args(arguments);
    command
}

pub fn code(output: &Output) -> i32 {
    output.status.code().unwrap()
}

pub fn stdout(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

pub fn stderr(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

/// A job of two linked windows in a folder of its own.
pub struct Workspace {
    folder: TempDir,
}

/// Samples of a window: a deterministic, well-spread series around a center, some 0.15 wide.
pub fn series(center: f64, n: u32) -> String {
    let mut text = String::from("# time x\n");
    for i in 0..n {
        let t = f64::from(i);
        let x = center + 0.15 * ((t * 1.9).sin() + (t * 0.73 + 0.4).cos());
        let _ = writeln!(text, "{t:.1} {x:.5}");
    }
    text
}

pub const JOB: &str = r#"format = 1

[system]
temperature = 300.0
energy_unit = "kJ/mol"

[[axis]]
name = "x"
unit = "nm"

[series]
time = { column = 1, unit = "ps" }
columns = { x = 2 }

[[window]]
name = "low"
files = ["low.txt"]
[[window.bias]]
kind = "harmonic"
center = 0.2
force_constant = 60.0

[[window]]
name = "high"
files = ["high.txt"]
[[window.bias]]
kind = "harmonic"
center = 0.45
force_constant = 60.0

[profile]
bin_width = 0.05

[output]
folder = "result"
"#;

impl Workspace {
    pub fn new() -> Self {
        let workspace = Self { folder: TempDir::new().unwrap() };
        workspace.write("job.toml", JOB);
        workspace.write("low.txt", &series(0.2, 600));
        workspace.write("high.txt", &series(0.45, 600));
        workspace
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    pub fn write(&self, name: &str, text: &str) {
        fs::write(self.path(name), text).unwrap();
    }

    pub fn read(&self, name: &str) -> String {
        fs::read_to_string(self.path(name)).unwrap()
    }

    /// Changes the job; the text to change must be there.
    pub fn change_job(&self, from: &str, to: &str) {
        let job = self.read("job.toml");
        assert!(job.contains(from), "the job has no `{from}`");
        self.write("job.toml", &job.replace(from, to));
    }

    pub fn run(&self, command: &str, more: &[&str]) -> Output {
        let job = self.path("job.toml");
        let mut arguments = vec![command, job.to_str().unwrap()];
        arguments.extend_from_slice(more);
        spandrel(&arguments)
    }

    pub fn solve(&self) -> Output {
        self.run("solve", &[])
    }

    /// Names in the folder, sorted; temporary ones would show here.
    pub fn entries(&self) -> Vec<String> {
        let mut names: Vec<String> = fs::read_dir(self.folder.path())
            .unwrap()
            .map(|entry| entry.unwrap().file_name().into_string().unwrap())
            .collect();
        names.sort();
        names
    }
}

/// Rows of a CSV file of ours, as maps from column to text; comment lines are left out.
pub fn rows(text: &str) -> Vec<std::collections::HashMap<String, String>> {
    let mut reader = csv::ReaderBuilder::new().comment(Some(b'#')).from_reader(text.as_bytes());
    reader.deserialize().map(|row| row.unwrap()).collect()
}
