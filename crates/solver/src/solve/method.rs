//! The ways to the minimum, behind one door.

use super::certify::{Certificate, certify};
use super::fixed_point::SelfConsistent;
use super::links::Links;
use super::memory_limited::MemoryLimited;
use super::newton::Newton;
use super::solution::Solution;
use super::trust_region::TrustRegion;
use crate::ensemble::Ensemble;
use serde::Serialize;
use std::fmt;
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

    fn minimizer(self) -> Box<dyn Minimizer> {
        match self {
            Self::Newton => Box::new(Newton),
            Self::SelfConsistent => Box::new(SelfConsistent),
            Self::TrustRegion => Box::new(TrustRegion),
            Self::LimitedMemory => Box::new(MemoryLimited),
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

/// Why there is no solution.
#[derive(Debug, Clone, PartialEq)]
pub enum SolveError {
    /// The windows fall into groups that no samples link.
    NotLinked(Box<Links>),
    /// The method stopped short of the tolerance.
    NotConverged {
        /// Where it stopped, in kT.
        free_energies: Vec<f64>,
        /// How far that is from the minimum; `None` if the Hessian is not positive definite there.
        certificate: Option<Certificate>,
        /// What was asked for.
        tolerance: f64,
        /// How.
        method: Method,
        /// Iterations taken.
        iterations: u64,
    },
    /// The caller asked to stop.
    Interrupted,
}

impl fmt::Display for SolveError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotLinked(links) => write!(
                f,
                "the windows fall into {} groups that no samples link, so their profiles cannot be joined",
                links.groups.len()
            ),
            Self::NotConverged { certificate, tolerance, method, iterations, .. } => {
                write!(f, "`{}` stopped after {iterations} iterations ", method.name())?;
                match certificate {
                    Some(c) => write!(
                        f,
                        "with a Newton step of {:.1e} kT, above the tolerance of {tolerance:.1e} kT",
                        c.newton_step
                    ),
                    None => write!(f, "where the likelihood has no curvature in some direction"),
                }
            }
            Self::Interrupted => write!(f, "interrupted"),
        }
    }
}

impl std::error::Error for SolveError {}

/// Maximizes the likelihood of linked windows, starting from `links`.
///
/// # Errors
/// Groups of windows that are not linked; a result whose Newton step, with everything looked up again at the result, is not below the
/// tolerance (the partial result comes with the error); a stop asked for by `progress`.
pub fn solve(
    ensemble: &Ensemble,
    links: &Links,
    options: &SolveOptions,
    progress: &mut Progress<'_>,
) -> Result<Solution, SolveError> {
    if links.groups.len() != 1 {
        return Err(SolveError::NotLinked(Box::new(links.clone())));
    }
    let gauge = 0;
    let Minimized { f, iterations } = options
        .method
        .minimizer()
        .minimize(ensemble, gauge, &links.start, options, progress)
        .map_err(|Stopped| SolveError::Interrupted)?;
    let free_energies: Vec<f64> = f.iter().map(|x| x - f[gauge]).collect();
    match certify(ensemble, &free_energies, gauge) {
        Some(certificate) if certificate.newton_step <= options.tolerance => {
            Ok(Solution { free_energies, gauge, method: options.method, iterations, certificate })
        }
        certificate => Err(SolveError::NotConverged {
            free_energies,
            certificate,
            tolerance: options.tolerance,
            method: options.method,
            iterations,
        }),
    }
}
