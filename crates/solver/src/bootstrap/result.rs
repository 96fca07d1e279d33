//! Errors from resampling, beside those from influences.

use super::blocks::BlockRule;
use crate::influence::{Support, Uncertainty};
use serde::Serialize;

/// Ratio of two standard errors of one quantity, either way, beyond which they disagree: the interval of one is then half as long again as that
/// of the other. Within it they are two estimates of one number from one set of data, each with its own noise.
pub const DISAGREEMENT: f64 = 1.5;

/// Part of the replicates without a value beyond which there is no error: an end of the 95 % interval would be infinite.
pub const MOST_MISSING: f64 = 0.025;

/// The error of one quantity from resampling.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ResampledError {
    /// Standard deviation over the replicates, with Student's t as for influences. `None` where the quantity has no error by influences, where
    /// its blocks are too few, or where more than [`MOST_MISSING`] of the replicates have no value.
    pub uncertainty: Option<Uncertainty>,
    /// Standard error over that from influences.
    pub ratio: Option<f64>,
    /// Replicates in which no sample of the bin, or of the zero, was drawn. Those that could not be solved are not among them.
    pub n_empty: usize,
}

/// Where something is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case", tag = "kind", content = "number")]
pub enum Place {
    /// A bin of the profile, by its number in it.
    Bin(usize),
    /// A window, by its number.
    Window(usize),
}

/// The ratio of two standard errors that is farthest from 1.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ErrorRatio {
    /// Where.
    pub place: Place,
    /// Bootstrap over influences.
    pub ratio: f64,
}

impl ErrorRatio {
    /// The ratio or its inverse, whichever is above 1.
    #[must_use]
    pub fn factor(&self) -> f64 {
        self.ratio.max(self.ratio.recip())
    }
}

/// The outcome of a bootstrap.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Bootstrap {
    /// Where the random numbers started.
    pub seed: u64,
    /// Replicates drawn.
    pub n_replicates: usize,
    /// Replicates that have no solution: their windows no longer hang together. They are left out of everything.
    pub n_unsolved: usize,
    /// How each stream of the ensemble was resampled; `None` where it was taken as it is, because it supports no error.
    pub streams: Vec<Option<BlockRule>>,
    /// Errors of the profile's bins (differences from its zero, kT), in the order of the profile.
    pub bins: Vec<ResampledError>,
    /// Errors of the windows' f relative to the gauge window, kT.
    pub windows: Vec<ResampledError>,
}

impl Bootstrap {
    /// Where bootstrap and influences are farthest apart, among the errors that both determine: provisional ones are too noisy to be
    /// compared. `None` if there are none.
    #[must_use]
    pub fn farthest_ratio(&self) -> Option<ErrorRatio> {
        let bins = self.bins.iter().enumerate().map(|(i, error)| (Place::Bin(i), error));
        let windows = self.windows.iter().enumerate().map(|(k, error)| (Place::Window(k), error));
        bins.chain(windows)
            .filter(|(_, error)| error.uncertainty.is_some_and(|error| error.support == Support::Determined))
            .filter_map(|(place, error)| Some(ErrorRatio { place, ratio: error.ratio? }))
            .reduce(|farthest, next| if next.factor() > farthest.factor() { next } else { farthest })
    }

    /// The same if it is beyond [`DISAGREEMENT`].
    #[must_use]
    pub fn disagreement(&self) -> Option<ErrorRatio> {
        self.farthest_ratio().filter(|farthest| farthest.factor() > DISAGREEMENT)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn error(ratio: f64, degrees_of_freedom: f64) -> ResampledError {
        let uncertainty = Uncertainty::new(0.3, degrees_of_freedom, 40.0, true);
        ResampledError { uncertainty: Some(uncertainty), ratio: Some(ratio), n_empty: 0 }
    }

    fn with_errors(bins: Vec<ResampledError>, windows: Vec<ResampledError>) -> Bootstrap {
        Bootstrap { seed: 7, n_replicates: 1000, n_unsolved: 0, streams: Vec::new(), bins, windows }
    }

    #[test]
    fn ratios_disagree_only_beyond_one_and_a_half_either_way() {
        let sure = |ratio| error(ratio, 35.0);
        assert_eq!(with_errors(vec![sure(1.1), sure(1.5)], vec![sure(0.7)]).disagreement(), None);
        let above = with_errors(vec![sure(1.1), sure(1.501)], vec![sure(0.7)]).disagreement();
        assert_eq!(above, Some(ErrorRatio { place: Place::Bin(1), ratio: 1.501 }));
        let below = with_errors(vec![sure(1.1), sure(1.6)], vec![sure(0.9), sure(0.6)]).disagreement();
        assert_eq!(below, Some(ErrorRatio { place: Place::Window(1), ratio: 0.6 }));
    }

    #[test]
    fn errors_that_are_provisional_or_missing_disagree_with_nothing() {
        let none = ResampledError { uncertainty: None, ratio: None, n_empty: 900 };
        let outcome = with_errors(vec![none, error(2.3, 8.0)], vec![error(1.2, 35.0), none]);
        assert_eq!(outcome.farthest_ratio(), Some(ErrorRatio { place: Place::Window(0), ratio: 1.2 }));
        assert_eq!(with_errors(vec![none], vec![error(2.3, 8.0)]).farthest_ratio(), None);
    }
}
