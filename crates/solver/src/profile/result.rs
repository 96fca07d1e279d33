//! Bins with free energies, errors, and what supports them.

use super::request::{ProfileError, ProfileRequest, Zero};
use crate::ensemble::Ensemble;
use crate::influence::{Deviations, Influence, Quantity, Support, Uncertainty};
use crate::quantities::log_weight_of_bins;
use nalgebra::DMatrix;
use rayon::prelude::*;
use serde::Serialize;
use std::ops::RangeInclusive;

/// Effective samples in a bin below which its error is not determined.
///
/// An error of ln p presumes that the count could not as well have been none: with 5 independent samples the chance of that is e⁻⁵.
pub const FEWEST_EFFECTIVE_SAMPLES: f64 = 5.0;

/// What a bin's numbers rest on.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum BinStatus {
    /// Free energy and error are given.
    Determined,
    /// They are given, but the error rests on few batches.
    Provisional,
    /// The free energy is given; the data support no error.
    NotDetermined,
    /// The bin in which the profile is zero by choice: nothing to err.
    Zero,
    /// No sample: nothing is given.
    Unsampled,
}

impl BinStatus {
    /// Name in output files.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Determined => "determined",
            Self::Provisional => "provisional",
            Self::NotDetermined => "not-determined",
            Self::Zero => "zero",
            Self::Unsampled => "unsampled",
        }
    }
}

/// One bin of a profile. Energies in kT, positions in the axis' unit.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ProfileBin {
    /// Lower edge.
    pub lower: f64,
    /// Upper edge.
    pub upper: f64,
    /// F relative to the zero; `None` where nothing was sampled.
    pub free_energy: Option<f64>,
    /// Error of the difference from the zero; `None` where the status says so.
    pub uncertainty: Option<Uncertainty>,
    /// What the numbers rest on.
    pub status: BinStatus,
    /// Samples in the bin.
    pub n_samples: u64,
    /// Effective number of independent samples, Σₖ nₖ/gₖ.
    pub effective_samples: f64,
    /// Windows with at least one sample in the bin.
    pub n_windows: usize,
}

impl ProfileBin {
    /// Middle of the bin.
    #[must_use]
    pub fn center(&self) -> f64 {
        f64::midpoint(self.lower, self.upper)
    }
}

/// A profile: F(bin) = −ln(p(bin)/volume) + constant, in kT, with its zero stated.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Profile {
    /// The bins, in order.
    pub bins: Vec<ProfileBin>,
    /// The zero.
    pub zero: Zero,
    /// Middle of the bin that is zero, in the axis' unit; `None` if a range is.
    pub zero_position: Option<f64>,
    #[serde(skip)]
    deviations: Vec<Option<Deviations>>,
}

/// A bin's density and its deviations, before the zero is taken off.
struct Sampled {
    log_density: f64,
    deviations: Deviations,
}

impl Profile {
    /// Draws the profile from a solution.
    ///
    /// # Errors
    /// A zero on bins that nothing sampled, or no sample in the range.
    pub fn draw(ensemble: &Ensemble, influence: &Influence, request: &ProfileRequest) -> Result<Self, ProfileError> {
        let bins = bins_of(ensemble, request).ok_or(ProfileError::NothingSampled)?;
        let numbers: Vec<i64> = bins.clone().collect();
        let sampled: Vec<Option<Sampled>> = numbers
            .par_iter()
            .map(|&bin| density(ensemble, influence, bin..=bin))
            .collect();
        let (zero, zero_bin) = zero_of(ensemble, influence, request.zero, &bins, &sampled)?;

        let mut profile = Self {
            bins: Vec::with_capacity(numbers.len()),
            zero: request.zero,
            zero_position: zero_bin.map(|bin| center(ensemble, bin)),
            deviations: Vec::with_capacity(numbers.len()),
        };
        let support = BinSupport::of_bins(ensemble, &bins);
        for ((&number, density), support) in numbers.iter().zip(sampled).zip(support) {
            let deviations = density
                .as_ref()
                .map(|density| density.deviations.minus(&zero.deviations));
            let uncertainty = deviations.as_ref().map(|deviations| influence.uncertainty(deviations));
            let status = match uncertainty {
                None => BinStatus::Unsampled,
                Some(_) if zero_bin == Some(number) => BinStatus::Zero,
                Some(_) if support.effective_samples < FEWEST_EFFECTIVE_SAMPLES => BinStatus::NotDetermined,
                Some(Uncertainty {
                    support: Support::NotDetermined,
                    ..
                }) => BinStatus::NotDetermined,
                Some(Uncertainty {
                    support: Support::Provisional,
                    ..
                }) => BinStatus::Provisional,
                Some(Uncertainty {
                    support: Support::Determined,
                    ..
                }) => BinStatus::Determined,
            };
            let has_error = matches!(status, BinStatus::Determined | BinStatus::Provisional);
            profile.bins.push(ProfileBin {
                lower: ensemble.bins.lower_edge(number),
                upper: ensemble.bins.lower_edge(number + 1),
                free_energy: density.map(|density| zero.log_density - density.log_density),
                uncertainty: uncertainty.filter(|_| has_error),
                status,
                n_samples: support.n_samples,
                effective_samples: support.effective_samples,
                n_windows: support.n_windows,
            });
            profile.deviations.push(deviations.filter(|_| has_error));
        }
        Ok(profile)
    }

