//! The one door for errors: how each sample pulls on a quantity, and what that pull is worth as a variance.
//!
//! For a scalar Q(f, m) a sample x of window k has the influence φₖ(x) = q(x) − (∂Q/∂f)ᵀ H⁻¹ ψₖ(x), ψₖⱼ(x) = Mⱼ wⱼ(x) − δⱼₖ and q = ∂Q/∂m.
//! Var Q = Σₖ ωₖ² Nₖ σ²ₖ with σ²ₖ the long-run variance of φₖ along the window's own time, from batch means (Doss & Tan 2014; Roy,
//! Tan & Flegal 2018), so correlation in time is in every error without dropping a sample.

mod quantity;
mod streams;
mod uncertainty;

pub use quantity::{Direct, Quantity};
pub(crate) use uncertainty::quantile;
pub use uncertainty::{FEW_BATCHES, FEW_DEGREES, Support, TOO_FEW_BATCHES, TOO_FEW_DEGREES, Uncertainty};

use crate::ensemble::Ensemble;
use crate::solve::{Likelihood, Solution, factorized};
use nalgebra::{Cholesky, DMatrix, DVector, Dyn};
use streams::StreamBatches;

/// Influences of all samples on any quantity of a solution.
#[derive(Debug, Clone)]
pub struct Influence {
    gauge: usize,
    factor: Cholesky<f64, Dyn>,
    streams: Vec<StreamBatches>,
    /// Windows none of whose replicas supports an error.
    unsupported: Vec<usize>,
    /// ln D of each point at the solution.
    log_denominators: Vec<f64>,
    /// Windows with weight on each point and their parts Mₖ wₖ of it.
    answered: Vec<Vec<(u32, f64)>>,
}

/// What one replica says of a quantity.
#[derive(Debug, Clone, Copy)]
pub(crate) struct ReplicaMean {
    /// Samples in it.
    pub n_samples: f64,
    /// Mean of its samples' influences.
    pub influence: f64,
}

/// Deviations of a quantity's batch influences from their means, scaled so that products add up to covariances.
///
/// Cov(Q₁, Q₂) = Σᵢ z₁ᵢ z₂ᵢ over all batches of all replicas. Deviations of a sum of quantities are the sums of their deviations.
#[derive(Debug, Clone, PartialEq)]
pub struct Deviations(Vec<f64>);

impl Deviations {
    /// Deviations of the difference of two quantities of the same solution.
    #[must_use]
    pub fn minus(&self, other: &Self) -> Self {
        Self(self.0.iter().zip(&other.0).map(|(a, b)| a - b).collect())
    }

    /// Covariance of two quantities of the same solution, in the product of their units.
    #[must_use]
    pub fn covariance(&self, other: &Self) -> f64 {
        self.0.iter().zip(&other.0).map(|(a, b)| a * b).sum()
    }
}

impl Influence {
    /// Prepares the influences of a solution; `None` if the Hessian is not positive definite there.
    ///
    /// Cost: one pass over the counts of all groups times the overlapping windows, once for all quantities.
    #[must_use]
    pub fn of(ensemble: &Ensemble, solution: &Solution) -> Option<Self> {
        let likelihood = Likelihood::at(ensemble, &solution.free_energies);
        let zeros = vec![0.0; ensemble.n_windows()];
        let growth = vec![1.0; ensemble.n_windows()];
        let factor = factorized(likelihood.hessian(&zeros), solution.gauge)?;
        let answered: Vec<Vec<(u32, f64)>> =
            (0..ensemble.points.len()).map(|point| likelihood.answered(point, &growth).collect()).collect();
        let unsupported = (0..ensemble.n_windows())
            .filter(|&k| ensemble.streams.iter().all(|stream| stream.window != k || stream.batches.is_none()))
            .collect();
        Some(Self {
            gauge: solution.gauge,
            factor,
            streams: StreamBatches::of_ensemble(ensemble, &answered),
            unsupported,
            log_denominators: (0..ensemble.points.len()).map(|point| likelihood.log_denominator(point)).collect(),
            answered,
        })
    }

    /// Windows none of whose replicas supports an error: a single group of samples, or a constant coordinate. Where there is one, no
    /// quantity has an error.
    #[must_use]
    pub fn unsupported_windows(&self) -> &[usize] {
        &self.unsupported
    }

    /// ln D of a point, kT-free: the point's unbiased weight is m/D relative to the gauge window's partition function.
    #[must_use]
    pub fn log_denominator(&self, point: usize) -> f64 {
        self.log_denominators[point]
    }

    /// Windows with weight on a point and their parts Mₖ wₖ of it, which add to one.
    #[must_use]
    pub fn answered(&self, point: usize) -> &[(u32, f64)] {
        &self.answered[point]
    }

    /// Deviations of a quantity relative to the gauge window. Cost: one pass over the batches.
    #[must_use]
    pub fn deviations(&self, quantity: &Quantity) -> Deviations {
        let pull = self.pull(quantity);
        Deviations(self.streams.iter().flat_map(|stream| stream.deviations(quantity, &pull)).collect())
    }

    /// Mean influence on a quantity over each replica that supports an error, up to a constant for each window, in the order of the
    /// ensemble's streams.
    pub(crate) fn replica_means(&self, quantity: &Quantity) -> Vec<ReplicaMean> {
        let pull = self.pull(quantity);
        let mean = |stream: &StreamBatches| ReplicaMean {
            n_samples: stream.n_samples(),
            influence: stream.mean(quantity, &pull),
        };
        self.streams.iter().map(mean).collect()
    }

    /// H⁻¹ ∂Q/∂f, 0 in the gauge window.
    fn pull(&self, quantity: &Quantity) -> Vec<f64> {
        let mut free = quantity.free_energy_gradient.clone();
        free.remove(self.gauge);
        let mut pull: Vec<f64> = self.factor.solve(&DVector::from_vec(free)).iter().copied().collect();
        pull.insert(self.gauge, 0.0);
        pull
    }

    /// Number of batches and part of the variance of each replica that supports an error, in the order of the ensemble's streams.
    pub(crate) fn parts(&self, deviations: &Deviations) -> Vec<(usize, f64)> {
        let mut rest = deviations.0.as_slice();
        let part = |stream: &StreamBatches| {
            let (own, later) = rest.split_at(stream.n_batches());
            rest = later;
            (stream.n_batches(), own.iter().map(|z| z * z).sum())
        };
        self.streams.iter().map(part).collect()
    }

    /// Standard error, degrees of freedom and interval of a quantity with the given deviations.
    #[must_use]
    pub fn uncertainty(&self, deviations: &Deviations) -> Uncertainty {
        Uncertainty::from_parts(self.parts(deviations).into_iter(), self.unsupported.is_empty())
    }

    /// Covariance matrix of quantities with the given deviations.
    #[must_use]
    pub fn covariance(&self, deviations: &[Deviations]) -> DMatrix<f64> {
        DMatrix::from_fn(deviations.len(), deviations.len(), |i, j| deviations[i].covariance(&deviations[j]))
    }
}
