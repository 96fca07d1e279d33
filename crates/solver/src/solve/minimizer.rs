//! What every way to the minimum has in common.

use super::method::{Progress, SolveOptions};
use crate::ensemble::Ensemble;

/// Where a method stopped; whether that is the minimum is for [`certify`] to say.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Minimized {
    /// Reduced free energies in kT.
    pub f: Vec<f64>,
    /// Iterations taken.
    pub iterations: u64,
}

/// The caller asked to stop.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Stopped;

/// A way to the minimum of the likelihood.
pub(super) trait Minimizer {
    /// Walks from `start` (kT, one a window) as far as it can, holding `start[gauge]`.
    ///
    /// # Errors
    /// Only when `progress` asks to stop.
    fn minimize(
        &self,
        ensemble: &Ensemble,
        gauge: usize,
        start: &[f64],
        options: &SolveOptions,
        progress: &mut Progress<'_>,
    ) -> Result<Minimized, Stopped>;
}
