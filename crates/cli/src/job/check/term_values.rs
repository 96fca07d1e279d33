//! The numbers of a term with their units, in kT and in the axis' unit.

use std::fmt::Display;
use std::str::FromStr;

use spandrel_bias::HarmonicConvention;
use spandrel_bias::units::{Dimension, EnergyUnit, ForceConstantUnit, PositionUnit, UnitError};

use super::kind::Kind;
use super::term::{TermAxis, TermReader};
use super::units::{mismatch, other_kind};
use crate::job::mark::{Faulty, Typed};
use crate::job::problem::{Problem, Problems};
use crate::job::resolved::Setting;
use crate::job::scalar::{Allowed, Scalar};

impl TermReader<'_> {
    /// A position or a length along the axis, in the axis' unit. Where `beside` names a unit other than the axis' for another key,
    /// this one's unit must be given as well.
    pub(super) fn position(
        &mut self,
        name: &'static str,
        kind: Kind,
        axis: Option<TermAxis>,
        allowed: Allowed,
        beside: Option<&Scalar>,
        problems: &mut Problems,
    ) -> Option<f64> {
        let unit_name = match name {
            "center" => "center_unit",
            "bound" => "bound_unit",
            _ => "half_width_unit",
        };
        let number = self.inputs.require(name, kind.name(), problems);
        let number = number.and_then(|scalar| scalar.number(allowed, problems));
        let unit = match self.inputs.take(unit_name) {
            Ok(Some(scalar)) => scalar.unit::<PositionUnit>(problems),
            Err(Faulty) => None,
            Ok(None) => {
                let axis = axis?;
                let other = beside.and_then(|scalar| scalar.unit::<PositionUnit>(&mut Problems::default()));
                if let Some(other) = other.filter(|other| other.value != axis.unit.value) {
                    problems.push(
                        self.inputs
                            .missing(unit_name, kind.name())
                            .label(other.mark, format!("here the unit is not that of the axis, {}", axis.unit.value)),
                    );
                    return None;
                }
                Some(axis.unit)
            }
        };
        let (number, unit, axis) = (number?, unit?, axis?);
        self.resolved.set(name, Setting::Number(number.value));
        self.resolved.set(unit_name, Setting::Text(unit.value.to_string()));
        let Ok(factor) = unit.value.factor_to(axis.unit.value) else {
            let axis_name = self.context.axes.name(axis.index);
            problems.push(other_kind(&format!("bias.{unit_name}"), unit, axis_name, axis.unit));
            return None;
        };
        Some(number.value * factor)
    }

    /// The force constant of ½ k x², in kT per squared axis unit.
    pub(super) fn force_constant(
        &mut self,
        kind: Kind,
        axis: Option<TermAxis>,
        problems: &mut Problems,
    ) -> Option<f64> {
        const CONVENTIONS: [(&str, HarmonicConvention); 2] =
            [("half", HarmonicConvention::Half), ("full", HarmonicConvention::Full)];
        let number = self.inputs.require("force_constant", kind.name(), problems);
        let number = number.and_then(|scalar| scalar.number(Allowed::Positive, problems));
        let unit =
            self.compound_unit("force_constant_unit", axis, |energy, per| ForceConstantUnit { energy, per }, problems);
        let convention = match self.inputs.take("convention") {
            Ok(Some(scalar)) => scalar.word(&CONVENTIONS, problems).map(|word| word.value),
            Err(Faulty) => None,
            Ok(None) => Some(HarmonicConvention::Half),
        };
        let (number, unit, convention, axis) = (number?, unit?, convention?, axis?);
        let word = CONVENTIONS.iter().find(|(_, known)| *known == convention).map_or("", |(word, _)| word);
        self.resolved.set("force_constant", Setting::Number(number.value));
        self.resolved.set("force_constant_unit", Setting::Text(unit.value.to_string()));
        self.resolved.set("convention", Setting::Text(word.to_owned()));
        let reduced = unit.value.to_reduced(number.value, axis.unit.value, self.context.temperature);
        let Ok(reduced) = reduced else {
            self.push_mismatch("force_constant_unit", &unit, axis, "squared ", problems);
            return None;
        };
        Some(convention.half_force_constant(reduced))
    }

    /// The unit of a slope or a force constant. On an axis of angles it must be given: degrees are often paired with constants per
    /// radian, and a guess could be wrong by a factor of 3283.
    pub(super) fn compound_unit<U>(
        &mut self,
        name: &'static str,
        axis: Option<TermAxis>,
        default: impl FnOnce(EnergyUnit, PositionUnit) -> U,
        problems: &mut Problems,
    ) -> Option<Typed<U>>
    where
        U: FromStr<Err = UnitError>,
    {
        match self.inputs.take(name) {
            Ok(Some(scalar)) => scalar.unit(problems),
            Err(Faulty) => None,
            Ok(None) => {
                let axis = axis?;
                if matches!(axis.unit.value, PositionUnit::Degree | PositionUnit::Radian) {
                    let squared = if name == "slope_unit" { "" } else { "^2" };
                    let energy = self.context.energy_unit;
                    problems.push(
                        Problem::at(
                            self.inputs.mark,
                            format!("`bias.{name}`: expected a unit on an axis of angles, found no such key"),
                        )
                        .note("whether this is per degree or per radian cannot be told")
                        .help(format!(
                            "add `{name} = \"{energy}/rad{squared}\"` or `{name} = \"{energy}/deg{squared}\"`"
                        )),
                    );
                    return None;
                }
                Some(Typed { value: default(self.context.energy_unit, axis.unit.value), mark: self.inputs.mark })
            }
        }
    }

    pub(super) fn push_mismatch<U: Display>(
        &self,
        name: &str,
        unit: &Typed<U>,
        axis: TermAxis,
        squared: &str,
        problems: &mut Problems,
    ) {
        let expected = match axis.unit.value.dimension() {
            Dimension::Length => format!("an energy over a {squared}length"),
            Dimension::Angle if squared.is_empty() => "an energy over an angle".to_owned(),
            Dimension::Angle => format!("an energy over a {squared}angle"),
            Dimension::None => "an energy alone".to_owned(),
        };
        let axis_name = self.context.axes.name(axis.index);
        problems.push(mismatch(&format!("bias.{name}"), unit, &expected, axis_name, axis.unit));
    }
}
