//! Errors from resampling and between replicas against closed forms, exact profiles and the errors from influences.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{CellChoice, assemble, axis, bias, condense, sampled, solved};
use spandrel_solver::bootstrap::{
    BetweenReplicas, Bootstrap, BootstrapError, BootstrapOptions, ReplicaError, ResampledError, block_length,
};
use spandrel_solver::condense::{BinGrid, CellScheme};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::influence::Influence;
use spandrel_solver::profile::{BinStatus, Profile, ProfileRequest, Zero};
use spandrel_solver::solve::{Solution, SolveOptions};
use spandrel_testkit::{
    Correlation, HarmonicSystem, KnownSystem, OneDimensionalSystem, Restraint, Window, cases, stream, tolerance,
};
use std::ops::ControlFlow;

struct Analysis {
    ensemble: Ensemble,
    solution: Solution,
    influence: Influence,
    profile: Profile,
}

impl Analysis {
    fn of(ensemble: Ensemble, zero_at: f64) -> Self {
        let solution = solved(&ensemble, &SolveOptions::default());
        let influence = Influence::of(&ensemble, &solution).unwrap();
        let zero = Zero::Position { position: zero_at };
        let request = ProfileRequest { first_bin: None, last_bin: None, zero };
        let profile = Profile::draw(&ensemble, &influence, &request).unwrap();
        Self { ensemble, solution, influence, profile }
    }

    fn try_bootstrap(&self, n_replicates: usize) -> Result<Bootstrap, BootstrapError> {
        let Self { ensemble, solution, influence, profile } = self;
        let options = BootstrapOptions { n_replicates, seed: 41 };
        Bootstrap::run(ensemble, solution, influence, profile, &options, &mut |_, _| ControlFlow::Continue(()))
    }

    fn bootstrap(&self, n_replicates: usize) -> Bootstrap {
        self.try_bootstrap(n_replicates).unwrap()
    }

    fn between_replicas(&self) -> Option<BetweenReplicas> {
        BetweenReplicas::of(&self.ensemble, &self.solution, &self.influence, &self.profile)
    }
}

fn harmonic(center: f64, force_constant: f64) -> Restraint {
    Restraint::Harmonic { center, force_constant }
}

/// A flat line from 0 to 1, sampled evenly without memory.
fn uniform(n_samples: usize, number: u64) -> Vec<f64> {
    let latent = Correlation::Independent.sample_latent(n_samples, &mut stream(23, number));
    // 1/(1 + exp(−1.702 z)) is within 0.01 of the normal distribution function; how even it is does not matter here.
    latent.iter().map(|z| (1.0 + (-1.702 * z).exp()).recip()).collect()
}

fn unbiased(runs: &[Vec<f64>], width: f64) -> Ensemble {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, width, None).unwrap();
    let bias = bias(&Restraint::None, &axis);
    let replicas = runs.iter().map(|run| condense(&CellScheme::Samples(bins), &axis, &bias, run)).collect();
    let data = WindowData { name: "free".into(), bias, weight: 1.0, replicas };
    Ensemble::assemble(&[axis], bins, vec![data]).unwrap()
}

fn ratios<'a>(errors: impl IntoIterator<Item = &'a ResampledError>) -> Vec<f64> {
    errors.into_iter().filter_map(|error| error.ratio).collect()
}

