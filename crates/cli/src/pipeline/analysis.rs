//! Condensed runs to profiles.

use super::notices::findings_of_reading;
use super::reading::ReadWindow;
use crate::interrupt::Interrupt;
use crate::job::{ErrorMethod, Job};
use crate::messages::Messages;
use crate::progress::Progress;
use nalgebra::DMatrix;
use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use spandrel_solver::bootstrap::{BetweenReplicas, Bootstrap, BootstrapError, BootstrapOptions};
use spandrel_solver::ensemble::{Ensemble, EnsembleError, WindowData};
use spandrel_solver::findings::{
    Finding, look_at_bootstrap, look_at_ensemble, look_at_links, look_at_profile, look_at_replicas,
};
use spandrel_solver::influence::{Influence, Uncertainty};
use spandrel_solver::profile::{Profile, ProfileError, ProfileRequest, SimultaneousBand, Zero};
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
    /// The errors once more, from resampling, where the job asks for it.
    pub bootstrap: Option<Bootstrap>,
    /// The errors once more, from the spread between replicas, where there are any.
    pub between_replicas: Option<BetweenReplicas>,
    /// The band that holds the whole curve; `None` where no bin has an error.
    pub band: Option<SimultaneousBand>,
    /// Where asked for: the bins with an error, and the covariance of their free energies in kT².
    pub covariance: Option<(Vec<usize>, DMatrix<f64>)>,
}

/// Probability that a band holds the whole curve.
pub const BAND_PROBABILITY: f64 = 0.95;

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
    /// The runs cannot be resampled.
    Bootstrap(BootstrapError),
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
    findings.extend(look_at_links(&ensemble, &links, job.solver.allow_gaps));
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
    let run = Run { job, messages, interrupt };
    if analysis.links.groups.len() == 1 {
        let ensemble = &analysis.ensemble;
        let part = run.solve_part(&job.profile.request, ensemble, &analysis.links)?;
        let findings = findings_of_part(ensemble, &part);
        analysis.findings.extend(findings);
        return Ok(vec![part]);
    }
    if !job.solver.allow_gaps {
        return Err(AnalysisError::Solve(SolveError::NotLinked(Box::new(analysis.links.clone()))));
    }
    let mut parts = Vec::new();
    for group in &analysis.links.groups {
        let ensemble = analysis.ensemble.restricted_to(group);
        let links = analysis.links.within(group);
        let solve = |request| run.solve_part(&request, &ensemble, &links);
        // A zero on ground that only another group covers gives way to the group's own lowest bin.
        let outcome = match solve(job.profile.request) {
            Err(AnalysisError::Profile(ProfileError::ZeroNotSampled { .. })) => {
                solve(ProfileRequest { zero: Zero::Minimum, ..job.profile.request })
            }
            outcome => outcome,
        };
        let mut part = outcome?;
        part.windows.clone_from(group);
        analysis.findings.extend(findings_of_part(&ensemble, &part));
        parts.push(part);
    }
    Ok(parts)
}

fn findings_of_part(ensemble: &Ensemble, part: &Part) -> Vec<Finding> {
    let mut findings = look_at_profile(&part.profile);
    if let Some(bootstrap) = &part.bootstrap {
        findings.extend(look_at_bootstrap(ensemble, &part.profile, bootstrap));
    }
    if let Some(between) = &part.between_replicas {
        findings.extend(look_at_replicas(&part.profile, between));
    }
    findings
}

/// What every step of a solve needs to know.
struct Run<'a> {
    job: &'a Job,
    messages: Messages,
    interrupt: &'a Interrupt,
}

impl Run<'_> {
    fn solve_part(&self, request: &ProfileRequest, ensemble: &Ensemble, links: &Links) -> Result<Part, AnalysisError> {
        let progress = Progress::open(self.messages, "solving");
        let mut report = |iterations: u64, step: Option<f64>| {
            progress.say(step.map_or_else(
                || format!("solving: {iterations} iterations"),
                |step| format!("solving: {iterations} iterations, Newton step {step:.1e} kT"),
            ));
            if self.interrupt.requested() { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
        };
        let solution = solve(ensemble, links, &self.job.solver.options, &mut report).map_err(AnalysisError::Solve)?;
        let influence = Influence::of(ensemble, &solution).ok_or(AnalysisError::NoCurvature)?;
        let profile = Profile::draw(ensemble, &influence, request).map_err(AnalysisError::Profile)?;
        // Where windows fall into groups, each profile shows its own stretch of the axis only.
        let profile = if ensemble.n_windows() < self.job.windows.len() { profile.trimmed() } else { profile };
        let between_replicas = BetweenReplicas::of(ensemble, &solution, &influence, &profile);
        let bootstrap = self.resampled(ensemble, &solution, &influence, &profile)?;
        let profile = match (&bootstrap, self.job.errors.method) {
            (Some(bootstrap), ErrorMethod::Bootstrap) => {
                profile.with_errors(&bootstrap.bins.iter().map(|bin| bin.uncertainty).collect::<Vec<_>>())
            }
            _ => profile,
        };
        let mut generator = ChaCha8Rng::seed_from_u64(self.job.solver.seed);
        let band = profile.simultaneous_band(&influence, BAND_PROBABILITY, &mut generator);
        let covariance = self.job.covariance.then(|| profile.covariance(&influence));
        let window_results = (0..ensemble.n_windows())
            .map(|k| {
                let quantity = free_energy_of_window(&solution.free_energies, k);
                let from_influences = Some(influence.uncertainty(&influence.deviations(&quantity)));
                let uncertainty = match (&bootstrap, self.job.errors.method) {
                    (Some(bootstrap), ErrorMethod::Bootstrap) => bootstrap.windows[k].uncertainty,
                    _ => from_influences,
                };
                WindowResult {
                    free_energy: solution.free_energies[k],
                    uncertainty: uncertainty.filter(|_| k != solution.gauge),
                }
            })
            .collect();
        Ok(Part {
            windows: (0..ensemble.n_windows()).collect(),
            solution,
            window_results,
            profile,
            bootstrap,
            between_replicas,
            band,
            covariance,
        })
    }

    /// The bootstrap that the job asks for.
    fn resampled(
        &self,
        ensemble: &Ensemble,
        solution: &Solution,
        influence: &Influence,
        profile: &Profile,
    ) -> Result<Option<Bootstrap>, AnalysisError> {
        let n_replicates = self.job.errors.bootstrap_replicates;
        if n_replicates == 0 {
            return Ok(None);
        }
        let progress = Progress::counted(self.messages, "resampling", n_replicates as u64);
        let mut report = |done: usize, _: usize| {
            progress.reach(done as u64);
            if self.interrupt.requested() { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
        };
        let options = BootstrapOptions { n_replicates, seed: self.job.solver.seed };
        match Bootstrap::run(ensemble, solution, influence, profile, &options, &mut report) {
            Ok(bootstrap) => Ok(Some(bootstrap)),
            Err(BootstrapError::Interrupted) => Err(AnalysisError::Solve(SolveError::Interrupted)),
            // Nothing has an error then, which findings say already.
            Err(BootstrapError::Unsupported { .. }) => Ok(None),
            Err(error) => Err(AnalysisError::Bootstrap(error)),
        }
    }
}
