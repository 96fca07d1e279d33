//! Energies of the periodic square-lattice Ising model, drawn exactly at several couplings, combined into its density of states and free
//! energies, which are known exactly.
//!
//! A window at coupling K has the reduced bias K·E, so that the unbiased weight of an energy is its number of states g(E).
//! Sources: B. Kaufman 1949, Phys. Rev. 76, 1232 (free energy of the finite torus); P. D. Beale 1996, Phys. Rev. Lett. 76, 78 (its numbers
//! of states); L. Onsager 1944, Phys. Rev. 65, 117 (infinite lattice).
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{
    Joint, Solved, UNLIKELY, independent_number, is_likely, largest_magnitude, mean_square, neighbor_covariance,
    neighbor_differences, probability_of_mean_square, z_scores,
};
use nalgebra::DMatrix;
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Bias, Linear, Term};
use spandrel_solver::condense::BinGrid;
use spandrel_solver::influence::{Deviations, Direct, Quantity};
use spandrel_solver::profile::{Profile, ProfileRequest, Zero};
use spandrel_solver::quantities::free_energy_of_window;
use spandrel_testkit::rng::window_stream;
use spandrel_testkit::{Correlation, DensityOfStates, Table, tolerance};
use std::f64::consts::{LN_2, PI};
use std::sync::Arc;

const FREE_ENERGIES: &str = include_str!("reference/ising/free_energy.csv");
/// Distance of neighboring energies.
const LEVEL: f64 = 4.0;
/// Coupling at the critical point, sinh 2K = 1.
const CRITICAL: f64 = 0.440_686_793_509_771_5;
/// Samples that a level must be expected to hold before the error of its logarithm can be taken for normal: the logarithm of a count of 25
/// is off by 1/50, a tenth of its error.
const EXPECTED_SAMPLES: f64 = 25.0;

/// Least part of a long-run variance that batches of six mean lags show of an exponential memory, h(6) = 1 − (1 − e⁻⁶)/6. Variances are
/// divided by that part; the count on one level forgets faster than the energy does, and its variance may come out so much too large.
const LEAST_SHOWN: f64 = 0.8337;

/// A lattice, and the couplings at which it is sampled. Of the couplings of the reference, 0.35, the critical one and 0.47 are left out.
struct Lattice {
    side: u32,
    density: &'static str,
    couplings: &'static [f64],
}

const SMALL: Lattice = Lattice {
    side: 16,
    density: include_str!("reference/ising/density_16.csv"),
    couplings: &[0.0, 0.1, 0.18, 0.25, 0.32, 0.38, 0.41, 0.43, 0.45, 0.48, 0.55, 0.7],
};
/// Energies spread by a factor of two more here and their means lie four times as far apart.
const LARGE: Lattice = Lattice {
    side: 32,
    density: include_str!("reference/ising/density_32.csv"),
    couplings: &[
        0.0, 0.05, 0.1, 0.14, 0.18, 0.22, 0.25, 0.28, 0.31, 0.34, 0.37, 0.39, 0.41, 0.43, 0.45, 0.48, 0.51, 0.55, 0.6,
        0.7,
    ],
};

impl Lattice {
    fn n_sites(&self) -> f64 {
        f64::from(self.side * self.side)
    }

    fn states(&self) -> DensityOfStates {
        self.density.parse().unwrap()
    }

    /// Coupling and −ln Z of each row of the reference.
    fn reference(&self) -> Vec<(f64, f64)> {
        let table: Table = FREE_ENERGIES.parse().unwrap();
        let couplings = table.column("coupling").unwrap();
        couplings.into_iter().zip(table.column(&format!("minus_ln_z_{}", self.side)).unwrap()).collect()
    }

