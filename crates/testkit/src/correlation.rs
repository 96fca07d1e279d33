//! Latent Gaussian series with set autocorrelation times.
//!
//! A window is sampled as `x_t = CDF_k⁻¹(Φ(z_t))`: z is a stationary Gaussian series of unit variance, so every sample
//! follows the window's distribution exactly while neighbors in time remember each other.

use rand_distr::{Distribution, StandardNormal};

use crate::rng::Generator;

/// Autocorrelation of the latent series. Times are in frames.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Correlation {
    /// No memory.
    Independent,
    /// `z_t = ρ z_{t−1} + √(1 − ρ²) ε_t` with ρ = exp(−1/τ): autocorrelation exp(−t/τ).
    Exponential {
        /// The correlation time τ, positive.
        time: f64,
    },
    /// `z = √(1 − s)·z_fast + √s·z_slow`: autocorrelation `(1 − s) exp(−t/τ_fast) + s exp(−t/τ_slow)`.
    TwoTimes {
        /// Share s of the variance that the slow part carries, between 0 and 1.
        slow_share: f64,
        /// The correlation time of the fast part, positive.
        fast_time: f64,
        /// The correlation time of the slow part, positive.
        slow_time: f64,
    },
}

impl Correlation {
    /// Exact autocorrelation of z at `lag` frames.
    #[must_use]
    pub fn autocorrelation(self, lag: usize) -> f64 {
        match self {
            Self::Independent => f64::from(u8::from(lag == 0)),
            Self::Exponential { time } => decay(lag, time),
            Self::TwoTimes { slow_share, fast_time, slow_time } => {
                (1.0 - slow_share) * decay(lag, fast_time) + slow_share * decay(lag, slow_time)
            }
        }
    }

    /// Exact statistical inefficiency of z, g = 1 + 2 Σ_{t≥1} ρ(t): one for independent samples, (1 + ρ)/(1 − ρ) for one
    /// exponential. It is that of x where the window is Gaussian.
    #[must_use]
    pub fn statistical_inefficiency(self) -> f64 {
        match self {
            Self::Independent => 1.0,
            Self::Exponential { time } => exponential_inefficiency(time),
            Self::TwoTimes { slow_share, fast_time, slow_time } => {
                (1.0 - slow_share) * exponential_inefficiency(fast_time)
                    + slow_share * exponential_inefficiency(slow_time)
            }
        }
    }

    /// Draws `n_samples` of the latent series z, started in its stationary distribution.
    #[must_use]
    pub fn sample_latent(self, n_samples: usize, generator: &mut Generator) -> Vec<f64> {
        match self {
            Self::Independent => (0..n_samples).map(|_| StandardNormal.sample(generator)).collect(),
            Self::Exponential { time } => {
                let mut series = Autoregression::new(time, generator);
                (0..n_samples).map(|_| series.next(generator)).collect()
            }
            Self::TwoTimes { slow_share, fast_time, slow_time } => {
                let mut fast = Autoregression::new(fast_time, generator);
                let mut slow = Autoregression::new(slow_time, generator);
                let (fast_weight, slow_weight) = ((1.0 - slow_share).sqrt(), slow_share.sqrt());
                (0..n_samples)
                    .map(|_| fast_weight * fast.next(generator) + slow_weight * slow.next(generator))
                    .collect()
            }
        }
    }

    pub(crate) fn is_valid(self) -> bool {
        let positive = |time: f64| time > 0.0 && time.is_finite();
        match self {
            Self::Independent => true,
            Self::Exponential { time } => positive(time),
            Self::TwoTimes { slow_share, fast_time, slow_time } => {
                (0.0..=1.0).contains(&slow_share) && positive(fast_time) && positive(slow_time)
            }
        }
    }
}

/// exp(−lag/time).
fn decay(lag: usize, time: f64) -> f64 {
    (-(lag as f64) / time).exp()
}

/// (1 + ρ)/(1 − ρ) with ρ = exp(−1/time), which is 1/tanh(1/(2 time)).
fn exponential_inefficiency(time: f64) -> f64 {
    (0.5 / time).tanh().recip()
}

/// First-order autoregression of unit variance.
struct Autoregression {
    next: f64,
    rho: f64,
    noise: f64,
}

impl Autoregression {
    fn new(time: f64, generator: &mut Generator) -> Self {
        let rho = (-1.0 / time).exp();
        Self { next: StandardNormal.sample(generator), rho, noise: (1.0 - rho * rho).sqrt() }
    }

