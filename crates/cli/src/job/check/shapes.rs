//! The shapes that are given by a few numbers.

use spandrel_bias::units::ForceUnit;
use spandrel_bias::{FlatBottomed, Harmonic, Linear, OneSidedHarmonic, PeriodicHarmonic, Shape, Side};

use super::kind::Kind;
use super::term::{TermAxis, TermReader};
use crate::job::number::readable;
use crate::job::problem::Problems;
use crate::job::resolved::Setting;
use crate::job::scalar::Allowed;

impl TermReader<'_> {
    pub(super) fn harmonic(&mut self, kind: Kind, axis: Option<TermAxis>, problems: &mut Problems) -> Option<Shape> {
        let center = self.position("center", kind, axis, Allowed::Finite, None, problems);
        let force_constant = self.force_constant(kind, axis, problems);
        let (center, force_constant) = (center?, force_constant?);
        let shape = if kind == Kind::PeriodicHarmonic {
            PeriodicHarmonic::new(center, force_constant).map(Shape::from)
        } else {
            Harmonic::new(center, force_constant).map(Shape::from)
        };
        self.built(shape, problems)
    }

    pub(super) fn linear(&mut self, axis: Option<TermAxis>, problems: &mut Problems) -> Option<Shape> {
        let slope = self.inputs.require("slope", Kind::Linear.name(), problems);
        let slope = slope.and_then(|scalar| scalar.number(Allowed::Finite, problems));
        let unit = self.compound_unit("slope_unit", axis, |energy, per| ForceUnit { energy, per }, problems);
        let (slope, unit, axis) = (slope?, unit?, axis?);
        self.resolved.set("slope", Setting::Number(slope.value));
        self.resolved.set("slope_unit", Setting::Text(unit.value.to_string()));
        let Ok(reduced) = unit.value.to_reduced(slope.value, axis.unit.value, self.context.temperature) else {
            self.push_mismatch("slope_unit", &unit, axis, "", problems);
            return None;
        };
        self.built(Linear::new(reduced).map(Shape::from), problems)
    }

    pub(super) fn one_sided(&mut self, axis: Option<TermAxis>, problems: &mut Problems) -> Option<Shape> {
        const SIDES: [(&str, Side); 2] = [("above", Side::Above), ("below", Side::Below)];
        let bound = self.position("bound", Kind::OneSided, axis, Allowed::Finite, None, problems);
        let side = self.inputs.require("side", Kind::OneSided.name(), problems);
        let side = side.and_then(|scalar| scalar.word(&SIDES, problems));
        let force_constant = self.force_constant(Kind::OneSided, axis, problems);
        let side = side?.value;
        let word = SIDES.iter().find(|(_, known)| *known == side).map_or("", |(word, _)| word);
        self.resolved.set("side", Setting::Text(word.to_owned()));
        self.built(OneSidedHarmonic::new(side, bound?, force_constant?).map(Shape::from), problems)
    }

    pub(super) fn flat_bottomed(&mut self, axis: Option<TermAxis>, problems: &mut Problems) -> Option<Shape> {
        let kind = Kind::FlatBottomed;
        let center_unit =
            self.inputs.inputs.iter().find_map(|(key, _, scalar)| scalar.clone().filter(|_| *key == "center_unit"));
        let center = self.position("center", kind, axis, Allowed::Finite, None, problems);
        let half_width =
            self.inputs.inputs.iter().find(|(key, ..)| *key == "half_width").and_then(|(.., scalar)| scalar.clone());
        let width = self.position("half_width", kind, axis, Allowed::NotNegative, center_unit.as_ref(), problems);
        let force_constant = self.force_constant(kind, axis, problems);
        let width = width?;
        let period = self.context.axes.get(axis?.index)?.period.ok()?;
        if let Some(period) = period.filter(|period| width >= 0.5 * period) {
            if let Some(scalar) = half_width {
                problems.push(scalar.complaint(&format!(
                    "expected less than half the period of {}, found {}",
                    readable(period),
                    scalar.value.found()
                )));
            }
            return None;
        }
        self.built(FlatBottomed::new(center?, width, force_constant?).map(Shape::from), problems)
    }
}
