//! Reading a job file from the disk.

use std::io::ErrorKind;
use std::path::Path;
use std::sync::Arc;

use toml::de::DeTable;

use super::check;
use super::mark::{Mark, Source};
use super::model::Job;
use super::problem::{JobProblems, Problem, Problems};
use super::table;
use super::typed::TypedJob;

/// Reads and checks the job file at `path`. Paths in it are relative to its folder; the files of the windows are looked for but not
/// read, tables of windows and biases are read.
///
/// # Errors
/// Everything that is wrong with the job, at once.
pub fn load(path: &Path) -> Result<Job, JobProblems> {
    let name = path.display().to_string();
    let mut problems = Problems::default();
    let job = read_text(path, &mut problems).and_then(|text| load_text(path, &text, &mut problems));
    match job {
        Some(job) if problems.is_empty() => Ok(job),
        _ => Err(problems.into_report(name)),
    }
}

fn read_text(path: &Path, problems: &mut Problems) -> Option<Arc<str>> {
    let name = path.display();
    let bytes = match std::fs::read(path) {
        Ok(bytes) => bytes,
        Err(error) => {
            let found = match error.kind() {
                ErrorKind::NotFound => "nothing by this name".to_owned(),
                _ if path.is_dir() => "a folder".to_owned(),
                _ => error.to_string(),
            };
            problems.push(
                Problem::new(format!("`{name}`: expected a job file that can be read, found {found}"))
                    .help("check the path; a job is a text file in TOML, often called `job.toml`"),
            );
            return None;
        }
    };
    match String::from_utf8(bytes) {
        Ok(text) => Some(text.into()),
        Err(error) => {
            let good = &error.as_bytes()[..error.utf8_error().valid_up_to()];
            let line_start = good.iter().rposition(|&byte| byte == b'\n').map_or(0, |index| index + 1);
            let line = good.split(|&byte| byte == b'\n').count();
            let column = String::from_utf8_lossy(&good[line_start..]).chars().count() + 1;
            problems.push(
                Problem::new(format!("`{name}:{line}:{column}`: expected UTF-8 text, found other bytes"))
                    .help("save the job as UTF-8 text"),
            );
            None
        }
    }
}

fn load_text(path: &Path, text: &Arc<str>, problems: &mut Problems) -> Option<Job> {
    let source = problems.add_source(Source { name: path.display().to_string(), text: Arc::clone(text) });
    let (document, errors) = DeTable::parse_recoverable(text);
    if !errors.is_empty() {
        // What a broken text was meant to say is not guessed at.
        for error in errors {
            let mark = Mark::new(source, error.span().unwrap_or(text.len()..text.len()));
            problems.push(Problem::at(mark, format!("expected TOML, found: {}", error.message())));
        }
        return None;
    }
    let typed = TypedJob::read(table::top(source, document.get_ref()), problems)?;
    check::check(typed, path, text, problems)
}