    /// Numbers of the bins that have an error, and the covariance matrix of their free energies in kT².
    #[must_use]
    pub fn covariance(&self, influence: &Influence) -> (Vec<usize>, DMatrix<f64>) {
        let with_error: Vec<usize> = (0..self.bins.len()).filter(|&i| self.deviations[i].is_some()).collect();
        let deviations: Vec<Deviations> = self.deviations.iter().flatten().cloned().collect();
        (with_error, influence.covariance(&deviations))
    }
}

fn center(ensemble: &Ensemble, bin: i64) -> f64 {
    f64::midpoint(ensemble.bins.lower_edge(bin), ensemble.bins.lower_edge(bin + 1))
}

fn bins_of(ensemble: &Ensemble, request: &ProfileRequest) -> Option<RangeInclusive<i64>> {
    let sampled = (*ensemble.points.bins.first()?, *ensemble.points.bins.last()?);
    let whole = ensemble
        .bins
        .n_bins_in_period()
        .map_or(sampled, |n| (0, i64::from(n) - 1));
    let bins = request.first_bin.unwrap_or(whole.0)..=request.last_bin.unwrap_or(whole.1);
    let points = ensemble.points.in_bin(*bins.start()).start..ensemble.points.in_bin(*bins.end()).end;
    (!points.is_empty()).then_some(bins)
}

fn density(ensemble: &Ensemble, influence: &Influence, bins: RangeInclusive<i64>) -> Option<Sampled> {
    let volume = (bins.end() - bins.start() + 1) as f64 * ensemble.bins.width();
    let quantity: Quantity = log_weight_of_bins(ensemble, influence, bins)?;
    Some(Sampled {
        log_density: quantity.value - volume.ln(),
        deviations: influence.deviations(&quantity),
    })
}

fn zero_of(
    ensemble: &Ensemble,
    influence: &Influence,
    zero: Zero,
    bins: &RangeInclusive<i64>,
    sampled: &[Option<Sampled>],
) -> Result<(Sampled, Option<i64>), ProfileError> {
    let single = |bin: i64| {
        density(ensemble, influence, bin..=bin)
            .map(|density| (density, Some(bin)))
            .ok_or(ProfileError::ZeroNotSampled {
                zero,
                position: center(ensemble, bin),
            })
    };
    let bin_of = |position: f64| {
        ensemble
            .bins
            .bin_of(position)
            .ok_or(ProfileError::ZeroNotSampled { zero, position })
    };
    match zero {
        Zero::Minimum => {
            let densest = bins
                .clone()
                .zip(sampled)
                .filter_map(|(bin, density)| density.as_ref().map(|density| (bin, density.log_density)))
                .reduce(|best, next| if next.1 > best.1 { next } else { best });
            single(densest.ok_or(ProfileError::NothingSampled)?.0)
        }
        Zero::Position { position } => single(bin_of(position)?),
        Zero::Range { from, to } => {
            let first = bin_of(from)?;
            let last = first + ensemble.bins.n_bins_touched(from, to) - 1;
            if let Some(empty) = (first..=last).find(|&bin| ensemble.points.in_bin(bin).is_empty()) {
                return Err(ProfileError::ZeroNotSampled {
                    zero,
                    position: center(ensemble, empty),
                });
            }
            density(ensemble, influence, first..=last)
                .map(|density| (density, None))
                .ok_or(ProfileError::ZeroNotSampled { zero, position: from })
        }
    }
}

/// What was sampled in a bin.
#[derive(Debug, Clone, Copy, Default)]
struct BinSupport {
    n_samples: u64,
    effective_samples: f64,
    n_windows: usize,
}

impl BinSupport {
    fn of_bins(ensemble: &Ensemble, bins: &RangeInclusive<i64>) -> Vec<Self> {
        let mut support: Vec<Self> = bins.clone().map(|_| Self::default()).collect();
        for window in &ensemble.windows {
            let g = window.inefficiency.unwrap_or(1.0);
            let mut last_bin = None;
            for &(point, count) in &window.counts {
                let bin = ensemble.points.bins[point as usize];
                let place = bins
                    .contains(&bin)
                    .then(|| usize::try_from(bin - bins.start()).ok())
                    .flatten();
                let Some(of_bin) = place.and_then(|place| support.get_mut(place)) else {
                    continue;
                };
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
}
