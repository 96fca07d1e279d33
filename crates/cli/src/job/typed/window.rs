//! `[[window]]` and `[window_table]`.

use super::bias::TypedBias;
use super::series::{TypedDiscard, take_stride};
use crate::job::keys::Section;
use crate::job::mark::Typed;
use crate::job::problem::{Problem, Problems};
use crate::job::scalar::Allowed;
use crate::job::table::{Field, Table};

/// `[[window]]`
#[derive(Debug)]
pub(in crate::job) struct TypedWindow {
    /// Not blank.
    pub name: Option<Typed<String>>,
    /// Where the series are.
    pub files: TypedFiles,
    /// Whether the window is left out.
    pub exclude: bool,
    /// Kelvin, above 0.
    pub temperature: Option<Typed<f64>>,
    /// What is left out at the start.
    pub discard: Option<TypedDiscard>,
    /// At least 1.
    pub stride: Option<Typed<u64>>,
    /// The terms.
    pub bias: Vec<TypedBias>,
}

/// Paths or patterns of a window, one list of segments a replica.
#[derive(Debug, Clone, PartialEq)]
pub(in crate::job) struct TypedFiles {
    /// Each replica's list, with its place; empty where it is at fault.
    pub replicas: Vec<Typed<Vec<Typed<String>>>>,
}

/// `[window_table]`
#[derive(Debug)]
pub(in crate::job) struct TypedWindowTable {
    /// The table's path.
    pub file: Option<Typed<String>>,
    /// Column of the names.
    pub name_column: Option<Typed<String>>,
    /// Column of the paths.
    pub files_column: Option<Typed<String>>,
    /// Column that tells replicas apart.
    pub replica_column: Option<Typed<String>>,
    /// Folder in front of the paths.
    pub folder: Option<Typed<String>>,
    /// The terms of every row.
    pub bias: Vec<TypedBias>,
}

impl TypedWindow {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let name = table.require("name", problems);
        let window = Self {
            name: name.and_then(|field| field.scalar(problems)?.text(problems)),
            files: TypedFiles::take(&mut table, problems),
            exclude: table
                .take("exclude")
                .and_then(|field| field.scalar(problems)?.flag(problems))
                .is_some_and(|flag| flag.value),
            temperature: table
                .take("temperature")
                .and_then(|field| field.scalar(problems)?.number(Allowed::Positive, problems)),
            discard: TypedDiscard::take(&mut table, problems),
            stride: take_stride(&mut table, problems),
            bias: take_bias(&mut table, false, problems),
        };
        table.finish(problems);
        window
    }
}

impl TypedFiles {
    fn take(table: &mut Table<'_>, problems: &mut Problems) -> Self {
        let which = table.exactly_one(&["files", "replicas"], problems);
        let files = table.take("files");
        let replicas = table.take("replicas");
        let replicas = match which {
            Some("files") => files.and_then(|field| read_segments(&field, problems)).into_iter().collect(),
            Some(_) => replicas.map(|field| read_replicas(&field, problems)).unwrap_or_default(),
            None => Vec::new(),
        };
        Self { replicas }
    }
}

fn read_replicas(field: &Field<'_>, problems: &mut Problems) -> Vec<Typed<Vec<Typed<String>>>> {
    let Some(lists) = field.list("a list of lists of paths or patterns", problems) else {
        return Vec::new();
    };
    if lists.is_empty() {
        problems.push(field.problem("at least one list of paths or patterns"));
    }
    if let Some(text) = lists.iter().find(|list| !list.is_list()) {
        problems.push(text.problem("a list of paths or patterns for each replica").help(
            "put the segments of each replica into brackets, as in `replicas = [[\"z00a.txt\"], [\"z00b.txt\"]]`",
        ));
        return Vec::new();
    }
    lists.iter().filter_map(|list| read_segments(list, problems)).collect()
}

fn read_segments(field: &Field<'_>, problems: &mut Problems) -> Option<Typed<Vec<Typed<String>>>> {
    let what = "a list of paths or patterns";
    let value = field.texts(what, problems)?;
    if field.list(what, problems)?.is_empty() {
        problems.push(Problem::at(
            field.mark,
            format!("`{}`: expected at least one path or pattern, found an empty list", field.path),
        ));
    }
    Some(Typed { value, mark: field.mark })
}

fn take_bias(table: &mut Table<'_>, columns_allowed: bool, problems: &mut Problems) -> Vec<TypedBias> {
    let Some(field) = table.take("bias") else {
        return Vec::new();
    };
    let terms = field.tables(Section::Bias, problems);
    terms.into_iter().map(|term| TypedBias::read(term, columns_allowed, problems)).collect()
}

impl TypedWindowTable {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let file = table.require("file", problems);
        let files_column = table.require("files_column", problems);
        let text = |field: Option<Field<'_>>, problems: &mut Problems| {
            field.and_then(|field| field.scalar(problems)?.text(problems))
        };
        let window_table = Self {
            file: text(file, problems),
            name_column: text(table.take("name_column"), problems),
            files_column: text(files_column, problems),
            replica_column: text(table.take("replica_column"), problems),
            folder: text(table.take("folder"), problems),
            bias: take_bias(&mut table, true, problems),
        };
        table.finish(problems);
        window_table
    }
}
