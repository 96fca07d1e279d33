//! The plain self-consistent iteration of the multi-histogram equations.

use super::certify::{largest, newton_step};
use super::likelihood::Likelihood;
use super::method::{Progress, SolveOptions};
use super::minimizer::{Minimized, Minimizer, Stopped};
use crate::ensemble::Ensemble;
use std::ops::ControlFlow;

/// A wish to stop is heard this often.
const STEPS_BETWEEN_REPORTS: u64 = 64;

/// fₖ ← −ln Σ_c m(c) exp(−bₖ(c))/D(c) for all windows at once, until the Newton step is below the tolerance.
///
/// The step of the iteration says little about the distance to the end, so the Newton step is looked at from time to time instead.
pub(super) struct SelfConsistent;

impl Minimizer for SelfConsistent {
    fn minimize(
        &self,
        ensemble: &Ensemble,
        gauge: usize,
        start: &[f64],
        options: &SolveOptions,
        progress: &mut Progress<'_>,
    ) -> Result<Minimized, Stopped> {
        let mut likelihood = Likelihood::at(ensemble, start);
        let mut delta = vec![0.0; start.len()];
        let limit = options.max_iterations.unwrap_or(5_000_000);
        let mut next_look = 16;
        let mut iteration = 0;
        while iteration < limit {
            iteration += 1;
            let gradient = likelihood.evaluate(&delta).gradient;
            for ((d, g), total) in delta.iter_mut().zip(&gradient).zip(likelihood.totals()) {
                *d -= (g / total).ln_1p();
            }
            let gauge_value = delta[gauge];
            for d in &mut delta {
                *d -= gauge_value;
            }
            if iteration % STEPS_BETWEEN_REPORTS == 0 && progress(iteration, None) == ControlFlow::Break(()) {
                return Err(Stopped);
            }
            if iteration == next_look {
                let distance = newton_step(&likelihood, &delta, gauge).map(|(step, _)| largest(&step));
                if progress(iteration, distance) == ControlFlow::Break(()) {
                    return Err(Stopped);
                }
                if distance.is_some_and(|distance| distance < 0.5 * options.tolerance) {
                    break;
                }
                next_look += (iteration / 4).min(20_000);
            }
            if largest(&delta) > 1.0 {
                likelihood = Likelihood::at(ensemble, &moved(&likelihood, &delta));
                delta.fill(0.0);
            }
        }
        Ok(Minimized { f: moved(&likelihood, &delta), iterations: iteration })
    }
}

fn moved(likelihood: &Likelihood<'_>, delta: &[f64]) -> Vec<f64> {
    likelihood.shares().reference().iter().zip(delta).map(|(f, d)| f + d).collect()
}
