//! Solutions against closed forms, against an independent two-window solver, and against each other.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{CellChoice, assemble, axis, bias, sampled, solved};
use spandrel_bias::Bias;
use spandrel_solver::condense::BinGrid;
use spandrel_solver::influence::Influence;
use spandrel_solver::quantities::free_energy_of_window;
use spandrel_solver::solve::{Links, Method, SolveError, SolveOptions, solve, solve_pair};
use spandrel_testkit::{HarmonicSystem, KnownSystem, Restraint, Window, bennett_difference, cases, tolerance};
use statrs::distribution::{ContinuousCDF, Normal};
use std::ops::ControlFlow;

fn harmonic(center: f64, force_constant: f64) -> Restraint {
    Restraint::Harmonic { center, force_constant }
}

fn parabola_with_mixed_windows() -> HarmonicSystem {
    let windows = vec![
        Window::independent(Restraint::None, 3000),
        Window::independent(harmonic(-0.7, 6.3), 4000),
        Window::independent(harmonic(0.45, 9.1), 2500),
        Window::independent(harmonic(1.35, 17.7), 5000),
        Window::independent(Restraint::Linear { slope: 2.2 }, 3500),
    ];
    HarmonicSystem::new(0.3, 2.9, windows).unwrap()
}

#[test]
fn free_energies_of_harmonic_and_linear_biases_on_a_parabola_hold_their_closed_forms_within_their_errors() {
    let system = parabola_with_mixed_windows();
    let exact = system.reduced_free_energies();
    let mut squares = 0.0;
    let mut count = 0.0;
    for seed in 0..20 {
        let ensemble = sampled(&system, None, 0.0, 0.1, seed, &CellChoice::Lattice);
        let solution = solved(&ensemble, &SolveOptions::default());
        let influence = Influence::of(&ensemble, &solution).unwrap();
        for k in 1..exact.len() {
            let quantity = free_energy_of_window(&solution.free_energies, k);
            let error = influence.uncertainty(&influence.deviations(&quantity)).standard_error;
            let z = (quantity.value - (exact[k] - exact[0])) / error;
            assert!(z.abs() < tolerance::STANDARD_ERRORS, "window {k}, seed {seed}: z = {z}");
            squares += z * z;
            count += 1.0;
        }
    }
    // 80 z-scores of which four share one experiment: the mean square of at least 20 independent ones stays within 1 ± 4·√(2/20).
    let mean_square: f64 = squares / count;
    assert!((mean_square - 1.0).abs() < 4.0 * (2.0_f64 / 20.0).sqrt(), "mean square z = {mean_square}");
}

/// A sample without noise: x_i = mean + sd Φ⁻¹((i + ½)/N).
///
/// Its mean is exact by symmetry; its variance falls short by the tails beyond the outermost quantiles, some 2 ln(N)/N relative (the largest of
/// the terms that the midpoint rule misses). A free energy difference moves by about half the relative variance, so by ln(N)/N.
#[test]
fn evenly_spread_quantiles_give_the_closed_form_up_to_their_missing_tails() {
    let system = parabola_with_mixed_windows();
    let axis = axis(None);
    let biases: Vec<Bias> = system.windows().iter().map(|window| bias(&window.restraint, &axis)).collect();
    let normal = Normal::standard();
    let exact = system.reduced_free_energies();
    for n in [400_u32, 6400] {
        // Taken in steps of a prime, so that they look independent in time.
        let place = |i: u32| f64::from(i * 4099 % n) + 0.5;
        let quantiles: Vec<f64> = (0..n).map(|i| normal.inverse_cdf(place(i) / f64::from(n))).collect();
        let series: Vec<Vec<f64>> = (0..biases.len())
            .map(|k| quantiles.iter().map(|z| system.window_mean(k) + system.window_variance(k).sqrt() * z).collect())
            .collect();
        let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
        let ensemble = assemble(&axis, bins, &biases, &series, &CellChoice::Samples);
        let f = solved(&ensemble, &SolveOptions::default()).free_energies;
        let bound = f64::from(n).ln() / f64::from(n);
        for k in 1..f.len() {
            let miss = (f[k] - (exact[k] - exact[0])).abs();
            assert!(miss < bound, "{n} quantiles, window {k}: {miss} against {bound}");
        }
    }
}

#[test]
fn two_windows_agree_with_bennetts_equation_solved_by_bisection() {
    let windows = vec![Window::independent(harmonic(0.1, 8.0), 700), Window::independent(harmonic(0.9, 13.0), 1900)];
    let system = HarmonicSystem::new(0.4, 1.7, windows).unwrap();
    let series = system.sample_all(11, 3);
    let differences = |samples: &[f64]| -> Vec<f64> {
        samples.iter().map(|&x| system.bias_energy(1, x) - system.bias_energy(0, x)).collect()
    };
    let expected = bennett_difference(&differences(&series[0]), &differences(&series[1])).unwrap();

    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let biases: Vec<Bias> = system.windows().iter().map(|window| bias(&window.restraint, &axis)).collect();
    let ensemble = assemble(&axis, bins, &biases, &series, &CellChoice::Samples);
    let pair = solve_pair(&ensemble, 0, 1);
    assert!((pair.difference - expected).abs() < tolerance::SOLVERS, "{} against {expected}", pair.difference);
    let solution = solved(&ensemble, &SolveOptions::default());
    assert!((solution.free_energies[1] - expected).abs() < tolerance::SOLVERS);
}

