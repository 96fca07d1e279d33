//! The outcome of a solve.

use super::certify::Certificate;
use super::method::Method;
use serde::Serialize;

/// The windows' reduced free energies at maximum likelihood.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Solution {
    /// fₖ in kT, one a window, 0 in the gauge window: minus the logarithm of the window's partition function relative to the gauge window's.
    pub free_energies: Vec<f64>,
    /// The window whose f is held at 0.
    pub gauge: usize,
    /// How it was found.
    pub method: Method,
    /// Iterations taken.
    pub iterations: u64,
    /// Distance from the minimum.
    pub certificate: Certificate,
}
