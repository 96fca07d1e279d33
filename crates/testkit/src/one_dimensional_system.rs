//! Any smooth potential with any smooth biases, by quadrature.

use crate::density::Density;
use crate::error::SystemError;
use crate::known_system::KnownSystem;
use crate::normal::standard_normal_cdf;
use crate::potential::Potential;
use crate::restraint::Restraint;
use crate::rng::Generator;
use crate::window::{Window, check_window};

/// A potential on [lower, upper), closed by hard walls or periodic, with its windows.
///
/// Integrals are five-point Gauss sums on 4096 panels, right to about 1e-13 where the densities are smooth on the scale of a
/// panel. Samples are `x_t = CDF⁻¹(Φ(z_t))` with a latent series z ([`crate::correlation`]); in a periodic system the
/// distribution function starts half a period below the window's center, so that neighbors in z are neighbors in space.
///
/// ```
/// use spandrel_testkit::{KnownSystem, OneDimensionalSystem, Potential, Restraint, Window};
///
/// let potential = Potential::double_well(0.1, 0.4, 6.0, 0.15);
/// let windows = [-0.3, 0.1, 0.5].map(|center| {
///     Window::independent(Restraint::Harmonic { center, force_constant: 90.0 }, 400)
/// });
/// let system = OneDimensionalSystem::new(potential, -1.0, 1.2, windows.to_vec())?;
/// let samples = system.sample_all(7, 0);
/// assert_eq!(samples[2].len(), 400);
/// # Ok::<(), spandrel_testkit::SystemError>(())
/// ```
#[derive(Clone, Debug)]
pub struct OneDimensionalSystem {
    potential: Potential,
    lower: f64,
    upper: f64,
    period: Option<f64>,
    windows: Vec<Window>,
    unbiased: Density,
    densities: Vec<Density>,
    free_energies: Vec<f64>,
}

impl OneDimensionalSystem {
    /// A system between hard walls at `lower` and `upper`.
    ///
    /// # Errors
    /// If the range is not finite and increasing, there is no window, a window's numbers are out of range, or the potential
    /// or a bias is nowhere finite or somewhere not a number.
    pub fn new(potential: Potential, lower: f64, upper: f64, windows: Vec<Window>) -> Result<Self, SystemError> {
        Self::build(potential, lower, upper, None, windows)
    }

    /// A periodic system on [lower, lower + period). The potential must have that period.
    ///
    /// # Errors
    /// As [`Self::new`]; also if a restraint is linear.
    pub fn periodic(potential: Potential, lower: f64, period: f64, windows: Vec<Window>) -> Result<Self, SystemError> {
        if let Some(index) = windows.iter().position(|window| matches!(window.restraint, Restraint::Linear { .. })) {
            return Err(SystemError::Unsupported {
                window: index,
                found: format!("{:?}", windows[index].restraint),
                expected: "a restraint with the period of the system",
            });
        }
        Self::build(potential, lower, lower + period, Some(period), windows)
    }

    fn build(
        potential: Potential,
        lower: f64,
        upper: f64,
        period: Option<f64>,
        windows: Vec<Window>,
    ) -> Result<Self, SystemError> {
        if !(lower < upper && lower.is_finite() && upper.is_finite()) {
            return Err(SystemError::Range { lower, upper });
        }
        if windows.is_empty() {
            return Err(SystemError::NoWindows);
        }
        let unbiased = Density::new(lower, upper, |x| potential.energy(x)).ok_or(SystemError::NoWeight)?;
        let mut densities = Vec::with_capacity(windows.len());
        for (index, window) in windows.iter().enumerate() {
            check_window(index, window)?;
            let energy = |x| potential.energy(x) + window.restraint.energy(x, period);
            densities.push(Density::new(lower, upper, energy).ok_or(SystemError::NoWeight)?);
        }
        let free_energies = densities.iter().map(|density| unbiased.ln_integral() - density.ln_integral()).collect();
        Ok(Self { potential, lower, upper, period, windows, unbiased, densities, free_energies })
    }

    /// The first `n_windows` windows only (all of them if there are fewer), at least one.
    #[must_use]
    pub fn first_windows(mut self, n_windows: usize) -> Self {
        let kept = n_windows.max(1);
        self.windows.truncate(kept);
        self.densities.truncate(kept);
        self.free_energies.truncate(kept);
        self
    }

    /// Lower and upper end of the range.
    #[must_use]
    pub fn range(&self) -> (f64, f64) {
        (self.lower, self.upper)
    }

    /// The period, if there is one.
    #[must_use]
    pub fn period(&self) -> Option<f64> {
        self.period
    }

