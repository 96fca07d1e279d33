//! Limited-memory quasi-Newton minimization (Liu & Nocedal 1989) with the line search of Moré & Thuente (1994).

use super::certify::factorized;
use super::method::{Progress, SolveOptions};
use super::minimizer::{Minimized, Minimizer, Stopped};
use super::objective::Objective;
use super::restarts::{Round, in_rounds};
use crate::ensemble::Ensemble;
use argmin::core::{Executor, State};
use argmin::solver::linesearch::MoreThuenteLineSearch;
use argmin::solver::quasinewton::LBFGS;

/// Updates that the method remembers.
const MEMORY: usize = 10;

/// L-BFGS in variables in which the Hessian of each round's start is the identity; without them neighboring windows pull so unevenly
/// that hundreds of steps still end far from the minimum.
pub(super) struct MemoryLimited;

impl Minimizer for MemoryLimited {
    fn minimize(
        &self,
        ensemble: &Ensemble,
        gauge: usize,
        start: &[f64],
        options: &SolveOptions,
        progress: &mut Progress<'_>,
    ) -> Result<Minimized, Stopped> {
        in_rounds(ensemble, gauge, start, options, progress, 20, |likelihood, iterations| {
            let n_free = likelihood.totals().len() - 1;
            let total: f64 = likelihood.totals().iter().sum();
            let hessian = likelihood.hessian(&vec![0.0; n_free + 1]) / total;
            let objective = Objective::new(likelihood, gauge).preconditioned_by(factorized(hessian, gauge)?);
            let method = LBFGS::new(MoreThuenteLineSearch::new(), MEMORY)
                .with_tolerance_grad(1e-16)
                .ok()?
                .with_tolerance_cost(0.0)
                .ok()?;
            let result = Executor::new(objective.clone(), method)
                .configure(|state| state.param(vec![0.0; n_free]).max_iters(iterations))
                .run()
                .ok()?;
            let best = result.state().get_best_param()?;
            Some(Round { delta: objective.to_delta(best), iterations: result.state().get_iter() })
        })
    }
}
