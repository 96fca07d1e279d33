//! Damped Newton steps: the default.

use super::certify::{factorized, largest, newton_step, without};
use super::likelihood::Likelihood;
use super::method::{Progress, SolveOptions};
use super::minimizer::{Minimized, Minimizer, Stopped};
use crate::ensemble::Ensemble;
use nalgebra::{DMatrix, DVector};
use std::ops::ControlFlow;

/// Change of any f, in kT, beyond which the shares are looked up again.
const REFRESH_BEYOND: f64 = 1.0;
/// Largest step, in kT: the exponentials of the shares stay tame, and a start that is far off is reached in a few more steps.
const LONGEST_STEP: f64 = 2.0;
/// Below this step, in kT, the likelihood is a parabola and a decrease need not be checked.
const SURE_STEP: f64 = 1e-4;

pub(super) struct Newton;

impl Minimizer for Newton {
    fn minimize(
        &self,
        ensemble: &Ensemble,
        gauge: usize,
        start: &[f64],
        options: &SolveOptions,
        progress: &mut Progress<'_>,
    ) -> Result<Minimized, Stopped> {
        let mut f = start.to_vec();
        let mut likelihood = Likelihood::at(ensemble, &f);
        let mut delta = vec![0.0; f.len()];
        let limit = options.max_iterations.unwrap_or(200);
        for iteration in 1..=limit {
            let newton = newton_step(&likelihood, &delta, gauge).map(|(step, _)| step);
            let Some(mut step) = newton.or_else(|| shifted_step(&likelihood, &delta, gauge)) else {
                return Ok(Minimized { f, iterations: iteration });
            };
            let length = largest(&step);
            if progress(iteration, Some(length)) == ControlFlow::Break(()) {
                return Err(Stopped);
            }
            let fraction = damp(&likelihood, &delta, &mut step);
            for (d, s) in delta.iter_mut().zip(&step) {
                *d += fraction * s;
            }
            f = likelihood.shares().reference().iter().zip(&delta).map(|(f, d)| f + d).collect();
            // One more step from here would be below the tolerance squared: the certificate will confirm it.
            if length < options.tolerance.sqrt().min(SURE_STEP) * 1e-2 || fraction == 0.0 {
                return Ok(Minimized { f, iterations: iteration });
            }
            if largest(&delta) > REFRESH_BEYOND {
                likelihood = Likelihood::at(ensemble, &f);
                delta.fill(0.0);
            }
        }
        Ok(Minimized { f, iterations: limit })
    }
}

/// A step where rounding has left the Hessian without curvature in some direction: the least of some multiples of the identity is added
/// that gives it one (Levenberg 1944). `None` if none does.
fn shifted_step(likelihood: &Likelihood<'_>, delta: &[f64], gauge: usize) -> Option<Vec<f64>> {
    let gradient = DVector::from_vec(without(&likelihood.evaluate(delta).gradient, gauge));
    let hessian = likelihood.hessian(delta);
    let scale = hessian.diagonal().amax();
    let solved = (1..=12).find_map(|power| {
        let shift = DMatrix::identity(hessian.nrows(), hessian.ncols()) * (scale * 1e-14 * 10.0_f64.powi(power));
        factorized(&hessian + shift, gauge).map(|factor| factor.solve(&gradient))
    })?;
    let mut step: Vec<f64> = solved.iter().map(|x| -x).collect();
    step.insert(gauge, 0.0);
    Some(step)
}

/// Shortens a step to the longest that is allowed, and returns the part of it that lowers the likelihood.
pub(super) fn damp(likelihood: &Likelihood<'_>, delta: &[f64], step: &mut [f64]) -> f64 {
    let length = largest(step);
    if length > LONGEST_STEP {
        for s in step.iter_mut() {
            *s *= LONGEST_STEP / length;
        }
    }
    if length < SURE_STEP { 1.0 } else { decreasing_fraction(likelihood, delta, step) }
}

/// The longest of 1, ½, ¼… of the step that lowers the likelihood by a thousandth of what its slope promises; 0 if none does.
fn decreasing_fraction(likelihood: &Likelihood<'_>, delta: &[f64], step: &[f64]) -> f64 {
    let here = likelihood.evaluate(delta);
    let slope: f64 = here.gradient.iter().zip(step).map(|(g, s)| g * s).sum();
    let mut fraction = 1.0;
    for _ in 0..40 {
        let trial: Vec<f64> = delta.iter().zip(step).map(|(d, s)| d + fraction * s).collect();
        if likelihood.evaluate(&trial).value <= here.value + 1e-3 * fraction * slope {
            return fraction;
        }
        fraction *= 0.5;
    }
    0.0
}
