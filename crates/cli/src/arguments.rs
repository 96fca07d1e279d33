//! The command line.

use clap::{Args, Parser, Subcommand};
use std::path::PathBuf;

/// Free-energy profiles from restrained molecular simulations, with error bars.
///
/// A job file says which windows there are, how they were biased and which profile is wanted. Exit codes: 0 done, 2 command line,
/// 3 job file, 4 data, 5 windows not linked, 6 not converged, 7 output, 8 profile, 130 interrupted.
#[derive(Debug, Parser)]
#[command(name = crate::PROGRAM, version, max_term_width = 100)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    pub command: Command,
}

/// What to do.
#[derive(Debug, Subcommand)]
pub enum Command {
    /// Turn the windows of a job into a profile with errors, written to the job's output folder.
    Solve {
        /// What to do it with.
        #[command(flatten)]
        common: Common,
        /// Write the results to this folder instead of the job's.
        #[arg(long, value_name = "FOLDER")]
        output: Option<PathBuf>,
        /// Replace an earlier result in the output folder; files that it does not list are never touched.
        #[arg(long)]
        force: bool,
    },
    /// Read and check everything that a job names, and say how its windows hang together. Writes nothing.
    Check {
        /// What to do it with.
        #[command(flatten)]
        common: Common,
    },
}

/// What every command takes.
#[derive(Debug, Args)]
pub struct Common {
    /// The job file (TOML). Paths in it are relative to its own folder.
    #[arg(value_name = "JOB")]
    pub job: PathBuf,
    /// Work on so many threads instead of all cores. The results are the same for any number.
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub threads: Option<u16>,
    /// Print errors only.
    #[arg(long, short)]
    pub quiet: bool,
}
