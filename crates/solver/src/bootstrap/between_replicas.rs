//! The spread between replicas as an estimate of every error.

use super::targets::Targets;
use crate::ensemble::Ensemble;
use crate::influence::{Influence, Quantity, ReplicaMean, Support, Uncertainty};
use crate::profile::Profile;
use crate::solve::Solution;
use serde::Serialize;

/// The error of one quantity from the spread between replicas.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ReplicaError {
    /// Standard error with the parts of the windows that have replicas from the spread between them, and those of the others from their batches.
    pub uncertainty: Uncertainty,
    /// Part of the variance, by influences, that the windows with replicas answer for.
    pub replicated_part: f64,
    /// √(variance between replicas / variance from their batches) over the windows with replicas. Well above 1, with many degrees of freedom:
    /// the replicas disagree beyond what they show in time, so motion slower than a run is at work.
    pub ratio: f64,
    /// Degrees of freedom of the part between replicas alone.
    pub degrees_between: f64,
}

/// Errors from the spread between replicas: independent starts need no assumption about correlation in time.
///
/// Window k with replicas r = 1 .. R of N_r samples and mean influences φ̄_r has the part ωₖ² Nₖ Σ_r N_r (φ̄_r − φ̄)²/(R − 1) of the variance with
/// R − 1 degrees of freedom: batch means with a replica for a batch. Degrees add up by Welch–Satterthwaite.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BetweenReplicas {
    /// Windows with two or more replicas that support an error.
    pub n_windows: usize,
    /// Errors of the profile's bins (differences from its zero, kT); `None` where the profile gives none.
    pub bins: Vec<Option<ReplicaError>>,
    /// Errors of the windows' f relative to the gauge window, kT; `None` for that window, or where no error is determined.
    pub windows: Vec<Option<ReplicaError>>,
}

impl BetweenReplicas {
    /// `None` where no window has two replicas that support an error, or some window has none.
    #[must_use]
    pub fn of(ensemble: &Ensemble, solution: &Solution, influence: &Influence, profile: &Profile) -> Option<Self> {
        let mut n_replicas = vec![0_usize; ensemble.n_windows()];
        for stream in ensemble.streams.iter().filter(|stream| stream.batches.is_some()) {
            n_replicas[stream.window] += 1;
        }
        let n_windows = n_replicas.iter().filter(|&&n| n > 1).count();
        if n_windows == 0 || !influence.unsupported_windows().is_empty() {
            return None;
        }
        let targets = Targets::of(ensemble, solution, influence, profile);
        let estimate = |means: &[ReplicaMean], parts: &[(usize, f64)], from_influences: Uncertainty| {
            (from_influences.support != Support::NotDetermined)
                .then(|| error(ensemble, &n_replicas, means, parts, from_influences))
        };
        let zero = influence.replica_means(targets.zero.as_ref()?);
        let bin = |bin: usize| {
            let mut means = influence.replica_means(targets.bins[bin].as_ref()?);
            for (mean, zero) in means.iter_mut().zip(&zero) {
                mean.influence -= zero.influence;
            }
            estimate(&means, &influence.parts(profile.deviations(bin)?), profile.bins[bin].uncertainty?)
        };
        let window = |quantity: &Option<Quantity>| {
            let quantity = quantity.as_ref()?;
            let deviations = influence.deviations(quantity);
            let from_influences = influence.uncertainty(&deviations);
            estimate(&influence.replica_means(quantity), &influence.parts(&deviations), from_influences)
        };
        Some(Self {
            n_windows,
            bins: (0..profile.bins.len()).map(bin).collect(),
            windows: targets.windows.iter().map(window).collect(),
        })
    }
}

/// `means` and `parts` have one entry for each replica that supports an error, window by window.
fn error(
    ensemble: &Ensemble,
    n_replicas: &[usize],
    means: &[ReplicaMean],
    parts: &[(usize, f64)],
    from_influences: Uncertainty,
) -> ReplicaError {
    let (mut between, mut squares_between) = (0.0, 0.0);
    let (mut within, mut others, mut squares_of_others) = (0.0, 0.0, 0.0);
    let mut first = 0;
    for (window, &n) in ensemble.windows.iter().zip(n_replicas) {
        let (means, parts) = (&means[first..first + n], &parts[first..first + n]);
        first += n;
        let of_batches: f64 = parts.iter().map(|(_, part)| part).sum();
        if n < 2 {
            others += of_batches;
            squares_of_others += parts.iter().map(|(a, part)| part * part / (*a as f64 - 1.0)).sum::<f64>();
        } else {
            let part = window.weight * window.total_weight() * long_run_variance(means);
            between += part;
            squares_between += part * part / (n as f64 - 1.0);
            within += of_batches;
        }
    }
    let variance = between + others;
    let degrees = (variance * variance / (squares_between + squares_of_others)).max(1.0);
    let uncertainty = Uncertainty::new(variance.sqrt(), degrees, f64::INFINITY, true);
    ReplicaError {
        uncertainty: Uncertainty { support: uncertainty.support.max(from_influences.support), ..uncertainty },
        replicated_part: within / (within + others),
        ratio: (between / within).sqrt(),
        degrees_between: (between * between / squares_between).max(1.0),
    }
}

/// Σ N_r (φ̄_r − φ̄)²/(R − 1).
fn long_run_variance(means: &[ReplicaMean]) -> f64 {
    let total: f64 = means.iter().map(|mean| mean.n_samples).sum();
    let center = means.iter().map(|mean| mean.n_samples * mean.influence).sum::<f64>() / total;
    let spread: f64 = means.iter().map(|mean| mean.n_samples * (mean.influence - center).powi(2)).sum();
    spread / (means.len() - 1) as f64
}