    fn next(&mut self, generator: &mut Generator) -> f64 {
        let current = self.next;
        let noise: f64 = StandardNormal.sample(generator);
        self.next = self.rho * current + self.noise * noise;
        current
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::autocorrelation::autocorrelation;
    use crate::rng::stream;
    use crate::tolerance;

    const MODELS: [Correlation; 3] = [
        Correlation::Independent,
        Correlation::Exponential { time: 3.7 },
        Correlation::TwoTimes { slow_share: 0.3, fast_time: 1.6, slow_time: 14.0 },
    ];

    /// Large-sample variance of an estimated autocorrelation (Bartlett 1946, J. R. Stat. Soc. Suppl. 8, 27).
    fn bartlett_variance(model: Correlation, lag: usize, n_samples: usize) -> f64 {
        let rho = |t: i64| model.autocorrelation(usize::try_from(t.unsigned_abs()).unwrap_or(usize::MAX));
        let lag = i64::try_from(lag).unwrap_or(i64::MAX);
        let terms = (-600..=600).map(|i| {
            rho(i).powi(2) + rho(i - lag) * rho(i + lag) - 4.0 * rho(lag) * rho(i) * rho(i - lag)
                + 2.0 * (rho(lag) * rho(i)).powi(2)
        });
        terms.sum::<f64>() / n_samples as f64
    }

    #[test]
    fn sampled_autocorrelation_agrees_with_the_formula() {
        let n_samples = 100_000;
        for (number, model) in (1..).zip(MODELS) {
            let series = model.sample_latent(n_samples, &mut stream(29, number));
            let found = autocorrelation(&series, 40);
            for lag in [1, 2, 5, 11, 40] {
                let error = found[lag] - model.autocorrelation(lag);
                let bound = tolerance::STANDARD_ERRORS * bartlett_variance(model, lag, n_samples).sqrt();
                assert!(error.abs() < bound, "{model:?}, lag {lag}: {error} against {bound}");
            }
        }
    }

    #[test]
    fn latent_series_has_zero_mean_and_unit_variance() {
        let n_samples = 100_000;
        for (number, model) in (11..).zip(MODELS) {
            let series = model.sample_latent(n_samples, &mut stream(29, number));
            let mean = series.iter().sum::<f64>() / n_samples as f64;
            let square = series.iter().map(|z| z * z).sum::<f64>() / n_samples as f64;
            let mean_error = (model.statistical_inefficiency() / n_samples as f64).sqrt();
            // Squares of a Gaussian series have the autocorrelation ρ² and the variance 2.
            let inefficiency_of_squares =
                1.0 + 2.0 * (1..600).map(|lag| model.autocorrelation(lag).powi(2)).sum::<f64>();
            let square_error = (2.0 * inefficiency_of_squares / n_samples as f64).sqrt();
            assert!(mean.abs() < tolerance::STANDARD_ERRORS * mean_error, "{model:?}: {mean}");
            assert!((square - 1.0).abs() < tolerance::STANDARD_ERRORS * square_error, "{model:?}: {square}");
        }
    }

    #[test]
    fn statistical_inefficiency_is_the_sum_over_all_lags() {
        for model in MODELS {
            let summed = 1.0 + 2.0 * (1..2000).map(|lag| model.autocorrelation(lag)).sum::<f64>();
            assert!((model.statistical_inefficiency() - summed).abs() < tolerance::SUMMATION_ORDER, "{model:?}");
        }
    }

    #[test]
    fn the_first_sample_is_stationary() {
        let replicates = 4000;
        let model = Correlation::Exponential { time: 50.0 };
        let firsts = (0..replicates).map(|number| model.sample_latent(1, &mut stream(31, number))[0]);
        let square = firsts.map(|z| z * z).sum::<f64>() / replicates as f64;
        let standard_error = (2.0 / replicates as f64).sqrt();
        assert!((square - 1.0).abs() < tolerance::STANDARD_ERRORS * standard_error, "{square}");
    }

    #[test]
    fn times_and_shares_out_of_range_are_refused() {
        assert!(MODELS.iter().all(|model| model.is_valid()));
        for time in [0.0, -2.0, f64::NAN, f64::INFINITY] {
            assert!(!Correlation::Exponential { time }.is_valid());
            assert!(!Correlation::TwoTimes { slow_share: 0.3, fast_time: time, slow_time: 9.0 }.is_valid());
            assert!(!Correlation::TwoTimes { slow_share: 0.3, fast_time: 3.0, slow_time: time }.is_valid());
        }
        for slow_share in [-0.1, 1.1, f64::NAN] {
            assert!(!Correlation::TwoTimes { slow_share, fast_time: 3.0, slow_time: 9.0 }.is_valid());
        }
    }
}
