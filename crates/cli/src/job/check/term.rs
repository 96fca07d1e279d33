//! One term of a bias, from its keys to a shape on an axis.

use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Shape, Term};

use super::bias::BiasContext;
use super::bias_tables::BiasTables;
use super::kind::Kind;
use super::term_inputs::TermInputs;
use crate::job::mark::{Faulty, Optional, Typed};
use crate::job::problem::{Problem, Problems};
use crate::job::resolved::{ResolvedTerm, Setting};

/// Reads one term.
pub(super) struct TermReader<'a> {
    /// What all terms share.
    pub context: &'a BiasContext<'a>,
    /// The keys not yet taken.
    pub inputs: TermInputs,
    /// The keys taken so far, with defaults.
    pub resolved: ResolvedTerm,
}

/// The axis of a term.
#[derive(Debug, Clone, Copy)]
pub(super) struct TermAxis {
    /// Its number.
    pub index: usize,
    /// Its unit.
    pub unit: Typed<PositionUnit>,
}

impl TermReader<'_> {
    /// The term; none for the kind `none`.
    pub(super) fn term(&mut self, siblings: usize, tables: &mut BiasTables, problems: &mut Problems) -> Optional<Term> {
        let kind_input = match self.inputs.take("kind") {
            Ok(Some(scalar)) => scalar,
            Err(Faulty) => return Err(Faulty),
            Ok(None) if self.inputs.misspelt.contains(&"kind") => return Err(Faulty),
            Ok(None) => {
                problems.push(
                    Problem::at(self.inputs.mark, "`bias.kind`: expected the shape of the bias, found no such key")
                        .help(
                            "add it, as in `kind = \"harmonic\"`; the other kinds are `periodic-harmonic`, `linear`, \
                             `one-sided`, `flat-bottomed`, `tabulated` and `none`",
                        ),
                );
                return Err(Faulty);
            }
        };
        let kind = kind_input.word(&Kind::WORDS, problems).ok_or(Faulty)?;
        let name = kind.value.name();
        self.resolved.set("kind", Setting::Text(name.to_owned()));
        if kind.value == Kind::None {
            if siblings > 1 {
                problems.push(
                    Problem::at(
                        kind.mark,
                        "`bias.kind`: expected `none` as the only bias of its window, found others beside it",
                    )
                    .help("remove it, or the other terms"),
                );
            }
            self.finish(kind.value, problems);
            return Ok(None);
        }
        let axis = self.axis(problems);
        let fitting = axis.is_none_or(|axis| self.fits(kind, axis, problems));
        let shape = match kind.value {
            Kind::Harmonic | Kind::PeriodicHarmonic => self.harmonic(kind.value, axis, problems),
            Kind::Linear => self.linear(axis, problems),
            Kind::OneSided => self.one_sided(axis, problems),
            Kind::FlatBottomed => self.flat_bottomed(axis, problems),
            Kind::Tabulated => self.tabulated(axis, tables, problems),
            Kind::None => None,
        };
        self.finish(kind.value, problems);
        match (shape, axis) {
            (Some(shape), Some(axis)) if fitting => Ok(Some(Term { axis: axis.index, shape })),
            _ => Err(Faulty),
        }
    }

    /// Complains about keys that are left. Faulty values of keys that the kind does have were taken from the list.
    fn finish(&mut self, kind: Kind, problems: &mut Problems) {
        let rest = TermInputs {
            mark: self.inputs.mark,
            inputs: std::mem::take(&mut self.inputs.inputs),
            misspelt: Vec::new(),
        };
        rest.finish(kind.name(), kind.keys(), problems);
    }

    /// Whether the kind is defined on the axis, as far as its period is known.
    fn fits(&self, kind: Typed<Kind>, axis: TermAxis, problems: &mut Problems) -> bool {
        let Some(entry) = self.context.axes.get(axis.index) else {
            return true;
        };
        let Ok(period) = entry.period else { return true };
        let Some(advice) = kind.value.refusal(period.is_some()) else {
            return true;
        };
        let having = if period.is_some() { "with a period" } else { "without a period" };
        let name = kind.value.name();
        problems.push(
            Problem::at(
                kind.mark,
                format!("`bias.kind`: expected a kind that is defined on an axis {having}, found `{name}`"),
            )
            .label(entry.mark, format!("axis `{}` is one {having}", self.context.axes.name(axis.index)))
            .help(advice),
        );
        false
    }

    fn axis(&mut self, problems: &mut Problems) -> Option<TermAxis> {
        let axes = self.context.axes;
        let index = match self.inputs.take("axis") {
            Ok(Some(scalar)) => {
                let name = scalar.text(problems)?;
                axes.find("bias.axis", &name, problems)?
            }
            Err(Faulty) => return None,
            Ok(None) => axes.only("bias.axis", self.inputs.mark, problems)?,
        };
        self.resolved.set("axis", Setting::Text(axes.name(index).to_owned()));
        Some(TermAxis { index, unit: axes.get(index)?.unit? })
    }

    /// The shape, or a problem at the term where its constructor refuses.
    pub(super) fn built<E: std::fmt::Display>(
        &self,
        shape: Result<Shape, E>,
        problems: &mut Problems,
    ) -> Option<Shape> {
        match shape {
            Ok(shape) => Some(shape),
            Err(error) => {
                problems.push(Problem::at(self.inputs.mark, error.to_string()));
                None
            }
        }
    }

    /// The checked axis, where all axes are sound.
    pub(super) fn whole_axis(&self, axis: TermAxis) -> Option<&Axis> {
        self.context.axes.whole.as_ref()?.get(axis.index)
    }
}
