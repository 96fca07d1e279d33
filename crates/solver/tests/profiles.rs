//! Profiles against exact ones, and what must not change them.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{CellChoice, assemble, axis, bias, condense, sampled, solved};
use spandrel_bias::Bias;
use spandrel_solver::condense::{BinGrid, CellLattice, CellScheme};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::influence::Influence;
use spandrel_solver::profile::{BinStatus, Profile, ProfileError, ProfileRequest, Zero};
use spandrel_solver::solve::SolveOptions;
use spandrel_testkit::{HarmonicSystem, KnownSystem, OneDimensionalSystem, Restraint, Window, cases, tolerance};

fn harmonic(center: f64, force_constant: f64) -> Restraint {
    Restraint::Harmonic { center, force_constant }
}

fn draw(ensemble: &Ensemble, request: &ProfileRequest) -> Profile {
    let solution = solved(ensemble, &SolveOptions::default());
    let influence = Influence::of(ensemble, &solution).unwrap();
    Profile::draw(ensemble, &influence, request).unwrap()
}

fn whole(zero: Zero) -> ProfileRequest {
    ProfileRequest { first_bin: None, last_bin: None, zero }
}

/// Share of 95 % intervals that hold the exact difference from the zero, and the mean square of z, over replicates of a case.
fn coverage(system: &OneDimensionalSystem, width: f64, zero_at: f64, replicates: u64) -> (f64, f64) {
    let (lower, _) = system.range();
    let period = system.period();
    let (mut held, mut squares, mut count) = (0.0, 0.0, 0.0);
    for seed in 0..replicates {
        let ensemble = sampled(system, period, lower, width, 100 + seed, &CellChoice::Lattice);
        let profile = draw(&ensemble, &whole(Zero::Position { position: zero_at }));
        let exact = |lower: f64, upper: f64| -(system.probability(lower, upper) / (upper - lower)).ln();
        let zero = profile.bins.iter().find(|bin| bin.status == BinStatus::Zero).unwrap();
        let offset = exact(zero.lower, zero.upper);
        for bin in profile.bins.iter().filter(|bin| bin.status == BinStatus::Determined) {
            let uncertainty = bin.uncertainty.unwrap();
            let miss = bin.free_energy.unwrap() - (exact(bin.lower, bin.upper) - offset);
            held += f64::from(u8::from(miss.abs() <= uncertainty.half_width_95));
            squares += (miss / uncertainty.standard_error).powi(2);
            count += 1.0;
        }
    }
    (held / count, squares / count)
}

/// Neighboring bins of one profile say nearly the same, so a replicate counts as four independent statements, whatever its bins: the
/// standard errors of a share of 95 % and of a mean square of z over `replicates`.
fn standard_errors(replicates: u64) -> (f64, f64) {
    let statements = 4.0 * replicates as f64;
    ((0.95 * 0.05 / statements).sqrt(), (2.0 / statements).sqrt())
}

/// Intervals wider than the truth asks for are the lesser fault, so a share of 100 % is let pass here; that the errors are not too large is
/// for the mean square to say.
fn assert_calibrated(system: &OneDimensionalSystem, width: f64, zero_at: f64, replicates: u64) {
    let (share, mean_square) = coverage(system, width, zero_at, replicates);
    let (of_share, of_square) = standard_errors(replicates);
    assert!(share > 0.95 - tolerance::STANDARD_ERRORS * of_share, "{share} held, mean square z {mean_square}");
    assert!((mean_square - 1.0).abs() < tolerance::STANDARD_ERRORS * of_square, "mean square z {mean_square}");
}

#[test]
fn intervals_hold_the_exact_profile_of_independent_samples_as_often_as_they_say() {
    let case = cases::independent().unwrap();
    let (lower, upper) = case.system.range();
    assert_calibrated(&case.system, 0.05, f64::midpoint(lower, upper), 60);
}

