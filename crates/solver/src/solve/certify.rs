//! The test that every solution has to pass, whichever way it was found.

use super::likelihood::Likelihood;
use crate::ensemble::Ensemble;
use nalgebra::{Cholesky, DMatrix, DVector, Dyn};
use serde::Serialize;

/// How far a result is from the minimum.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Certificate {
    /// max |H⁻¹ gradient| in kT, with all shares looked up again at the result: the distance to the minimum, to second order.
    ///
    /// Neither a small gradient nor a small self-consistent step says as much; the error can exceed the latter a hundred thousand times.
    pub newton_step: f64,
    /// Largest |gradient| divided by the total weight; no unit.
    pub relative_gradient: f64,
}

/// Measures the distance of `f` (kT, one a window) from the minimum; `None` if the Hessian without the gauge window is not
/// positive definite, which happens when windows hang together by next to nothing.
#[must_use]
pub fn certify(ensemble: &Ensemble, f: &[f64], gauge: usize) -> Option<Certificate> {
    let likelihood = Likelihood::at(ensemble, f);
    let (step, gradient) = newton_step(&likelihood, &vec![0.0; f.len()], gauge)?;
    let total: f64 = likelihood.totals().iter().sum();
    let certificate = Certificate { newton_step: largest(&step), relative_gradient: largest(&gradient) / total };
    (certificate.newton_step.is_finite() && certificate.relative_gradient.is_finite()).then_some(certificate)
}

/// The Newton step −H⁻¹ gradient at f⁰ + δ, one value a window and 0 in the gauge window, and the gradient.
pub(super) fn newton_step(likelihood: &Likelihood<'_>, delta: &[f64], gauge: usize) -> Option<(Vec<f64>, Vec<f64>)> {
    let gradient = likelihood.evaluate(delta).gradient;
    let factor = factorized(likelihood.hessian(delta), gauge)?;
    let free = DVector::from_vec(without(&gradient, gauge));
    let solved = factor.solve(&free);
    let mut step: Vec<f64> = solved.iter().map(|x| -x).collect();
    step.insert(gauge, 0.0);
    Some((step, gradient))
}

/// Cholesky factor of the Hessian without the row and column of the gauge window; `None` if it is not positive definite.
pub(crate) fn factorized(hessian: DMatrix<f64>, gauge: usize) -> Option<Cholesky<f64, Dyn>> {
    Cholesky::new(hessian.remove_row(gauge).remove_column(gauge))
}

pub(super) fn without(values: &[f64], gauge: usize) -> Vec<f64> {
    let mut rest = values.to_vec();
    rest.remove(gauge);
    rest
}

/// Largest absolute value; NaN if any value is.
pub(crate) fn largest(values: &[f64]) -> f64 {
    values.iter().fold(0.0, |largest: f64, x| if largest.is_nan() || x.abs() <= largest { largest } else { x.abs() })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_step_that_is_not_a_number_anywhere_is_never_small() {
        for place in 0..3 {
            let mut step = vec![1e-12, -2e-12, 0.0];
            step[place] = f64::NAN;
            assert!(largest(&step).is_nan(), "at {place}");
        }
        assert!((largest(&[1e-12, -2e-12, 0.0]) - 2e-12).abs() < f64::EPSILON);
    }
}
