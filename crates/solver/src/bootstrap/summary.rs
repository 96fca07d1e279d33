//! From the values of all replicates to one error.

use super::blocks::BlockRule;
use super::result::{MOST_MISSING, ResampledError};
use crate::influence::{Deviations, Influence, Support, Uncertainty};

/// What every error of a bootstrap rests on.
pub(super) struct Summary<'a> {
    pub influence: &'a Influence,
    /// Blocks of the streams that support an error, in their order.
    pub blocks: Vec<BlockRule>,
    pub n_replicates: usize,
    pub n_unsolved: usize,
}

impl Summary<'_> {
    /// The error of a quantity from its values in the solved replicates, beside that from influences and its deviations.
    pub(super) fn error(
        &self,
        values: impl Iterator<Item = Option<f64>> + Clone,
        from_influences: Option<Uncertainty>,
        deviations: Option<&Deviations>,
    ) -> ResampledError {
        let n_empty = values.clone().filter(Option::is_none).count();
        let n_missing = n_empty + self.n_unsolved;
        let supported = from_influences.filter(|error| error.support != Support::NotDetermined).zip(deviations);
        let few_missing = n_missing as f64 <= MOST_MISSING * self.n_replicates as f64;
        let resampled = supported.filter(|_| few_missing).map(|(error, deviations)| {
            let degrees = self.degrees_of_freedom(deviations, self.n_replicates - n_missing);
            let resampled = Uncertainty::new(standard_deviation(values.flatten()), degrees, f64::INFINITY, true);
            Uncertainty { support: resampled.support.max(error.support), ..resampled }
        });
        let uncertainty = resampled.filter(|error| error.support != Support::NotDetermined);
        let ratio = uncertainty.zip(from_influences).map(|(error, other)| error.standard_error / other.standard_error);
        ResampledError { uncertainty, ratio, n_empty }
    }

    /// 1/ν = 1/ν of the blocks + 1/(B − 1) for B replicates: the relative variances of the two estimates, 2/ν each, add up.
    fn degrees_of_freedom(&self, deviations: &Deviations, n_values: usize) -> f64 {
        let (mut variance, mut squares) = (0.0, 0.0);
        for ((_, part), blocks) in self.influence.parts(deviations).into_iter().zip(&self.blocks) {
            variance += part;
            squares += part * part / (blocks.n_blocks() - 1.0);
        }
        let of_blocks = squares / (variance * variance);
        (of_blocks + (n_values as f64 - 1.0).recip()).recip().max(1.0)
    }
}

/// Standard deviation with the divisor B − 1.
fn standard_deviation(values: impl Iterator<Item = f64> + Clone) -> f64 {
    let n = values.clone().count() as f64;
    let mean = values.clone().sum::<f64>() / n;
    (values.map(|x| (x - mean) * (x - mean)).sum::<f64>() / (n - 1.0)).sqrt()
}