    /// One experiment: `n_samples` energies a window, those of every second window correlated over a few frames, more so the closer to the
    /// critical point.
    fn sampled(&self, n_samples: usize, replicate: u64) -> Solved {
        let axis = Axis::new("energy", PositionUnit::None, None).unwrap();
        let states = self.states();
        let bias = |coupling: f64| {
            let shape = (coupling > 0.0).then(|| Linear::new(coupling).unwrap().into());
            let terms = shape.into_iter().map(|shape| Term { axis: 0, shape }).collect();
            Bias::new(Arc::from([axis.clone()]), terms).unwrap()
        };
        let series = |(k, &coupling): (usize, &f64)| {
            let time = 2.0 + 6.0 * (-10.0 * f64::abs(coupling - CRITICAL)).exp();
            let correlation = if k % 2 == 1 { Correlation::Exponential { time } } else { Correlation::Independent };
            let mut generator = window_stream(1944, replicate, k);
            states.sample(coupling, n_samples, correlation, &mut generator)
        };
        let biases: Vec<Bias> = self.couplings.iter().map(|&coupling| bias(coupling)).collect();
        let series: Vec<Vec<f64>> = self.couplings.iter().enumerate().map(series).collect();
        // Bins are centered on the energies, one each.
        let lowest = -2.0 * self.n_sites();
        let solved = Solved::of(&axis, BinGrid::new(0, lowest - 0.5 * LEVEL, LEVEL, None).unwrap(), &biases, &series);
        assert_eq!(solved.links.groups.len(), 1);
        solved
    }
}

/// What the combined energies miss of the exact density of states.
struct LevelMisses {
    energies: Vec<f64>,
    /// Of −ln g(E)/g(0).
    misses: Vec<f64>,
    covariance: DMatrix<f64>,
}

/// On the levels that enough samples should have visited, by the exact probabilities and not by what was drawn.
fn misses_of_levels(lattice: &Lattice, solved: &Solved, n_samples: usize) -> LevelMisses {
    let states = lattice.states();
    let place_of =
        |energy: f64| states.energies().iter().position(|&found| (found - energy).abs() < 0.5 * LEVEL).unwrap();
    let ln_g = |energy: f64| states.ln_degeneracies()[place_of(energy)];
    let mut expected = vec![0.0; states.energies().len()];
    for &coupling in lattice.couplings {
        for (sum, probability) in expected.iter_mut().zip(states.probabilities(coupling)) {
            *sum += probability * n_samples as f64;
        }
    }
    let request = ProfileRequest { first_bin: None, last_bin: None, zero: Zero::Position { position: 0.0 } };
    let profile = Profile::draw(&solved.ensemble, &solved.influence, &request).unwrap();
    let (with_error, covariance) = profile.covariance(&solved.influence);
    let energy = |i: usize| profile.bins[with_error[i]].center();
    let chosen: Vec<usize> =
        (0..with_error.len()).filter(|&i| expected[place_of(energy(i))] >= EXPECTED_SAMPLES).collect();
    // All of them have an error but the level that is zero.
    assert_eq!(chosen.len() + 1, expected.iter().filter(|&&samples| samples >= EXPECTED_SAMPLES).count());
    let miss = |&i: &usize| profile.bins[with_error[i]].free_energy.unwrap() + ln_g(energy(i)) - ln_g(0.0);
    LevelMisses {
        energies: chosen.iter().map(|&i| energy(i)).collect(),
        misses: chosen.iter().map(miss).collect(),
        covariance: covariance.select_rows(&chosen).select_columns(&chosen),
    }
}

