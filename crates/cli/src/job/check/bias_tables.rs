//! Tables of biases: each is read once, and each fault of one is told once, however many windows use it.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};
use std::sync::Arc;

use spandrel_bias::{BiasError, TableError};
use spandrel_ingest::{Column, IngestError, Place, Separator, Table, TableLayout, read_table};

use super::missing::Missing;
use crate::job::mark::{Mark, Source, SourceId, Typed};
use crate::job::model::{AuxiliaryFile, AuxiliaryRole};
use crate::job::number::readable;
use crate::job::paths::JobFolder;
use crate::job::problem::{Problem, Problems};

/// The largest table that is shown in a problem, in bytes; of larger ones, as of compressed ones, only the line is named.
const LARGEST_SHOWN: u64 = 1 << 20;

/// A path as it was typed, what stands between the columns, and which of them are wanted.
type Request = (String, Separator, [Column; 2]);

/// The tables read so far.
pub(super) struct BiasTables<'a> {
    /// Folder of the job.
    pub folder: &'a JobFolder,
    /// What stands between columns unless a term says otherwise.
    pub separator: Separator,
    comments: Vec<String>,
    read: HashMap<Request, Result<Arc<Table>, IngestError>>,
    files: Vec<AuxiliaryFile>,
    missing: Vec<Missing>,
    /// The tables as texts, where faults of them are shown.
    texts: HashMap<PathBuf, Option<Text>>,
    /// What was said about which table.
    told: HashSet<(PathBuf, String)>,
}

#[derive(Clone)]
struct Text {
    source: SourceId,
    text: Arc<str>,
}

impl<'a> BiasTables<'a> {
    /// No table yet.
    pub fn new(folder: &'a JobFolder, separator: Separator, comments: Vec<String>) -> Self {
        Self {
            folder,
            separator,
            comments,
            read: HashMap::new(),
            files: Vec::new(),
            missing: Vec::new(),
            texts: HashMap::new(),
            told: HashSet::new(),
        }
    }

    /// The files that are not there, and those that were read, in the order in which the job first uses them.
    pub fn finish(self) -> (Vec<Missing>, Vec<AuxiliaryFile>) {
        (self.missing, self.files)
    }

    /// The table of a term; `None` where it cannot be read.
    pub fn get(
        &mut self,
        file: &Typed<String>,
        separator: Separator,
        columns: [Column; 2],
        problems: &mut Problems,
    ) -> Option<Arc<Table>> {
        let key = (file.value.clone(), separator, columns);
        if !self.read.contains_key(&key) {
            let layout = TableLayout { separator, comments: self.comments.clone(), columns: key.2.clone() };
            let table = read_table(&self.folder.join(&file.value), &layout).map(Arc::new);
            if let Ok(table) = &table {
                self.take_note(table);
            }
            self.read.insert(key.clone(), table);
        }
        match self.read.get(&key)?.clone() {
            Ok(table) => Some(table),
            Err(error) => {
                self.cannot_be_read(file, error, problems);
                None
            }
        }
    }

    fn take_note(&mut self, table: &Table) {
        let entry = AuxiliaryFile {
            role: AuxiliaryRole::BiasTable,
            path: self.folder.shown(&table.path),
            bytes: table.bytes,
            sha256: table.sha256.clone(),
        };
        if !self.files.contains(&entry) {
            self.files.push(entry);
        }
    }

    fn cannot_be_read(&mut self, file: &Typed<String>, error: IngestError, problems: &mut Problems) {
        let typed = &file.value;
        match error {
            IngestError::Missing { path } => {
                let problem =
                    Problem::at(file.mark, format!("`bias.file`: expected a file, found nothing at `{typed}`"));
                self.missing.push(Missing::new(problem, path, typed));
            }
            IngestError::Directory { .. } => problems.push(
                Problem::at(file.mark, format!("`bias.file`: expected a file, found the folder `{typed}`"))
                    .help("name the table in it"),
            ),
            IngestError::Unreadable { reason, .. } => problems.push(
                Problem::at(
                    file.mark,
                    format!("`bias.file`: expected a file that can be read, found `{typed}`: {reason}"),
                )
                .help("check that the file can be read by you"),
            ),
            error => {
                let message = error.to_string();
                let advice = error.advice();
                match error.place() {
                    // The excerpt shows the place.
                    Some(place) => {
                        let what = message.strip_prefix(&format!("{place}: ")).unwrap_or(&message);
                        let found = match &error {
                            IngestError::BadNumber { found, .. } => found,
                            _ => "",
                        };
                        self.tell(file, (place, found), what, advice, problems);
                    }
                    None => problems.push(Problem::at(file.mark, format!("`bias.file`: {message}")).help(advice)),
                }
            }
        }
    }

