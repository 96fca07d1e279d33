//! Trust-region minimization with truncated conjugate gradients (Steihaug 1983), Hessian by products only.

use super::method::{Progress, SolveOptions};
use super::minimizer::{Minimized, Minimizer, Stopped};
use super::objective::Objective;
use super::restarts::{Round, in_rounds};
use crate::ensemble::Ensemble;
use argmin::core::{Executor, State};
use argmin::solver::trustregion::{Steihaug, TrustRegion as ArgminTrustRegion};

pub(super) struct TrustRegion;

impl Minimizer for TrustRegion {
    fn minimize(
        &self,
        ensemble: &Ensemble,
        gauge: usize,
        start: &[f64],
        options: &SolveOptions,
        progress: &mut Progress<'_>,
    ) -> Result<Minimized, Stopped> {
        in_rounds(ensemble, gauge, start, options, progress, 12, |likelihood, iterations| {
            let objective = Objective::new(likelihood, gauge);
            let n_free = likelihood.totals().len() - 1;
            let inner = Steihaug::new().with_epsilon(1e-12).ok()?.with_max_iters(10 * n_free as u64 + 50);
            let method = ArgminTrustRegion::new(inner).with_radius(1.0).ok()?.with_max_radius(2.0).ok()?;
            let result = Executor::new(objective.clone(), method)
                .configure(|state| state.param(vec![0.0; n_free]).max_iters(iterations))
                .run()
                .ok()?;
            let best = result.state().get_best_param()?;
            Some(Round { delta: objective.to_delta(best), iterations: result.state().get_iter() })
        })
    }
}