/// −ln Σ g(E) exp(−b(E)) over the energies from the combined weights, relative to the window without bias, and its deviations.
fn free_energy(solved: &Solved, bias: impl Fn(f64) -> f64) -> (f64, Deviations) {
    let points = &solved.ensemble.points;
    let log_term =
        |i: usize| points.weights[i].ln() - solved.influence.log_denominator(i) - bias(points.position(i)[0]);
    let log_terms: Vec<f64> = (0..points.len()).map(log_term).collect();
    let largest = log_terms.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let terms: Vec<f64> = log_terms.iter().map(|term| (term - largest).exp()).collect();
    let sum: f64 = terms.iter().sum();
    let mut free_energy_gradient = vec![0.0; solved.ensemble.n_windows()];
    for (point, term) in terms.iter().enumerate() {
        for &(k, part) in solved.influence.answered(point) {
            free_energy_gradient[k as usize] += term / sum * part;
        }
    }
    let values = terms.iter().zip(&points.weights).map(|(term, m)| -term / (sum * m)).collect();
    let value = -largest - sum.ln();
    from_unbiased(solved, &Quantity { value, direct: vec![Direct { first: 0, values }], free_energy_gradient })
}

/// A free energy relative to that of the window without bias, and its deviations.
fn from_unbiased(solved: &Solved, quantity: &Quantity) -> (f64, Deviations) {
    let unbiased = free_energy_of_window(&solved.solution.free_energies, 0);
    let influence = &solved.influence;
    (quantity.value - unbiased.value, influence.deviations(quantity).minus(&influence.deviations(&unbiased)))
}

/// −ln Z at a coupling, and its deviations. Without coupling Z is 2^N.
fn minus_ln_z(lattice: &Lattice, solved: &Solved, coupling: f64) -> (f64, Deviations) {
    let (difference, deviations) = free_energy(solved, |energy| coupling * energy);
    (difference - lattice.n_sites() * LN_2, deviations)
}

/// Misses of −ln Z at all couplings of the reference, and their deviations.
fn misses_of_minus_ln_z(lattice: &Lattice, solved: &Solved) -> (Vec<f64>, Vec<Deviations>) {
    let miss = |(coupling, exact): (f64, f64)| {
        let (found, deviations) = minus_ln_z(lattice, solved, coupling);
        (found - exact, deviations)
    };
    lattice.reference().into_iter().map(miss).unzip()
}

/// −ln of the partition function of one site of the infinite lattice (Onsager 1944):
/// −ln(2 cosh 2K) − 1/(2π) ∫₀^π ln ½(1 + √(1 − κ² sin² φ)) dφ, κ = 2 sinh 2K/cosh² 2K.
///
/// The middle-point rule on a period converges faster than any power away from the critical point.
fn onsager(coupling: f64) -> f64 {
    const POINTS: u32 = 2000;
    let kappa = 2.0 * (2.0 * coupling).sinh() / (2.0 * coupling).cosh().powi(2);
    let integrand = |i: u32| {
        let sine = (PI * (f64::from(i) + 0.5) / f64::from(POINTS)).sin();
        (0.5 * (1.0 + (1.0 - (kappa * sine).powi(2)).sqrt())).ln()
    };
    -(2.0 * (2.0 * coupling).cosh()).ln() - 0.5 * (0..POINTS).map(integrand).sum::<f64>() / f64::from(POINTS)
}

/// Levels against the one at zero energy, whose errors add up from window to window, and against their neighbors, whose errors are
/// nearly independent.
fn assert_density_of_states(lattice: &Lattice, n_samples: usize) {
    let solved = lattice.sampled(n_samples, 0);
    let LevelMisses { energies, misses, covariance } = misses_of_levels(lattice, &solved, n_samples);
    let differences = (neighbor_differences(&misses), neighbor_covariance(&covariance));
    for (misses, covariance) in [(&misses, &covariance), (&differences.0, &differences.1)] {
        let z = z_scores(misses, covariance);
        let (mean_square, independent) = (mean_square(&z), independent_number(covariance));
        let too_large = probability_of_mean_square(mean_square, independent) < UNLIKELY;
        let too_small = probability_of_mean_square(mean_square / LEAST_SHOWN, independent) > 1.0 - UNLIKELY;
        assert!(!too_large && !too_small, "mean square of z {mean_square} for {independent} independent ones");
        assert!(largest_magnitude(&z) < tolerance::STANDARD_ERRORS, "{}", largest_magnitude(&z));
    }

    let some: Vec<usize> = (0..misses.len()).step_by(misses.len() / 16).collect();
    let some_misses: Vec<f64> = some.iter().map(|&i| misses[i]).collect();
    let some_covariance = covariance.select_rows(&some).select_columns(&some);
    let joint = Joint::of(&some_misses, &some_covariance, solved.fewest_degrees());
    assert!(joint.is_likely(), "{joint:?}");
    // The density of states that follows if every coupling was 0.003 larger than told is found out.
    let wrong: Vec<f64> = some.iter().map(|&i| misses[i] + 3e-3 * energies[i]).collect();
    let joint = Joint::of(&wrong, &some_covariance, solved.fewest_degrees());
    assert!(joint.is_refused(), "{joint:?}");
}

