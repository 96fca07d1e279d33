//! The likelihood at the exact free energies, with expected counts in place of counted ones.

use super::grid::{Node, nodes};
use crate::settings::Weighting;
use nalgebra::{DMatrix, DVector};
use rayon::prelude::*;
use spandrel_testkit::{Case, KnownSystem};

/// One node as the solver would see it.
#[derive(Debug, Clone)]
struct Place {
    /// Windows' parts Mⱼ wⱼ, which add to one.
    answered: Vec<f64>,
    /// 1/D.
    density: f64,
}

/// All windows of a system on their nodes.
#[derive(Debug, Clone)]
pub(super) struct ExactSystem {
    /// Mₖ = ωₖ Nₖ.
    totals: Vec<f64>,
    nodes: Vec<Vec<Node>>,
    places: Vec<Vec<Place>>,
    /// Unbiased probability of each bin, as the nodes have it.
    weights: Vec<f64>,
    /// ∂ ln p/∂fⱼ of each bin.
    gradients: Vec<Vec<f64>>,
}

impl ExactSystem {
    pub(super) fn new(case: &Case, weighting: Weighting) -> Self {
        let system = &case.system;
        let windows = system.windows();
        let totals: Vec<f64> = windows.iter().map(|window| weighting.of(window) * window.n_samples as f64).collect();
        let nodes: Vec<Vec<Node>> = (0..windows.len()).into_par_iter().map(|k| nodes(case, k)).collect();
        let place = |node: &Node| {
            let term = |j: usize| totals[j] * (system.reduced_free_energies()[j] - system.bias_energy(j, node.x)).exp();
            let terms: Vec<f64> = (0..windows.len()).map(term).collect();
            let denominator: f64 = terms.iter().sum();
            let answered = terms.iter().map(|term| term / denominator).collect();
            Place { answered, density: denominator.recip() }
        };
        let places: Vec<Vec<Place>> =
            nodes.par_iter().map(|nodes| nodes.iter().map(place).collect::<Vec<_>>()).collect();

        let n_bins = case.edges.len().saturating_sub(1);
        let mut weights = vec![0.0; n_bins];
        let mut gradients = vec![vec![0.0; windows.len()]; n_bins];
        for ((nodes, places), total) in nodes.iter().zip(&places).zip(&totals) {
            for (node, place) in nodes.iter().zip(places) {
                let Some(bin) = node.bin else { continue };
                let weight = total * node.weight * place.density;
                weights[bin] += weight;
                for (sum, answered) in gradients[bin].iter_mut().zip(&place.answered) {
                    *sum -= weight * answered;
                }
            }
        }
        for (gradient, weight) in gradients.iter_mut().zip(&weights) {
            for entry in gradient {
                *entry /= weight;
            }
        }
        Self { totals, nodes, places, weights, gradients }
    }

    pub(super) fn nodes(&self, window: usize) -> &[Node] {
        &self.nodes[window]
    }

    /// H⁻¹ ∂Q/∂f for Q = ln p of each scored bin less that of the zero; the first window is the gauge. `None` if H is singular.
    pub(super) fn pulls(&self, zero: usize, scored: &[usize]) -> Option<Vec<Vec<f64>>> {
        let n = self.totals.len();
        let mut hessian = DMatrix::zeros(n, n);
        for ((nodes, places), total) in self.nodes.iter().zip(&self.places).zip(&self.totals) {
            for (node, place) in nodes.iter().zip(places) {
                let weight = total * node.weight;
                for i in 0..n {
                    hessian[(i, i)] += weight * place.answered[i];
                    for j in 0..n {
                        hessian[(i, j)] -= weight * place.answered[i] * place.answered[j];
                    }
                }
            }
        }
        let factor = hessian.remove_row(0).remove_column(0).cholesky()?;
        let pull = |&bin: &usize| {
            let gradient = (1..n).map(|j| self.gradients[bin][j] - self.gradients[zero][j]);
            let solved = factor.solve(&DVector::from_iterator(n - 1, gradient));
            std::iter::once(0.0).chain(solved.iter().copied()).collect()
        };
        Some(scored.iter().map(pull).collect())
    }

    /// φ on the nodes of a window, up to a constant.
    pub(super) fn influence(&self, window: usize, bin: usize, zero: usize, pull: &[f64]) -> Vec<f64> {
        let direct = |node: &Node, density: f64, bin: usize| {
            if node.bin == Some(bin) { density / self.weights[bin] } else { 0.0 }
        };
        self.nodes[window]
            .iter()
            .zip(&self.places[window])
            .map(|(node, place)| {
                let indirect: f64 = pull.iter().zip(&place.answered).map(|(pull, answered)| pull * answered).sum();
                direct(node, place.density, bin) - direct(node, place.density, zero) - indirect
            })
            .collect()
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use spandrel_testkit::cases;

    #[test]
    fn expected_counts_give_back_the_exact_weights_of_the_bins() {
        let case = cases::uneven().unwrap();
        let exact = ExactSystem::new(&case, Weighting::InverseG);
        for (bin, edges) in case.edges.windows(2).enumerate() {
            let expected = case.system.probability(edges[0], edges[1]);
            // Quantiles are right to 1e-9 in probability; the rarest bin holds some 1e-5 of a window.
            assert!((exact.weights[bin] / expected - 1.0).abs() < 1e-6, "bin {bin}");
            // Shares add to one.
            assert!((exact.gradients[bin].iter().sum::<f64>() + 1.0).abs() < 1e-12);
        }
    }

    /// With one window nothing is joined: p of a bin is a mean of exp(b − f) 1_bin over its samples, N φ = exp(b − f) 1_bin/p.
    #[test]
    fn a_single_window_has_the_influence_of_its_reweighted_counts() {
        let case = cases::long_memory(35).unwrap().first_windows(1);
        let case = Case { edges: vec![-0.56, -0.52, -0.48, -0.44], ..case };
        let exact = ExactSystem::new(&case, Weighting::Unit);
        let pulls = exact.pulls(1, &[0]).unwrap();
        let found = exact.influence(0, 0, 1, &pulls[0]);
        for (node, found) in exact.nodes(0).iter().zip(found) {
            let factor = (case.system.bias_energy(0, node.x) - case.system.reduced_free_energies()[0]).exp();
            let of_bin = |bin: usize| factor / case.system.probability(case.edges[bin], case.edges[bin + 1]);
            let expected = match node.bin {
                Some(0) => of_bin(0),
                Some(1) => -of_bin(1),
                _ => 0.0,
            };
            // Weights of bins are right to 1e-6, relative to which numbers of order ten to a hundred.
            assert!((found * exact.totals[0] - expected).abs() < 1e-4, "{found} against {expected}");
        }
    }
}
