//! Exact long-run variances of functions of a latent Gaussian series.

use super::grid::Node;
use super::lag_sum::lag_sum;
use spandrel_testkit::Correlation;

/// Highest order used: the grid resolves no more. See the grid's panels.
const HIGHEST_ORDER: u32 = 2000;

/// Long-run variance of a function, and the most that orders left out can add to it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct LongRun {
    pub variance: f64,
    pub left_out: f64,
}

/// Long-run variances of φ(x_t) for several functions φ, each given by its values on the nodes.
///
/// With c_n = ∫ φ h_n over the standard normal density, h_n = He_n/√n!, and S_n = Σ_{t≥1} ρ(t)ⁿ,
/// σ² = Var φ + 2 Σ_{n≥1} c_n² S_n, since E[h_n(z_0) h_m(z_t)] = δ_nm ρ(t)ⁿ (Mehler). Since S_n decreases, orders above L add at most
/// 2 S_{L+1} (Var φ − Σ_{n≤L} c_n²); orders are added until that is at most `accuracy` times the greater of the variance so far and the
/// function's `floor`, or the grid resolves no more.
pub(super) fn long_run_variances(
    nodes: &[Node],
    functions: &[(Vec<f64>, f64)],
    correlation: Correlation,
    accuracy: f64,
) -> Vec<LongRun> {
    let mut rest: Vec<f64> = functions.iter().map(|(values, _)| plain_variance(nodes, values)).collect();
    let mut variances = rest.clone();
    // Hermite polynomials times the nodes' weights: the weight keeps them bounded, and makes each coefficient a plain sum.
    let mut lower: Vec<f64> = vec![0.0; nodes.len()];
    let mut current: Vec<f64> = nodes.iter().map(|node| node.weight).collect();
    let mut next_sum = lag_sum(correlation, 1);
    for order in 1..=HIGHEST_ORDER {
        let enough = functions.iter().zip(&rest).zip(&variances);
        if enough.into_iter().all(|((f, rest), so_far)| 2.0 * next_sum * rest <= accuracy * so_far.max(f.1)) {
            break;
        }
        let (below, scale) = (f64::from(order - 1).sqrt(), f64::from(order).sqrt().recip());
        for ((node, lower), current) in nodes.iter().zip(&mut lower).zip(&mut current) {
            let raised = (node.z * *current - below * *lower) * scale;
            *lower = std::mem::replace(current, raised);
        }
        for (((values, _), rest), variance) in functions.iter().zip(&mut rest).zip(&mut variances) {
            let coefficient: f64 = values.iter().zip(&current).map(|(value, weighted)| value * weighted).sum();
            let square = coefficient * coefficient;
            *variance += 2.0 * square * next_sum;
            *rest = (*rest - square).max(0.0);
        }
        next_sum = lag_sum(correlation, order + 1);
    }
    variances
        .into_iter()
        .zip(rest)
        .map(|(variance, rest)| LongRun { variance, left_out: 2.0 * next_sum * rest })
        .collect()
}

/// Var φ over the window's distribution.
pub(super) fn plain_variance(nodes: &[Node], values: &[f64]) -> f64 {
    let mean: f64 = nodes.iter().zip(values).map(|(node, value)| node.weight * value).sum();
    nodes.iter().zip(values).map(|(node, value)| node.weight * (value - mean).powi(2)).sum()
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::super::grid::nodes;
    use super::*;
    use spandrel_testkit::{Case, OneDimensionalSystem, Potential, Restraint, Window, tolerance};
    use std::f64::consts::PI;

    const ACCURACY: f64 = 1e-4;
    const EXPONENTIAL: Correlation = Correlation::Exponential { time: 8.3 };

    /// A parabola under a parabola: a Gaussian window of mean (κa + kc)/(κ + k) and variance 1/(κ + k). An edge stands at the mean.
    fn gaussian() -> (Vec<Node>, f64, f64) {
        let (stiffness, force_constant) = (7.0, 60.0);
        let mean = (stiffness * 0.2 + force_constant * -0.1) / (stiffness + force_constant);
        let windows = vec![Window::independent(Restraint::Harmonic { center: -0.1, force_constant }, 100)];
        let potential = Potential::harmonic(0.2, stiffness);
        let system = OneDimensionalSystem::new(potential, mean - 1.6, mean + 1.6, windows).unwrap();
        let case = Case { name: "gaussian", system, edges: vec![mean, mean + 0.2] };
        (nodes(&case, 0), mean, (stiffness + force_constant).recip())
    }

    fn long_run(nodes: &[Node], correlation: Correlation, function: impl Fn(f64) -> f64) -> LongRun {
        let values = nodes.iter().map(|node| function(node.x)).collect();
        long_run_variances(nodes, &[(values, 0.0)], correlation, ACCURACY)[0]
    }

    #[test]
    fn a_linear_function_of_a_gaussian_window_has_its_variance_times_the_inefficiency() {
        let (nodes, _, variance) = gaussian();
        let two_times = Correlation::TwoTimes { slow_share: 0.3, fast_time: 1.6, slow_time: 14.0 };
        for correlation in [Correlation::Independent, EXPONENTIAL, two_times] {
            let found = long_run(&nodes, correlation, |x| 2.3 - 1.7 * x).variance;
            let expected = 1.7_f64.powi(2) * variance * correlation.statistical_inefficiency();
            // Nodes are right to 1e-9 in probability, which the tails magnify; nothing is cut off, since one order is all there is.
            assert!((found / expected - 1.0).abs() < 1e-6, "{correlation:?}: {found} against {expected}");
        }
    }

    /// Squares of a Gaussian series of unit variance have the autocovariance 2ρ².
    #[test]
    fn a_square_forgets_twice_as_fast() {
        let (nodes, mean, variance) = gaussian();
        let found = long_run(&nodes, EXPONENTIAL, |x| (x - mean).powi(2) / variance).variance;
        let expected = 2.0 * Correlation::Exponential { time: 8.3 / 2.0 }.statistical_inefficiency();
        assert!((found / expected - 1.0).abs() < 1e-6, "{found} against {expected}");
    }

    /// Signs of a Gaussian series have the autocorrelation (2/π) arcsin ρ (Van Vleck & Middleton 1966, Proc. IEEE 54, 2).
    #[test]
    fn a_jump_is_right_to_what_is_said_to_be_left_out() {
        let (nodes, mean, _) = gaussian();
        let found = long_run(&nodes, EXPONENTIAL, |x| (x - mean).signum());
        let expected = 1.0 + 4.0 / PI * (1..400).map(|lag| EXPONENTIAL.autocorrelation(lag).asin()).sum::<f64>();
        let missing = expected - found.variance;
        assert!(found.left_out <= ACCURACY * found.variance);
        // Quadrature of the orders that are there is right to 1e-5.
        assert!(missing > -1e-5 * expected && missing < found.left_out + 1e-5 * expected, "{missing} of {expected}");
    }

    #[test]
    fn independent_samples_need_no_orders() {
        let (nodes, mean, _) = gaussian();
        let found = long_run(&nodes, Correlation::Independent, |x| (x - mean).signum());
        assert!(found.left_out <= 0.0 && (found.variance - 1.0).abs() < tolerance::QUANTILE, "{found:?}");
    }
}