/// Beale 1996.
#[test]
fn combined_energies_of_a_small_lattice_give_its_density_of_states() {
    assert_density_of_states(&SMALL, 12_000);
}

/// Beale 1996.
#[test]
fn combined_energies_of_a_large_lattice_give_its_density_of_states() {
    assert_density_of_states(&LARGE, 16_000);
}

/// All spins up or all down. Their number is known so well that neither one nor three would do: ln 3/2 is more than 4.5 errors.
#[test]
fn ground_states_are_two() {
    let solved = SMALL.sampled(30_000, 2);
    let ground = -2.0 * SMALL.n_sites();
    let is_ground = |energy: f64| if energy < ground + 0.5 * LEVEL { 0.0 } else { f64::INFINITY };
    let (difference, deviations) = free_energy(&solved, is_ground);
    let ln_number = SMALL.n_sites() * LN_2 - difference;
    let error = solved.influence.uncertainty(&deviations).standard_error;
    assert!(error < 1.5_f64.ln() / tolerance::STANDARD_ERRORS, "{error}");
    assert!((ln_number - LN_2).abs() < tolerance::STANDARD_ERRORS * error, "{} ± {error}", ln_number.exp());
}

/// Kaufman 1949. Seven of the ten couplings were sampled, three lie between.
#[test]
fn free_energies_agree_with_the_finite_lattice_at_sampled_couplings_and_between() {
    for (lattice, n_samples) in [(SMALL, 12_000), (LARGE, 16_000)] {
        let solved = lattice.sampled(n_samples, 1);
        let (misses, deviations) = misses_of_minus_ln_z(&lattice, &solved);
        let covariance = solved.influence.covariance(&deviations);
        let z = z_scores(&misses, &covariance);
        assert!(largest_magnitude(&z) < tolerance::STANDARD_ERRORS, "side {}: {z:?}", lattice.side);
        let joint = Joint::of(&misses, &covariance, solved.fewest_degrees());
        assert!(joint.is_likely(), "side {}: {joint:?}", lattice.side);
    }
}

/// At a sampled coupling the sum over the combined weights is the window's own f, in value and in every batch's pull on it: the likelihood
/// equations say so.
#[test]
fn a_free_energy_between_windows_turns_into_the_windows_own_at_its_coupling() {
    let solved = SMALL.sampled(3000, 3);
    for (k, &coupling) in SMALL.couplings.iter().enumerate().skip(1) {
        let (own, own_deviations) = from_unbiased(&solved, &free_energy_of_window(&solved.solution.free_energies, k));
        let (summed, summed_deviations) = free_energy(&solved, |energy| coupling * energy);
        assert!((own - summed).abs() < tolerance::SOLVERS, "{coupling}: {own} against {summed}");
        let apart = own_deviations.minus(&summed_deviations);
        assert!(apart.covariance(&apart).sqrt() < tolerance::SOLVERS, "{coupling}");
    }
}

