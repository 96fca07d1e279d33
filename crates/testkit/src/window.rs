//! One window of a system: its restraint, its length and its memory.

use crate::correlation::Correlation;
use crate::error::SystemError;
use crate::restraint::Restraint;

/// A window to be sampled.
#[derive(Clone, Debug)]
pub struct Window {
    /// The bias.
    pub restraint: Restraint,
    /// Number of samples.
    pub n_samples: usize,
    /// Autocorrelation of the latent series.
    pub correlation: Correlation,
}

impl Window {
    /// A window with independent samples.
    #[must_use]
    pub fn independent(restraint: Restraint, n_samples: usize) -> Self {
        Self { restraint, n_samples, correlation: Correlation::Independent }
    }
}

/// Refuses a window whose numbers are out of range.
pub(crate) fn check_window(index: usize, window: &Window) -> Result<(), SystemError> {
    if !window.restraint.is_valid() {
        return Err(SystemError::Restraint { window: index, found: format!("{:?}", window.restraint) });
    }
    if !window.correlation.is_valid() {
        return Err(SystemError::Correlation { window: index, found: format!("{:?}", window.correlation) });
    }
    Ok(())
}