    /// The potential at `x`, kT, on its own zero.
    #[must_use]
    pub fn potential(&self, x: f64) -> f64 {
        self.potential.energy(x)
    }

    /// Exact density of the unbiased system at `x`, per unit of x; zero outside the range.
    #[must_use]
    pub fn unbiased_density(&self, x: f64) -> f64 {
        self.inside(x, || (-self.potential.energy(x) - self.unbiased.ln_integral()).exp())
    }

    /// Exact density of window `window` at `x`, per unit of x; zero outside the range.
    #[must_use]
    pub fn window_density(&self, window: usize, x: f64) -> f64 {
        self.inside(x, || (-self.window_energy(window, x) - self.densities[window].ln_integral()).exp())
    }

    /// Exact probability of lower ≤ x < upper in window `window`.
    #[must_use]
    pub fn window_probability(&self, window: usize, lower: f64, upper: f64) -> f64 {
        self.densities[window].probability(lower, upper, |x| self.window_energy(window, x))
    }

    /// Exact mean position in window `window`, on [lower, upper) also in a periodic system.
    #[must_use]
    pub fn window_mean(&self, window: usize) -> f64 {
        self.densities[window].mean()
    }

    /// Exact variance of the position in window `window`, on [lower, upper) also in a periodic system.
    #[must_use]
    pub fn window_variance(&self, window: usize) -> f64 {
        self.densities[window].variance()
    }

    /// Position under which window `window` has probability `below`.
    #[must_use]
    pub fn window_quantile(&self, window: usize, below: f64) -> f64 {
        self.densities[window].quantile(below)
    }

    fn inside(&self, x: f64, value: impl FnOnce() -> f64) -> f64 {
        if (self.lower..self.upper).contains(&x) { value() } else { 0.0 }
    }

    fn window_energy(&self, window: usize, x: f64) -> f64 {
        self.potential.energy(x) + self.windows[window].restraint.energy(x, self.period)
    }

    /// Probability below the point where the distribution function of a window starts: half a period from the center.
    fn start_of_order(&self, window: usize) -> f64 {
        match (self.period, self.windows[window].restraint.center()) {
            (Some(period), Some(center)) => {
                let start = self.lower + (center - 0.5 * period - self.lower).rem_euclid(period);
                self.densities[window].cumulative(start)
            }
            _ => 0.0,
        }
    }
}

impl KnownSystem for OneDimensionalSystem {
    fn windows(&self) -> &[Window] {
        &self.windows
    }

    fn bias_energy(&self, window: usize, x: f64) -> f64 {
        self.windows[window].restraint.energy(x, self.period)
    }

    fn reduced_free_energies(&self) -> &[f64] {
        &self.free_energies
    }

    fn probability(&self, lower: f64, upper: f64) -> f64 {
        self.unbiased.probability(lower, upper, |x| self.potential.energy(x))
    }