#[test]
fn intervals_hold_the_exact_profile_of_correlated_samples_on_a_periodic_axis_as_often_as_they_say() {
    let case = cases::periodic().unwrap();
    let (lower, _) = case.system.range();
    let width = case.system.period().unwrap() / 72.0;
    assert_calibrated(&case.system, width, lower + 30.5 * width, 60);
}

#[test]
fn intervals_hold_the_exact_profile_of_seventy_effective_samples_a_window_as_often_as_they_say() {
    let case = cases::long_memory(70).unwrap().first_windows(5);
    assert_calibrated(&case.system, 0.08, -0.42, 60);
}

#[test]
fn a_zero_across_the_end_of_the_period_is_the_mean_density_there() {
    let case = cases::periodic().unwrap();
    let ensemble = sampled(&case.system, case.system.period(), -180.0, 5.0, 3, &CellChoice::Lattice);
    let profile = draw(&ensemble, &whole(Zero::Range { from: 170.0, to: 190.0 }));
    let bins = [&profile.bins[..2], &profile.bins[70..]].concat();
    let mean = bins.iter().map(|bin| (-bin.free_energy.unwrap()).exp()).sum::<f64>() / 4.0;
    assert!((mean - 1.0).abs() < tolerance::SUMMATION_ORDER, "{mean}");
}

#[test]
fn a_zero_on_a_single_sample_leaves_no_bin_with_an_error() {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let mut series: Vec<f64> = (0..900).map(|i| 0.5 + 0.4 * (f64::from(i) * 2.1).sin()).collect();
    series[417] = 1.1;
    let ensemble = assemble(&axis, bins, &[bias(&Restraint::None, &axis)], &[series], &CellChoice::Lattice);
    let profile = draw(&ensemble, &whole(Zero::Position { position: 1.1 }));
    assert!(profile.bins.iter().all(|bin| bin.uncertainty.is_none()), "{:?}", profile.bins);
    let profile = draw(&ensemble, &whole(Zero::Position { position: 0.6 }));
    let without: Vec<usize> = (0..profile.bins.len()).filter(|&i| profile.bins[i].uncertainty.is_none()).collect();
    // The zero itself and the bin of the single sample.
    assert_eq!(without, [2, 4]);
}

