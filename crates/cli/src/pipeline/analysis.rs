//! Condensed runs to profiles.

use super::notices::findings_of_reading;
use super::reading::ReadWindow;
use crate::interrupt::Interrupt;
use crate::job::Job;
use crate::messages::Messages;
use crate::progress::Progress;
use spandrel_solver::ensemble::{Ensemble, EnsembleError, WindowData};
use spandrel_solver::findings::{Finding, look_at_ensemble, look_at_links, look_at_profile};
use spandrel_solver::influence::{Influence, Uncertainty};
use spandrel_solver::profile::{Profile, ProfileError, ProfileRequest, Zero};
use spandrel_solver::quantities::free_energy_of_window;
use spandrel_solver::solve::{Links, Solution, SolveError, solve};
use std::ops::ControlFlow;

/// Everything before the solve: what `check` looks at.
#[derive(Debug)]
pub struct Analysis {
    /// All windows on shared points.
    pub ensemble: Ensemble,
    /// How they hang together.
    pub links: Links,
    /// What was found so far.
    pub findings: Vec<Finding>,
}

/// One group of linked windows, solved.
#[derive(Debug)]
pub struct Part {
    /// Numbers of its windows in the job.
    pub windows: Vec<usize>,
    /// Their free energies.
    pub solution: Solution,
    /// One entry a window of the part.
    pub window_results: Vec<WindowResult>,
    /// Its profile.
    pub profile: Profile,
}

/// The free energy of one window with its error.
#[derive(Debug, Clone, Copy)]
pub struct WindowResult {
    /// f relative to the part's first window, in kT.
    pub free_energy: f64,
    /// Its error; `None` for the first window, which is 0 by definition.
    pub uncertainty: Option<Uncertainty>,
}

/// Why there is no result.
#[derive(Debug)]
pub enum AnalysisError {
    /// The windows cannot be laid together.
    Ensemble(EnsembleError),
    /// The equations were not solved.
    Solve(SolveError),
    /// The likelihood has no curvature in some direction at the solution.
    NoCurvature,
    /// The profile cannot be drawn.
    Profile(ProfileError),
}

/// Lays the windows on shared points and finds their links.
///
/// # Errors
/// Windows that cannot be laid together.
pub fn lay_out(job: &Job, windows: &[ReadWindow]) -> Result<Analysis, AnalysisError> {
    let mut findings = findings_of_reading(job, windows);
    let data = job.windows.iter().zip(windows).map(|(settings, window)| WindowData {
        name: settings.name.clone(),
        bias: settings.bias.clone(),
        weight: 1.0,
        replicas: window.replicas.iter().map(|replica| replica.condensed.clone()).collect(),
    });
    let ensemble = Ensemble::assemble(&job.axes, job.profile.bins, data.collect()).map_err(AnalysisError::Ensemble)?;
    let links = Links::find(&ensemble);
    findings.extend(look_at_ensemble(&ensemble));
    findings.extend(look_at_links(&ensemble, &links));
    Ok(Analysis { ensemble, links, findings })
}

/// Solves each group of linked windows and draws its profile; more than one group only where the job allows gaps.
///
/// # Errors
/// Windows that are not linked, a solve that stopped short, a zero that was not sampled, or a wish to stop.
pub fn solve_parts(
    job: &Job,
    analysis: &mut Analysis,
    messages: Messages,
    interrupt: &Interrupt,
) -> Result<Vec<Part>, AnalysisError> {
    let progress = Progress::open(messages, "solving");
    if analysis.links.groups.len() == 1 {
        let ensemble = &analysis.ensemble;
        let part = solve_part(job, &job.profile.request, ensemble, &analysis.links, &progress, interrupt)?;
        analysis.findings.extend(look_at_profile(&part.profile));
        return Ok(vec![part]);
    }
    if !job.solver.allow_gaps {
        return Err(AnalysisError::Solve(SolveError::NotLinked(Box::new(analysis.links.clone()))));
    }
    let mut parts = Vec::new();
    for group in &analysis.links.groups {
        let ensemble = analysis.ensemble.restricted_to(group);
        let links = analysis.links.within(group);
        let solve = |request| solve_part(job, &request, &ensemble, &links, &progress, interrupt);
        // A zero on ground that only another group covers gives way to the group's own lowest bin.
        let outcome = match solve(job.profile.request) {
            Err(AnalysisError::Profile(ProfileError::ZeroNotSampled { .. })) => {
                solve(ProfileRequest { zero: Zero::Minimum, ..job.profile.request })
            }
            outcome => outcome,
        };
        let mut part = outcome?;
        part.profile = part.profile.trimmed();
        part.windows.clone_from(group);
        analysis.findings.extend(look_at_profile(&part.profile));
        parts.push(part);
    }
    Ok(parts)
}

fn solve_part(
    job: &Job,
    request: &ProfileRequest,
    ensemble: &Ensemble,
    links: &Links,
    progress: &Progress,
    interrupt: &Interrupt,
) -> Result<Part, AnalysisError> {
    let mut report = |iterations: u64, step: Option<f64>| {
        progress.say(step.map_or_else(
            || format!("solving: {iterations} iterations"),
            |step| format!("solving: {iterations} iterations, Newton step {step:.1e} kT"),
        ));
        if interrupt.requested() { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
    };
    let solution = solve(ensemble, links, &job.solver.options, &mut report).map_err(AnalysisError::Solve)?;
    let influence = Influence::of(ensemble, &solution).ok_or(AnalysisError::NoCurvature)?;
    let profile = Profile::draw(ensemble, &influence, request).map_err(AnalysisError::Profile)?;
    let window_results = (0..ensemble.n_windows())
        .map(|k| {
            let quantity = free_energy_of_window(&solution.free_energies, k);
            let uncertainty = influence.uncertainty(&influence.deviations(&quantity));
            WindowResult {
                free_energy: solution.free_energies[k],
                uncertainty: (k != solution.gauge).then_some(uncertainty),
            }
        })
        .collect();
    Ok(Part { windows: (0..ensemble.n_windows()).collect(), solution, window_results, profile })
}