#[test]
fn all_methods_agree_and_are_certified() {
    for (case, width) in [(cases::independent().unwrap(), 0.02), (cases::periodic().unwrap(), 5.0)] {
        let period = case.system.period();
        let (lower, _) = case.system.range();
        let ensemble = sampled(&case.system, period, lower, width, 5, &CellChoice::Lattice);
        let newton = solved(&ensemble, &SolveOptions::default());
        assert!(newton.certificate.newton_step < 1e-10);
        for method in Method::ALL {
            let solution = solved(&ensemble, &SolveOptions { method, ..SolveOptions::default() });
            assert!(solution.certificate.newton_step <= 1e-10);
            for (a, b) in solution.free_energies.iter().zip(&newton.free_energies) {
                assert!((a - b).abs() < tolerance::SOLVERS, "{method:?}: {a} against {b}");
            }
        }
    }
}

#[test]
fn cells_change_no_free_energy_by_more_than_their_bound() {
    let case = cases::uneven().unwrap();
    let (lower, _) = case.system.range();
    let on_cells = sampled(&case.system, None, lower, 0.02, 8, &CellChoice::Lattice);
    let on_samples = sampled(&case.system, None, lower, 0.02, 8, &CellChoice::Samples);
    assert!(on_cells.points.len() < on_samples.points.len() / 2);
    let (cells, samples) = (solved(&on_cells, &SolveOptions::default()), solved(&on_samples, &SolveOptions::default()));
    for (a, b) in cells.free_energies.iter().zip(&samples.free_energies) {
        assert!((a - b).abs() < tolerance::CELLS, "{a} against {b}");
    }
}

#[test]
fn a_run_that_is_cut_short_gives_its_partial_result_with_the_error() {
    let system = parabola_with_mixed_windows();
    let ensemble = sampled(&system, None, 0.0, 0.1, 2, &CellChoice::Lattice);
    let links = Links::find(&ensemble);
    let options = SolveOptions { method: Method::SelfConsistent, max_iterations: Some(3), ..SolveOptions::default() };
    let error = solve(&ensemble, &links, &options, &mut |_, _| ControlFlow::Continue(())).unwrap_err();
    let SolveError::NotConverged { free_energies, certificate, iterations, .. } = error else {
        unreachable!("{error}")
    };
    assert_eq!(iterations, 3);
    assert_eq!(free_energies.len(), 5);
    assert!(certificate.unwrap().newton_step > 1e-10);
}

#[test]
fn a_solve_stops_when_asked_to() {
    let system = parabola_with_mixed_windows();
    let ensemble = sampled(&system, None, 0.0, 0.1, 2, &CellChoice::Lattice);
    let links = Links::find(&ensemble);
    for method in Method::ALL {
        let options = SolveOptions { method, ..SolveOptions::default() };
        let outcome = solve(&ensemble, &links, &options, &mut |_, _| ControlFlow::Break(()));
        assert_eq!(outcome, Err(SolveError::Interrupted));
    }
}

#[test]
fn windows_without_common_ground_are_named_with_the_stretch_between_them() {
    let windows = [-0.5, 0.0, 2.5, 3.0].map(|center| Window::independent(harmonic(center, 80.0), 800)).to_vec();
    let system = HarmonicSystem::new(0.2, 0.6, windows).unwrap();
    let ensemble = sampled(&system, None, 0.0, 0.1, 4, &CellChoice::Lattice);
    let links = Links::find(&ensemble);
    assert_eq!(links.groups, [vec![0, 1], vec![2, 3]]);
    let [stretch] = links.uncovered.as_slice() else { unreachable!("one stretch, found {:?}", links.uncovered) };
    assert_eq!((stretch.below, stretch.above), (1, 2));
    // Windows have a spread of 0.11; the furthest of 800 samples lies between 1.5 and 5 spreads from its mean.
    let (from, to) = stretch.range.unwrap();
    assert!(0.16 < from && from < 0.6 && 1.9 < to && to < 2.35, "{stretch:?}");
    let outcome = solve(&ensemble, &links, &SolveOptions::default(), &mut |_, _| ControlFlow::Continue(()));
    assert!(matches!(outcome, Err(SolveError::NotLinked(_))));
}

#[test]
fn biases_of_thousands_of_kt_neither_overflow_nor_change_the_answer() {
    // The same windows and samples, moved by 1000: with slopes of ±60 every bias energy moves by tens of thousands of kT, and f_k by slope × shift.
    let slopes = [-60.0, -58.0, -55.5];
    let build = |shift: f64| {
        let windows = slopes.map(|slope| Window::independent(Restraint::Linear { slope }, 900)).to_vec();
        let system = HarmonicSystem::new(shift, 1.1, windows).unwrap();
        let ensemble = sampled(&system, None, shift, 0.5, 6, &CellChoice::Samples);
        solved(&ensemble, &SolveOptions::default()).free_energies
    };
    let (near, far) = (build(0.0), build(1000.0));
    for k in 1..slopes.len() {
        let expected = near[k] + (slopes[k] - slopes[0]) * 1000.0;
        // Positions near 1000 are stored to 6e-14; times a slope of 60 that is 4e-12 kT a sample, and both solves stop within 1e-10.
        assert!((far[k] - expected).abs() < tolerance::SOLVERS, "{} against {expected}", far[k]);
    }
}

