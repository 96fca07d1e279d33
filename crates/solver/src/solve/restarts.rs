//! General-purpose minimizers in rounds, each from fresh shares.

use super::certify::{largest, newton_step};
use super::likelihood::Likelihood;
use super::method::{Progress, SolveOptions};
use super::minimizer::{Minimized, Stopped};
use super::newton::damp;
use crate::ensemble::Ensemble;
use std::ops::ControlFlow;

/// What one round reached.
pub(super) struct Round {
    /// Change of every f, kT.
    pub delta: Vec<f64>,
    /// Iterations spent.
    pub iterations: u64,
}

/// Lets `run` (given the likelihood and its number of iterations) go on from where the last round ended, with the shares looked up
/// again, until the Newton step is below the tolerance, no round comes closer any more, or the iterations are spent.
///
/// A round that fails, because its first step left the reach of the shares, gives way to one damped Newton step.
/// The minimizers have no test of their own that can be trusted at this precision: values that differ by less than their rounding
/// end a line search. Formed relative to a reference close by, they keep their digits.
pub(super) fn in_rounds(
    ensemble: &Ensemble,
    gauge: usize,
    start: &[f64],
    options: &SolveOptions,
    progress: &mut Progress<'_>,
    round_length: u64,
    run: impl Fn(&Likelihood<'_>, u64) -> Option<Round>,
) -> Result<Minimized, Stopped> {
    let mut f = start.to_vec();
    let mut iterations = 0;
    let mut closest = f64::INFINITY;
    let mut rounds_without_gain = 0;
    let limit = options.max_iterations.unwrap_or(2_000);
    while iterations < limit && rounds_without_gain < 5 && f.len() > 1 {
        let likelihood = Likelihood::at(ensemble, &f);
        let zeros = vec![0.0; f.len()];
        let newton = newton_step(&likelihood, &zeros, gauge).map(|(step, _)| step);
        let distance = newton.as_ref().map(|step| largest(step));
        if progress(iterations, distance) == ControlFlow::Break(()) {
            return Err(Stopped);
        }
        match distance {
            Some(distance) if distance < 0.5 * options.tolerance => break,
            Some(distance) if distance < closest => {
                closest = distance;
                rounds_without_gain = 0;
            }
            _ => rounds_without_gain += 1,
        }
        let round = run(&likelihood, round_length.min(limit - iterations));
        iterations += round.as_ref().map_or(1, |round| round.iterations.max(1));
        let reached = round.map(|round| round.delta).filter(|delta| delta.iter().all(|d| d.is_finite()));
        let moved = reached.filter(|delta| delta.iter().any(|d| *d != 0.0)).or_else(|| {
            let mut step = newton?;
            let fraction = damp(&likelihood, &zeros, &mut step);
            Some(step.iter().map(|s| fraction * s).collect())
        });
        let Some(delta) = moved else { break };
        for (f, d) in f.iter_mut().zip(&delta) {
            *f += d;
        }
    }
    Ok(Minimized { f, iterations })
}
