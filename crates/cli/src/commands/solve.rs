//! `solve`: from a job to a profile on the disk.

use super::failure::Failure;
use crate::interrupt::Interrupt;
use crate::job::{self, Job};
use crate::messages::Messages;
use crate::output::{
    COVARIANCE, FIGURE, PMF, SUMMARY, Staging, Summary, WINDOWS, covariance_csv, pmf_csv, profile_figure, solve_text,
    windows_csv,
};
use crate::pipeline::{lay_out, read_windows, solve_parts};
use std::path::PathBuf;

/// What a solve was asked for on the command line.
#[derive(Debug, Clone)]
pub struct SolveRequest {
    /// The job file.
    pub job: PathBuf,
    /// Folder of the results, in place of the job's.
    pub output: Option<PathBuf>,
    /// Whether an earlier result may be replaced.
    pub force: bool,
}

/// Solves a job and writes its results.
///
/// # Errors
/// Problems of the job, the series, the solve, or the output folder. Nothing is then written.
pub fn solve(request: &SolveRequest, messages: Messages, interrupt: &Interrupt) -> Result<(), Failure> {
    let job: Job = job::load(&request.job).map_err(|problems| Failure::of_job(&problems))?;
    let folder = request.output.as_ref().unwrap_or(&job.output_folder);
    // Before the work, so that nobody waits for a result that has no place to go.
    let mut staging = Staging::open(folder, request.force).map_err(|error| Failure::of_output(&error))?;
    let read = read_windows(&job, messages, interrupt).map_err(|error| Failure::of_reading(&job, &error))?;
    let mut analysis = lay_out(&job, &read).map_err(|error| Failure::of_analysis(None, &job, &error))?;
    let parts = solve_parts(&job, &mut analysis, messages, interrupt)
        .map_err(|error| Failure::of_analysis(Some(&analysis.ensemble), &job, &error))?;

    let pmf = pmf_csv(&job, &parts).map_err(|error| Failure::of_formatting(&error))?;
    let windows = windows_csv(&job, &read, &analysis, &parts).map_err(|error| Failure::of_formatting(&error))?;
    let mut files = vec![(PMF, pmf), (WINDOWS, windows), (FIGURE, profile_figure(&job, &parts).into_bytes())];
    if job.covariance {
        let covariance = covariance_csv(&job, &parts).map_err(|error| Failure::of_formatting(&error))?;
        files.push((COVARIANCE, covariance));
    }
    for (name, bytes) in &files {
        staging.write(name, bytes).map_err(|error| Failure::of_output(&error))?;
    }
    let summary = Summary::new(&job, &read, &analysis, &parts, staging.files());
    let mut written: Vec<String> = staging.files().iter().map(|file| file.name.clone()).collect();
    written.push(SUMMARY.to_owned());
    let bytes = summary.to_bytes().map_err(|error| Failure::of_formatting(&error))?;
    if interrupt.requested() {
        return Err(Failure::interrupted());
    }
    staging.finish(&bytes).map_err(|error| Failure::of_output(&error))?;
    messages.summary(&solve_text(&job, &read, &analysis, &parts, &written, folder));
    Ok(())
}
