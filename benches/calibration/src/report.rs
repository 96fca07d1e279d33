//! All scores of one system.

use crate::experiment::Experiment;
use crate::jackknife::{Estimate, jackknife, ratio};
use crate::method::{ErrorBar, Method};
use crate::oracle::Oracle;
use crate::outcome::{Refusal, Replicate};
use crate::score::{Score, held};
use crate::settings::Settings;
use crate::system::System;
use std::collections::BTreeMap;

/// How the estimates, and the exact errors on all scored bins, compare with the truth: scores without any estimated error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OracleScore {
    /// Coverage of 95 % intervals with the exact standard error, over all scored bins of all replicates that gave a profile.
    pub coverage_95: Option<Estimate>,
    /// The same of 68 % intervals.
    pub coverage_68: Option<Estimate>,
    /// Root mean square of estimate less truth, kT.
    pub root_mean_square: Option<Estimate>,
    /// Root mean square of (estimate − truth)/exact standard error.
    pub relative_root_mean_square: Option<Estimate>,
    /// Largest part of an exact variance that can be missing.
    pub left_out: f64,
}

/// All scores of one system.
#[derive(Debug, Clone, PartialEq)]
pub struct Report {
    /// The system.
    pub system: System,
    /// What was asked for.
    pub settings: Settings,
    /// Number of scored bins a replicate.
    pub n_scored: usize,
    /// How many replicates gave no profile for which reason.
    pub refused: BTreeMap<Refusal, usize>,
    /// Scores without any estimated error.
    pub oracle: OracleScore,
    /// Scores of each method.
    pub methods: Vec<(Method, Score)>,
    /// Middle of each scored bin, in the unit of the system.
    pub centers: Vec<f64>,
}

impl Report {
    /// Scores all replicates of a system.
    #[must_use]
    pub fn of(
        system: System,
        settings: Settings,
        experiment: &Experiment,
        oracle: &Oracle,
        replicates: &[Replicate],
    ) -> Self {
        let mut refused = BTreeMap::new();
        for refusal in replicates.iter().filter_map(|replicate| replicate.as_ref().err()) {
            *refused.entry(*refusal).or_insert(0) += 1;
        }
        Self {
            system,
            settings,
            n_scored: experiment.scored().len(),
            refused,
            oracle: OracleScore::of(oracle, replicates),
            methods: Method::ALL
                .into_iter()
                .enumerate()
                .map(|(number, method)| (method, Score::of(replicates, number, &oracle.standard_errors)))
                .collect(),
            centers: experiment.scored().iter().map(|&bin| experiment.center(bin)).collect(),
        }
    }
}

impl OracleScore {
    fn of(oracle: &Oracle, replicates: &[Replicate]) -> Self {
        let bars: Vec<ErrorBar> = oracle.standard_errors.iter().map(|&error| ErrorBar::exact(error)).collect();
        let mean = |of: &dyn Fn(f64, &ErrorBar) -> f64| -> Vec<[f64; 2]> {
            let part = |replicate: &Replicate| {
                let misses = replicate.iter().flat_map(|outcome| &outcome.misses);
                let known = misses.zip(&bars).filter_map(|(miss, bar)| Some(of((*miss)?, bar)));
                known.fold([0.0, 0.0], |[sum, n], value| [sum + value, n + 1.0])
            };
            replicates.iter().map(part).collect()
        };
        let root = |[sum, n]: &[f64; 2]| ratio(*sum, *n).map(f64::sqrt);
        let plain = |[sum, n]: &[f64; 2]| ratio(*sum, *n);
        Self {
            coverage_95: jackknife(&mean(&|miss, bar| held(miss, bar.half_width_95)), plain),
            coverage_68: jackknife(&mean(&|miss, bar| held(miss, bar.half_width_68)), plain),
            root_mean_square: jackknife(&mean(&|miss, _| miss * miss), root),
            relative_root_mean_square: jackknife(&mean(&|miss, bar| (miss / bar.standard_error).powi(2)), root),
            left_out: oracle.left_out,
        }
    }
}
