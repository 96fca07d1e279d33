//! The command line.

use crate::settings::{Settings, Weighting};
use crate::system::System;
use clap::Parser;
use std::path::PathBuf;

/// Measures on systems of known truth whether the error bars of a profile hold what they say.
///
/// Prints one line a system: the share of scored bins with an interval (printed, and determined without reserve), the coverage of 95 % and
/// 68 % intervals, that of the oracle (the exact large-sample error) on the same bins and on all, the standard deviation of (estimate −
/// truth)/error, the worst single bin, the median width of the intervals over the exact one, and the root mean square of the true error.
/// Numbers after ± are standard errors from the spread between replicates.
#[derive(Debug, Parser)]
#[command(name = "spandrel-calibration", version, max_term_width = 100)]
pub struct Arguments {
    /// Replicate experiments of each system.
    #[arg(long, value_name = "N", default_value_t = 1000, value_parser = clap::value_parser!(u64).range(2..=1_000_000))]
    pub replicates: u64,
    /// Measure this system only; may be given several times. All systems otherwise.
    #[arg(long, value_name = "NAME")]
    pub system: Vec<System>,
    /// Seed of all random numbers.
    #[arg(long, value_name = "S", default_value_t = 1)]
    pub seed: u64,
    /// Work on so many threads instead of all cores. The numbers are the same for any number.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,
    /// Write all scores to this file, too.
    #[arg(long, value_name = "FILE")]
    pub csv: Option<PathBuf>,
    /// Weight of the samples in the likelihood.
    #[arg(long, value_name = "WEIGHTS", default_value = "unit")]
    pub weights: Weighting,
}

impl Arguments {
    /// Systems asked for, in the order given.
    #[must_use]
    pub fn systems(&self) -> Vec<System> {
        if self.system.is_empty() { System::ALL.to_vec() } else { self.system.clone() }
    }

    /// Settings asked for.
    #[must_use]
    pub fn settings(&self) -> Settings {
        Settings { n_replicates: self.replicates, seed: self.seed, weighting: self.weights }
    }
}
