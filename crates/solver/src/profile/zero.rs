//! The place where a profile is zero.

use super::request::{ProfileError, Zero};
use super::support::BinSupport;
use crate::condense::BinGrid;
use crate::ensemble::Ensemble;
use crate::influence::{Deviations, Influence};
use crate::quantities::log_weight_of_bins;
use std::ops::RangeInclusive;

/// Mean density over some bins, as its logarithm, and how it deviates.
pub(super) struct LogDensity {
    pub value: f64,
    pub deviations: Deviations,
}

impl LogDensity {
    /// Over stretches of bins; `None` if nothing was sampled there.
    pub(super) fn over(ensemble: &Ensemble, influence: &Influence, bins: &[RangeInclusive<i64>]) -> Option<Self> {
        let n_bins: i64 = bins.iter().map(|bins| bins.end() - bins.start() + 1).sum();
        let volume = n_bins as f64 * ensemble.bins.width();
        let quantity = log_weight_of_bins(ensemble, influence, bins)?;
        Some(Self { value: quantity.value - volume.ln(), deviations: influence.deviations(&quantity) })
    }
}

/// The zero of a profile: its density, its bin if it is a single one, and what supports it.
pub(super) struct ZeroPoint {
    pub density: LogDensity,
    pub bin: Option<i64>,
    pub effective_samples: f64,
}

impl ZeroPoint {
    /// Finds the zero; `densest` is the bin of the lowest free energy.
    pub(super) fn find(
        ensemble: &Ensemble,
        influence: &Influence,
        zero: Zero,
        densest: i64,
    ) -> Result<Self, ProfileError> {
        let (stretches, bin) = match zero {
            Zero::Minimum => (vec![densest..=densest], Some(densest)),
            Zero::Position { position } => {
                let bin = ensemble.bins.bin_of(position).ok_or(ProfileError::ZeroNotSampled { zero, position })?;
                (vec![bin..=bin], Some(bin))
            }
            Zero::Range { from, to } => {
                (stretches_of_range(&ensemble.bins, from, to).ok_or(ProfileError::ZeroRange { from, to })?, None)
            }
        };
        if let Some(empty) = stretches.iter().cloned().flatten().find(|&bin| ensemble.points.in_bin(bin).is_empty()) {
            return Err(ProfileError::ZeroNotSampled { zero, position: ensemble.bins.center(empty) });
        }
        let density = LogDensity::over(ensemble, influence, &stretches).ok_or(ProfileError::NothingSampled)?;
        Ok(Self { density, bin, effective_samples: BinSupport::effective_samples_in(ensemble, &stretches) })
    }
}

/// The bins that a range touches as one or two stretches; `None` for a range that is empty, out of reach or longer than the period.
pub(super) fn stretches_of_range(bins: &BinGrid, from: f64, to: f64) -> Option<Vec<RangeInclusive<i64>>> {
    let (first, n_bins) = bins.touched_by(from, to)?;
    Some(in_first_period(first, i64::from(n_bins), bins.n_bins_in_period()))
}

/// A stretch of bins as one or two increasing stretches of the first period.
fn in_first_period(first: i64, n_bins: i64, n_bins_in_period: Option<u32>) -> Vec<RangeInclusive<i64>> {
    let Some(period) = n_bins_in_period.map(i64::from) else { return vec![first..=first + n_bins - 1] };
    let first = first.rem_euclid(period);
    let last = first + n_bins - 1;
    if last < period { vec![first..=last] } else { vec![0..=last - period, first..=period - 1] }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_stretch_across_the_end_of_the_period_falls_into_two() {
        assert_eq!(in_first_period(3, 4, None), [3..=6]);
        assert_eq!(in_first_period(70, 2, Some(72)), [70..=71]);
        assert_eq!(in_first_period(70, 4, Some(72)), [0..=1, 70..=71]);
        assert_eq!(in_first_period(-1, 2, Some(72)), [0..=0, 71..=71]);
    }
}
