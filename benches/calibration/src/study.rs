//! All replicates of one system.

use crate::error::CalibrationError;
use crate::experiment::Experiment;
use crate::oracle::Oracle;
use crate::outcome::Replicate;
use crate::report::Report;
use crate::settings::Settings;
use crate::system::System;
use rayon::prelude::*;

/// Runs replicates 0 to `settings.n_replicates` − 1 in parallel, in the order of their numbers.
///
/// # Errors
/// The first that no replicate should meet.
pub fn replicates(experiment: &Experiment, settings: &Settings) -> Result<Vec<Replicate>, CalibrationError> {
    (0..settings.n_replicates).into_par_iter().map(|replicate| experiment.run(settings.seed, replicate)).collect()
}

/// Measures one system. Cost: 0.1 to 0.5 s of one core a replicate.
///
/// # Errors
/// As [`Experiment::new`], [`Oracle::of`] and [`replicates`].
pub fn measure(system: System, settings: &Settings) -> Result<Report, CalibrationError> {
    let experiment = Experiment::new(system.case()?, settings.weighting)?;
    let oracle = Oracle::of(experiment.case(), settings.weighting, experiment.zero(), experiment.scored())?;
    Ok(Report::of(system, *settings, &experiment, &oracle, &replicates(&experiment, settings)?))
}
