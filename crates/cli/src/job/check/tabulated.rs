//! The kind `tabulated`: a table of energies in a file.

use std::num::NonZeroUsize;

use spandrel_bias::units::{EnergyUnit, PositionUnit};
use spandrel_bias::{Interpolation, OutsideRule, Shape, Tabulated};
use spandrel_ingest::Column;

use super::bias_tables::BiasTables;
use super::term::{TermAxis, TermReader};
use super::units::other_kind;
use crate::job::mark::{Faulty, Typed};
use crate::job::problem::Problems;
use crate::job::resolved::Setting;
use crate::job::scalar::Scalar;
use crate::job::typed::SEPARATORS;

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
        let table = tables.get(&file, separator, [position_column, energy_column], problems)?;
        let factor = factor.ok()?;
        let positions = table.first.iter().map(|position| position * factor).collect();
        let temperature = self.context.temperature;
        let energies = table.second.iter().map(|&energy| energy_unit.to_reduced(energy, temperature)).collect();
        match Tabulated::new(self.whole_axis(axis)?, positions, energies, interpolation, outside) {
            Ok(shape) => Some(shape.into()),
            Err(error) => {
                tables.refused(&file, &table, &error, problems);
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

fn word<T: Copy + PartialEq>(words: &[(&'static str, T)], value: T) -> &'static str {
    words.iter().find(|(_, known)| *known == value).map_or("", |(word, _)| word)
}
