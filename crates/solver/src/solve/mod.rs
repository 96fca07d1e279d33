//! Maximum likelihood: from an ensemble to the windows' reduced free energies.
//!
//! The unbiased weight of a point c is p(c) ∝ m(c)/D(c), D(c) = Σₖ Mₖ exp(fₖ − bₖ(c)), where the fₖ minimize the convex
//! A(f) = Σ_c m(c) ln D(c) − Σₖ Mₖ fₖ with f fixed in one window (Ferrenberg & Swendsen 1989; Kumar et al. 1992 for points that are
//! bins; Bartels 2000, Kong et al. 2003, Shirts & Chodera 2008 for points that are samples; Zhu & Hummer 2012 for the convex form).
//!
//! [`Links`] finds a start and which windows hang together; a [`Method`] walks to the minimum; [`certify`] measures how far from it
//! the result is, in the same way for each of them.

mod candidates;
mod certify;
mod fixed_point;
mod likelihood;
mod links;
mod maximize;
mod memory_limited;
mod method;
mod minimizer;
mod newton;
mod objective;
mod pair;
mod restarts;
mod shares;
mod solution;
mod trust_region;
mod uncovered;

pub use certify::{Certificate, certify};
pub(crate) use certify::{factorized, largest};
pub(crate) use likelihood::Likelihood;
pub use links::{LEAST_LINK, Link, Links};
pub use maximize::{SolveError, solve};
pub use method::{Method, Progress, SolveOptions};
pub use pair::{PairSolution, solve_pair};
pub use shares::SHARE_CUT;
pub use solution::Solution;
pub use uncovered::UncoveredStretch;
