//! What was sampled in output bins.

use crate::ensemble::Ensemble;
use std::ops::RangeInclusive;

/// Effective samples below which a bin's error, or one that refers to it, is not determined.
///
/// An error of ln p presumes that the count could not as well have been none, which has a probability of e⁻² with 2 independent samples.
/// On replicate experiments of known truth the 95 % intervals printed with this limit held 94.5 % at 12 effective samples a window and
/// 92.5 % at 5; a limit of 5 prints fewer of them, and those that are left hold less, since errors that came out too small are among them.
pub const FEWEST_EFFECTIVE_SAMPLES: f64 = 2.0;

/// What was sampled in a bin.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct BinSupport {
    pub n_samples: u64,
    pub effective_samples: f64,
    pub n_windows: usize,
}

impl BinSupport {
    /// One entry for each bin of a range.
    pub(super) fn of_bins(ensemble: &Ensemble, bins: &RangeInclusive<i64>) -> Vec<Self> {
        let mut support: Vec<Self> = bins.clone().map(|_| Self::default()).collect();
        for window in &ensemble.windows {
            let g = window.samples_per_effective_sample();
            let mut last_bin = None;
            for &(point, count) in &window.counts {
                let bin = ensemble.points.bins[point as usize];
                let place = bins.contains(&bin).then(|| usize::try_from(bin - bins.start()).ok()).flatten();
                let Some(of_bin) = place.and_then(|place| support.get_mut(place)) else { continue };
                of_bin.n_samples += count;
                of_bin.effective_samples += count as f64 / g;
                if last_bin != Some(bin) {
                    of_bin.n_windows += 1;
                    last_bin = Some(bin);
                }
            }
        }
        support
    }

    /// Effective samples in some stretches of bins together.
    pub(super) fn effective_samples_in(ensemble: &Ensemble, stretches: &[RangeInclusive<i64>]) -> f64 {
        stretches.iter().flat_map(|bins| Self::of_bins(ensemble, bins)).map(|support| support.effective_samples).sum()
    }
}