    /// A table that was read but cannot be a bias.
    pub fn refused(&mut self, file: &Typed<String>, table: &Table, error: &BiasError, problems: &mut Problems) {
        let problem = |what: &str| Problem::at(file.mark, format!("`bias.file`: {what}"));
        match error {
            BiasError::Table(TableError::NotIncreasing { row, .. }) => {
                // In the unit of the file, unlike what the error holds.
                let position =
                    |row: usize| table.first.get(row).map(|&position| readable(position)).unwrap_or_default();
                let what = format!(
                    "expected positions that increase, found {} after {}",
                    position(*row),
                    position(row.saturating_sub(1))
                );
                let line = table.lines.get(*row).copied().unwrap_or_default();
                let place = Place { path: table.path.clone(), line, column: None, character: None };
                self.tell(file, (&place, ""), &what, "sort the table and keep each position once", problems);
            }
            BiasError::Table(TableError::BeyondPeriod { span, period, .. }) => problems.push(
                problem(&format!(
                    "expected a table of at most one period, {}, found one of {}",
                    readable(*period),
                    readable(*span)
                ))
                .help("keep one period of it"),
            ),
            other => problems.push(problem(&format!("{}: {other}", table.path.display()))),
        }
    }

    /// A fault at a place in a table, where this text may be found.
    fn tell(
        &mut self,
        file: &Typed<String>,
        (place, found): (&Place, &str),
        what: &str,
        advice: &str,
        problems: &mut Problems,
    ) {
        if !self.told.insert((place.path.clone(), format!("{place}: {what}"))) {
            return;
        }
        let text = self.texts.entry(place.path.clone()).or_insert_with(|| show(&place.path, problems)).clone();
        let problem = match text.and_then(|text| text.mark(place, found)) {
            Some(mark) => {
                Problem::at(mark, format!("`bias.file`: {what}")).label(file.mark, "the table is asked for here")
            }
            None => Problem::at(file.mark, format!("`bias.file`: {place}: {what}")),
        };
        problems.push(problem.help(advice));
    }
}

/// The text of a table that problems can point into.
fn show(path: &Path, problems: &mut Problems) -> Option<Text> {
    let is_small = std::fs::metadata(path).is_ok_and(|metadata| metadata.len() <= LARGEST_SHOWN);
    let text: Arc<str> = if is_small { std::fs::read_to_string(path).ok()?.into() } else { return None };
    let source = problems.add_source(Source { name: path.display().to_string(), text: Arc::clone(&text) });
    Some(Text { source, text })
}

impl Text {
    /// What was found at a place, its first character where that is not known, or the whole line.
    fn mark(&self, place: &Place, found: &str) -> Option<Mark> {
        let number = usize::try_from(place.line).ok()?.checked_sub(1)?;
        let line = self.text.split_inclusive('\n').nth(number)?;
        let mut start: usize = self.text.split_inclusive('\n').take(number).map(str::len).sum();
        let mut line = line.trim_end_matches(['\r', '\n']);
        if let Some(rest) = line.strip_prefix('\u{feff}').filter(|_| number == 0) {
            start += line.len() - rest.len();
            line = rest;
        }
        let range = match place.character.and_then(|character| line.char_indices().nth(character - 1)) {
            Some((begin, _)) if line[begin..].starts_with(found) && !found.is_empty() => begin..begin + found.len(),
            Some((begin, first)) => begin..begin + first.len_utf8(),
            None => 0..line.len(),
        };
        Some(Mark::new(self.source, start + range.start..start + range.end))
    }
}
