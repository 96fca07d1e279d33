//! The likelihood as a problem for general-purpose minimizers.

use super::likelihood::Likelihood;
use argmin::core::{CostFunction, Error, Gradient, Hessian};
use argmin_math::ArgminDot;
use nalgebra::{Cholesky, DVector, Dyn};
use std::sync::Arc;

/// Largest change of any f, in kT, for which the shares of the reference are still complete enough.
const LARGEST_CHANGE: f64 = 3.0;

/// A(f⁰ + δ) divided by the total weight, over the δ of all windows but the gauge window.
///
/// With a preconditioner H = L Lᵀ the variables are z = Lᵀ δ, in which the minimum is close to round.
#[derive(Clone)]
pub(super) struct Objective<'a> {
    likelihood: &'a Likelihood<'a>,
    gauge: usize,
    scale: f64,
    preconditioner: Option<Arc<Cholesky<f64, Dyn>>>,
}

impl<'a> Objective<'a> {
    pub(super) fn new(likelihood: &'a Likelihood<'a>, gauge: usize) -> Self {
        let scale = 1.0 / likelihood.totals().iter().sum::<f64>();
        Self { likelihood, gauge, scale, preconditioner: None }
    }

    pub(super) fn preconditioned_by(self, factor: Cholesky<f64, Dyn>) -> Self {
        Self { preconditioner: Some(Arc::new(factor)), ..self }
    }

    /// δ of every window, 0 in the gauge window, from the variables.
    pub(super) fn to_delta(&self, variables: &[f64]) -> Vec<f64> {
        let mut delta = match &self.preconditioner {
            None => variables.to_vec(),
            Some(factor) => {
                let z = DVector::from_column_slice(variables);
                factor
                    .l_dirty()
                    .tr_solve_lower_triangular(&z)
                    .map_or_else(|| vec![f64::NAN; z.len()], |d| d.as_slice().to_vec())
            }
        };
        delta.insert(self.gauge, 0.0);
        delta
    }

    fn to_variable_gradient(&self, mut gradient: Vec<f64>) -> Vec<f64> {
        gradient.remove(self.gauge);
        for g in &mut gradient {
            *g *= self.scale;
        }
        match &self.preconditioner {
            None => gradient,
            Some(factor) => {
                let g = DVector::from_vec(gradient);
                factor
                    .l_dirty()
                    .solve_lower_triangular(&g)
                    .map_or_else(|| vec![f64::NAN; g.len()], |d| d.as_slice().to_vec())
            }
        }
    }

    /// The minimizers loop for ever on values that are not finite, so such values leave as errors.
    fn checked_delta(&self, variables: &[f64]) -> Result<Vec<f64>, Error> {
        let delta = self.to_delta(variables);
        if delta.iter().all(|d| d.abs() <= LARGEST_CHANGE) {
            Ok(delta)
        } else {
            Err(Error::msg("step beyond the reach of the shares"))
        }
    }
}

impl CostFunction for Objective<'_> {
    type Param = Vec<f64>;
    type Output = f64;

    fn cost(&self, variables: &Vec<f64>) -> Result<f64, Error> {
        let value = self.likelihood.evaluate(&self.checked_delta(variables)?).value * self.scale;
        if value.is_finite() { Ok(value) } else { Err(Error::msg("likelihood is not finite")) }
    }
}

impl Gradient for Objective<'_> {
    type Param = Vec<f64>;
    type Gradient = Vec<f64>;

    fn gradient(&self, variables: &Vec<f64>) -> Result<Vec<f64>, Error> {
        let gradient = self.likelihood.evaluate(&self.checked_delta(variables)?).gradient;
        Ok(self.to_variable_gradient(gradient))
    }
}

/// The Hessian as a product with vectors; the minimizer never sees a matrix.
#[derive(Clone)]
pub(super) struct HessianOperator<'a> {
    objective: Objective<'a>,
    delta: Arc<Vec<f64>>,
}

impl ArgminDot<Vec<f64>, Vec<f64>> for HessianOperator<'_> {
    fn dot(&self, vector: &Vec<f64>) -> Vec<f64> {
        let mut full = vector.clone();
        full.insert(self.objective.gauge, 0.0);
        let mut product = self.objective.likelihood.hessian_product(&self.delta, &full);
        product.remove(self.objective.gauge);
        for p in &mut product {
            *p *= self.objective.scale;
        }
        product
    }
}

impl<'a> Hessian for Objective<'a> {
    type Param = Vec<f64>;
    type Hessian = HessianOperator<'a>;

    fn hessian(&self, variables: &Vec<f64>) -> Result<HessianOperator<'a>, Error> {
        let delta = Arc::new(self.checked_delta(variables)?);
        Ok(HessianOperator { objective: self.clone(), delta })
    }
}
