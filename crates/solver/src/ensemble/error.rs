//! Why windows cannot be laid together.

use spandrel_bias::OutsideTable;
use std::fmt;

/// Why windows cannot be laid together.
#[derive(Debug, Clone, PartialEq)]
pub enum EnsembleError {
    /// There is no window.
    NoWindows,
    /// A window without a sample.
    NoSamples {
        /// Its name.
        window: String,
    },
    /// A weight that is not positive and finite.
    Weight {
        /// The window's name.
        window: String,
        /// The weight given.
        weight: f64,
    },
    /// A window's bias, runs or bins have other axes than the ensemble.
    Axes {
        /// The window's name.
        window: String,
        /// Number of axes of the ensemble.
        n_axes: usize,
    },
    /// A window's runs were condensed on other cells than the first one's.
    MixedCells {
        /// The window's name.
        window: String,
    },
    /// More points than can be numbered (2³²).
    TooManyPoints,
    /// A window's table does not reach a place that another window sampled.
    OutsideTable {
        /// Name of the window with the table.
        window: String,
        /// Where its table ends and which position it misses.
        outside: OutsideTable,
    },
}

impl fmt::Display for EnsembleError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoWindows => write!(f, "no window is left to solve"),
            Self::NoSamples { window } => write!(f, "window `{window}` has no sample"),
            Self::Weight { window, weight } => {
                write!(f, "window `{window}` has weight {weight}, expected a positive finite number")
            }
            Self::Axes { window, n_axes } => {
                write!(f, "window `{window}` does not have the {n_axes} axes of the ensemble")
            }
            Self::MixedCells { window } => {
                write!(f, "window `{window}` was condensed on other cells than the windows before it")
            }
            Self::TooManyPoints => write!(f, "more than 4294967295 points; take fewer samples, or larger cells"),
            Self::OutsideTable { window, outside } => {
                write!(f, "the bias table of window `{window}` misses a place that another window sampled: {outside}")
            }
        }
    }
}

impl std::error::Error for EnsembleError {}
