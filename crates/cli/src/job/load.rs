//! Reading a job file from the disk.

use std::io::ErrorKind;
use std::ops::Range;
use std::path::Path;
use std::sync::Arc;

use toml::de::DeTable;

use super::check;
use super::keys::Section;
use super::mark::{Mark, Source, SourceId};
use super::model::Job;
use super::problem::{JobProblems, Problem, Problems};
use super::table;
use super::typed::TypedJob;

/// Most faults of the syntax that are shown.
const SHOWN_SYNTAX: usize = 5;

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

/// The first line of a text that has lines, but no line with a key or a section as TOML would have.
fn foreign_line(text: &str) -> Option<Range<usize>> {
    let mut first = None;
    let mut next = 0;
    for line in text.split_inclusive('\n') {
        let content = line.trim();
        let start = next + (line.len() - line.trim_start().len());
        next += line.len();
        if content.is_empty() || content.starts_with('#') {
            continue;
        }
        if content.starts_with('[') || content.contains('=') {
            return None;
        }
        first.get_or_insert(start..start + content.len());
    }
    first
}

fn no_job(mark: Mark, found: &str) -> Problem {
    Problem::at(mark, format!("expected a job in TOML, found {found}"))
        .help("a job begins with `format = 1`; the files of the windows are named in it")
}

/// What a broken text was meant to say is not guessed at: only its syntax is complained about, and only as far as the complaints
/// are not likely to follow from one another.
fn syntax_problems(
    source: SourceId,
    text: &str,
    mut errors: Vec<toml::de::Error>,
    is_job: bool,
    problems: &mut Problems,
) {
    let mark = |error: &toml::de::Error| Mark::new(source, error.span().unwrap_or(text.len()..text.len()));
    errors.sort_by_key(mark);
    if !is_job && let Some(first) = errors.first() {
        problems.push(no_job(mark(first), &format!("a text with no key of a job: {}", first.message())));
        return;
    }
    let shown = errors.len().min(SHOWN_SYNTAX);
    for (error, number) in errors.iter().take(shown).zip(1..) {
        let problem = Problem::at(mark(error), format!("expected TOML, found: {}", error.message()));
        problems.push(if number == shown && errors.len() > shown {
            problem.help("mend these first; there are more like them below")
        } else {
            problem
        });
    }
}

fn load_text(path: &Path, text: &Arc<str>, problems: &mut Problems) -> Option<Job> {
    let source = problems.add_source(Source { name: path.display().to_string(), text: Arc::clone(text) });
    if let Some(line) = foreign_line(text) {
        problems.push(no_job(Mark::new(source, line), "a text without any key"));
        return None;
    }
    let (document, errors) = DeTable::parse_recoverable(text);
    if !errors.is_empty() {
        let is_job = document.get_ref().keys().any(|key| Section::Top.key(key.get_ref()).is_some());
        syntax_problems(source, text, errors, is_job, problems);
        return None;
    }
    let typed = TypedJob::read(table::top(source, document.get_ref()), problems)?;
    check::check(typed, path, text, problems)
}
