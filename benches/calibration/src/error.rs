//! What can go wrong with a study, as opposed to within a replicate.

use spandrel_bias::{AxisError, BiasError};
use spandrel_solver::condense::{BinGridError, CondenseError};
use spandrel_solver::ensemble::EnsembleError;
use spandrel_solver::profile::ProfileError;
use spandrel_testkit::SystemError;
use std::fmt;

/// Why a study cannot be made.
#[derive(Debug)]
#[non_exhaustive]
pub enum CalibrationError {
    /// The system cannot be built.
    System(SystemError),
    /// A window has a bias that the study cannot hand to the solver.
    Restraint {
        /// Number of the window.
        window: usize,
        /// Its restraint.
        found: String,
    },
    /// The axis is refused.
    Axis(AxisError),
    /// A bias is refused.
    Bias(BiasError),
    /// The bins of the profile are refused.
    Bins(BinGridError),
    /// The bins of the profile cannot be scored.
    TooFewBins {
        /// Bins found.
        n_bins: usize,
    },
    /// A sample is refused.
    Condense(CondenseError),
    /// The windows cannot be laid together.
    Ensemble(EnsembleError),
    /// The profile is refused for another reason than a zero without samples.
    Profile(ProfileError),
    /// The exact Hessian is not positive definite.
    Singular,
}

impl fmt::Display for CalibrationError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::System(inner) => inner.fmt(f),
            Self::Restraint { window, found } => {
                write!(f, "window {window}: expected no restraint, a harmonic or a linear one, found {found}")
            }
            Self::Axis(inner) => inner.fmt(f),
            Self::Bias(inner) => inner.fmt(f),
            Self::Bins(inner) => inner.fmt(f),
            Self::TooFewBins { n_bins } => write!(f, "expected at least 3 bins to score, found {n_bins}"),
            Self::Condense(inner) => inner.fmt(f),
            Self::Ensemble(inner) => inner.fmt(f),
            Self::Profile(inner) => inner.fmt(f),
            Self::Singular => write!(f, "the exact distributions of the windows do not overlap"),
        }
    }
}

impl std::error::Error for CalibrationError {}

macro_rules! from {
    ($($inner:ty => $variant:ident),*) => {
        $(impl From<$inner> for CalibrationError {
            fn from(inner: $inner) -> Self {
                Self::$variant(inner)
            }
        })*
    };
}

from!(
    SystemError => System,
    AxisError => Axis,
    BiasError => Bias,
    BinGridError => Bins,
    CondenseError => Condense,
    EnsembleError => Ensemble,
    ProfileError => Profile
);
