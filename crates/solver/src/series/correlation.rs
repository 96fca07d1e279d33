//! Correlation along a series, read off its block means.

use super::Autocorrelation;
use super::sequence::monotone_pairs;
use serde::Serialize;

/// Mean lag and inefficiency of a series in units of its blocks.
///
/// With ρₜ the autocorrelation of B block means (1/B normalization), pairs Γₘ = ρ₂ₘ + ρ₂ₘ₊₁ are summed until the first that is not
/// positive, after making them non-increasing (initial monotone sequence, Geyer 1992):
///
/// - inefficiency of the block means G = 2 Σ Γₘ − 1,
/// - mean lag s = 2 [(Γ₀ − 1) + Σₘ≥₁ (2m + ½) Γₘ] / max(G, 1), clipped to [0, B/2].
///
/// Where ρ₁ < 1/√B the blocks pass for independent: s = 0 and G = 1.
///
/// The mean lag follows the slowest motion that carries weight, which the inefficiency does not when two time scales mix.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct MeanLag {
    /// Mean lag s in blocks.
    pub mean_lag: f64,
    /// Inefficiency G of the block means (1 when the blocks are independent).
    pub block_inefficiency: f64,
    /// Variance of the block means with the divisor B.
    pub block_variance: f64,
}

impl MeanLag {
    /// Reads the correlation off `means` (B values in the order of time). Cost B log B.
    ///
    /// `None` if there are fewer than two blocks or all means are equal: nothing can then be said about correlation.
    #[must_use]
    pub fn of_block_means(means: &[f64]) -> Option<Self> {
        let b = means.len() as f64;
        let Autocorrelation { variance, rho } = Autocorrelation::of(means)?;
        if rho[1] < 1.0 / b.sqrt() {
            return Some(Self { mean_lag: 0.0, block_inefficiency: 1.0, block_variance: variance });
        }
        let (mut sum, mut lag_sum) = (0.0, 0.0);
        for (m, pair) in monotone_pairs(&rho).enumerate() {
            sum += pair;
            lag_sum += if m == 0 { pair - 1.0 } else { (2.0 * m as f64 + 0.5) * pair };
        }
        let block_inefficiency = 2.0 * sum - 1.0;
        let mean_lag = (2.0 * lag_sum / block_inefficiency.max(1.0)).clamp(0.0, b / 2.0);
        Some(Self { mean_lag, block_inefficiency, block_variance: variance })
    }
}
