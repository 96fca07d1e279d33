//! A band that holds the whole curve at once.

use super::result::Profile;
use crate::influence::{Influence, quantile};
use nalgebra::{DMatrix, DVector, SymmetricEigen};
use rand_chacha::ChaCha8Rng;
use rand_distr::{Distribution, StandardNormal};
use serde::Serialize;
use statrs::distribution::{ContinuousCDF, Normal};

/// Draws from the joint distribution of the bins: the level of the band is then known to √(0.05·0.95/20000) = 0.15 %.
const DRAWS: usize = 20_000;

/// Directions of the correlation matrix with less than this part of the largest eigenvalue move no bin visibly.
const LEAST_EIGENVALUE: f64 = 1e-8;

/// Half widths, one a bin, such that the exact curve lies inside at all bins together with the stated probability.
///
/// Pointwise 95 % intervals hold the whole curve less often, since there are many bins to miss. The band widens all of them to a common
/// pointwise level: the one at which the largest of the bins' standardized deviations, jointly normal with the estimated correlations, stays
/// inside with the stated probability (the sup-t band; Montiel Olea & Plagborg-Møller 2019). Each bin keeps Student's t with its own
/// degrees of freedom.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SimultaneousBand {
    /// Probability that the whole curve lies inside.
    pub probability: f64,
    /// Pointwise probability of each interval of the band.
    pub pointwise_probability: f64,
    /// Half width of each bin of the profile in kT; `None` where the bin has no error.
    pub half_widths: Vec<Option<f64>>,
}

impl Profile {
    /// The band of the given probability (between 0 and 1); `None` if no bin has an error, or the probability is out of range.
    ///
    /// The random numbers only serve to find the common level; the same generator state gives the same band.
    #[must_use]
    pub fn simultaneous_band(
        &self,
        influence: &Influence,
        probability: f64,
        generator: &mut ChaCha8Rng,
    ) -> Option<SimultaneousBand> {
        if !(probability > 0.0 && probability < 1.0) {
            return None;
        }
        let (with_error, covariance) = self.covariance(influence);
        let beyond = Normal::standard().sf(largest_deviation(&covariance, probability, generator)?);

        let mut half_widths = vec![None; self.bins.len()];
        for bin in with_error {
            half_widths[bin] = self.bins[bin]
                .uncertainty
                .map(|error| quantile(1.0 - beyond, error.degrees_of_freedom) * error.standard_error);
        }
        Some(SimultaneousBand { probability, pointwise_probability: 1.0 - 2.0 * beyond, half_widths })
    }
}

/// Quantile of the largest standardized deviation among jointly normal numbers with the given covariance.
fn largest_deviation(covariance: &DMatrix<f64>, probability: f64, generator: &mut ChaCha8Rng) -> Option<f64> {
    let root = root_of_correlation(covariance)?;
    let mut largest: Vec<f64> = (0..DRAWS)
        .map(|_| {
            let draw = DVector::from_fn(root.ncols(), |_, _| StandardNormal.sample(generator));
            (&root * draw).amax()
        })
        .collect();
    largest.sort_by(f64::total_cmp);
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 0 and the number of draws")]
    let place = ((probability * DRAWS as f64).ceil() as usize).clamp(1, DRAWS) - 1;
    Some(largest[place])
}

/// A matrix whose rows have the correlations of the bins as their products; `None` for no bins or numbers that are none.
fn root_of_correlation(covariance: &DMatrix<f64>) -> Option<DMatrix<f64>> {
    if covariance.is_empty() || covariance.iter().any(|x| !x.is_finite()) {
        return None;
    }
    let scale = covariance.diagonal().map(|variance| variance.sqrt().recip());
    let correlation =
        DMatrix::from_fn(covariance.nrows(), covariance.ncols(), |i, j| covariance[(i, j)] * scale[i] * scale[j]);
    let SymmetricEigen { eigenvectors, eigenvalues } = SymmetricEigen::new(correlation);
    let largest = eigenvalues.amax();
    let kept: Vec<usize> = (0..eigenvalues.len()).filter(|&i| eigenvalues[i] > LEAST_EIGENVALUE * largest).collect();
    Some(DMatrix::from_fn(covariance.nrows(), kept.len(), |bin, i| {
        eigenvectors[(bin, kept[i])] * eigenvalues[kept[i]].sqrt()
    }))
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use rand::SeedableRng;

    /// Pointwise probability that goes with the quantile, less than, at or above the exact one within 4.5 standard errors of the draws.
    fn assert_level(covariance: &DMatrix<f64>, exact_pointwise: f64) {
        let mut generator = ChaCha8Rng::seed_from_u64(5);
        let quantile = largest_deviation(covariance, 0.95, &mut generator).unwrap();
        // The draws hold the joint probability to √(0.05·0.95/20000); one of m independent bins turns that into an m-th of it, or all of it.
        let joint_error = 4.5 * (0.05_f64 * 0.95 / 20_000.0).sqrt();
        let pointwise = 1.0 - 2.0 * Normal::standard().sf(quantile);
        assert!((pointwise - exact_pointwise).abs() < joint_error, "{pointwise} against {exact_pointwise}");
    }

    #[test]
    fn independent_bins_need_the_power_of_their_number() {
        let variances = DVector::from_fn(12, |i, _| 0.3 + i as f64);
        assert_level(&DMatrix::from_diagonal(&variances), 0.95_f64.powf(1.0 / 12.0));
    }

    #[test]
    fn bins_that_move_as_one_need_no_more_than_one() {
        let deviations = DVector::from_fn(12, |i, _| 0.3 + i as f64);
        assert_level(&(&deviations * deviations.transpose()), 0.95);
    }

    #[test]
    fn no_bins_or_numbers_that_are_none_give_no_band() {
        let mut generator = ChaCha8Rng::seed_from_u64(5);
        assert_eq!(largest_deviation(&DMatrix::zeros(0, 0), 0.95, &mut generator), None);
        let broken = DMatrix::from_element(2, 2, f64::NAN);
        assert_eq!(largest_deviation(&broken, 0.95, &mut generator), None);
    }
}
