//! What a profile is asked for.

use serde::Serialize;
use std::fmt;

/// Where the profile is zero.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
#[serde(rename_all = "kebab-case", tag = "kind")]
pub enum Zero {
    /// The lowest bin among those with samples enough for an error. Errors are those of differences from that bin; that it was chosen by
    /// its value is not in them.
    Minimum,
    /// The bin that holds a position (in the axis' unit).
    Position {
        /// The position.
        position: f64,
    },
    /// The mean density over the bins that a range touches: F = 0 is −kT ln of it.
    Range {
        /// Lower end, in the axis' unit.
        from: f64,
        /// Upper end, in the axis' unit.
        to: f64,
    },
}

/// Which bins, and where the zero is.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ProfileRequest {
    /// First bin of the output; `None`: the first one sampled (on an axis with a period: bin 0).
    pub first_bin: Option<i64>,
    /// Last bin of the output; `None`: the last one sampled (on an axis with a period: the last one of the period).
    pub last_bin: Option<i64>,
    /// The zero.
    pub zero: Zero,
}

/// Why there is no profile.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ProfileError {
    /// The zero lies on bins without a sample.
    ZeroNotSampled {
        /// The zero asked for.
        zero: Zero,
        /// Middle of the first such bin, in the axis' unit.
        position: f64,
    },
    /// No sample lies in the bins of the output.
    NothingSampled,
    /// The range of the zero is empty, out of reach, or longer than the period.
    ZeroRange {
        /// Lower end given.
        from: f64,
        /// Upper end given.
        to: f64,
    },
}

impl fmt::Display for ProfileError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::ZeroNotSampled { position, .. } => {
                write!(f, "the zero of the profile needs the bin at {position}, where nothing was sampled")
            }
            Self::NothingSampled => write!(f, "no sample lies in the range of the profile"),
            Self::ZeroRange { from, to } => {
                write!(f, "the zero of the profile needs a range of the axis within one period, found {from} to {to}")
            }
        }
    }
}

impl std::error::Error for ProfileError {}
