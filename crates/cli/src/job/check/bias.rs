//! The bias of a window: the sum of its terms.

use std::sync::Arc;

use spandrel_bias::Bias;
use spandrel_bias::units::{EnergyUnit, Temperature};

use super::axes::Axes;
use super::bias_tables::BiasTables;
use super::term::TermReader;
use super::term_inputs::TermInputs;
use crate::job::mark::Faulty;
use crate::job::problem::{Problem, Problems};
use crate::job::resolved::ResolvedTerm;

/// What the terms of all windows share.
pub(super) struct BiasContext<'a> {
    /// The axes.
    pub axes: &'a Axes,
    /// The temperature; any where it is at fault, since nothing comes of the job then.
    pub temperature: Temperature,
    /// The job's unit of energy; any where it is at fault.
    pub energy_unit: EnergyUnit,
}

/// The bias of one window.
pub(super) struct CheckedBias {
    /// `None` where a term or an axis is at fault.
    pub bias: Option<Bias>,
    /// The terms in the job's own words.
    pub terms: Vec<ResolvedTerm>,
}

impl BiasContext<'_> {
    /// Checks all terms of a window.
    pub fn bias(&self, typed: &[TermInputs], tables: &mut BiasTables, problems: &mut Problems) -> CheckedBias {
        let mut terms = Vec::new();
        let mut resolved = Vec::new();
        let mut complete = true;
        for inputs in typed {
            let mut reader = TermReader { context: self, inputs: inputs.clone(), resolved: ResolvedTerm::default() };
            match reader.term(typed.len(), tables, problems) {
                Ok(Some(term)) => terms.push(term),
                Ok(None) => {}
                Err(Faulty) => complete = false,
            }
            resolved.push(reader.resolved);
        }
        let axes = self.axes.whole.as_ref().filter(|_| complete);
        let bias = axes.and_then(|axes| match Bias::new(Arc::clone(axes), terms) {
            Ok(bias) => Some(bias),
            Err(error) => {
                problems.push(match typed.first() {
                    Some(first) => Problem::at(first.mark, error.to_string()),
                    None => Problem::new(error.to_string()),
                });
                None
            }
        });
        CheckedBias { bias, terms: resolved }
    }
}