/// Kaufman 1949, by replicates: differences of −ln Z between neighboring couplings of the reference.
///
/// Statements are counted as independent ones. The mean square of z then spreads by √(2/n), the share of 95 % intervals by
/// √(0.05 · 0.95/n).
#[test]
fn intervals_of_free_energy_differences_hold_the_exact_ones_as_often_as_they_say() {
    let (mut squares, mut held, mut count, mut independent) = (0.0, 0.0, 0.0, 0.0);
    for replicate in 0..50 {
        let solved = SMALL.sampled(2000, 100 + replicate);
        let (misses, deviations) = misses_of_minus_ln_z(&SMALL, &solved);
        let deviations: Vec<Deviations> = deviations.windows(2).map(|pair| pair[1].minus(&pair[0])).collect();
        independent += independent_number(&solved.influence.covariance(&deviations));
        for (miss, deviations) in neighbor_differences(&misses).iter().zip(&deviations) {
            let uncertainty = solved.influence.uncertainty(deviations);
            squares += (miss / uncertainty.standard_error).powi(2);
            held += f64::from(u8::from(miss.abs() <= uncertainty.half_width_95));
            count += 1.0;
        }
    }
    let (mean_square, share) = (squares / count, held / count);
    assert!(is_likely(probability_of_mean_square(mean_square, independent)), "{mean_square} of {independent}");
    let error = (0.05 * 0.95 / independent).sqrt();
    assert!((share - 0.95).abs() < tolerance::STANDARD_ERRORS * error, "{share} held of {independent}");
}

#[test]
fn reference_of_the_infinite_lattice_is_onsagers() {
    let table: Table = FREE_ENERGIES.parse().unwrap();
    let stored = table.column("minus_ln_z_per_site_infinite").unwrap();
    for (coupling, stored) in table.column("coupling").unwrap().into_iter().zip(stored) {
        if (coupling - CRITICAL).abs() > 1e-3 {
            assert!((onsager(coupling) - stored).abs() < tolerance::STORED_DIGITS, "{coupling}");
        }
    }
}

/// Onsager 1944. What a torus of N sites has besides N sites of the infinite lattice is known in three cases: nothing in the disordered
/// phase, −ln 2 for the two ordered states, and −ln(2^¼ + 2^−½) at the critical point (A. E. Ferdinand, M. E. Fisher 1969, Phys. Rev. 185,
/// 832). At side 32 the exact finite lattice keeps to them within 1.1e-4 at the couplings here; the combined energies tell them apart.
#[test]
fn gap_to_the_infinite_lattice_is_that_of_the_phase() {
    let solved = LARGE.sampled(16_000, 4);
    let exact = LARGE.reference();
    let table: Table = FREE_ENERGIES.parse().unwrap();
    let infinite = table.column("minus_ln_z_per_site_infinite").unwrap();
    let critical = -(2_f64.powf(0.25) + 0.5_f64.sqrt()).ln();
    for (coupling, expected) in
        [(0.1, 0.0), (0.25, 0.0), (0.35, 0.0), (CRITICAL, critical), (0.47, -LN_2), (0.55, -LN_2), (0.7, -LN_2)]
    {
        let row = exact.iter().position(|&(found, _)| (found - coupling).abs() < 1e-12).unwrap();
        let bulk = LARGE.n_sites() * infinite[row];
        assert!((exact[row].1 - bulk - expected).abs() < 1.1e-4, "{coupling}");
        let (found, deviations) = minus_ln_z(&LARGE, &solved, coupling);
        let error = solved.influence.uncertainty(&deviations).standard_error;
        assert!((found - bulk - expected).abs() < tolerance::STANDARD_ERRORS * error, "{coupling}: {}", found - bulk);
    }
    let (disordered, ordered) = (minus_ln_z(&LARGE, &solved, 0.25), minus_ln_z(&LARGE, &solved, 0.7));
    let error = solved.influence.uncertainty(&ordered.1.minus(&disordered.1)).standard_error;
    assert!(error < LN_2 / tolerance::STANDARD_ERRORS, "{error}");
}
