//! From an ensemble and its profile to resampled errors.

use super::blocks::BlockRule;
use super::options::{BootstrapError, BootstrapOptions, FEWEST_REPLICATES, ReplicateProgress};
use super::replicates::{Replication, Stopped};
use super::resampler::Resampler;
use super::result::Bootstrap;
use super::strips::Strips;
use super::summary::Summary;
use super::targets::{BinWeight, Targets};
use super::warm_start::WarmStart;
use crate::ensemble::Ensemble;
use crate::influence::{Influence, Quantity};
use crate::profile::Profile;
use crate::solve::Solution;
use rayon::prelude::*;

impl Bootstrap {
    /// Resamples the runs in blocks ([`BlockRule`]), solves each replicate again, and sets the spread of the results beside the errors from
    /// influences. `solution`, `influence` and `profile` belong to the ensemble.
    ///
    /// The windows keep their biases and numbers of samples. Each replicate starts from the solution and is solved to
    /// [`REPLICATE_TOLERANCE`](super::REPLICATE_TOLERANCE). Degrees of freedom are those of the blocks (Welch–Satterthwaite, each run's part of
    /// the variance from its influences, with n/l − 1) and of the number of replicates.
    ///
    /// Neighboring points with nearly the same shares count as one, which moves an error by less than a part in a hundred.
    /// Cost of a replicate: an eighth of a pass over the counts of all groups, and some ten over the shares.
    ///
    /// # Errors
    /// Fewer than [`FEWEST_REPLICATES`] asked for; a window that supports no error; a zero without samples; windows that hang together by
    /// next to nothing; a stop asked for by `progress`.
    pub fn run(
        ensemble: &Ensemble,
        solution: &Solution,
        influence: &Influence,
        profile: &Profile,
        options: &BootstrapOptions,
        progress: &mut ReplicateProgress<'_>,
    ) -> Result<Self, BootstrapError> {
        let BootstrapOptions { n_replicates, seed } = *options;
        if n_replicates < FEWEST_REPLICATES {
            return Err(BootstrapError::Replicates { found: n_replicates });
        }
        let unsupported: Vec<String> =
            influence.unsupported_windows().iter().map(|&k| ensemble.windows[k].name.clone()).collect();
        if !unsupported.is_empty() {
            return Err(BootstrapError::Unsupported { windows: unsupported });
        }
        let targets = Targets::of(ensemble, solution, influence, profile);
        let strips = Strips::lay(ensemble, influence);
        let weight_of = |quantity: &Quantity| BinWeight::of(quantity, ensemble, &strips);
        let zero = targets.zero.as_ref().map(weight_of).ok_or(BootstrapError::ZeroNotSampled)?;
        let warm = WarmStart::new(ensemble, influence, &strips, solution.gauge);
        let base =
            warm.hessian_factor(strips.weights(), &vec![0.0; warm.n_rows()]).ok_or(BootstrapError::NoCurvature)?;
        let streams: Vec<Option<BlockRule>> =
            ensemble.streams.par_iter().map(|stream| BlockRule::of(ensemble, stream)).collect();

        let resampler = Resampler::new(ensemble, &strips, &streams, seed);
        let bins = targets.bins.iter().map(|bin| bin.as_ref().map(weight_of)).collect();
        let replicates = Replication { resampler, warm: &warm, base, bins, zero }
            .all(n_replicates, progress)
            .map_err(|Stopped| BootstrapError::Interrupted)?;

        let summary = Summary {
            influence,
            blocks: streams.iter().flatten().copied().collect(),
            n_replicates,
            n_unsolved: replicates.iter().filter(|replicate| replicate.is_none()).count(),
        };
        let solved = || replicates.iter().flatten();
        let bin = |bin: usize| {
            let values = solved().map(|replicate| replicate.bins[bin]);
            summary.error(values, profile.bins[bin].uncertainty, profile.deviations(bin))
        };
        let window = |k: usize| {
            let values = solved().map(|replicate| Some(replicate.windows[k]));
            let deviations = targets.windows[k].as_ref().map(|quantity| influence.deviations(quantity));
            let from_influences = deviations.as_ref().map(|deviations| influence.uncertainty(deviations));
            summary.error(values, from_influences, deviations.as_ref())
        };
        Ok(Self {
            seed,
            n_replicates,
            n_unsolved: summary.n_unsolved,
            bins: (0..profile.bins.len()).map(bin).collect(),
            windows: (0..ensemble.n_windows()).map(window).collect(),
            streams,
        })
    }
}
