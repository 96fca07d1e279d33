//! The job file: what a user asks for, read, checked and complained about as a whole.
//!
//! ```text
//! text -> table (sections and keys, with places) -> typed (what was typed) -> check -> model (what can be run)
//! ```
//! What was typed and what was checked are two types; the modules say what may live in each. Every stage goes on after a problem as
//! far as it can, so that all problems of a job are shown at once. [`KEYS`] lists every key.

mod check;
mod keys;
mod load;
mod mark;
mod model;
mod nearest;
mod number;
mod paths;
mod problem;
mod reference;
mod render;
mod resolved;
mod scalar;
mod table;
mod typed;

pub use keys::{KEYS, Key, Section};
pub use load::load;
pub use model::{
    AuxiliaryFile, AuxiliaryRole, AxisColumn, CellChoice, ErrorMethod, ErrorSettings, Excluded, ExcludedReplica, Job,
    JobWindow, ProfileSettings, SolverSettings, Stretch,
};
pub use problem::JobProblems;
pub use reference::reference;
pub use resolved::{
    ResolvedColumn, ResolvedJob, ResolvedProfile, ResolvedReplica, ResolvedSeries, ResolvedSolver, ResolvedTerm,
    ResolvedWindow, Setting,
};
