//! What all systems with a known answer offer.

use crate::rng::{Generator, window_stream};
use crate::window::Window;

/// A system whose reduced free energies are known and that can be sampled exactly.
pub trait KnownSystem {
    /// The windows.
    fn windows(&self) -> &[Window];

    /// Bias energy of window `window` at `x`, kT.
    fn bias_energy(&self, window: usize, x: f64) -> f64;

    /// Exact `f_k = −ln ⟨exp(−b_k)⟩` in kT, the average being over the unbiased system: the reversible work of switching the
    /// bias on. One number a window.
    fn reduced_free_energies(&self) -> &[f64];

    /// Exact probability of lower ≤ x < upper in the unbiased system.
    fn probability(&self, lower: f64, upper: f64) -> f64;

    /// Draws all samples of one window, in time order.
    fn sample_window(&self, window: usize, generator: &mut Generator) -> Vec<f64>;

    /// Draws all windows of one replicate experiment; each window has a random stream of its own.
    fn sample_all(&self, seed: u64, replicate: u64) -> Vec<Vec<f64>> {
        (0..self.windows().len())
            .map(|window| self.sample_window(window, &mut window_stream(seed, replicate, window)))
            .collect()
    }

    /// Exact profile −ln(p/width) on the bins between neighbors of `edges`, kT, its lowest value zero. Bins without weight
    /// are infinite. Fewer than two edges give no bins.
    fn profile(&self, edges: &[f64]) -> Vec<f64> {
        let raw: Vec<f64> =
            edges.windows(2).map(|pair| -(self.probability(pair[0], pair[1]) / (pair[1] - pair[0])).ln()).collect();
        let lowest = raw.iter().copied().fold(f64::INFINITY, f64::min);
        raw.iter().map(|value| value - lowest).collect()
    }
}
