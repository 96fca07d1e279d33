//! Bins with free energies, errors, and what supports them.

use super::request::{ProfileError, ProfileRequest, Zero};
use super::support::{BinSupport, FEWEST_EFFECTIVE_SAMPLES};
use super::zero::{LogDensity, ZeroPoint, stretches_of_range};
use crate::condense::BinGrid;
use crate::ensemble::Ensemble;
use crate::influence::{Deviations, Influence, Support, Uncertainty};
use nalgebra::DMatrix;
use rayon::prelude::*;
use serde::Serialize;
use std::ops::RangeInclusive;

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
    /// Effective samples in the zero; below [`FEWEST_EFFECTIVE_SAMPLES`] no bin has an error.
    pub zero_effective_samples: f64,
    #[serde(skip)]
    deviations: Vec<Option<Deviations>>,
}

impl Profile {
    /// Draws the profile from a solution.
    ///
    /// # Errors
    /// A zero on bins that nothing sampled, or no sample in the range.
    pub fn draw(ensemble: &Ensemble, influence: &Influence, request: &ProfileRequest) -> Result<Self, ProfileError> {
        let bins = bins_of(ensemble, request).ok_or(ProfileError::NothingSampled)?;
        let numbers: Vec<i64> = bins.clone().collect();
        let densities: Vec<Option<LogDensity>> =
            numbers.par_iter().map(|&bin| LogDensity::over(ensemble, influence, &[bin..=bin])).collect();
        let support = BinSupport::of_bins(ensemble, &bins);
        let densest = densest_bin(&numbers, &densities, &support).ok_or(ProfileError::NothingSampled)?;
        let zero = ZeroPoint::find(ensemble, influence, request.zero, densest)?;

        let mut profile = Self {
            bins: Vec::with_capacity(numbers.len()),
            zero: request.zero,
            zero_position: zero.bin.map(|bin| ensemble.bins.center(bin)),
            zero_effective_samples: zero.effective_samples,
            deviations: Vec::with_capacity(numbers.len()),
        };
        for ((&number, density), support) in numbers.iter().zip(densities).zip(support) {
            let deviations = density.as_ref().map(|density| density.deviations.minus(&zero.density.deviations));
            let uncertainty = deviations.as_ref().map(|deviations| influence.uncertainty(deviations));
            let status = status(number, uncertainty.as_ref(), &support, &zero);
            let has_error = matches!(status, BinStatus::Determined | BinStatus::Provisional);
            profile.bins.push(ProfileBin {
                lower: ensemble.bins.lower_edge(number),
                upper: ensemble.bins.lower_edge(number + 1),
                free_energy: density.map(|density| zero.density.value - density.value),
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

    /// The same profile with errors from elsewhere, one a bin; where there is none the bin's error is not determined.
    #[must_use]
    pub fn with_errors(mut self, errors: &[Option<Uncertainty>]) -> Self {
        for (bin, error) in self.bins.iter_mut().zip(errors) {
            if bin.uncertainty.is_none() {
                continue;
            }
            bin.uncertainty = error.filter(|error| error.support != Support::NotDetermined);
            bin.status = match bin.uncertainty.map(|error| error.support) {
                Some(Support::Determined) => BinStatus::Determined,
                Some(Support::Provisional) => BinStatus::Provisional,
                Some(Support::NotDetermined) | None => BinStatus::NotDetermined,
            };
        }
        for (bin, deviations) in self.bins.iter().zip(&mut self.deviations) {
            if bin.uncertainty.is_none() {
                *deviations = None;
            }
        }
        self
    }

    /// The profile without unsampled bins at its ends.
    #[must_use]
    pub fn trimmed(mut self) -> Self {
        let sampled = |bin: &ProfileBin| bin.status != BinStatus::Unsampled;
        let first = self.bins.iter().position(sampled).unwrap_or(0);
        let end = self.bins.iter().rposition(sampled).map_or(0, |last| last + 1);
        self.bins = self.bins[first..end.max(first)].to_vec();
        self.deviations = self.deviations[first..end.max(first)].to_vec();
        self
    }

    /// How the free energy of a bin deviates; `None` where it has no error.
    pub(crate) fn deviations(&self, bin: usize) -> Option<&Deviations> {
        self.deviations.get(bin)?.as_ref()
    }

    /// The stretches of bins over whose mean density the profile is zero.
    pub(crate) fn zero_stretches(&self, bins: &BinGrid) -> Option<Vec<RangeInclusive<i64>>> {
        match (self.zero_position, self.zero) {
            (Some(position), _) => bins.bin_of(position).map(|bin| vec![bin..=bin]),
            (None, Zero::Range { from, to }) => stretches_of_range(bins, from, to),
            (None, Zero::Minimum | Zero::Position { .. }) => None,
        }
    }

    /// Numbers of the bins that have an error, and the covariance matrix of their free energies in kT².
    #[must_use]
    pub fn covariance(&self, influence: &Influence) -> (Vec<usize>, DMatrix<f64>) {
        let with_error: Vec<usize> = (0..self.bins.len()).filter(|&i| self.deviations[i].is_some()).collect();
        let deviations: Vec<Deviations> = self.deviations.iter().flatten().cloned().collect();
        (with_error, influence.covariance(&deviations))
    }
}

/// The bin of the lowest free energy; one with too few samples for an error serves only where there is no other.
fn densest_bin(numbers: &[i64], densities: &[Option<LogDensity>], support: &[BinSupport]) -> Option<i64> {
    let sampled =
        || numbers.iter().zip(densities).zip(support).filter_map(|((n, d), s)| Some((*n, d.as_ref()?.value, s)));
    let densest = |best: (i64, f64), next: (i64, f64)| if next.1 > best.1 { next } else { best };
    let supported = sampled().filter(|(_, _, support)| support.effective_samples >= FEWEST_EFFECTIVE_SAMPLES);
    let bin_and_density = |(n, d, _): (i64, f64, &BinSupport)| (n, d);
    supported
        .map(bin_and_density)
        .reduce(densest)
        .or_else(|| sampled().map(bin_and_density).reduce(densest))
        .map(|(number, _)| number)
}

fn status(number: i64, uncertainty: Option<&Uncertainty>, support: &BinSupport, zero: &ZeroPoint) -> BinStatus {
    let Some(uncertainty) = uncertainty else { return BinStatus::Unsampled };
    if zero.bin == Some(number) {
        return BinStatus::Zero;
    }
    if support.effective_samples < FEWEST_EFFECTIVE_SAMPLES || zero.effective_samples < FEWEST_EFFECTIVE_SAMPLES {
        return BinStatus::NotDetermined;
    }
    match uncertainty.support {
        Support::NotDetermined => BinStatus::NotDetermined,
        Support::Provisional => BinStatus::Provisional,
        Support::Determined => BinStatus::Determined,
    }
}

fn bins_of(ensemble: &Ensemble, request: &ProfileRequest) -> Option<RangeInclusive<i64>> {
    let sampled = (*ensemble.points.bins.first()?, *ensemble.points.bins.last()?);
    let whole = ensemble.bins.n_bins_in_period().map_or(sampled, |n| (0, i64::from(n) - 1));
    let bins = request.first_bin.unwrap_or(whole.0)..=request.last_bin.unwrap_or(whole.1);
    let points = ensemble.points.in_bin(*bins.start()).start..ensemble.points.in_bin(*bins.end()).end;
    (!points.is_empty()).then_some(bins)
}
