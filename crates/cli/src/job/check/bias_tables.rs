//! Tabulated biases: each file is read once, however many windows use it.

use std::collections::HashMap;
use std::num::NonZeroUsize;

use spandrel_bias::units::{EnergyUnit, PositionUnit};
use spandrel_bias::{BiasError, Interpolation, OutsideRule, Shape, Tabulated};
use spandrel_ingest::{Column, IngestError, Separator, Table, TableLayout, read_table};

use super::files::neighbor;
use super::term::{TermAxis, TermReader};
use super::units::other_kind;
use crate::job::mark::{Faulty, Typed};
use crate::job::model::{AuxiliaryFile, AuxiliaryRole};
use crate::job::paths::JobFolder;
use crate::job::problem::{Problem, Problems};
use crate::job::resolved::Setting;
use crate::job::scalar::Scalar;
use crate::job::typed::SEPARATORS;

/// The tables read so far.
pub(super) struct BiasTables<'a> {
    folder: &'a JobFolder,
    /// What stands between columns unless a term says otherwise.
    separator: Separator,
    comments: Vec<String>,
    read: HashMap<(String, Separator, [Column; 2]), Result<Table, IngestError>>,
    files: Vec<AuxiliaryFile>,
}

impl<'a> BiasTables<'a> {
    /// No table yet.
    pub fn new(folder: &'a JobFolder, separator: Separator, comments: Vec<String>) -> Self {
        Self { folder, separator, comments, read: HashMap::new(), files: Vec::new() }
    }

    /// The files that were read, in the order in which the job first uses them.
    pub fn into_files(self) -> Vec<AuxiliaryFile> {
        self.files
    }

    fn get(&mut self, file: &str, separator: Separator, columns: [Column; 2]) -> &Result<Table, IngestError> {
        let Self { folder, comments, read, files, .. } = self;
        read.entry((file.to_owned(), separator, columns.clone())).or_insert_with(|| {
            let layout = TableLayout { separator, comments: comments.clone(), columns };
            let table = read_table(&folder.join(file), &layout)?;
            let entry = AuxiliaryFile {
                role: AuxiliaryRole::BiasTable,
                path: folder.shown(&table.path),
                bytes: table.bytes,
                sha256: table.sha256.clone(),
            };
            if !files.contains(&entry) {
                files.push(entry);
            }
            Ok(table)
        })
    }
}

const INTERPOLATIONS: [(&str, Interpolation); 2] = [("linear", Interpolation::Linear), ("cubic", Interpolation::Cubic)];

const OUTSIDE: [(&str, OutsideRule); 3] =
    [("error", OutsideRule::Error), ("hold", OutsideRule::Hold), ("extend", OutsideRule::Extend)];

impl TermReader<'_> {
    /// A term of the kind `tabulated`.
    pub(super) fn tabulated(
        &mut self,
        axis: Option<TermAxis>,
        tables: &mut BiasTables<'_>,
        problems: &mut Problems,
    ) -> Option<Shape> {
        let file = self.inputs.require("file", "tabulated", problems);
        let file = file.and_then(|scalar| scalar.text(problems));
        let separator = self.optional(
            "separator",
            tables.separator,
            |scalar, problems| scalar.word(&SEPARATORS, problems),
            problems,
        );
        let numbered = |number: usize| Column::Number(NonZeroUsize::MIN.saturating_add(number - 1));
        let position_column = self.optional("position_column", numbered(1), Scalar::column, problems);
        let energy_column = self.optional("energy_column", numbered(2), Scalar::column, problems);
        let energy_unit = self.optional("energy_unit", self.context.energy_unit, Scalar::unit::<EnergyUnit>, problems);
        let interpolation = self.optional(
            "interpolation",
            Interpolation::Linear,
            |scalar, problems| scalar.word(&INTERPOLATIONS, problems),
            problems,
        );
        let outside =
            self.optional("outside", OutsideRule::Error, |scalar, problems| scalar.word(&OUTSIDE, problems), problems);
        let position_unit = match (self.inputs.take("position_unit"), axis) {
            (Ok(Some(scalar)), _) => scalar.unit::<PositionUnit>(problems),
            (Ok(None), Some(axis)) => Some(axis.unit),
            (Err(Faulty), _) | (Ok(None), None) => None,
        };
        let (file, separator, position_column, energy_column) = (file?, separator?, position_column?, energy_column?);
        let (energy_unit, interpolation, outside) = (energy_unit?, interpolation?, outside?);
        let (position_unit, axis) = (position_unit?, axis?);
        let set = |term: &mut Self, key, text: String| term.resolved.set(key, Setting::Text(text));
        set(self, "file", tables.folder.shown(&tables.folder.join(&file.value)));
        set(self, "separator", separator.to_string());
        set(self, "position_column", position_column.to_string());
        set(self, "energy_column", energy_column.to_string());
        set(self, "position_unit", position_unit.value.to_string());
        set(self, "energy_unit", energy_unit.to_string());
        set(self, "interpolation", word(&INTERPOLATIONS, interpolation).to_owned());
        set(self, "outside", word(&OUTSIDE, outside).to_owned());
        let factor = position_unit.value.factor_to(axis.unit.value);
        if factor.is_err() {
            let name = self.context.axes.name(axis.index);
            problems.push(other_kind("bias.position_unit", position_unit, name, axis.unit));
        }
        let table = match tables.get(&file.value, separator, [position_column, energy_column]) {
            Ok(table) => table,
            Err(IngestError::Missing { path }) => {
                problems.push(
                    Problem::at(file.mark, format!("`bias.file`: expected a file, found nothing at `{}`", file.value))
                        .suggest(neighbor(path, &file.value).as_deref())
                        .help("paths are relative to the folder of the job"),
                );
                return None;
            }
            Err(error) => {
                problems.push(Problem::at(file.mark, format!("`bias.file`: {error}")).help(error.advice()));
                return None;
            }
        };
        let factor = factor.ok()?;
        let positions = table.first.iter().map(|position| position * factor).collect();
        let temperature = self.context.temperature;
        let energies = table.second.iter().map(|&energy| energy_unit.to_reduced(energy, temperature)).collect();
        match Tabulated::new(self.whole_axis(axis)?, positions, energies, interpolation, outside) {
            Ok(shape) => Some(shape.into()),
            Err(error) => {
                problems.push(refused(&file, table, &error));
                None
            }
        }
    }

    /// A key with a default. `None` where its value is at fault.
    fn optional<T>(
        &mut self,
        name: &str,
        default: T,
        read: impl FnOnce(&Scalar, &mut Problems) -> Option<Typed<T>>,
        problems: &mut Problems,
    ) -> Option<T> {
        match self.inputs.take(name) {
            Ok(Some(scalar)) => read(&scalar, problems).map(|typed| typed.value),
            Err(Faulty) => None,
            Ok(None) => Some(default),
        }
    }
}

/// A table that was read but cannot be a bias.
fn refused(file: &Typed<String>, table: &Table, error: &BiasError) -> Problem {
    Problem::at(file.mark, format!("`bias.file`: {}: {error}", table.path.display()))
}

fn word<T: Copy + PartialEq>(words: &[(&'static str, T)], value: T) -> &'static str {
    words.iter().find(|(_, known)| *known == value).map_or("", |(word, _)| word)
}
