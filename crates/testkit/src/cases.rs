//! The standard experiments of the calibration tests: made-up potentials whose every answer is known.
//!
//! Positions are in nm, in [`periodic`] in degrees; energies are in kT. Each case names the bins on which its profile is scored.

use crate::correlation::Correlation;
use crate::error::SystemError;
use crate::known_system::KnownSystem;
use crate::one_dimensional_system::OneDimensionalSystem;
use crate::potential::Potential;
use crate::restraint::Restraint;
use crate::window::Window;

/// A system to be sampled many times, and the output bins to be scored.
#[derive(Clone, Debug)]
pub struct Case {
    /// Short name for messages.
    pub name: &'static str,
    /// The system with its windows.
    pub system: OneDimensionalSystem,
    /// Edges of the output bins, all inside the sampled stretch.
    pub edges: Vec<f64>,
}

impl Case {
    /// The same case with its first `n_windows` windows only, and the bins below the center of the last of them.
    #[must_use]
    pub fn first_windows(self, n_windows: usize) -> Self {
        let system = self.system.first_windows(n_windows);
        let last = system.windows().last();
        let end = last.and_then(|window| window.restraint.center()).unwrap_or(f64::INFINITY);
        let edges = self.edges.into_iter().filter(|edge| *edge <= end).collect();
        Self { name: self.name, system, edges }
    }
}

/// Case a: 21 windows of 5000 independent samples on a rippled double well.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn independent() -> Result<Case, SystemError> {
    rippled_double_well("independent", 5000, Correlation::Independent)
}

/// Case m1: case a with two correlation times, 80 % of the latent variance at 2 frames and 20 % at 100.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn two_times() -> Result<Case, SystemError> {
    let correlation = Correlation::TwoTimes { slow_share: 0.2, fast_time: 2.0, slow_time: 100.0 };
    rippled_double_well("two_times", 5000, correlation)
}

/// Case m3: case a with 10000 samples a window and two correlation times, 90 % of the latent variance at 1 frame and 10 % at 60.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn two_times_long_runs() -> Result<Case, SystemError> {
    let correlation = Correlation::TwoTimes { slow_share: 0.1, fast_time: 1.0, slow_time: 60.0 };
    rippled_double_well("two_times_long_runs", 10_000, correlation)
}

fn rippled_double_well(name: &'static str, n_samples: usize, correlation: Correlation) -> Result<Case, SystemError> {
    let potential = Potential::double_well(0.02, 0.45, 7.0, 0.2).rippled(0.25, 0.27, 0.6);
    let windows = (0..21)
        .map(|i| Window {
            restraint: Restraint::Harmonic { center: -0.6 + 0.06 * f64::from(i), force_constant: 820.0 },
            n_samples,
            correlation,
        })
        .collect();
    let system = OneDimensionalSystem::new(potential, -1.1, 1.1, windows)?;
    Ok(Case { name, system, edges: even_edges(-0.6, 0.03, 40) })
}

/// Case b: 24 windows of 5000 samples around a periodic torsion, correlation time 5 frames.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn periodic() -> Result<Case, SystemError> {
    let potential = Potential::torsion(360.0, vec![(1, 1.2, 0.4), (2, 0.8, -0.7), (3, 1.8, 0.2)]);
    let windows = (0..24)
        .map(|i| Window {
            restraint: Restraint::Harmonic { center: -172.5 + 15.0 * f64::from(i), force_constant: 0.016 },
            n_samples: 5000,
            correlation: Correlation::Exponential { time: 5.0 },
        })
        .collect();
    let system = OneDimensionalSystem::periodic(potential, -180.0, 360.0, windows)?;
    Ok(Case { name: "periodic", system, edges: even_edges(-180.0, 5.0, 72) })
}

/// Case c: 25 windows with 200 to 10000 samples, force constants of 300 to 3400 and correlation times of 0.4 to 8 frames, all
/// mixed up; neighbors stand 1.5 mean deviations apart.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn uneven() -> Result<Case, SystemError> {
    let potential = Potential::double_well(1.3, 0.8, 5.0, -0.1).rippled(0.6, 0.5, 1.9);
    // Multiples of a number without common factors with 25 visit every level once, in a scattered order.
    let level = |i: u32, step: u32| f64::from((i * step) % 25) / 24.0;
    let force_constant = |i: u32| 300.0 * (3400.0_f64 / 300.0).powf(level(i, 11));
    let deviation = |i: u32| force_constant(i).sqrt().recip();
    let mut center = 0.7;
    let mut windows = Vec::with_capacity(25);
    for i in 0..25 {
        windows.push(Window {
            restraint: Restraint::Harmonic { center, force_constant: force_constant(i) },
            n_samples: geometric_length(200.0, 50.0, level(i, 7)),
            correlation: Correlation::Exponential { time: 0.4 * 20.0_f64.powf(level(i, 18)) },
        });
        center += 0.75 * (deviation(i) + deviation(i + 1));
    }
    let system = OneDimensionalSystem::new(potential, 0.0, 2.8, windows)?;
    Ok(Case { name: "uneven", system, edges: even_edges(0.7, 0.03, 38) })
}

