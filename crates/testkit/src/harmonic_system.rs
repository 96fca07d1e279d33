//! Biases on a parabola: everything in closed form.

use crate::error::SystemError;
use crate::known_system::KnownSystem;
use crate::normal::standard_normal_cdf;
use crate::restraint::Restraint;
use crate::rng::Generator;
use crate::window::{Window, check_window};

/// The potential κ(x − a)²/2 on the whole line with unbiased, harmonic and linear windows.
///
/// Every window is Gaussian. A harmonic bias k(x − c)²/2 has mean (κa + kc)/(κ + k), variance 1/(κ + k) and
/// f = ln((κ + k)/κ)/2 + κk(a − c)²/(2(κ + k)); a linear bias s·x has mean a − s/κ, variance 1/κ and f = s·a − s²/(2κ)
/// (complete the square).
#[derive(Clone, Debug)]
pub struct HarmonicSystem {
    center: f64,
    force_constant: f64,
    windows: Vec<Window>,
    free_energies: Vec<f64>,
    means: Vec<f64>,
    variances: Vec<f64>,
}

impl HarmonicSystem {
    /// Potential with center a = `center` and κ = `force_constant` in kT per position squared.
    ///
    /// # Errors
    /// If κ is not positive and finite, there is no window, a window's numbers are out of range, or a restraint is
    /// [`Restraint::Custom`].
    pub fn new(center: f64, force_constant: f64, windows: Vec<Window>) -> Result<Self, SystemError> {
        if !(force_constant > 0.0 && force_constant.is_finite() && center.is_finite()) {
            return Err(SystemError::ForceConstant { found: force_constant });
        }
        if windows.is_empty() {
            return Err(SystemError::NoWindows);
        }
        let mut system = Self {
            center,
            force_constant,
            windows: Vec::new(),
            free_energies: Vec::new(),
            means: Vec::new(),
            variances: Vec::new(),
        };
        for (index, window) in windows.into_iter().enumerate() {
            check_window(index, &window)?;
            let (free_energy, mean, variance) =
                system.closed_form(&window.restraint).ok_or_else(|| SystemError::Unsupported {
                    window: index,
                    found: format!("{:?}", window.restraint),
                    expected: "no restraint, a harmonic or a linear one",
                })?;
            system.free_energies.push(free_energy);
            system.means.push(mean);
            system.variances.push(variance);
            system.windows.push(window);
        }
        Ok(system)
    }

    /// Free energy, mean and variance under a restraint.
    fn closed_form(&self, restraint: &Restraint) -> Option<(f64, f64, f64)> {
        let (a, kappa) = (self.center, self.force_constant);
        match *restraint {
            Restraint::None => Some((0.0, a, kappa.recip())),
            Restraint::Harmonic { center: c, force_constant: k } => {
                let total = kappa + k;
                let free_energy = 0.5 * (k / kappa).ln_1p() + 0.5 * kappa * k / total * (a - c).powi(2);
                Some((free_energy, (kappa * a + k * c) / total, total.recip()))
            }
            Restraint::Linear { slope: s } => Some((s * a - 0.5 * s * s / kappa, a - s / kappa, kappa.recip())),
            Restraint::Custom(_) => None,
        }
    }

    /// Exact mean position in window `window`.
    #[must_use]
    pub fn window_mean(&self, window: usize) -> f64 {
        self.means[window]
    }

    /// Exact variance of the position in window `window`.
    #[must_use]
    pub fn window_variance(&self, window: usize) -> f64 {
        self.variances[window]
    }

    /// Exact variance of the mean of window `window`'s samples for large n: variance · g / n. The latent series is the
    /// position itself here, so its statistical inefficiency g is exact too.
    #[must_use]
    pub fn variance_of_window_mean(&self, window: usize) -> f64 {
        let settings = &self.windows[window];
        self.variances[window] * settings.correlation.statistical_inefficiency() / settings.n_samples as f64
    }
}

impl KnownSystem for HarmonicSystem {
    fn windows(&self) -> &[Window] {
        &self.windows
    }

    fn bias_energy(&self, window: usize, x: f64) -> f64 {
        self.windows[window].restraint.energy(x, None)
    }

    fn reduced_free_energies(&self) -> &[f64] {
        &self.free_energies
    }

    fn probability(&self, lower: f64, upper: f64) -> f64 {
        let scaled = |x: f64| (x - self.center) * self.force_constant.sqrt();
        let (low, high) = (scaled(lower), scaled(upper));
        // Both ends in the upper tail: take the mirror image, where the distribution function keeps its digits.
        if low > 0.0 {
            standard_normal_cdf(-low) - standard_normal_cdf(-high)
        } else {
            standard_normal_cdf(high) - standard_normal_cdf(low)
        }
    }

