//! From linked windows to a certified solution, whichever way.

use super::certify::{Certificate, certify};
use super::fixed_point::SelfConsistent;
use super::links::Links;
use super::memory_limited::MemoryLimited;
use super::method::{Method, Progress, SolveOptions};
use super::minimizer::{Minimized, Minimizer, Stopped};
use super::newton::Newton;
use super::solution::Solution;
use super::trust_region::TrustRegion;
use crate::ensemble::Ensemble;
use std::fmt;

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
    let Minimized { f, iterations } = minimizer(options.method)
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

fn minimizer(method: Method) -> Box<dyn Minimizer> {
    match method {
        Method::Newton => Box::new(Newton),
        Method::SelfConsistent => Box::new(SelfConsistent),
        Method::TrustRegion => Box::new(TrustRegion),
        Method::LimitedMemory => Box::new(MemoryLimited),
    }
}
