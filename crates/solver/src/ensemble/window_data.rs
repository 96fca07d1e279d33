//! Windows before they are laid together.

use crate::condense::CondensedReplica;
use spandrel_bias::Bias;

/// A window as it is handed in: its condensed runs and what is known of it.
#[derive(Debug, Clone, PartialEq)]
pub struct WindowData {
    /// Name, unique in the ensemble.
    pub name: String,
    /// Reduced bias (kT).
    pub bias: Bias,
    /// Statistical weight ω of one sample, positive.
    pub weight: f64,
    /// One or more independent runs, all condensed on the same cells.
    pub replicas: Vec<CondensedReplica>,
}