#[test]
fn counts_of_a_free_run_scatter_as_a_multinomial_does() {
    // 6400 independent samples are 100 groups of 64.
    let analysis = Analysis::of(unbiased(&[uniform(6400, 1)], 0.2), 0.5);
    let bootstrap = analysis.bootstrap(1000);
    assert_eq!(bootstrap.streams[0].map(|blocks| (blocks.n_groups, blocks.block_length)), Some((100, 1)));
    let zero = analysis.profile.bins.iter().find(|bin| bin.status == BinStatus::Zero).unwrap();
    let others = analysis.profile.bins.iter().zip(&bootstrap.bins).filter(|(bin, _)| bin.status != BinStatus::Zero);
    let mut compared = 0;
    for (bin, error) in others {
        // Var ln(n₁/n₂) = 1/n₁ + 1/n₂ to first order, whatever else the bins hold.
        let exact = (1.0 / bin.n_samples as f64 + 1.0 / zero.n_samples as f64).sqrt();
        // A standard deviation is known to 1/√(2·999) from the replicates and to 1/√(2·99) from the groups.
        let bound = tolerance::STANDARD_ERRORS * (1.0_f64 / (2.0 * 999.0) + 1.0 / (2.0 * 99.0)).sqrt();
        let found = error.uncertainty.unwrap();
        assert!((found.standard_error / exact - 1.0).abs() < bound, "{found:?} against {exact}");
        // Relative variances 2/99 and 2/999 add up.
        let degrees = (1.0_f64 / 99.0 + 1.0 / 999.0).recip();
        assert!((found.degrees_of_freedom / degrees - 1.0).abs() < tolerance::ROUNDING_RELATIVE, "{found:?}");
        compared += 1;
    }
    assert_eq!(compared, 4);
}

#[test]
fn a_bin_with_a_single_sample_is_empty_as_often_as_its_group_is_not_drawn() {
    let mut run: Vec<f64> = uniform(100, 4).iter().map(|x| 0.99 * x).collect();
    run[37] = 1.01;
    let bootstrap = Analysis::of(unbiased(&[run], 0.25), 0.4).bootstrap(1000);
    let blocks = bootstrap.streams[0].unwrap();
    assert_eq!((blocks.n_groups, blocks.block_length), (100, 1));
    assert!((blocks.shown_part - 0.99).abs() < 1e-12);
    // 99 draws out of 100 groups of one sample.
    let chance = 0.99_f64.powi(99);
    let error = (chance * (1.0 - chance) / 1000.0).sqrt();
    let last = bootstrap.bins.last().unwrap();
    let empty = last.n_empty as f64 / 1000.0;
    assert!((empty - chance).abs() < tolerance::STANDARD_ERRORS * error, "{empty} against {chance}");
    assert_eq!((last.uncertainty, last.ratio), (None, None));
    assert!(bootstrap.bins[..4].iter().all(|error| error.n_empty == 0));
}

#[test]
fn a_bin_seen_in_a_single_visit_has_no_resampled_error() {
    let mut run: Vec<f64> = uniform(6400, 1).iter().map(|x| 0.99 * x).collect();
    run[1930..1936].fill(1.01);
    let analysis = Analysis::of(unbiased(&[run], 0.25), 0.4);
    let bootstrap = analysis.bootstrap(400);
    let (bin, error) = (analysis.profile.bins.last().unwrap(), bootstrap.bins.last().unwrap());
    assert_eq!(bin.n_samples, 6);
    assert!(bin.uncertainty.is_some());
    // Its group is drawn in two replicates out of three.
    assert!((80..240).contains(&error.n_empty), "{error:?}");
    assert_eq!((error.uncertainty, error.ratio), (None, None));
}