/// Case g: 15 windows on a double well with a correlation time of 200 frames and `effective_samples` independent samples'
/// worth of data in each: 400 frames for one, since g = 2τ.
///
/// # Errors
/// If `effective_samples` makes the windows too long to count; none in practice.
pub fn long_memory(effective_samples: usize) -> Result<Case, SystemError> {
    let potential = Potential::double_well(0.05, 0.4, 4.0, -0.25);
    let windows = (0..15)
        .map(|i| Window {
            restraint: Restraint::Harmonic { center: -0.5 + 0.08 * f64::from(i), force_constant: 500.0 },
            n_samples: effective_samples.saturating_mul(400),
            correlation: Correlation::Exponential { time: 200.0 },
        })
        .collect();
    let system = OneDimensionalSystem::new(potential, -1.0, 1.1, windows)?;
    Ok(Case { name: "long_memory", system, edges: even_edges(-0.5, 0.04, 28) })
}

/// `n_bins` + 1 edges from `lower` in steps of `width`.
fn even_edges(lower: f64, width: f64, n_bins: u32) -> Vec<f64> {
    (0..=n_bins).map(|i| lower + width * f64::from(i)).collect()
}

/// shortest · ratio^level, rounded.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 200 and 10000")]
fn geometric_length(shortest: f64, ratio: f64, level: f64) -> usize {
    (shortest * ratio.powf(level)).round() as usize
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed construction fails the test")]

    use super::*;

    fn all() -> Vec<Case> {
        vec![
            independent().unwrap(),
            two_times().unwrap(),
            two_times_long_runs().unwrap(),
            periodic().unwrap(),
            uneven().unwrap(),
            long_memory(35).unwrap(),
            long_memory(70).unwrap().first_windows(3),
        ]
    }

    /// ∫ min(p_k, p_{k+1}): one for equal windows, zero for strangers.
    fn overlap(system: &OneDimensionalSystem, one: usize, other: usize) -> f64 {
        let (lower, upper) = system.range();
        let n_cells = 4000;
        let width = (upper - lower) / f64::from(n_cells);
        (0..n_cells)
            .map(|i| lower + width * (f64::from(i) + 0.5))
            .map(|x| width * system.window_density(one, x).min(system.window_density(other, x)))
            .sum()
    }

    #[test]
    fn neighboring_windows_overlap() {
        for case in all() {
            for window in 1..case.system.windows().len() {
                let found = overlap(&case.system, window - 1, window);
                assert!(found > 0.1, "{}, windows {} and {window}: {found}", case.name, window - 1);
            }
        }
    }

    #[test]
    fn every_output_bin_is_well_sampled() {
        for case in all() {
            for bin in case.edges.windows(2) {
                let expected: f64 = (0..case.system.windows().len())
                    .map(|k| {
                        let n_samples = case.system.windows()[k].n_samples as f64;
                        n_samples * case.system.window_probability(k, bin[0], bin[1])
                    })
                    .sum();
                assert!(expected > 100.0, "{}, {bin:?}: {expected}", case.name);
            }
            assert!(case.system.profile(&case.edges).iter().all(|value| value.is_finite()));
        }
    }

    #[test]
    fn lengths_are_those_announced() {
        let lengths = |case: &Case| case.system.windows().iter().map(|window| window.n_samples).collect::<Vec<_>>();
        let uneven = lengths(&uneven().unwrap());
        assert_eq!((uneven.iter().min(), uneven.iter().max()), (Some(&200), Some(&10_000)));
        assert_eq!(lengths(&independent().unwrap()), vec![5000; 21]);
        assert_eq!(lengths(&long_memory(12).unwrap()), vec![4800; 15]);
        assert_eq!(lengths(&long_memory(12).unwrap().first_windows(5)), vec![4800; 5]);
    }

    #[test]
    fn fewer_windows_keep_the_bins_below_the_last_center() {
        let case = long_memory(35).unwrap().first_windows(3);
        assert_eq!(case.edges.len(), 5);
        assert!(case.edges.iter().all(|edge| (-0.5..=-0.34 + 1e-9).contains(edge)));
    }
}
