//! What one replicate experiment came to.

use crate::method::ErrorBar;

/// A replicate that gave a profile. Lists have one entry a scored bin. Energies in kT.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Estimated less exact free-energy difference from the zero; `None` where nothing was sampled.
    pub misses: Vec<Option<f64>>,
    /// Error bars, one list a method in the order of [`Method::ALL`](crate::Method::ALL).
    pub error_bars: Vec<Vec<Option<ErrorBar>>>,
}

/// A replicate, whether it gave a profile or not.
pub type Replicate = Result<Outcome, Refusal>;

/// Why a replicate gave no profile, as the program would say it to its user.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Refusal {
    /// The windows fall into groups that no samples link.
    NotLinked,
    /// The solve stopped short of its tolerance, or the likelihood has no curvature at its end.
    NotConverged,
    /// Nothing was sampled at the zero.
    ZeroNotSampled,
}

impl Refusal {
    /// In words, for the table.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::NotLinked => "not linked",
            Self::NotConverged => "not converged",
            Self::ZeroNotSampled => "zero not sampled",
        }
    }
}
