//! Windows from a table: one row each, or one row a replica.

use std::collections::HashMap;
use std::io::ErrorKind;
use std::path::Path;
use std::sync::Arc;

use super::candidate::Candidate;
use super::digest::sha256;
use super::missing::Missing;
use super::rows::{Rows, other_separator};
use super::term_inputs::TermInputs;
use crate::job::mark::{Mark, Source, Typed};
use crate::job::model::{AuxiliaryFile, AuxiliaryRole};
use crate::job::paths::JobFolder;
use crate::job::problem::{Problem, Problems};
use crate::job::scalar::{Scalar, ScalarValue};
use crate::job::typed::{BiasInput, TypedBias, TypedWindowTable};

/// The windows of a table, and the table's own entry among the files read.
pub(super) fn candidates(
    typed: &TypedWindowTable,
    folder: &JobFolder,
    missing: &mut Vec<Missing>,
    problems: &mut Problems,
) -> (Vec<Candidate>, Option<AuxiliaryFile>) {
    let Some(file) = &typed.file else {
        return (Vec::new(), None);
    };
    let Some((text, auxiliary)) = read_text(file, folder, missing, problems) else {
        return (Vec::new(), None);
    };
    let source =
        problems.add_source(Source { name: folder.join(&file.value).display().to_string(), text: Arc::clone(&text) });
    let named = [&typed.files_column, &typed.name_column, &typed.replica_column].into_iter().flatten();
    let asked: Vec<&str> =
        named.chain(asked_columns(&typed.bias).map(|(_, asked)| asked)).map(|asked| asked.value.as_str()).collect();
    if let Some(problem) = other_separator(source, &text, &asked) {
        problems.push(problem.label(file.mark, "the table is asked for here"));
        return (Vec::new(), Some(auxiliary));
    }
    let rows = Rows::read(source, &text, problems);
    let Some(rows) = rows.filter(|rows| !rows.below.is_empty() || rows.faulty) else {
        problems.push(
            Problem::at(
                file.mark,
                format!("`window_table.file`: expected a header and at least one row, found none in `{}`", file.value),
            )
            .help("the first line that is no comment names the columns, each line below it is a window"),
        );
        return (Vec::new(), Some(auxiliary));
    };
    let columns = Columns::find(typed, &rows, problems);
    (columns.candidates(typed, &rows, problems), Some(auxiliary))
}

fn read_text(
    file: &Typed<String>,
    folder: &JobFolder,
    missing: &mut Vec<Missing>,
    problems: &mut Problems,
) -> Option<(Arc<str>, AuxiliaryFile)> {
    let path = folder.join(&file.value);
    let expected = |found: String| Problem::at(file.mark, format!("`window_table.file`: expected a file{found}"));
    let bytes = match std::fs::read(&path) {
        Ok(bytes) => bytes,
        Err(error) if error.kind() == ErrorKind::NotFound => {
            let problem = expected(format!(", found nothing at `{}`", file.value));
            missing.push(Missing::new(problem, path, &file.value));
            return None;
        }
        Err(_) if path.is_dir() => {
            problems.push(expected(format!(", found the folder `{}`", file.value)).help("name the table in it"));
            return None;
        }
        Err(error) => {
            problems.push(
                expected(format!(" that can be read, found `{}`: {error}", file.value))
                    .help("check that the file can be read by you"),
            );
            return None;
        }
    };
    let auxiliary = AuxiliaryFile {
        role: AuxiliaryRole::WindowTable,
        path: folder.shown(&path),
        bytes: bytes.len() as u64,
        sha256: sha256(&bytes),
    };
    match String::from_utf8(bytes) {
        Ok(text) => Some((text.into(), auxiliary)),
        Err(error) => {
            let good = &error.as_bytes()[..error.utf8_error().valid_up_to()];
            let line = good.split(|&byte| byte == b'\n').count();
            problems.push(
                Problem::at(
                    file.mark,
                    format!(
                        "`window_table.file`: expected UTF-8 text, found other bytes in line {line} of `{}`",
                        file.value
                    ),
                )
                .help("save the table as comma-separated UTF-8 text"),
            );
            None
        }
    }
}