#[test]
fn every_method_finds_back_from_a_start_that_is_far_off_in_one_window() {
    let system = parabola_with_mixed_windows();
    let ensemble = sampled(&system, None, 0.0, 0.1, 2, &CellChoice::Lattice);
    let mut links = Links::find(&ensemble);
    let expected = solved(&ensemble, &SolveOptions::default()).free_energies;
    links.start[3] += 6.0;
    for method in Method::ALL {
        let options = SolveOptions { method, ..SolveOptions::default() };
        let solution = solve(&ensemble, &links, &options, &mut |_, _| ControlFlow::Continue(())).unwrap();
        for (a, b) in solution.free_energies.iter().zip(&expected) {
            assert!((a - b).abs() < tolerance::SOLVERS, "{method:?}: {a} against {b}");
        }
    }
}

#[test]
fn a_single_window_is_solved_by_every_method() {
    let windows = vec![Window::independent(harmonic(0.2, 7.0), 300)];
    let system = HarmonicSystem::new(0.1, 1.9, windows).unwrap();
    let ensemble = sampled(&system, None, 0.0, 0.1, 2, &CellChoice::Lattice);
    for method in Method::ALL {
        assert_eq!(solved(&ensemble, &SolveOptions { method, ..SolveOptions::default() }).free_energies, [0.0]);
    }
}

#[test]
fn on_a_periodic_axis_two_groups_have_two_stretches_between_them_one_across_the_end_of_the_period() {
    let axis = axis(Some(360.0));
    let bins = BinGrid::new(0, -180.0, 5.0, Some(360.0)).unwrap();
    let centers = [-170.0, -155.0, 40.0, 55.0];
    let biases: Vec<Bias> = centers.iter().map(|&center| bias(&harmonic(center, 0.02), &axis)).collect();
    // Samples within 16 degrees of each center, the first window's across the end of the period.
    let series: Vec<Vec<f64>> =
        centers.iter().map(|center| (0..600).map(|i| center + 16.0 * (f64::from(i) * 0.37).sin()).collect()).collect();
    let ensemble = assemble(&axis, bins, &biases, &series, &CellChoice::Lattice);
    let links = Links::find(&ensemble);
    assert_eq!(links.groups, [vec![0, 1], vec![2, 3]]);
    let [first, second] = links.uncovered.as_slice() else {
        unreachable!("two stretches, found {:?}", links.uncovered)
    };
    assert_eq!((first.below, first.above, second.below, second.above), (1, 2, 3, 0));
    // Samples reach 16 from the centers, to within a cell.
    for (found, expected) in [(first.range, (-139.0, 24.0)), (second.range, (71.0, 174.0))] {
        let (from, to) = found.unwrap();
        assert!((from - expected.0).abs() < 0.05 && (to - expected.1).abs() < 0.05, "{from} to {to}");
    }
}

#[test]
fn windows_that_overlap_too_thinly_have_no_stretch_to_name() {
    // Two stiff windows far apart, each with one stray sample in the other's place.
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.5, None).unwrap();
    let biases: Vec<Bias> = [0.0, 6.0].iter().map(|&center| bias(&harmonic(center, 40.0), &axis)).collect();
    let mut series: Vec<Vec<f64>> = [0.0, 6.0]
        .iter()
        .map(|center| (0..500).map(|i| center + 0.4 * (f64::from(i) * 0.02).sin()).collect())
        .collect();
    series[0][499] = 3.2;
    series[1][499] = 2.8;
    let links = Links::find(&assemble(&axis, bins, &biases, &series, &CellChoice::Lattice));
    assert_eq!(links.groups.len(), 2);
    assert_eq!(links.uncovered[0].range, None);
}

#[test]
fn windows_whose_samples_belong_to_each_others_bias_are_not_linked() {
    // The files of two windows were mixed up: any difference of their free energies meets Bennett's equation, so nothing is linked by it.
    let windows = [-0.5, 0.0, 0.5, 1.0].map(|center| Window::independent(harmonic(center, 30.0), 800)).to_vec();
    let system = HarmonicSystem::new(0.2, 0.6, windows).unwrap();
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let biases: Vec<Bias> = system.windows().iter().map(|window| bias(&window.restraint, &axis)).collect();
    let mut series = system.sample_all(3, 0);
    series.swap(0, 3);
    let ensemble = assemble(&axis, bins, &biases, &series, &CellChoice::Lattice);
    assert!(solve_pair(&ensemble, 0, 3).linking_samples < 1.0);
    assert!(solve_pair(&ensemble, 1, 2).linking_samples > 20.0);
}
