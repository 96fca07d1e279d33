//! What can be wrong with a system.

use std::fmt;

/// Why a system cannot be built.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum SystemError {
    /// There is no window.
    NoWindows,
    /// The range is not two finite numbers in increasing order.
    Range {
        /// Lower end as given.
        lower: f64,
        /// Upper end as given.
        upper: f64,
    },
    /// A restraint has a center, force constant or slope that is not finite, or a negative force constant.
    Restraint {
        /// Index of the window.
        window: usize,
        /// The restraint as given.
        found: String,
    },
    /// A restraint of this kind has no meaning in this system.
    Unsupported {
        /// Index of the window.
        window: usize,
        /// The restraint as given.
        found: String,
        /// What the system allows.
        expected: &'static str,
    },
    /// A correlation time is not positive and finite, or a share is not between 0 and 1.
    Correlation {
        /// Index of the window.
        window: usize,
        /// The correlation as given.
        found: String,
    },
    /// The force constant of the potential is not positive and finite.
    ForceConstant {
        /// The number as given.
        found: f64,
    },
    /// The potential or a bias is nowhere finite in the range, or somewhere not a number.
    NoWeight,
}

impl fmt::Display for SystemError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoWindows => write!(out, "expected at least one window, found none"),
            Self::Range { lower, upper } => {
                write!(out, "expected a finite range with `lower` < `upper`, found {lower} to {upper}")
            }
            Self::Restraint { window, found } => write!(
                out,
                "window {window}: expected finite numbers and a `force_constant` that is not negative, found {found}"
            ),
            Self::Unsupported { window, found, expected } => {
                write!(out, "window {window}: expected {expected}, found {found}")
            }
            Self::Correlation { window, found } => write!(
                out,
                "window {window}: expected positive finite correlation times and a `slow_share` in 0..1, found {found}"
            ),
            Self::ForceConstant { found } => {
                write!(out, "expected a positive finite `force_constant`, found {found}")
            }
            Self::NoWeight => {
                write!(out, "expected energies that are numbers, and finite somewhere in the range; found others")
            }
        }
    }
}

impl std::error::Error for SystemError {}