#[test]
fn independent_samples_have_the_same_errors_by_both_ways() {
    let windows = [-0.4, -0.1, 0.2, 0.5, 0.8].map(|center| Window::independent(harmonic(center, 31.0), 6400)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let analysis = Analysis::of(sampled(&system, None, -0.05, 0.1, 2, &CellChoice::Lattice), 0.2);
    let bootstrap = analysis.bootstrap(1000);
    // 100 groups are the 100 batches, so the two ways have the same noise, but for that of the replicates.
    assert!(bootstrap.streams.iter().flatten().all(|blocks| (blocks.n_groups, blocks.block_length) == (100, 1)));
    let well_sampled = analysis.profile.bins.iter().zip(&bootstrap.bins).filter(|(bin, _)| bin.n_samples >= 500);
    let ratios = [ratios(well_sampled.map(|(_, error)| error)), ratios(&bootstrap.windows)].concat();
    // What is not linear in counts of 500 adds 1/500; the parts shown by ring and by batches differ by 1/100 where a lag is seen by chance.
    let bound = tolerance::STANDARD_ERRORS / (2.0_f64 * 1000.0).sqrt() + 1.0 / 500.0 + 1.0 / 100.0;
    assert!(ratios.len() > 12, "{ratios:?}");
    assert!(ratios.iter().all(|ratio| (ratio - 1.0).abs() < bound), "{ratios:?}");
}

fn assert_no_disagreement(effective_samples: usize) {
    let case = cases::long_memory(effective_samples).unwrap();
    let ensemble = sampled(&case.system, None, case.system.range().0, 0.08, 6, &CellChoice::Lattice);
    let bootstrap = Analysis::of(ensemble, -0.42).bootstrap(400);
    let ratios = [ratios(&bootstrap.bins), ratios(&bootstrap.windows)].concat();
    assert!(ratios.len() >= 20, "{ratios:?}");
    assert!(ratios.iter().all(|ratio| (1.0 / 1.5..1.5).contains(ratio)), "{ratios:?}");
    assert_eq!(bootstrap.disagreement(), None);
    assert!(bootstrap.streams.iter().flatten().all(|blocks| blocks.block_length > 1), "{:?}", bootstrap.streams);
}

#[test]
fn seventy_effective_samples_a_window_have_the_same_errors_by_both_ways_within_a_half() {
    assert_no_disagreement(70);
}

#[test]
fn thirty_five_effective_samples_a_window_have_the_same_errors_by_both_ways_within_a_half() {
    assert_no_disagreement(35);
}

#[test]
fn a_wrong_bias_moves_the_profile_and_not_the_agreement_of_its_errors() {
    let windows = [-0.4, -0.1, 0.2, 0.5, 0.8].map(|center| Window::independent(harmonic(center, 31.0), 6400)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let axis = axis(None);
    let series = system.sample_all(2, 0);
    let with_center = |center: f64| {
        let mut restraints: Vec<Restraint> = system.windows().iter().map(|window| window.restraint.clone()).collect();
        restraints[2] = harmonic(center, 31.0);
        let biases: Vec<_> = restraints.iter().map(|restraint| bias(restraint, &axis)).collect();
        let bins = BinGrid::new(0, -0.05, 0.1, None).unwrap();
        Analysis::of(assemble(&axis, bins, &biases, &series, &CellChoice::Lattice), -0.3)
    };
    let (right, wrong) = (with_center(0.2), with_center(0.27));
    let change =
        |bin: usize| wrong.profile.bins[bin].free_energy.unwrap() - right.profile.bins[bin].free_energy.unwrap();
    let last = wrong.profile.bins.iter().rposition(|bin| bin.n_samples >= 500).unwrap();
    let error = right.profile.bins[last].uncertainty.unwrap().standard_error;
    assert!(change(last).abs() > 10.0 * error, "{} against {error}", change(last));
    assert_eq!(wrong.bootstrap(400).disagreement(), None);
}

/// Share of 95 % intervals that hold the exact difference from the zero, and the mean square of z, over replicates of a system.
fn coverage(system: &OneDimensionalSystem, width: f64, zero_at: f64, replicates: u64) -> (f64, f64) {
    let (mut held, mut squares, mut count) = (0.0, 0.0, 0.0);
    for seed in 0..replicates {
        let ensemble = sampled(system, None, system.range().0, width, 500 + seed, &CellChoice::Lattice);
        let analysis = Analysis::of(ensemble, zero_at);
        let bootstrap = analysis.bootstrap(100);
        let exact = |lower: f64, upper: f64| -(system.probability(lower, upper) / (upper - lower)).ln();
        let zero = analysis.profile.bins.iter().find(|bin| bin.status == BinStatus::Zero).unwrap();
        let offset = exact(zero.lower, zero.upper);
        for (bin, error) in analysis.profile.bins.iter().zip(&bootstrap.bins) {
            if bin.status != BinStatus::Determined {
                continue;
            }
            let Some(error) = error.uncertainty else { continue };
            let miss = bin.free_energy.unwrap() - (exact(bin.lower, bin.upper) - offset);
            held += f64::from(u8::from(miss.abs() <= error.half_width_95));
            squares += (miss / error.standard_error).powi(2);
            count += 1.0;
        }
    }
    (held / count, squares / count)
}

#[test]
fn intervals_hold_the_exact_profile_of_correlated_samples_as_often_as_they_say() {
    let system = cases::long_memory(70).unwrap().first_windows(5).system;
    let (share, mean_square) = coverage(&system, 0.08, -0.42, 60);
    // The bins of a replicate count as four independent statements.
    let statements = 4.0 * 60.0_f64;
    let of_share = (0.95 * 0.05 / statements).sqrt();
    let of_square = (2.0 / statements).sqrt();
    assert!(share > 0.95 - tolerance::STANDARD_ERRORS * of_share, "{share} held, mean square z {mean_square}");
    assert!((mean_square - 1.0).abs() < tolerance::STANDARD_ERRORS * of_square, "mean square z {mean_square}");
}

#[test]
fn block_lengths_are_those_of_the_formula_for_a_first_order_autoregression() {
    let n = 8000;
    for (number, time) in (1..).zip([1.3, 4.7, 11.0]) {
        let rho = (-1.0_f64 / time).exp();
        // With γₜ = ρᵗ the sums are closed: b³ = (3/2) (2ρ/(1 − ρ²))² n (Politis & White 2004, section 3).
        let exact = (1.5 * (2.0 * rho / (1.0 - rho * rho)).powi(2) * f64::from(n)).cbrt();
        let mut lengths: Vec<f64> = (0..101)
            .map(|i| {
                let mut generator = stream(19, 1000 * number + i);
                block_length(&Correlation::Exponential { time }.sample_latent(8000, &mut generator)).unwrap()
            })
            .collect();
        lengths.sort_by(f64::total_cmp);
        // Estimates scatter by a fifth to a third and lean to one side as the window's reach is found; their median by a thirtieth.
        assert!((lengths[50] / exact - 1.0).abs() < 0.15, "{time}: {} against {exact}", lengths[50]);
        assert!(lengths[10] > 0.5 * exact && lengths[90] < 2.0 * exact, "{time}: {lengths:?}");
    }
    let independent = (0..40).map(|i| block_length(&Correlation::Independent.sample_latent(128, &mut stream(20, i))));
    // Each of the first five autocorrelations passes for memory once in 250 times.
    assert!(independent.filter(|length| *length == Some(1.0)).count() >= 34);
}

#[test]
fn results_are_the_same_bytes_for_any_number_of_threads() {
    let case = cases::uneven().unwrap();
    let analysis = Analysis::of(sampled(&case.system, None, 0.0, 0.05, 3, &CellChoice::Lattice), 1.42);
    let with_threads = |n: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(n).build().unwrap();
        pool.install(|| analysis.bootstrap(37))
    };
    let one = with_threads(1);
    assert_eq!(one, with_threads(3));
    assert!(one.farthest_ratio().is_some());
}

#[test]
fn a_stop_is_obeyed_and_progress_counts_up_to_all_replicates() {
    let analysis = Analysis::of(unbiased(&[uniform(800, 5)], 0.2), 0.5);
    let Analysis { ensemble, solution, influence, profile } = &analysis;
    let options = BootstrapOptions { n_replicates: 203, seed: 2 };
    let mut seen = Vec::new();
    let done = Bootstrap::run(ensemble, solution, influence, profile, &options, &mut |done, of| {
        seen.push((done, of));
        ControlFlow::Continue(())
    });
    assert!(done.is_ok());
    assert!(seen.is_sorted() && seen[0] == (0, 203) && seen.last() == Some(&(203, 203)), "{seen:?}");
    let stopped = Bootstrap::run(ensemble, solution, influence, profile, &options, &mut |done, _| {
        if done < 10 { ControlFlow::Continue(()) } else { ControlFlow::Break(()) }
    });
    assert_eq!(stopped, Err(BootstrapError::Interrupted));
}

#[test]
fn runs_that_show_no_spread_leave_nothing_to_check() {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let moving: Vec<f64> = (0..400).map(|i| 0.3 + 0.1 * (f64::from(i) * 0.7).sin()).collect();
    let biases = [bias(&harmonic(0.3, 5.0), &axis), bias(&harmonic(0.35, 5.0), &axis)];
    for silent in [vec![0.31; 400], vec![0.31]] {
        let series = [moving.clone(), silent];
        let analysis = Analysis::of(assemble(&axis, bins, &biases, &series, &CellChoice::Lattice), 0.3);
        assert_eq!(analysis.try_bootstrap(50), Err(BootstrapError::Unsupported { windows: vec!["w1".into()] }));
        assert_eq!(analysis.between_replicas(), None);
    }
}

#[test]
fn too_few_replicates_and_a_zero_of_other_data_are_refused() {
    let analysis = Analysis::of(unbiased(&[uniform(800, 5)], 0.2), 0.5);
    assert_eq!(analysis.try_bootstrap(19), Err(BootstrapError::Replicates { found: 19 }));
    assert!(analysis.try_bootstrap(20).is_ok());
    let left: Vec<f64> = uniform(800, 6).iter().map(|x| 0.3 * x).collect();
    let other = Analysis { profile: analysis.profile, ..Analysis::of(unbiased(&[left], 0.2), 0.1) };
    assert_eq!(other.try_bootstrap(20), Err(BootstrapError::ZeroNotSampled));
}

#[test]
fn a_replica_too_short_for_an_error_leaves_the_rest_to_the_others() {
    // The single sample stays; the other run scatters as much more.
    let runs = [uniform(6400, 1), vec![0.5]];
    let (alone, with_stub) = (unbiased(&runs[..1], 0.2), unbiased(&runs, 0.2));
    let bootstrap = Analysis::of(with_stub, 0.5).bootstrap(200);
    assert_eq!(bootstrap.streams[1], None);
    let without = Analysis::of(alone, 0.5).bootstrap(200);
    for (a, b) in bootstrap.bins.iter().zip(&without.bins) {
        assert_eq!(a.ratio.is_some(), b.ratio.is_some());
        if let (Some(a), Some(b)) = (a.ratio, b.ratio) {
            // Other draws: two standard deviations of 200 values each, compared by their ratios to nearly the same errors.
            assert!((a / b - 1.0).abs() < tolerance::STANDARD_ERRORS / 200.0_f64.sqrt(), "{a} against {b}");
        }
    }
}

fn of_bins(between: &BetweenReplicas) -> Vec<ReplicaError> {
    between.bins.iter().flatten().copied().collect()
}

#[test]
fn spread_between_replicas_of_a_free_run_is_that_of_their_counts() {
    let lengths = [700, 500, 900, 400];
    let runs: Vec<Vec<f64>> = (60..).zip(lengths).map(|(number, n)| uniform(n, number)).collect();
    let analysis = Analysis::of(unbiased(&runs, 0.5), 0.25);
    let between = analysis.between_replicas().unwrap();
    assert_eq!(between.n_windows, 1);
    // φ = 1_b/n_b − 1_a/n_a for the second bin relative to the first.
    let n = lengths.iter().sum::<usize>() as f64;
    let in_second = |run: &Vec<f64>| run.iter().filter(|x| **x >= 0.5).count() as f64;
    let n_second: f64 = runs.iter().map(in_second).sum();
    let influence = |run: &Vec<f64>| {
        let part = in_second(run) / run.len() as f64;
        part / n_second - (1.0 - part) / (n - n_second)
    };
    // Weighted mean of φ over all: (n_b/n_b − n_a/n_a)/n = 0.
    let spread: f64 = runs.iter().map(|run| run.len() as f64 * influence(run).powi(2)).sum();
    let expected = (n * spread / 3.0).sqrt();
    let found = of_bins(&between);
    assert_eq!(found.len(), 1);
    assert!((found[0].uncertainty.standard_error / expected - 1.0).abs() < 1e-10, "{found:?} against {expected}");
    assert!((found[0].uncertainty.degrees_of_freedom - 3.0).abs() < 1e-10);
    assert!((found[0].replicated_part - 1.0).abs() < 1e-10);
}

/// Three windows on a parabola; those in `replicated` have ten runs of 640 samples, the others one of 6400. `shift` displaces every second run.
fn with_replicas(replicated: &[usize], shift: f64) -> Ensemble {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    let windows = [-0.4, 0.1, 0.6].map(|center| Window::independent(harmonic(center, 21.0), 6400)).to_vec();
    let system = HarmonicSystem::new(0.2, 1.3, windows).unwrap();
    let data = system.windows().iter().zip(system.sample_all(12, 0)).enumerate().map(|(k, (window, samples))| {
        let bias = bias(&window.restraint, &axis);
        let run_length = if replicated.contains(&k) { 640 } else { 6400 };
        let replicas = samples.chunks(run_length).enumerate().map(|(r, run)| {
            let sign = if run_length == 6400 { 0.0 } else { [1.0, -1.0][r % 2] };
            let moved: Vec<f64> = run.iter().map(|x| x + sign * shift).collect();
            condense(&CellScheme::Samples(bins), &axis, &bias, &moved)
        });
        WindowData { name: format!("w{k}"), bias: bias.clone(), weight: 1.0, replicas: replicas.collect() }
    });
    Ensemble::assemble(std::slice::from_ref(&axis), bins, data.collect()).unwrap()
}

#[test]
fn replicas_that_start_independently_confirm_the_errors() {
    let between = Analysis::of(with_replicas(&[0, 1, 2], 0.0), 0.15).between_replicas().unwrap();
    assert_eq!(between.n_windows, 3);
    let errors = [of_bins(&between), between.windows.iter().flatten().copied().collect()].concat();
    assert!(errors.len() > 10);
    for error in errors {
        // Between ten runs a variance has 9 degrees of freedom a window, from their batches hundreds.
        let bound = tolerance::STANDARD_ERRORS / (2.0 * error.degrees_between).sqrt();
        assert!((9.0 - 1e-9..=27.0 + 1e-9).contains(&error.degrees_between), "{error:?}");
        assert!((error.ratio - 1.0).abs() < bound, "{error:?}");
    }
}

#[test]
fn replicas_trapped_apart_show_what_their_own_series_do_not() {
    let analysis = Analysis::of(with_replicas(&[1], 0.06), 0.15);
    let between = analysis.between_replicas().unwrap();
    assert_eq!(between.n_windows, 1);
    let window = between.windows[1].unwrap();
    assert!(window.ratio > 3.0, "{window:?}");
    assert!((0.2..0.9).contains(&window.replicated_part), "{window:?}");
    // The windows with a single run keep the part of their batches.
    let from_influences = analysis.bootstrap(200).windows[1].uncertainty.unwrap().standard_error;
    let expected = from_influences * (1.0 + window.replicated_part * (window.ratio.powi(2) - 1.0)).sqrt();
    // 200 replicates know their error to 1/√400.
    let bound = tolerance::STANDARD_ERRORS / 400.0_f64.sqrt();
    assert!((window.uncertainty.standard_error / expected - 1.0).abs() < bound, "{window:?} against {expected}");
}

#[test]
fn single_runs_have_nothing_between_them() {
    assert_eq!(Analysis::of(with_replicas(&[], 0.0), 0.15).between_replicas(), None);
}
