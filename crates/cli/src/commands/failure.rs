//! Every way in which a command can fail, as text and exit status.

use crate::exit_status::ExitStatus;
use crate::job::{Job, JobProblems};
use crate::output::OutputError;
use crate::pipeline::{AnalysisError, ReadingError, ReadingProblem};
use spandrel_solver::condense::CondenseError;
use spandrel_solver::ensemble::{Ensemble, EnsembleError};
use spandrel_solver::solve::{Links, Method, SolveError};
use std::fmt::Write as _;

/// Problems of series shown one by one.
const SHOWN_PROBLEMS: usize = 20;
/// Windows of a group named one by one.
const NAMED_WINDOWS: usize = 8;

/// What a command says when it fails.
#[derive(Debug)]
pub struct Failure {
    /// For the exit code.
    pub status: ExitStatus,
    /// For the person.
    pub text: String,
}

impl Failure {
    fn new(status: ExitStatus, text: impl Into<String>) -> Self {
        Self { status, text: text.into() }
    }

    /// The user asked to stop.
    #[must_use]
    pub fn interrupted() -> Self {
        Self::new(ExitStatus::Interrupted, "interrupted; nothing was written")
    }

    /// The job has problems.
    #[must_use]
    pub fn of_job(problems: &JobProblems) -> Self {
        Self::new(ExitStatus::Job, problems.to_string())
    }

    /// The series cannot be used.
    #[must_use]
    pub fn of_reading(job: &Job, error: &ReadingError) -> Self {
        match error {
            ReadingError::Interrupted => Self::interrupted(),
            ReadingError::Problems(problems) => {
                let mut text = String::new();
                for problem in problems.iter().take(SHOWN_PROBLEMS) {
                    let (message, advice) = problem_in_words(job, problem);
                    let _ = writeln!(text, "error: {message}\n  help: {advice}");
                }
                if problems.len() > SHOWN_PROBLEMS {
                    let _ = writeln!(text, "and {} more", problems.len() - SHOWN_PROBLEMS);
                }
                let _ = write!(text, "{} of the runs cannot be used", problems.len());
                Self::new(ExitStatus::Data, text)
            }
        }
    }

    /// The analysis stopped.
    #[must_use]
    pub fn of_analysis(ensemble: Option<&Ensemble>, job: &Job, error: &AnalysisError) -> Self {
        match error {
            AnalysisError::Ensemble(error) => {
                Self::new(ExitStatus::Data, format!("error: {error}\n  help: {}", ensemble_advice(error)))
            }
            AnalysisError::NoCurvature => Self::new(
                ExitStatus::NotConverged,
                "error: the likelihood has no curvature in some direction at the solution, so no error follows from it\n  help: some windows hang together by next to nothing; see the links that `spandrel check` names",
            ),
            AnalysisError::Bootstrap(error) => Self::new(
                ExitStatus::NotConverged,
                format!(
                    "error: {error}\n  help: leave `[errors]` out to do without a bootstrap; no result was written"
                ),
            ),
            AnalysisError::Profile(error) => Self::new(
                ExitStatus::Profile,
                format!("error: {error}\n  help: choose another `zero` or range in [profile], or sample that place"),
            ),
            AnalysisError::Solve(SolveError::Interrupted) => Self::interrupted(),
            AnalysisError::Solve(SolveError::NotLinked(links)) => Self::new(
                ExitStatus::NotLinked,
                ensemble.map_or_else(String::new, |ensemble| not_linked(ensemble, job, links)),
            ),
            AnalysisError::Solve(error @ SolveError::NotConverged { method, .. }) => {
                let advice = if *method == Method::Newton {
                    "a window's samples may not belong to its bias: compare means and centers, units and files"
                } else {
                    "raise `max_iterations`, or use `method = \"newton\"` in [solver]"
                };
                Self::new(ExitStatus::NotConverged, format!("error: {error}\n  help: {advice}; no result was written"))
            }
        }
    }

    /// The results cannot be written.
    #[must_use]
    pub fn of_output(error: &OutputError) -> Self {
        Self::new(ExitStatus::Output, format!("error: {error}"))
    }

    /// A file's text could not be made.
    #[must_use]
    pub fn of_formatting(error: &dyn std::error::Error) -> Self {
        Self::new(ExitStatus::Output, format!("error: cannot write the results: {error}"))
    }
}

fn problem_in_words(job: &Job, problem: &ReadingProblem) -> (String, String) {
    match problem {
        ReadingProblem::Ingest(error) => (error.to_string(), error.advice().to_owned()),
        ReadingProblem::Sample { place, error } => {
            let place = place.as_ref().map(|place| format!("{place}: ")).unwrap_or_default();
            let advice = match error {
                CondenseError::OutsideTable(_) => OUTSIDE_ADVICE,
                CondenseError::TooFar { .. } => "check the column, its unit, and the width of the bins",
                CondenseError::Axes { .. } => "this is a fault of the program, not of the job; please report it",
                CondenseError::TooMany => "take a larger `stride`, or a larger `cell_error`",
            };
            (format!("{place}{error}"), advice.to_owned())
        }
        ReadingProblem::NothingLeft { window, file } => (
            format!("{}: window `{window}` has no sample left outside the excluded stretches", job.shown(file)),
            "exclude the window too, or narrow the stretches".to_owned(),
        ),
    }
}

/// How the job says what holds outside a table.
const OUTSIDE_ADVICE: &str = "in the job: `outside = \"hold\"` or `outside = \"extend\"` with the tabulated term";

fn ensemble_advice(error: &EnsembleError) -> &'static str {
    match error {
        EnsembleError::OutsideTable { .. } => OUTSIDE_ADVICE,
        EnsembleError::TooManyPoints => "take a larger `stride`, or a larger `cell_error`",
        EnsembleError::NoWindows => "name at least one window that is not excluded",
        EnsembleError::NoSamples { .. }
        | EnsembleError::Weight { .. }
        | EnsembleError::Axes { .. }
        | EnsembleError::MixedCells { .. } => "this is a fault of the program, not of the job; please report it",
    }
}

fn not_linked(ensemble: &Ensemble, job: &Job, links: &Links) -> String {
    let axis = &job.axes[job.profile.bins.axis()];
    let mut text = format!("error: {}\n", SolveError::NotLinked(Box::new(links.clone())));
    for (number, group) in (1..).zip(&links.groups) {
        let mut names: Vec<&str> =
            group.iter().take(NAMED_WINDOWS).map(|&k| ensemble.windows[k].name.as_str()).collect();
        let more = format!("and {} more", group.len().saturating_sub(NAMED_WINDOWS));
        if group.len() > NAMED_WINDOWS {
            names.push(&more);
        }
        let _ = writeln!(text, "  group {number}: {}", names.join(", "));
    }
    for stretch in &links.uncovered {
        let (below, above) = (&ensemble.windows[stretch.below].name, &ensemble.windows[stretch.above].name);
        let _ = match stretch.range {
            Some((from, to)) => writeln!(
                text,
                "  not covered: {} from {from:.6} to {to:.6} {}, between `{below}` and `{above}`",
                axis.name(),
                axis.unit(),
            ),
            None => writeln!(text, "  too thin: `{below}` and `{above}` overlap by less than one independent sample"),
        };
    }
    text.push_str(
        "  help: add windows there, or check that each window's samples belong to its bias (files, centers, units);\n        `allow_gaps = true` in [solver] solves each group with a zero of its own",
    );
    text
}
