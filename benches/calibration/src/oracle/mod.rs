//! The exact large-sample standard error of a profile: what a perfect estimate of the error would say.

mod exact;
mod grid;
mod lag_sum;
mod long_run;

use crate::error::CalibrationError;
use crate::settings::Weighting;
use exact::ExactSystem;
use long_run::{long_run_variances, plain_variance};
use rayon::prelude::*;
use spandrel_testkit::{Case, KnownSystem};

/// Largest part of a variance that orders left out may hide.
const ACCURACY: f64 = 1e-4;

/// Exact large-sample standard errors of the free-energy differences from a bin.
///
/// Var Q = Σₖ ωₖ² Nₖ σ²ₖ with σ²ₖ the long-run variance along window k of the influence φ(x) = q(x) − (∂Q/∂f)ᵀ H⁻¹ M w(x) at the exact
/// free energies, all integrals over the exact distributions of the windows.
///
/// The true error of short runs is smaller: with one correlation time the ends of a run take the part g/(2N) from the variance of its means.
#[derive(Debug, Clone, PartialEq)]
pub struct Oracle {
    /// One for each bin asked for, kT.
    pub standard_errors: Vec<f64>,
    /// Largest part of any of the variances that can be missing.
    pub left_out: f64,
}

impl Oracle {
    /// For the differences of the bins `scored` from the bin `zero`.
    ///
    /// # Errors
    /// Windows whose exact distributions do not overlap.
    pub fn of(case: &Case, weighting: Weighting, zero: usize, scored: &[usize]) -> Result<Self, CalibrationError> {
        let windows = case.system.windows();
        let exact = ExactSystem::new(case, weighting);
        let pulls = exact.pulls(zero, scored).ok_or(CalibrationError::Singular)?;
        // φ of each quantity on the nodes of each window.
        let influences: Vec<Vec<Vec<f64>>> = (0..windows.len())
            .into_par_iter()
            .map(|k| scored.iter().zip(&pulls).map(|(&bin, pull)| exact.influence(k, bin, zero, pull)).collect())
            .collect();
        let scales: Vec<f64> =
            windows.iter().map(|window| weighting.of(window).powi(2) * window.n_samples as f64).collect();
        // What each variance would be without memory: no window needs an accuracy beyond its part of that.
        let memoryless: Vec<f64> = (0..scored.len())
            .map(|q| (0..windows.len()).map(|k| scales[k] * plain_variance(exact.nodes(k), &influences[k][q])).sum())
            .collect();
        let of_windows: Vec<_> = influences
            .into_par_iter()
            .enumerate()
            .map(|(k, influences)| {
                let floors = memoryless.iter().map(|variance| variance / (scales[k] * windows.len() as f64));
                let functions: Vec<(Vec<f64>, f64)> = influences.into_iter().zip(floors).collect();
                // Half for the variance so far and half for the floors.
                long_run_variances(exact.nodes(k), &functions, windows[k].correlation, 0.5 * ACCURACY)
            })
            .collect();
        let mut oracle = Self { standard_errors: Vec::with_capacity(scored.len()), left_out: 0.0 };
        for q in 0..scored.len() {
            let parts = || of_windows.iter().zip(&scales);
            let variance: f64 = parts().map(|(window, scale)| scale * window[q].variance).sum();
            let left_out: f64 = parts().map(|(window, scale)| scale * window[q].left_out).sum();
            oracle.standard_errors.push(variance.sqrt());
            oracle.left_out = oracle.left_out.max(left_out / variance);
        }
        Ok(oracle)
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::experiment::Experiment;
    use crate::system::System;
    use spandrel_testkit::tolerance;

    fn oracle(system: System, weighting: Weighting) -> Oracle {
        let experiment = Experiment::new(system.case().unwrap(), weighting).unwrap();
        Oracle::of(experiment.case(), weighting, experiment.zero(), experiment.scored()).unwrap()
    }

    #[test]
    fn orders_left_out_hide_no_more_than_they_may() {
        for system in System::ALL {
            let oracle = oracle(system, Weighting::Unit);
            assert!(oracle.left_out <= ACCURACY, "{system:?}: {}", oracle.left_out);
            assert!(oracle.standard_errors.iter().all(|error| *error > 0.0), "{system:?}");
        }
    }

    #[test]
    fn a_common_factor_in_all_weights_changes_no_error() {
        // All windows of this system have the same inefficiency.
        let (unit, weighted) =
            (oracle(System::Periodic, Weighting::Unit), oracle(System::Periodic, Weighting::InverseG));
        for (one, other) in unit.standard_errors.iter().zip(&weighted.standard_errors) {
            assert!((one / other - 1.0).abs() < tolerance::SUMMATION_ORDER, "{one} against {other}");
        }
    }

    #[test]
    fn errors_go_with_one_over_the_root_of_the_samples() {
        let (few, many) =
            (oracle(System::LongMemory35, Weighting::Unit), oracle(System::LongMemory70, Weighting::Unit));
        for (one, other) in few.standard_errors.iter().zip(&many.standard_errors) {
            // Twice as many samples; where the orders end may differ.
            assert!((one / other / 2.0_f64.sqrt() - 1.0).abs() < ACCURACY, "{one} against {other}");
        }
    }
}
