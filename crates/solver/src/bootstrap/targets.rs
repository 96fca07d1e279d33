//! What is checked: the free energies of the profile's bins and of the windows.

use super::strips::Strips;
use crate::ensemble::Ensemble;
use crate::influence::{Influence, Quantity};
use crate::profile::Profile;
use crate::quantities::{free_energy_of_window, log_weight_of_bins};
use crate::solve::Solution;

/// The quantities of a profile and its windows.
pub(super) struct Targets {
    /// Logarithm of the weight of each bin of the profile; `None` where nothing was sampled.
    pub bins: Vec<Option<Quantity>>,
    /// Logarithm of the weight of the zero; `None` if the profile is of another ensemble.
    pub zero: Option<Quantity>,
    /// Free energy of each window; `None` for the gauge window.
    pub windows: Vec<Option<Quantity>>,
}

impl Targets {
    pub(super) fn of(ensemble: &Ensemble, solution: &Solution, influence: &Influence, profile: &Profile) -> Self {
        let weight_of = |stretches: &[_]| log_weight_of_bins(ensemble, influence, stretches);
        let bins = profile.bins.iter().map(|bin| {
            let number = ensemble.bins.bin_of(bin.center())?;
            weight_of(&[number..=number])
        });
        let window = |k| (k != solution.gauge).then(|| free_energy_of_window(&solution.free_energies, k));
        Self {
            bins: bins.collect(),
            zero: profile.zero_stretches(&ensemble.bins).and_then(|stretches| weight_of(&stretches)),
            windows: (0..ensemble.n_windows()).map(window).collect(),
        }
    }
}

/// The weight of a bin as a sum over strips.
pub(super) struct BinWeight {
    /// Strip c and 1/(D p) there, so that Σ m of the latter is 1.
    entries: Vec<(usize, f64)>,
}

impl BinWeight {
    /// From ln of the weight as a quantity, whose direct effect is 1/(D p) of each point.
    pub(super) fn of(quantity: &Quantity, ensemble: &Ensemble, strips: &Strips) -> Self {
        let mut entries: Vec<(usize, f64)> = Vec::new();
        for direct in &quantity.direct {
            for (point, q) in (direct.first..).zip(&direct.values) {
                let (strip, part) = (strips.of_point(point), strips.part_of_strip(ensemble, point) * q);
                match entries.last_mut() {
                    Some(last) if last.0 == strip => last.1 += part,
                    _ => entries.push((strip, part)),
                }
            }
        }
        Self { entries }
    }

    /// ln of the weight in a replicate relative to that in all counts, from the replicate's weights of the strips and the growth of their
    /// denominators; `None` if no sample of the bin was drawn.
    pub(super) fn change(&self, weights: &[f64], growth: &[f64]) -> Option<f64> {
        let ratio: f64 = self.entries.iter().map(|&(strip, q)| weights[strip] * q / growth[strip]).sum();
        (ratio > 0.0).then(|| ratio.ln())
    }
}
