//! Logarithms of unbiased weights, and the windows' free energies.

use crate::ensemble::Ensemble;
use crate::influence::{Direct, Influence, Quantity};
use std::ops::RangeInclusive;

/// ln Σ_{c in the bins} m(c)/D(c): the unbiased weight of output bins relative to the gauge window's partition function. The ranges of
/// bins must be increasing and without overlap.
///
/// `None` if no sample lies in the bins.
#[must_use]
pub fn log_weight_of_bins(
    ensemble: &Ensemble,
    influence: &Influence,
    bins: &[RangeInclusive<i64>],
) -> Option<Quantity> {
    let stretches: Vec<_> = bins
        .iter()
        .map(|bins| ensemble.points.in_bin(*bins.start()).start..ensemble.points.in_bin(*bins.end()).end)
        .filter(|points| !points.is_empty())
        .collect();
    // Relative to the largest density, so that no range of free energies overflows.
    let log_densities = stretches.iter().cloned().flatten().map(|point| -influence.log_denominator(point));
    let largest = log_densities.reduce(|largest, x| if x > largest { x } else { largest })?;
    let density = |point: usize| (-influence.log_denominator(point) - largest).exp();
    let weight = |point: usize| ensemble.points.weights[point] * density(point);
    let sum: f64 = stretches.iter().cloned().flatten().map(weight).sum();

    let mut free_energy_gradient = vec![0.0; ensemble.n_windows()];
    for point in stretches.iter().cloned().flatten() {
        let part = weight(point) / sum;
        for &(k, s) in influence.answered(point) {
            free_energy_gradient[k as usize] -= part * s;
        }
    }
    let direct = stretches
        .into_iter()
        .map(|points| Direct { first: points.start, values: points.map(|point| density(point) / sum).collect() });
    Some(Quantity { value: largest + sum.ln(), direct: direct.collect(), free_energy_gradient })
}

/// fₖ of window `k` relative to the gauge window, in kT.
#[must_use]
pub fn free_energy_of_window(free_energies: &[f64], k: usize) -> Quantity {
    let mut free_energy_gradient = vec![0.0; free_energies.len()];
    free_energy_gradient[k] = 1.0;
    Quantity { value: free_energies[k], direct: Vec::new(), free_energy_gradient }
}
