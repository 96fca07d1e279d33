//! `check`: reads everything, writes nothing.

use super::failure::Failure;
use crate::interrupt::Interrupt;
use crate::job::{self, Job};
use crate::messages::Messages;
use crate::output::check_text;
use crate::pipeline::{AnalysisError, lay_out, read_windows};
use spandrel_solver::solve::SolveError;
use std::path::Path;

/// Reads and checks everything that a job names.
///
/// # Errors
/// Problems of the job or of the series, or windows that are not linked where the job allows no gaps.
pub fn check(path: &Path, messages: Messages, interrupt: &Interrupt) -> Result<(), Failure> {
    let job: Job = job::load(path).map_err(|problems| Failure::of_job(&problems))?;
    let read = read_windows(&job, messages, interrupt).map_err(|error| Failure::of_reading(&job, &error))?;
    let analysis = lay_out(&job, &read).map_err(|error| Failure::of_analysis(None, &job, &error))?;
    messages.summary(&check_text(&job, &read, &analysis));
    if analysis.links.groups.len() > 1 && !job.solver.allow_gaps {
        let error = AnalysisError::Solve(SolveError::NotLinked(Box::new(analysis.links.clone())));
        return Err(Failure::of_analysis(Some(&analysis.ensemble), &job, &error));
    }
    Ok(())
}
