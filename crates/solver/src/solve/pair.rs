//! Two windows alone: Bennett's acceptance ratio.

use crate::ensemble::{Ensemble, Window};

/// The maximum-likelihood difference of two windows and how well their samples link them.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PairSolution {
    /// f_j − f_i in kT.
    pub difference: f64,
    /// Effective number of samples of either window that the other answers for, Σ_{x in i} share_j/gᵢ + Σ_{x in j} share_i/gⱼ; below 1
    /// the windows are not linked.
    ///
    /// No more than four times Σ share_i share_j/g, which a healthy pair exceeds: where the samples belong wholly to each other's bias,
    /// because files were mixed up, say, any difference meets the equation and none of them links anything.
    pub linking_samples: f64,
}

/// Solves two windows by Bennett's acceptance ratio (Bennett 1976): Σ over the samples of both of 1/(1 + e^{−(c + Δ)}) = M_j, with
/// c = ln(M_j/M_i) + bᵢ − b_j and Δ = f_j − f_i, a monotone equation with one root.
///
/// Weighted samples count with their weight ω. Cost: some ten passes over the points of both windows.
#[must_use]
pub fn solve_pair(ensemble: &Ensemble, i: usize, j: usize) -> PairSolution {
    let (first, second) = (&ensemble.windows[i], &ensemble.windows[j]);
    let offset = (second.total_weight() / first.total_weight()).ln();
    let samples_of = |window: &Window| -> Vec<(f64, f64)> {
        window
            .counts
            .iter()
            .map(|&(point, count)| {
                let position = ensemble.points.position(point as usize);
                (offset + first.reduced_bias(position) - second.reduced_bias(position), count as f64)
            })
            .collect()
    };
    let (of_first, of_second) = (samples_of(first), samples_of(second));
    let answered_by_second = |delta: f64, samples: &[(f64, f64)]| -> (f64, f64) {
        samples.iter().fold((0.0, 0.0), |(sum, slope), &(c, n)| {
            let share = 1.0 / (1.0 + (-(c + delta)).exp());
            (sum + n * share, slope + n * share * (1.0 - share))
        })
    };
    let excess = |delta: f64| {
        let (a, a_slope) = answered_by_second(delta, &of_first);
        let (b, b_slope) = answered_by_second(delta, &of_second);
        (first.weight * a + second.weight * b - second.total_weight(), first.weight * a_slope + second.weight * b_slope)
    };
    let difference = increasing_root(excess);
    let (g_first, g_second) = (first.samples_per_effective_sample(), second.samples_per_effective_sample());
    let (of_first, slope_first) = answered_by_second(difference, &of_first);
    let (of_second, slope_second) = answered_by_second(difference, &of_second);
    let answered = of_first / g_first + (second.n_samples as f64 - of_second) / g_second;
    let shared = slope_first / g_first + slope_second / g_second;
    let linking_samples = answered.min(4.0 * shared);
    PairSolution { difference, linking_samples }
}

/// Root of an increasing function (value and slope), by Newton steps kept inside a shrinking bracket.
fn increasing_root(function: impl Fn(f64) -> (f64, f64)) -> f64 {
    let (mut low, mut high) = (-1.0, 1.0);
    while function(low).0 > 0.0 && low > -1e6 {
        high = low;
        low *= 2.0;
    }
    while function(high).0 < 0.0 && high < 1e6 {
        low = high;
        high *= 2.0;
    }
    let mut x = f64::midpoint(low, high);
    for _ in 0..200 {
        let (value, slope) = function(x);
        if value < 0.0 {
            low = x;
        } else {
            high = x;
        }
        let newton = x - value / slope;
        let next = if newton > low && newton < high { newton } else { f64::midpoint(low, high) };
        if (next - x).abs() <= 1e-13 * (1.0 + x.abs()) {
            return next;
        }
        x = next;
    }
    x
}
