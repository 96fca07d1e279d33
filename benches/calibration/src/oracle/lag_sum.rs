//! Sums of powers of a latent autocorrelation over all lags.

use spandrel_testkit::Correlation;

/// Terms below this part of the sum are left out.
const CUT: f64 = 1e-17;

/// S_n = Σ_{t≥1} ρ(t)ⁿ for n ≥ 1; decreases with n, since 0 ≤ ρ < 1. For one exponential 1/(e^{n/τ} − 1).
pub(super) fn lag_sum(correlation: Correlation, n: u32) -> f64 {
    let order = f64::from(n);
    match correlation {
        Correlation::Independent => 0.0,
        Correlation::Exponential { time } => (order / time).exp_m1().recip(),
        Correlation::TwoTimes { .. } => {
            let mut sum = 0.0;
            for lag in 1.. {
                let term = correlation.autocorrelation(lag).powf(order);
                sum += term;
                if term <= CUT * sum {
                    break;
                }
            }
            sum
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use spandrel_testkit::tolerance;

    #[test]
    fn the_first_sum_is_half_of_what_memory_adds_to_the_inefficiency() {
        let two_times = Correlation::TwoTimes { slow_share: 0.3, fast_time: 1.6, slow_time: 14.0 };
        for correlation in [Correlation::Independent, Correlation::Exponential { time: 3.7 }, two_times] {
            let found = 1.0 + 2.0 * lag_sum(correlation, 1);
            assert!((found - correlation.statistical_inefficiency()).abs() < tolerance::SUMMATION_ORDER);
        }
    }

    #[test]
    fn powers_of_one_exponential_are_exponentials_of_shorter_time() {
        let shorter = lag_sum(Correlation::Exponential { time: 14.0 / 3.0 }, 1);
        let slow_only = Correlation::TwoTimes { slow_share: 1.0, fast_time: 1.6, slow_time: 14.0 };
        for correlation in [Correlation::Exponential { time: 14.0 }, slow_only] {
            assert!((lag_sum(correlation, 3) - shorter).abs() < tolerance::SUMMATION_ORDER, "{correlation:?}");
        }
    }
}
