//! Energies of the periodic square-lattice Ising model, exactly, from its density of states.

use std::str::FromStr;

use crate::correlation::Correlation;
use crate::normal::standard_normal_cdf;
use crate::rng::Generator;
use crate::table::{Table, TableError};

/// The number of states g(E) at each energy E, in units of the coupling constant J > 0, as ln g.
///
/// At the reduced coupling K = J/kT the energy has probability g(E) exp(−K E)/Z. One lattice at another coupling is the same
/// system with the reduced bias `(K − K_0)·E`, so its reduced free energies are differences of −ln Z.
#[derive(Clone, Debug, PartialEq)]
pub struct DensityOfStates {
    energies: Vec<f64>,
    ln_degeneracies: Vec<f64>,
}

impl FromStr for DensityOfStates {
    type Err = TableError;

    /// Reads the columns `energy` and `ln_degeneracy` of a table.
    fn from_str(text: &str) -> Result<Self, TableError> {
        let table: Table = text.parse()?;
        let (energies, ln_degeneracies) = (table.column("energy")?, table.column("ln_degeneracy")?);
        if energies.is_empty() || !energies.is_sorted_by(|low, high| low < high) {
            return Err(TableError::Content { reason: "expected energies in increasing order".to_owned() });
        }
        if let Some(found) = ln_degeneracies.iter().find(|value| !(0.0..f64::INFINITY).contains(*value)) {
            return Err(TableError::Content {
                reason: format!("expected `ln_degeneracy` of at least 0, found {found}"),
            });
        }
        Ok(Self { energies, ln_degeneracies })
    }
}

impl DensityOfStates {
    /// Energies that occur, increasing.
    #[must_use]
    pub fn energies(&self) -> &[f64] {
        &self.energies
    }

    /// ln g of each energy.
    #[must_use]
    pub fn ln_degeneracies(&self) -> &[f64] {
        &self.ln_degeneracies
    }

    /// −ln Z(K), the reduced free energy of the lattice at `coupling` K.
    #[must_use]
    pub fn reduced_free_energy(&self, coupling: f64) -> f64 {
        let terms = || self.energies.iter().zip(&self.ln_degeneracies).map(|(energy, ln_g)| ln_g - coupling * energy);
        let largest = terms().fold(f64::NEG_INFINITY, f64::max);
        -(largest + terms().map(|term| (term - largest).exp()).sum::<f64>().ln())
    }

    /// Probability of each energy at `coupling`.
    #[must_use]
    pub fn probabilities(&self, coupling: f64) -> Vec<f64> {
        let free_energy = self.reduced_free_energy(coupling);
        self.energies
            .iter()
            .zip(&self.ln_degeneracies)
            .map(|(energy, ln_g)| (ln_g - coupling * energy + free_energy).exp())
            .collect()
    }

    /// Mean energy at `coupling`.
    #[must_use]
    pub fn mean_energy(&self, coupling: f64) -> f64 {
        self.probabilities(coupling).iter().zip(&self.energies).map(|(probability, energy)| probability * energy).sum()
    }

    /// Variance of the energy at `coupling`.
    #[must_use]
    pub fn energy_variance(&self, coupling: f64) -> f64 {
        let mean = self.mean_energy(coupling);
        let probabilities = self.probabilities(coupling);
        probabilities.iter().zip(&self.energies).map(|(p, energy)| p * (energy - mean).powi(2)).sum()
    }

    /// Draws `n_samples` energies at `coupling`: the inverse of the distribution function at `Φ(z_t)`, with z from
    /// `correlation`.
    #[must_use]
    pub fn sample(
        &self,
        coupling: f64,
        n_samples: usize,
        correlation: Correlation,
        generator: &mut Generator,
    ) -> Vec<f64> {
        let cumulative: Vec<f64> = self
            .probabilities(coupling)
            .iter()
            .scan(0.0, |below, probability| {
                *below += probability;
                Some(*below)
            })
            .collect();
        let last = self.energies.len() - 1;
        correlation
            .sample_latent(n_samples, generator)
            .into_iter()
            .map(|z| {
                let below = standard_normal_cdf(z);
                self.energies[cumulative.partition_point(|&value| value <= below).min(last)]
            })
            .collect()
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed parse fails the test")]

    use super::*;
    use crate::rng::stream;
    use crate::tolerance;

    /// The 2 × 2 torus, whose sixteen states are counted on one's fingers: Z = 12 + 4 cosh 8K.
    fn two_by_two() -> DensityOfStates {
        let rows = [(-8, 2.0_f64), (0, 12.0), (8, 2.0)].map(|(energy, count)| format!("{energy},{:.17}", count.ln()));
        format!("energy,ln_degeneracy\n{}\n", rows.join("\n")).parse().unwrap()
    }

    #[test]
    fn two_by_two_lattice_agrees_with_its_closed_form() {
        let states = two_by_two();
        for coupling in [-0.3, 0.17, 0.6, 90.0] {
            // ln(12 + 4 cosh 8K), written for large arguments.
            let large = 8.0 * f64::abs(coupling);
            let expected = -(large + (2.0 + 12.0 * (-large).exp() + 2.0 * (-2.0 * large).exp()).ln());
            assert!((states.reduced_free_energy(coupling) / expected - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
        }
        let coupling = 0.17_f64;
        let partition = 12.0 + 4.0 * (8.0 * coupling).cosh();
        let mean = -32.0 * (8.0 * coupling).sinh() / partition;
        let variance = 256.0 * (8.0 * coupling).cosh() / partition - mean * mean;
        assert!((states.mean_energy(coupling) / mean - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
        assert!((states.energy_variance(coupling) / variance - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
    }

    #[test]
    fn sampled_energies_have_the_exact_mean() {
        let states = two_by_two();
        let n_samples = 50_000;
        let energies = states.sample(0.17, n_samples, Correlation::Independent, &mut stream(61, 4));
        let mean = energies.iter().sum::<f64>() / n_samples as f64;
        let standard_error = (states.energy_variance(0.17) / n_samples as f64).sqrt();
        assert!((mean - states.mean_energy(0.17)).abs() < tolerance::STANDARD_ERRORS * standard_error);
        assert!(energies.iter().all(|energy| states.energies().contains(energy)));
    }

    #[test]
    fn tables_that_are_no_density_of_states_are_refused() {
        let message = |text: &str| text.parse::<DensityOfStates>().unwrap_err().to_string();
        assert_eq!(message("energy,ln_degeneracy\n"), "expected energies in increasing order");
        assert_eq!(message("energy,ln_degeneracy\n4,1\n0,2\n"), "expected energies in increasing order");
        assert_eq!(message("energy,ln_degeneracy\n4,NaN\n"), "expected `ln_degeneracy` of at least 0, found NaN");
        assert_eq!(message("energy,count\n4,2\n"), "expected a column `ln_degeneracy`, found energy, count");
    }
}
