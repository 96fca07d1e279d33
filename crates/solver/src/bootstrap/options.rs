//! What a bootstrap is asked for, and why there is none.

use serde::Serialize;
use std::fmt;
use std::ops::ControlFlow;

/// Fewest replicates: a standard error is then known to a sixth.
pub const FEWEST_REPLICATES: usize = 20;

/// What a bootstrap is asked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct BootstrapOptions {
    /// Replicates, each of them solved: [`FEWEST_REPLICATES`] or more. B of them know a standard error to 1/√(2B), a thousand to 2.2 %.
    pub n_replicates: usize,
    /// Where the random numbers start. The same seed gives the same results, with any number of threads.
    pub seed: u64,
}

impl Default for BootstrapOptions {
    fn default() -> Self {
        Self { n_replicates: 1000, seed: 1 }
    }
}

/// Called now and then with the number of replicates done and asked for; breaking interrupts the bootstrap.
pub type ReplicateProgress<'a> = dyn FnMut(usize, usize) -> ControlFlow<()> + 'a;

/// Why there is no bootstrap.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum BootstrapError {
    /// Too few replicates were asked for.
    Replicates {
        /// The number asked for.
        found: usize,
    },
    /// Windows none of whose replicas shows a spread: nothing has an error that could be checked.
    Unsupported {
        /// Their names.
        windows: Vec<String>,
    },
    /// The profile's zero holds no sample of this ensemble.
    ZeroNotSampled,
    /// The likelihood has no curvature in some direction: the windows hang together by next to nothing.
    NoCurvature,
    /// The caller asked to stop.
    Interrupted,
}

impl fmt::Display for BootstrapError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Replicates { found } => {
                write!(f, "a bootstrap needs at least {FEWEST_REPLICATES} replicates, found {found}")
            }
            Self::Unsupported { windows } => write!(
                f,
                "no error can be checked: the series of {} show no spread in time; lengthen these runs or leave them out",
                windows.iter().map(|name| format!("`{name}`")).collect::<Vec<_>>().join(", ")
            ),
            Self::ZeroNotSampled => {
                write!(f, "the zero of the profile holds no sample; draw the profile from the same data first")
            }
            Self::NoCurvature => write!(
                f,
                "the windows hang together by next to nothing, so that no replicate can be solved; sample between them"
            ),
            Self::Interrupted => write!(f, "interrupted"),
        }
    }
}

impl std::error::Error for BootstrapError {}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn messages_name_what_was_found_and_what_to_do() {
        let unsupported = BootstrapError::Unsupported { windows: vec!["w3".into(), "w7".into()] };
        assert_eq!(
            unsupported.to_string(),
            "no error can be checked: the series of `w3`, `w7` show no spread in time; lengthen these runs or leave them out"
        );
        let few = BootstrapError::Replicates { found: 3 };
        assert_eq!(few.to_string(), "a bootstrap needs at least 20 replicates, found 3");
    }
}
