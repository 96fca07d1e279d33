//! The acceptance ratio of two windows, solved slowly and safely.

/// `Δf = f_1 − f_0` of two windows from Bennett's acceptance ratio (Bennett 1976, J. Comput. Phys. 22, 245, eqs. 12a and 12b).
///
/// `difference_in_0` holds `b_1(x) − b_0(x)` for the `n_0` samples of window 0, `difference_in_1` the same difference for the `n_1`
/// samples of window 1, in kT. The result solves
/// `Σ_{x in 0} 1/(1 + exp(b_1 − b_0 − C)) = Σ_{x in 1} 1/(1 + exp(b_0 − b_1 + C))`, `C = Δf + ln(n_1/n_0)`,
/// whose two sides rise and fall with C, so that bisection cannot miss. `None` if a window is empty or a number is not finite.
#[must_use]
pub fn bennett_difference(difference_in_0: &[f64], difference_in_1: &[f64]) -> Option<f64> {
    let all = || difference_in_0.iter().chain(difference_in_1);
    if difference_in_0.is_empty() || difference_in_1.is_empty() || !all().all(|value| value.is_finite()) {
        return None;
    }
    let excess = |shift: f64| {
        let accepted_in_0: f64 = difference_in_0.iter().map(|w| fermi(w - shift)).sum();
        let accepted_in_1: f64 = difference_in_1.iter().map(|w| fermi(shift - w)).sum();
        accepted_in_0 - accepted_in_1
    };
    let ln_ratio = (difference_in_1.len() as f64 / difference_in_0.len() as f64).ln();
    // Outside the range of the differences by this much, one side is below its smallest possible counterpart.
    let margin = 2.0 * (all().count() as f64).ln() + 2.0;
    let mut low = all().copied().fold(f64::INFINITY, f64::min) - margin;
    let mut high = all().copied().fold(f64::NEG_INFINITY, f64::max) + margin;
    loop {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            return Some(middle - ln_ratio);
        }
        if excess(middle) < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
}

/// 1/(1 + exp(x)) without overflow.
fn fermi(x: f64) -> f64 {
    if x > 0.0 { (-x).exp() / (1.0 + (-x).exp()) } else { 1.0 / (1.0 + x.exp()) }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed construction fails the test")]

    use super::*;
    use crate::harmonic_system::HarmonicSystem;
    use crate::known_system::KnownSystem;
    use crate::restraint::Restraint;
    use crate::tolerance;
    use crate::window::Window;

    #[test]
    fn a_constant_difference_is_returned_whatever_the_numbers_of_samples() {
        for constant in [-4000.0, -3.7, 2.9, 700.0] {
            let found = bennett_difference(&[constant; 5], &[constant; 13]).unwrap();
            assert!((found / constant - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
        }
    }

    /// With one sample a window the equation reads w_0 − C = C − w_1.
    #[test]
    fn one_sample_a_window_gives_the_mean_difference() {
        let found = bennett_difference(&[7.5], &[-2.25]).unwrap();
        assert!((found / 2.625 - 1.0).abs() < tolerance::ROUNDING_RELATIVE);
    }

    #[test]
    fn exchanging_the_windows_changes_the_sign() {
        let (first, second) = ([1.2, 3.4, 0.3, 2.2], [-0.7, 1.1, 0.2]);
        let forward = bennett_difference(&first, &second).unwrap();
        let negated = |values: &[f64]| values.iter().map(|value| -value).collect::<Vec<_>>();
        let backward = bennett_difference(&negated(&second), &negated(&first)).unwrap();
        assert!((forward / backward + 1.0).abs() < tolerance::ROUNDING_RELATIVE);
    }

    #[test]
    fn nothing_is_returned_for_empty_windows_and_for_numbers_that_are_not_finite() {
        assert_eq!(bennett_difference(&[], &[1.5]), None);
        assert_eq!(bennett_difference(&[0.5], &[]), None);
        assert_eq!(bennett_difference(&[0.5, f64::NAN], &[1.5]), None);
        assert_eq!(bennett_difference(&[0.5], &[f64::INFINITY]), None);
    }

    #[test]
    fn mean_over_replicates_agrees_with_the_closed_form() {
        let windows = [(-0.4, 9.0, 700), (0.3, 14.0, 300)].map(|(center, force_constant, n_samples)| {
            Window::independent(Restraint::Harmonic { center, force_constant }, n_samples)
        });
        let system = HarmonicSystem::new(0.15, 5.5, windows.to_vec()).unwrap();
        let truth = system.reduced_free_energies()[1] - system.reduced_free_energies()[0];
        let replicates = 60;
        let errors: Vec<f64> = (0..replicates)
            .map(|replicate| {
                let samples = system.sample_all(3, replicate);
                let difference = |series: &[f64]| {
                    series.iter().map(|&x| system.bias_energy(1, x) - system.bias_energy(0, x)).collect::<Vec<_>>()
                };
                bennett_difference(&difference(&samples[0]), &difference(&samples[1])).unwrap() - truth
            })
            .collect();
        let mean = errors.iter().sum::<f64>() / replicates as f64;
        let variance = errors.iter().map(|error| (error - mean).powi(2)).sum::<f64>() / (replicates - 1) as f64;
        let standard_error = (variance / replicates as f64).sqrt();
        assert!(standard_error < 0.02, "the check has no power: {standard_error}");
        assert!(mean.abs() < tolerance::STANDARD_ERRORS * standard_error, "{mean} ± {standard_error}");
    }
}