#[test]
fn profile_is_unchanged_when_a_window_is_split_in_two() {
    let windows = [-0.4, 0.1, 0.6].map(|center| Window::independent(harmonic(center, 21.0), 1200)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let mut biases: Vec<Bias> = system.windows().iter().map(|window| bias(&window.restraint, &axis)).collect();
    let mut series = system.sample_all(9, 0);
    let whole_window = assemble(&axis, bins, &biases, &series, &CellChoice::Samples);

    let tail = series[1].split_off(500);
    series.push(tail);
    biases.push(biases[1].clone());
    let split = assemble(&axis, bins, &biases, &series, &CellChoice::Samples);

    let request = whole(Zero::Position { position: 0.25 });
    let (one, two) = (draw(&whole_window, &request), draw(&split, &request));
    assert_eq!(one.bins.len(), two.bins.len());
    for (a, b) in one.bins.iter().zip(&two.bins) {
        match (a.free_energy, b.free_energy) {
            (Some(a), Some(b)) => assert!((a - b).abs() < tolerance::SOLVERS, "{a} against {b}"),
            (a, b) => assert_eq!(a, b),
        }
    }
}

/// The parabola's windows with each series cut into parts that count as replicas.
fn with_replicas(part_length: usize) -> Ensemble {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let lattice = CellScheme::lattice(CellLattice::new(bins, 6, &[]));
    let windows = [-0.4, 0.1, 0.6].map(|center| Window::independent(harmonic(center, 21.0), 1501)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let data = system.windows().iter().zip(system.sample_all(12, 0)).enumerate().map(|(k, (window, samples))| {
        let bias = bias(&window.restraint, &axis);
        let replicas = samples.chunks(part_length).map(|part| condense(&lattice, &axis, &bias, part)).collect();
        WindowData { name: format!("w{k}"), bias, weight: 1.0, replicas }
    });
    Ensemble::assemble(std::slice::from_ref(&axis), bins, data.collect()).unwrap()
}

#[test]
fn replicas_change_no_free_energy_and_add_their_degrees_of_freedom() {
    let (whole_runs, parts) = (with_replicas(1501), with_replicas(501));
    assert_eq!((parts.n_windows(), parts.streams.len()), (3, 9));
    let request = whole(Zero::Position { position: 0.15 });
    let (one, three) = (draw(&whole_runs, &request), draw(&parts, &request));
    let mut ratios = Vec::new();
    for (a, b) in one.bins.iter().zip(&three.bins) {
        if let (Some(x), Some(y)) = (a.free_energy, b.free_energy) {
            assert!((x - y).abs() < tolerance::SOLVERS, "{x} against {y}");
        }
        if let (Some(x), Some(y)) = (&a.uncertainty, &b.uncertainty) {
            ratios.push(y.standard_error / x.standard_error);
            assert!(y.degrees_of_freedom > x.degrees_of_freedom);
        }
    }
    // Two estimates of the same errors, from 3 × 100 and 9 × 100 batches: each ratio within 4.5/√(2·100), about a third.
    assert!(ratios.len() > 5 && ratios.iter().all(|ratio| (ratio - 1.0).abs() < 0.32), "{ratios:?}");
}

#[test]
fn a_replica_too_short_for_an_error_of_its_own_takes_that_of_the_others() {
    // 1501 samples in parts of 500: the last replica of each window has a single sample.
    let ensemble = with_replicas(500);
    assert_eq!(ensemble.streams.iter().filter(|stream| stream.batches.is_none()).count(), 3);
    let request = whole(Zero::Position { position: 0.15 });
    let (with_stub, without) = (draw(&ensemble, &request), draw(&with_replicas(501), &request));
    for (a, b) in with_stub.bins.iter().zip(&without.bins) {
        assert_eq!(a.status, b.status);
    }
}

#[test]
fn a_window_weighs_as_its_samples_do() {
    // Half the weight on a window that is there twice is the same likelihood, and twice the independent samples its errors say so.
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let lattice = CellScheme::lattice(CellLattice::new(bins, 6, &[]));
    let windows = [-0.4, 0.1].map(|center| Window::independent(harmonic(center, 9.0), 2000)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let series = system.sample_all(14, 0);
    let build = |copies: usize, weight: f64| {
        let data = system.windows().iter().zip(&series).enumerate().map(|(k, (window, samples))| {
            let bias = bias(&window.restraint, &axis);
            let replicas = vec![condense(&lattice, &axis, &bias, samples); copies];
            WindowData { name: format!("w{k}"), bias, weight, replicas }
        });
        Ensemble::assemble(std::slice::from_ref(&axis), bins, data.collect()).unwrap()
    };
    let request = whole(Zero::Position { position: -0.15 });
    let (single, doubled) = (draw(&build(1, 1.0), &request), draw(&build(2, 0.5), &request));
    for (a, b) in single.bins.iter().zip(&doubled.bins) {
        if let (Some(x), Some(y)) = (a.free_energy, b.free_energy) {
            assert!((x - y).abs() < tolerance::SOLVERS, "{x} against {y}");
        }
        if let (Some(x), Some(y)) = (&a.uncertainty, &b.uncertainty) {
            assert!((y.standard_error * 2.0_f64.sqrt() / x.standard_error - 1.0).abs() < tolerance::SOLVERS);
        }
    }
}

#[test]
fn unsampled_bins_are_empty_and_a_zero_on_one_is_refused() {
    // A flat unbiased window and a gap in its samples.
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let series: Vec<f64> = (0..600).map(|i| if i % 2 == 0 { 0.1 } else { 1.1 } + 0.01 * f64::from(i % 7)).collect();
    let biases = [bias(&Restraint::None, &axis)];
    let ensemble = assemble(&axis, bins, &biases, &[series], &CellChoice::Lattice);
    let profile = draw(&ensemble, &whole(Zero::Minimum));
    let empty: Vec<bool> = profile.bins.iter().map(|bin| bin.free_energy.is_none()).collect();
    assert_eq!(empty, [false, true, true, true, false]);
    assert!(profile.bins[1..4].iter().all(|bin| bin.status == BinStatus::Unsampled && bin.uncertainty.is_none()));

    let solution = solved(&ensemble, &SolveOptions::default());
    let influence = Influence::of(&ensemble, &solution).unwrap();
    for zero in [Zero::Position { position: 0.6 }, Zero::Range { from: 0.0, to: 0.5 }, Zero::Position { position: 9.0 }]
    {
        let refused = Profile::draw(&ensemble, &influence, &whole(zero));
        assert!(matches!(refused, Err(ProfileError::ZeroNotSampled { .. })), "{zero:?}: {refused:?}");
    }
    let outside = ProfileRequest { first_bin: Some(1), last_bin: Some(3), zero: Zero::Minimum };
    assert_eq!(Profile::draw(&ensemble, &influence, &outside), Err(ProfileError::NothingSampled));
}

#[test]
fn the_mean_over_a_range_is_minus_the_logarithm_of_the_mean_density_there() {
    let case = cases::independent().unwrap();
    let (lower, _) = case.system.range();
    let ensemble = sampled(&case.system, None, lower, 0.05, 3, &CellChoice::Lattice);
    let from = lower + 12.0 * 0.05;
    let profile = draw(&ensemble, &whole(Zero::Range { from, to: from + 4.0 * 0.05 }));
    let in_range = profile.bins.iter().filter(|bin| bin.center() > from && bin.center() < from + 0.2);
    let densities: Vec<f64> = in_range.map(|bin| (-bin.free_energy.unwrap()).exp()).collect();
    assert_eq!(densities.len(), 4);
    assert!((densities.iter().sum::<f64>() / 4.0 - 1.0).abs() < tolerance::SUMMATION_ORDER);
    assert_eq!(profile.zero_position, None);
}

#[test]
fn a_series_that_never_moves_supports_no_error() {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let moving: Vec<f64> = (0..400).map(|i| 0.3 + 0.1 * (f64::from(i) * 0.7).sin()).collect();
    let biases = [bias(&harmonic(0.3, 5.0), &axis), bias(&harmonic(0.35, 5.0), &axis)];
    let ensemble = assemble(&axis, bins, &biases, &[moving, vec![0.31; 400]], &CellChoice::Lattice);
    let profile = draw(&ensemble, &whole(Zero::Position { position: 0.3 }));
    assert!(profile.bins.iter().all(|bin| bin.uncertainty.is_none()), "{:?}", profile.bins);
}

#[test]
fn results_are_the_same_bytes_for_any_number_of_threads() {
    let case = cases::uneven().unwrap();
    let (lower, _) = case.system.range();
    let with_threads = |n: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(n).build().unwrap();
        pool.install(|| {
            let ensemble = sampled(&case.system, None, lower, 0.05, 3, &CellChoice::Lattice);
            draw(&ensemble, &whole(Zero::Minimum)).bins
        })
    };
    assert_eq!(with_threads(1), with_threads(3));
}

#[test]
fn the_lowest_bin_serves_as_zero_only_if_its_samples_support_an_error() {
    // Under a bias that pushes down, a single sample far up weighs so much that its bin is the lowest.
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let bias = bias(&Restraint::Linear { slope: 16.0 }, &axis);
    let mut series: Vec<f64> = (0..900).map(|i| 0.25 + 0.2 * (f64::from(i) * 2.1).sin()).collect();
    series[400] = 0.9;
    let ensemble = assemble(&axis, bins, &[bias], &[series], &CellChoice::Lattice);
    let profile = draw(&ensemble, &whole(Zero::Minimum));
    let lowest = profile.bins.iter().filter_map(|bin| bin.free_energy).fold(0.0, f64::min);
    assert!(lowest < -1.0, "{:?}", profile.bins);
    assert_eq!(profile.zero_position, Some(0.375));
    assert!(profile.bins[0].uncertainty.is_some());
}