/// The columns that the job asks for; `None` where one is not asked for or is at fault.
struct Columns {
    name: Option<usize>,
    files: Option<usize>,
    replica: Option<usize>,
    /// The columns of the bias by the place where the job asks for them.
    bias: HashMap<Mark, usize>,
}

impl Columns {
    fn find(typed: &TypedWindowTable, rows: &Rows, problems: &mut Problems) -> Self {
        let mut find =
            |path: &str, name: &Option<Typed<String>>| name.as_ref().and_then(|name| rows.column(path, name, problems));
        let name = find("window_table.name_column", &typed.name_column);
        let files = find("window_table.files_column", &typed.files_column);
        let replica = find("window_table.replica_column", &typed.replica_column);
        if let (Some(asked), None) = (&typed.replica_column, &typed.name_column) {
            problems.push(
                Problem::at(
                    asked.mark,
                    "`window_table.replica_column`: expected a `name_column` beside it, found no such key",
                )
                .help("rows are replicas of one window where their names are equal, so a column must hold the names"),
            );
        }
        let mut bias = HashMap::new();
        for (key, asked) in asked_columns(&typed.bias) {
            if let Some(index) = rows.column(&format!("window_table.bias.{key}"), asked, problems) {
                bias.insert(asked.mark, index);
            }
        }
        Self { name, files, replica, bias }
    }

    fn candidates(&self, typed: &TypedWindowTable, rows: &Rows, problems: &mut Problems) -> Vec<Candidate> {
        let Some(files_column) = self.files else {
            return Vec::new();
        };
        let names = match (&typed.name_column, self.name) {
            (None, _) => default_names(rows, files_column),
            (Some(_), None) => return Vec::new(),
            (Some(asked), Some(column)) => rows
                .below
                .iter()
                .map(|row| cell("window_table.name_column", row.get(column)?, asked.mark).text(problems))
                .collect(),
        };
        let mut windows: Vec<(Candidate, &[Typed<String>])> = Vec::new();
        let mut replicas: HashMap<(String, String), Mark> = HashMap::new();
        for (row, name) in rows.below.iter().zip(names) {
            let Some(name) = name else { continue };
            let segments = typed.files_column.as_ref().and_then(|asked| {
                let files = cell("window_table.files_column", row.get(files_column)?, asked.mark).text(problems)?;
                Some(segments(&files, typed.folder.as_ref()))
            });
            let segments = segments.unwrap_or_default();
            let known = windows
                .iter()
                .position(|(window, _)| window.name.as_ref().is_some_and(|known| known.value == name.value));
            if let (Some(asked), Some(column)) = (&typed.replica_column, self.replica) {
                let Some(replica) = row.get(column) else { continue };
                let Some(replica) = cell("window_table.replica_column", replica, asked.mark).text(problems) else {
                    continue;
                };
                if let Some(&first) = replicas.get(&(name.value.clone(), replica.value.clone())) {
                    problems.push(
                        Problem::at(
                            replica.mark,
                            format!("`window_table.replica_column`: expected a replica of window `{}` once, found `{}` again", name.value, replica.value),
                        )
                        .label(first, "first here")
                        .help("put the segments of one replica into one row, with `;` between them"),
                    );
                    continue;
                }
                replicas.insert((name.value.clone(), replica.value.clone()), replica.mark);
                if let Some((window, first_row)) = known.and_then(|index| windows.get_mut(index)) {
                    self.compare_bias(typed, first_row, row, &name.value, problems);
                    window.replicas.push(segments);
                    continue;
                }
            }
            let terms = typed.bias.iter().map(|bias| self.terms(bias, row)).collect();
            windows.push((
                Candidate {
                    name: Some(name),
                    replicas: vec![segments],
                    exclude: false,
                    temperature: None,
                    discard: None,
                    stride: None,
                    terms,
                },
                row,
            ));
        }
        windows.into_iter().map(|(window, _)| window).collect()
    }