    fn sample_window(&self, window: usize, generator: &mut Generator) -> Vec<f64> {
        let settings = &self.windows[window];
        let start = self.start_of_order(window);
        let latent = settings.correlation.sample_latent(settings.n_samples, generator);
        latent
            .into_iter()
            .map(|z| {
                let below = start + standard_normal_cdf(z);
                // Only a periodic system has a start above zero, and there the order goes on at the lower end.
                let wrapped = if start > 0.0 && below >= 1.0 { below - 1.0 } else { below };
                self.densities[window].quantile(wrapped)
            })
            .collect()
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed construction fails the test")]

    use super::*;
    use crate::autocorrelation::autocorrelation;
    use crate::correlation::Correlation;
    use crate::harmonic_system::HarmonicSystem;
    use crate::tolerance;

    fn restraints() -> Vec<Window> {
        [
            Restraint::Harmonic { center: -0.8, force_constant: 37.0 },
            Restraint::Harmonic { center: 0.9, force_constant: 1250.0 },
            Restraint::Linear { slope: 5.4 },
            Restraint::None,
        ]
        .map(|restraint| Window::independent(restraint, 20_000))
        .to_vec()
    }

    fn double_well(windows: Vec<Window>) -> OneDimensionalSystem {
        OneDimensionalSystem::new(Potential::double_well(0.1, 0.5, 12.0, 0.15), -1.3, 1.4, windows).unwrap()
    }

    /// I_0(a) by its power series (Abramowitz & Stegun 1964, 9.6.12).
    fn bessel_i0(argument: f64) -> f64 {
        let quarter = 0.25 * argument * argument;
        (1..80)
            .scan(1.0, |term, n| {
                *term *= quarter / f64::from(n * n);
                Some(*term)
            })
            .sum::<f64>()
            + 1.0
    }

    #[test]
    fn quadrature_agrees_with_the_closed_forms_on_a_parabola() {
        let closed = HarmonicSystem::new(0.23, 7.9, restraints()).unwrap();
        let quadrature = OneDimensionalSystem::new(Potential::harmonic(0.23, 7.9), -4.0, 4.6, restraints()).unwrap();
        for window in 0..closed.windows().len() {
            let difference = closed.reduced_free_energies()[window] - quadrature.reduced_free_energies()[window];
            assert!(difference.abs() < tolerance::QUADRATURE, "f of window {window} is off by {difference}");
            let difference = closed.window_mean(window) - quadrature.window_mean(window);
            assert!(difference.abs() < tolerance::QUADRATURE, "mean of window {window} is off by {difference}");
            let difference = closed.window_variance(window) - quadrature.window_variance(window);
            assert!(difference.abs() < tolerance::QUADRATURE, "variance of window {window} is off by {difference}");
        }
        let edges = [-2.0, -1.47, -0.3, 0.91, 0.912, 2.6];
        for (closed, quadrature) in closed.profile(&edges).iter().zip(quadrature.profile(&edges)) {
            assert!((closed - quadrature).abs() < tolerance::QUADRATURE);
        }
    }

    /// ∫ exp(−A cos) over a period is P·I_0(A), and a sum of two cosines of one period is a cosine.
    #[test]
    fn quadrature_agrees_with_bessel_functions_on_a_circle() {
        let (amplitude, bias_amplitude, phase) = (2.7_f64, 4.4_f64, 1.1_f64);
        let bias = Restraint::Custom(Potential::torsion(360.0, vec![(1, bias_amplitude, phase)]));
        let potential = Potential::torsion(360.0, vec![(1, amplitude, 0.0)]);
        let windows = vec![Window::independent(bias, 100)];
        let system = OneDimensionalSystem::periodic(potential, -180.0, 360.0, windows).unwrap();
        let joint =
            (amplitude.powi(2) + bias_amplitude.powi(2) + 2.0 * amplitude * bias_amplitude * phase.cos()).sqrt();
        let expected = bessel_i0(amplitude).ln() - bessel_i0(joint).ln();
        assert!((system.reduced_free_energies()[0] - expected).abs() < tolerance::QUADRATURE);
    }

    #[test]
    fn a_constant_added_to_the_potential_changes_nothing() {
        let plain = Potential::double_well(0.1, 0.5, 12.0, 0.15);
        let raised = |shift: f64| {
            let plain = plain.clone();
            OneDimensionalSystem::new(Potential::new(move |x| plain.energy(x) + shift), -1.3, 1.4, restraints())
                .unwrap()
        };
        let reference = double_well(restraints());
        for shift in [-4000.0, 700.0] {
            let system = raised(shift);
            for window in 0..4 {
                let difference = system.reduced_free_energies()[window] - reference.reduced_free_energies()[window];
                assert!(difference.abs() < tolerance::QUADRATURE, "shift {shift}: {difference}");
            }
            let (one, other) = (system.probability(0.05, 0.11), reference.probability(0.05, 0.11));
            assert!((one.ln() - other.ln()).abs() < tolerance::QUADRATURE, "shift {shift}");
        }
    }

    #[test]
    fn bins_add_up_to_one_and_cut_anywhere() {
        let system = double_well(restraints());
        let edges = [-1.3, -0.512_345, -0.1, 0.033, 0.033_1, 0.9, 1.4];
        let sum =
            |probability: &dyn Fn(f64, f64) -> f64| edges.windows(2).map(|e| probability(e[0], e[1])).sum::<f64>();
        assert!((sum(&|low, high| system.probability(low, high)) - 1.0).abs() < tolerance::SUMMATION_ORDER);
        assert!((sum(&|low, high| system.window_probability(1, low, high)) - 1.0).abs() < tolerance::SUMMATION_ORDER);
    }

    #[test]
    fn densities_are_what_probabilities_are_made_of() {
        let system = double_well(restraints());
        let width = 1e-5;
        for x in [-0.63, 0.08, 0.71] {
            // The middle of an interval differs from its mean by (ln p)'² width²/24, some 1e-8.
            let ratio = system.probability(x - 0.5 * width, x + 0.5 * width) / (width * system.unbiased_density(x));
            assert!((ratio - 1.0).abs() < 1e-6);
            let mean = system.window_probability(0, x - 0.5 * width, x + 0.5 * width) / width;
            assert!((mean / system.window_density(0, x) - 1.0).abs() < 1e-6);
        }
        assert!(system.unbiased_density(1.5) <= 0.0 && system.window_density(2, -1.31) <= 0.0);
    }

    #[test]
    fn quantile_inverts_the_distribution_function() {
        let system = double_well(restraints());
        for window in 0..4 {
            for below in [1e-7, 0.003, 0.37, 0.5, 0.88, 0.999_9] {
                let found = system.window_probability(window, -1.3, system.window_quantile(window, below));
                assert!((found - below).abs() < tolerance::QUANTILE, "window {window}: {found} for {below}");
            }
        }
    }

    /// Kolmogorov's largest distance times √n exceeds 2.5 with probability 2 exp(−2·2.5²) = 7e-6.
    #[test]
    fn samples_follow_the_exact_distribution() {
        let system = double_well(restraints());
        for (window, mut series) in system.sample_all(47, 5).into_iter().enumerate() {
            series.sort_by(f64::total_cmp);
            let n = series.len() as f64;
            let distance =
                |(rank, &x): (usize, &f64)| (system.window_probability(window, -1.3, x) - rank as f64 / n).abs();
            let largest = series.iter().enumerate().map(distance).fold(0.0, f64::max);
            assert!(largest * n.sqrt() < 2.5, "window {window}: {}", largest * n.sqrt());
        }
    }

    #[test]
    fn memory_goes_on_across_the_periodic_boundary() {
        let center = 176.0;
        let restraint = Restraint::Harmonic { center, force_constant: 0.01 };
        let windows =
            vec![Window { restraint, n_samples: 50_000, correlation: Correlation::Exponential { time: 20.0 } }];
        let flat = Potential::torsion(360.0, vec![(3, 0.2, 0.5)]);
        let system = OneDimensionalSystem::periodic(flat, -180.0, 360.0, windows).unwrap();
        let series = &system.sample_all(53, 0)[0];
        assert!(series.iter().all(|x| (-180.0..180.0).contains(x)));
        let share_across = series.iter().filter(|x| **x < 0.0).count() as f64 / series.len() as f64;
        assert!((0.2..0.6).contains(&share_across), "{share_across}");
        let displacements: Vec<f64> = series.iter().map(|x| (x - center + 180.0).rem_euclid(360.0) - 180.0).collect();
        // The window is nearly Gaussian, so the displacement keeps the latent exp(−1/20) = 0.951.
        let next = autocorrelation(&displacements, 1)[1];
        assert!((next - 0.951).abs() < 0.01, "{next}");
        let largest_step = displacements.windows(2).map(|pair| (pair[1] - pair[0]).abs()).fold(0.0, f64::max);
        assert!(largest_step < 30.0, "{largest_step}");
    }

    #[test]
    fn cutting_the_windows_leaves_the_others_alone() {
        let (all, first) = (double_well(restraints()), double_well(restraints()).first_windows(2));
        assert_eq!(first.windows().len(), 2);
        assert_eq!(first.reduced_free_energies(), &all.reduced_free_energies()[..2]);
        assert_eq!(first.sample_all(59, 1)[1], all.sample_all(59, 1)[1]);
    }

    #[test]
    fn impossible_systems_are_refused() {
        let build = |lower, upper, windows| {
            OneDimensionalSystem::new(Potential::harmonic(0.2, 3.0), lower, upper, windows).map(|_| ()).unwrap_err()
        };
        assert!(matches!(build(1.0, -1.0, restraints()), SystemError::Range { .. }));
        assert!(matches!(build(f64::NAN, 1.0, restraints()), SystemError::Range { .. }));
        assert_eq!(build(-1.0, 1.0, Vec::new()), SystemError::NoWindows);
        let stiff = Restraint::Harmonic { center: 0.2, force_constant: f64::NAN };
        assert_eq!(
            build(-1.0, 1.0, vec![Window::independent(stiff, 5)]).to_string(),
            "window 0: expected finite numbers and a `force_constant` that is not negative, found \
             Harmonic { center: 0.2, force_constant: NaN }"
        );
        let broken = OneDimensionalSystem::new(Potential::new(f64::sqrt), -1.0, 1.0, restraints());
        assert_eq!(broken.unwrap_err(), SystemError::NoWeight);
        let linear = OneDimensionalSystem::periodic(Potential::harmonic(0.2, 3.0), -1.0, 2.0, restraints());
        assert!(matches!(linear.unwrap_err(), SystemError::Unsupported { window: 2, .. }));
    }
}
