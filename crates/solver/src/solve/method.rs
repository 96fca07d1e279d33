//! The ways to the minimum, by name.

use serde::Serialize;
use std::ops::ControlFlow;

/// How the likelihood is maximized. All agree to 1e-9 kT where they are certified.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Method {
    /// Damped Newton steps.
    #[default]
    Newton,
    /// The plain self-consistent iteration; slow beyond some 25 windows.
    SelfConsistent,
    /// Trust region with truncated conjugate gradients.
    TrustRegion,
    /// Limited-memory quasi-Newton.
    #[serde(rename = "l-bfgs")]
    LimitedMemory,
}

impl Method {
    /// All methods.
    pub const ALL: [Self; 4] = [Self::Newton, Self::SelfConsistent, Self::TrustRegion, Self::LimitedMemory];

    /// Name in a job file.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Newton => "newton",
            Self::SelfConsistent => "self-consistent",
            Self::TrustRegion => "trust-region",
            Self::LimitedMemory => "l-bfgs",
        }
    }
}

/// What a solve is asked for.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SolveOptions {
    /// How.
    pub method: Method,
    /// Largest Newton step of a solution, in kT.
    pub tolerance: f64,
    /// Most iterations; `None` leaves it to the method.
    pub max_iterations: Option<u64>,
}

impl Default for SolveOptions {
    fn default() -> Self {
        Self { method: Method::default(), tolerance: 1e-10, max_iterations: None }
    }
}

/// Called with the number of iterations and, where it is known, the Newton step in kT; breaking interrupts the solve.
pub type Progress<'a> = dyn FnMut(u64, Option<f64>) -> ControlFlow<()> + 'a;