    fn sample_window(&self, window: usize, generator: &mut Generator) -> Vec<f64> {
        let settings = &self.windows[window];
        let (mean, deviation) = (self.means[window], self.variances[window].sqrt());
        let latent = settings.correlation.sample_latent(settings.n_samples, generator);
        latent.into_iter().map(|z| mean + deviation * z).collect()
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed construction fails the test")]

    use super::*;
    use crate::correlation::Correlation;
    use crate::potential::Potential;
    use crate::tolerance;

    fn system(n_samples: usize, correlation: Correlation) -> HarmonicSystem {
        let restraints = [
            Restraint::Harmonic { center: -0.8, force_constant: 37.0 },
            Restraint::Harmonic { center: 0.9, force_constant: 12.5 },
            Restraint::Linear { slope: 5.4 },
            Restraint::None,
        ];
        let windows = restraints.map(|restraint| Window { restraint, n_samples, correlation });
        HarmonicSystem::new(0.23, 7.9, windows.to_vec()).unwrap()
    }

    #[test]
    fn sample_moments_agree_with_the_closed_forms() {
        let n_samples = 40_000;
        for (seed, correlation) in [(41, Correlation::Independent), (42, Correlation::Exponential { time: 6.5 })] {
            let system = system(n_samples, correlation);
            let inefficiency_of_squares =
                1.0 + 2.0 * (1..400).map(|t| correlation.autocorrelation(t).powi(2)).sum::<f64>();
            for (window, series) in system.sample_all(seed, 2).iter().enumerate() {
                let mean = series.iter().sum::<f64>() / n_samples as f64;
                let error = mean - system.window_mean(window);
                let bound = tolerance::STANDARD_ERRORS * system.variance_of_window_mean(window).sqrt();
                assert!(error.abs() < bound, "mean of window {window}: {error} against {bound}");

                let truth = system.window_variance(window);
                let square = series.iter().map(|x| (x - system.window_mean(window)).powi(2)).sum::<f64>();
                let relative = square / n_samples as f64 / truth - 1.0;
                let bound = tolerance::STANDARD_ERRORS * (2.0 * inefficiency_of_squares / n_samples as f64).sqrt();
                assert!(relative.abs() < bound, "variance of window {window}: {relative} against {bound}");
            }
        }
    }

    /// f_k = −ln ⟨exp(−b_k)⟩, averaged over the samples of the unbiased window.
    #[test]
    fn free_energies_are_those_of_exponential_averages() {
        let system = system(200_000, Correlation::Independent);
        let unbiased = &system.sample_all(43, 0)[3];
        for window in [1, 2] {
            let weights: Vec<f64> = unbiased.iter().map(|&x| (-system.bias_energy(window, x)).exp()).collect();
            let mean = weights.iter().sum::<f64>() / weights.len() as f64;
            let variance = weights.iter().map(|w| (w - mean).powi(2)).sum::<f64>() / weights.len() as f64;
            let standard_error = (variance / weights.len() as f64).sqrt() / mean;
            let error = -mean.ln() - system.reduced_free_energies()[window];
            assert!(standard_error < 0.02, "the check has no power: {standard_error}");
            assert!(error.abs() < tolerance::STANDARD_ERRORS * standard_error, "window {window}: {error}");
        }
    }

    #[test]
    fn a_mirrored_stretch_has_the_same_probability_far_out_in_either_tail() {
        let system = system(1, Correlation::Independent);
        let (above, below) = (system.probability(2.4, 2.7), system.probability(-2.24, -1.94));
        assert!(above > 0.0 && above < 1e-8);
        assert!((above / below - 1.0).abs() < 1e-9, "bins mirrored with rounded edges: {above} and {below}");
    }

    #[test]
    fn profile_is_the_potential_on_narrow_bins() {
        let system = system(1, Correlation::Independent);
        let edges: Vec<f64> = (0..=200).map(|i| -0.77 + 0.01 * f64::from(i)).collect();
        for (index, value) in system.profile(&edges).iter().enumerate() {
            let middle = 0.5 * (edges[index] + edges[index + 1]);
            // Averaging over a bin of width h changes a parabola's profile by (κ² d² − κ) h²/24 at most, 6e-4 here.
            assert!((value - 0.5 * 7.9 * (middle - 0.23).powi(2)).abs() < 6e-4);
        }
    }

    #[test]
    fn impossible_systems_are_refused() {
        let good = Window::independent(Restraint::None, 10);
        for force_constant in [0.0, -3.0, f64::NAN, f64::INFINITY] {
            assert!(HarmonicSystem::new(0.2, force_constant, vec![good.clone()]).is_err());
        }
        assert_eq!(HarmonicSystem::new(0.2, 3.0, Vec::new()).unwrap_err(), SystemError::NoWindows);
        let custom = Window::independent(Restraint::Custom(Potential::harmonic(0.1, 2.0)), 10);
        let error = HarmonicSystem::new(0.2, 3.0, vec![good, custom]).unwrap_err();
        assert_eq!(
            error.to_string(),
            "window 1: expected no restraint, a harmonic or a linear one, found Custom(Potential(..))"
        );
    }
}
