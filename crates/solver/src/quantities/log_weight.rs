//! Logarithms of unbiased weights, and the windows' free energies.

use crate::ensemble::Ensemble;
use crate::influence::{Direct, Influence, Quantity};
use std::ops::RangeInclusive;

/// ln Σ_{c in the bins} m(c)/D(c): the unbiased weight of a range of output bins relative to the gauge window's partition function.
///
/// `None` if no sample lies in the bins.
#[must_use]
pub fn log_weight_of_bins(ensemble: &Ensemble, influence: &Influence, bins: RangeInclusive<i64>) -> Option<Quantity> {
    let first = ensemble.points.in_bin(*bins.start()).start;
    let points = first..ensemble.points.in_bin(*bins.end()).end;
    if points.is_empty() {
        return None;
    }
    // Relative to the largest weight, so that no range of free energies overflows.
    let log_densities: Vec<f64> = points.clone().map(|point| -influence.log_denominator(point)).collect();
    let largest = log_densities
        .iter()
        .fold(f64::NEG_INFINITY, |largest, &x| if x > largest { x } else { largest });
    let densities: Vec<f64> = log_densities.iter().map(|x| (x - largest).exp()).collect();
    let weights = &ensemble.points.weights[points.clone()];
    let sum: f64 = densities.iter().zip(weights).map(|(p, m)| p * m).sum();

    let mut free_energy_gradient = vec![0.0; ensemble.n_windows()];
    for ((point, p), m) in points.zip(&densities).zip(weights) {
        for &(k, s) in influence.answered(point) {
            free_energy_gradient[k as usize] -= p * m / sum * s;
        }
    }
    let values = densities.iter().map(|p| p / sum).collect();
    Some(Quantity {
        value: largest + sum.ln(),
        direct: vec![Direct { first, values }],
        free_energy_gradient,
    })
}

/// fₖ of window `k` relative to the gauge window, in kT.
#[must_use]
pub fn free_energy_of_window(free_energies: &[f64], k: usize) -> Quantity {
    let mut free_energy_gradient = vec![0.0; free_energies.len()];
    free_energy_gradient[k] = 1.0;
    Quantity {
        value: free_energies[k],
        direct: Vec::new(),
        free_energy_gradient,
    }
}