    /// One term with the values of a row.
    fn terms(&self, bias: &TypedBias, row: &[Typed<String>]) -> TermInputs {
        let inputs = bias.inputs.iter().map(|(key, key_mark, input)| {
            let scalar = match input {
                BiasInput::Given(scalar) => Some(scalar.clone()),
                BiasInput::Column(asked) => self
                    .bias
                    .get(&asked.mark)
                    .and_then(|&column| row.get(column))
                    .map(|value| cell(&format!("bias.{key}"), value, asked.mark)),
                BiasInput::Faulty => None,
            };
            (*key, *key_mark, scalar)
        });
        TermInputs { mark: bias.mark, inputs: inputs.collect(), misspelt: bias.misspelt.clone() }
    }

    /// Replicas of one window have one bias.
    fn compare_bias(
        &self,
        typed: &TypedWindowTable,
        first: &[Typed<String>],
        row: &[Typed<String>],
        window: &str,
        problems: &mut Problems,
    ) {
        for (key, asked) in asked_columns(&typed.bias) {
            let Some(&column) = self.bias.get(&asked.mark) else {
                continue;
            };
            let (Some(before), Some(value)) = (first.get(column), row.get(column)) else {
                continue;
            };
            if before.value != value.value {
                problems.push(
                    Problem::at(
                        value.mark,
                        format!(
                            "`bias.{key}`: expected `{}`, as in the first replica of window `{window}`, found `{}`",
                            before.value, value.value
                        ),
                    )
                    .label(before.mark, "the first replica")
                    .help("replicas of a window have the same bias; give windows of another bias another name"),
                );
            }
        }
    }
}

/// The keys of the terms that ask for a column, each with the name that it asks for.
fn asked_columns(bias: &[TypedBias]) -> impl Iterator<Item = (&'static str, &Typed<String>)> {
    bias.iter().flat_map(|bias| &bias.inputs).filter_map(|(key, _, input)| match input {
        BiasInput::Column(asked) => Some((*key, asked)),
        BiasInput::Given(_) | BiasInput::Faulty => None,
    })
}

fn cell(path: &str, cell: &Typed<String>, asked_at: Mark) -> Scalar {
    Scalar {
        path: path.to_owned(),
        mark: cell.mark,
        value: ScalarValue::Cell(cell.value.clone()),
        asked_at: Some(asked_at),
    }
}

/// The paths of a cell, separated by `;`, behind the folder.
fn segments(files: &Typed<String>, folder: Option<&Typed<String>>) -> Vec<Typed<String>> {
    let folder = folder.map_or("", |folder| folder.value.as_str());
    files
        .value
        .split(';')
        .map(str::trim)
        .filter(|path| !path.is_empty())
        .map(|path| Typed { value: Path::new(folder).join(path).to_string_lossy().into_owned(), mark: files.mark })
        .collect()
}

/// The names of the files, where each row has one plain file and the names differ; `w0`, `w1`, … otherwise.
fn default_names(rows: &Rows, files_column: usize) -> Vec<Option<Typed<String>>> {
    let cells: Vec<&Typed<String>> = rows.below.iter().filter_map(|row| row.get(files_column)).collect();
    let stems: Option<Vec<&str>> = cells.iter().map(|cell| plain_stem(&cell.value)).collect();
    let stems = stems.filter(|stems| {
        let mut sorted = stems.clone();
        sorted.sort_unstable();
        sorted.windows(2).all(|pair| pair[0] != pair[1])
    });
    let name = |(index, cell): (usize, &&Typed<String>)| {
        let stem = stems.as_ref().and_then(|stems| stems.get(index));
        let value = stem.map_or_else(|| format!("w{index}"), |stem| (*stem).to_owned());
        Some(Typed { value, mark: cell.mark })
    };
    cells.iter().enumerate().map(name).collect()
}

/// The name of a single plain file without its endings; `None` for patterns and lists.
fn plain_stem(cell: &str) -> Option<&str> {
    if cell.contains(['*', '?', '[', ';']) {
        return None;
    }
    let name = Path::new(cell).file_name()?.to_str()?;
    let name = name.strip_suffix(".gz").unwrap_or(name);
    Path::new(name).file_stem()?.to_str()
}
