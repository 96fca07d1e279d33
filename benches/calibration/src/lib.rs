//! The calibration study: do the error bars hold what they say?
//!
//! Systems whose every answer is known are sampled again and again, each replicate experiment goes through condensing, solving and drawing
//! the profile as any data would, and the intervals that come out are scored against the exact profile:
//!
//! ```text
//! System -> Experiment --replicate--> Outcome --all of them--> Report -> table, CSV
//!              Oracle ---------------------------^
//! ```
//!
//! Beside each coverage stands that of the [`Oracle`], the exact large-sample standard error, on the same bins of the same replicates: it
//! carries the luck of the draw, so the two differ by what the estimated errors do wrong. All standard errors come from the spread between
//! replicates, since the bins of one replicate are correlated.
//!
//! ```text
//! cargo run --release -p spandrel-calibration -- --system periodic --replicates 200
//! ```
//!
//! Energies are in kT, positions in the unit of the system. The same seed gives the same numbers for any number of threads.

pub mod arguments;
mod error;
mod experiment;
mod jackknife;
mod method;
mod oracle;
mod outcome;
mod report;
mod score;
mod settings;
mod study;
mod system;
mod table;
mod values;

pub use error::CalibrationError;
pub use experiment::{Experiment, Solved};
pub use jackknife::{Estimate, jackknife};
pub use method::{ErrorBar, Method};
pub use oracle::Oracle;
pub use outcome::{Outcome, Refusal, Replicate};
pub use report::{OracleScore, Report};
pub use score::{Score, WorstBin};
pub use settings::{Settings, Weighting};
pub use study::{measure, replicates};
pub use system::System;
pub use table::table;
pub use values::CsvFile;
