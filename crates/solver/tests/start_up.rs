//! Where a run settles, and what is left of it without its beginning.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{axis, bias, condense, solved};
use rand_distr::{Distribution, StandardNormal};
use spandrel_bias::{Axis, Bias};
use spandrel_solver::condense::{BinGrid, CellLattice, CellScheme, Cells, CondensedReplica, StartUp};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::series::{Cascade, Inefficiency, InefficiencyMethod};
use spandrel_solver::solve::SolveOptions;
use spandrel_testkit::{Correlation, Restraint, stream, tolerance};

/// Frames of memory; one independent sample is worth 20.02 of them.
const TIME: f64 = 10.0;

fn system(center: f64) -> (Axis, Bias, BinGrid) {
    let axis = axis(None);
    let bias = bias(&Restraint::Harmonic { center, force_constant: 1.3 }, &axis);
    (axis, bias, BinGrid::new(0, -0.2, 0.37, None).unwrap())
}

fn run(series: &[f64]) -> CondensedReplica {
    let (axis, bias, bins) = system(0.3);
    condense(&CellScheme::lattice(CellLattice::new(bins, 4, &[])), &axis, &bias, series)
}

/// A stationary series worth `effective` independent samples, then changed by `change(value, fraction of the run)`.
fn series(effective: f64, number: u64, change: impl Fn(f64, f64) -> f64) -> Vec<f64> {
    let memory = Correlation::Exponential { time: TIME };
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a small positive number")]
    let n = (memory.statistical_inefficiency() * effective) as usize;
    let z = memory.sample_latent(n, &mut stream(71, number));
    z.iter().enumerate().map(|(t, z)| change(*z, t as f64 / n as f64)).collect()
}

fn judged(effective: f64, runs: u64, change: impl Fn(f64, f64) -> f64 + Copy) -> Vec<(StartUp, CondensedReplica)> {
    (0..runs)
        .map(|number| {
            let replica = run(&series(effective, number, change));
            (StartUp::of(&replica).unwrap(), replica)
        })
        .collect()
}

fn share(judged: &[(StartUp, CondensedReplica)], of: impl Fn(&StartUp) -> f64) -> f64 {
    judged.iter().map(|(start, _)| of(start)).sum::<f64>() / judged.len() as f64
}

fn share_dropped(start: &StartUp, replica: &CondensedReplica) -> f64 {
    start.samples_dropped as f64 / replica.n_samples as f64
}

/// Claims of [`StartUp`]: a share of stationary runs of at most so many not to settle, and to be cut with evidence. The bounds carry 4.5
/// binomial standard errors.
#[test]
fn stationary_runs_settle_and_are_seldom_cut_with_evidence() {
    for (effective, unsettled, evident) in [(12.0, 0.003, 0.08), (35.0, 0.0005, 0.05), (70.0, 0.0005, 0.03)] {
        let runs = 400_u32;
        let found = judged(effective, u64::from(runs), |z, _| z);
        let most = |rate: f64| rate + tolerance::STANDARD_ERRORS * (rate * (1.0 - rate) / f64::from(runs)).sqrt();
        let rate = share(&found, |start| f64::from(u8::from(!start.settles)));
        assert!(rate <= most(unsettled), "{effective}: {rate} do not settle");
        let rate = share(&found, |start| f64::from(u8::from(start.evident)));
        assert!(rate <= most(evident), "{effective}: {rate} cut with evidence");
        assert!(found.iter().all(|(start, _)| start.effective_after >= start.effective_before));
        assert!(found.iter().all(|(start, replica)| 2 * start.groups_dropped <= replica.groups.len()));
    }
}

/// Three relaxation times in the first 30 % of the run: exp(−3) of the drift is left at their end.
#[test]
fn a_planted_relaxation_is_found_and_mostly_removed() {
    for (effective, size) in [(70.0, 4.0), (300.0, 3.0)] {
        let found = judged(effective, 100, |z, u| z + size * (-u / 0.1).exp());
        let evident = share(&found, |start| f64::from(u8::from(start.evident)));
        assert!(evident > 0.9, "{effective}: {evident}");
        let settled = share(&found, |start| f64::from(u8::from(start.settles)));
        assert!(settled > 0.9, "{effective}: {settled}");
        let (mut before, mut after, mut dropped) = (0.0, 0.0, 0.0);
        for (start, replica) in &found {
            let kept = replica.without_leading_groups(start.groups_dropped);
            assert_eq!(replica.n_samples - kept.n_samples, start.samples_dropped);
            before += replica.mean_position(0).unwrap() / 100.0;
            after += kept.mean_position(0).unwrap() / 100.0;
            dropped += share_dropped(start, replica) / 100.0;
        }
        assert!((0.1..0.35).contains(&dropped), "{effective}: {dropped} dropped");
        assert!(after < before / 4.0, "{effective}: bias {before} before and {after} after");
    }
}

#[test]
fn a_run_that_drifts_to_its_end_does_not_settle() {
    for (effective, size) in [(35.0, 7.0), (70.0, 4.0), (300.0, 3.0)] {
        let found = judged(effective, 60, |z, u| z - size * u);
        let unsettled = share(&found, |start| f64::from(u8::from(!start.settles)));
        assert!(unsettled > 0.85, "{effective}: {unsettled}");
        assert!(found.iter().all(|(start, replica)| 2 * start.groups_dropped <= replica.groups.len()));
    }
}

/// A spread that shrinks leaves the mean of the axis where it is; the energy of the bias tells.
#[test]
fn the_bias_energy_shows_what_the_mean_position_does_not() {
    let found = judged(70.0, 60, |z, u| 0.3 + z * (1.0 + 3.0 * (-u / 0.1).exp()));
    let by_energy = share(&found, |start| f64::from(u8::from(start.channel == 1 && start.evident)));
    assert!(by_energy > 0.8, "{by_energy}");
}

#[test]
fn a_run_without_its_beginning_counts_what_the_rest_alone_would() {
    let mut values = series(1000.0, 3, |z, u| z + 4.0 * (-u / 0.05).exp());
    values.truncate(20_000);
    let whole = run(&values);
    // 312 blocks of 64 and 78 groups of 256; without eight groups the rest alone has blocks and groups of the same lengths.
    let kept = whole.without_leading_groups(8);
    let alone = run(&values[8 * 256..]);
    assert_eq!((alone.blocks.block_length(), alone.groups[0].n_samples), (64, 256));
    assert_eq!((kept.n_samples, kept.groups.len()), (17_952, 70));
    assert!(kept.groups == alone.groups, "groups differ");
    assert_eq!(kept.blocks.n_blocks(), alone.blocks.n_blocks());
    for channel in 0..2 {
        for (found, expected) in kept.blocks.channel(channel).iter().zip(alone.blocks.channel(channel)) {
            // Blocks are summed as one or merged from halves, as the length of the run has it.
            assert!((found - expected).abs() < tolerance::SUMMATION_ORDER, "{found} against {expected}");
        }
    }

    let (Cells::Lattice { cells, .. }, Cells::Lattice { cells: expected, .. }) = (&kept.cells, &alone.cells) else {
        unreachable!("cells of a lattice")
    };
    assert_eq!(cells.len(), expected.len());
    let Cells::Lattice { cells: of_whole, .. } = &whole.cells else { unreachable!("cells of a lattice") };
    assert!(cells.len() < of_whole.len());
    for (found, expected) in cells.iter().zip(expected) {
        assert_eq!((found.key, found.count), (expected.key, expected.count));
        // Still within its own cell: 2⁴⁰ steps a bin, 2⁴ cells a bin.
        let mean = found.position_sum.div_euclid(i128::from(found.count));
        assert_eq!(mean >> 36, i128::from(found.key.lattice));
    }

    for (channel, (found, expected)) in kept.channels.iter().zip(&alone.channels).enumerate() {
        assert_eq!(found.count(), expected.count());
        assert!((found.mean().unwrap() - expected.mean().unwrap()).abs() < tolerance::SUMMATION_ORDER);
        assert_eq!(found.levels().len(), expected.levels().len());
        for (level, (of_kept, of_alone)) in found.levels().iter().zip(expected.levels()).enumerate() {
            assert_eq!(of_kept.count, of_alone.count);
            let variances = [of_kept.population_variance(), of_alone.population_variance()];
            // From level 6 on a value is a whole block; below it the spread within blocks is that of the whole run, which for the energy
            // of a run that comes from afar is larger than that of the rest.
            let allowed = match (level, channel) {
                (6.., _) => 1e-9,
                (_, 0) => 0.05 * variances[1],
                _ => 0.5 * variances[1],
            };
            assert!((variances[0] - variances[1]).abs() < allowed, "level {level}: {variances:?}");
        }
        for level in if channel == 0 { 0..8 } else { 6..8 } {
            let of = |sums: &Cascade| sums.lag_one_autocorrelation(level).unwrap();
            let allowed = if level >= 6 { 1e-9 } else { 0.05 };
            assert!((of(found) - of(expected)).abs() < allowed, "level {level}: {} {}", of(found), of(expected));
        }
    }
    let slowest = |run: &CondensedReplica| {
        Inefficiency::slowest(&run.blocks, &run.channels[..1], InefficiencyMethod::InitialSequence).unwrap().value
    };
    assert!((slowest(&kept) / slowest(&alone) - 1.0).abs() < 0.05);
    assert_eq!((&kept.reference, &kept.mean_squared_slope), (&whole.reference, &whole.mean_squared_slope));
}

/// The same pattern in every block, blocks at different heights: the variance of the rest is that of the pattern plus that of its heights.
#[test]
fn variance_of_the_rest_is_exact_where_blocks_differ_only_by_their_means() {
    let heights: Vec<f64> = StandardNormal.sample_iter(stream(73, 0)).take(300).map(|z: f64| 2.0 + 0.7 * z).collect();
    let pattern = |i: usize| 1.5 * (i as f64 * 0.9).sin() + 0.1 * i as f64;
    let values: Vec<f64> = heights.iter().flat_map(|h| (0..64).map(move |i| h + pattern(i))).collect();
    let whole = run(&values);
    assert_eq!((whole.blocks.block_length(), whole.groups[0].n_samples), (64, 256));
    for groups in [1, 10, 60] {
        let kept = whole.without_leading_groups(groups);
        let rest = &values[groups * 256..];
        let mean = rest.iter().sum::<f64>() / rest.len() as f64;
        let exact = rest.iter().map(|x| (x - mean).powi(2)).sum::<f64>() / (rest.len() - 1) as f64;
        let found = kept.channels[0].variance().unwrap();
        assert!((found / exact - 1.0).abs() < tolerance::SUMMATION_ORDER, "{groups}: {found} against {exact}");
    }
}

#[test]
fn one_cell_a_sample_leaves_the_samples_of_the_rest() {
    let (axis, bias, bins) = system(0.3);
    let scheme = CellScheme::Samples(bins);
    let values = series(30.0, 5, |z, _| z);
    let whole = condense(&scheme, &axis, &bias, &values);
    let kept = whole.without_leading_groups(9);
    let dropped = 9 * usize::try_from(whole.groups[0].n_samples).unwrap();
    assert_eq!(kept.cells, Cells::Samples { positions: values[dropped..].to_vec(), n_axes: 1 });
    let counted: Vec<(u32, u32)> = kept.groups.iter().flat_map(|group| group.entries.clone()).collect();
    let last = u32::try_from(values.len() - dropped).unwrap();
    assert_eq!(counted, (0..last).map(|cell| (cell, 1)).collect::<Vec<_>>());
}

/// Later stages take the rest as they take any run: the free energy is that of the kept samples alone.
#[test]
fn a_solution_without_beginnings_is_that_of_the_kept_samples() {
    let (axis, _, bins) = system(0.0);
    let centers = [-0.3, 0.6];
    let runs: Vec<Vec<f64>> = (0..).zip(centers).map(|(k, c)| series(200.0, 90 + k, |z, _| c + 0.6 * z)).collect();
    let free_energy = |scheme: &CellScheme, cut: &dyn Fn(&[f64], &Bias) -> CondensedReplica| {
        let windows = runs.iter().zip(centers).map(|(values, center)| {
            let bias = bias(&Restraint::Harmonic { center, force_constant: 1.9 }, &axis);
            let replica = cut(values, &bias);
            WindowData { name: format!("at {center}"), bias, weight: 1.0, replicas: vec![replica] }
        });
        let ensemble = Ensemble::assemble(std::slice::from_ref(&axis), *scheme.bins(), windows.collect()).unwrap();
        assert!(ensemble.windows.iter().all(|window| window.effective_samples > 20.0));
        solved(&ensemble, &SolveOptions::default()).free_energies[1]
    };
    let samples = CellScheme::Samples(bins);
    let kept_samples = |values: &[f64]| {
        let group = 1_usize << (values.len() / 129).ilog2() << 1;
        values[13 * group..].to_vec()
    };
    let expected = free_energy(&samples, &|values, bias| condense(&samples, &axis, bias, &kept_samples(values)));
    let cut = |scheme: &CellScheme| {
        free_energy(scheme, &|values, bias| condense(scheme, &axis, bias, values).without_leading_groups(13))
    };
    assert!((cut(&samples) - expected).abs() < tolerance::SOLVERS);
    let lattice = CellScheme::lattice(CellLattice::new(bins, 7, &[]));
    assert!((cut(&lattice) - expected).abs() < tolerance::CELLS);
}

#[test]
fn the_last_group_always_stays_and_nothing_dropped_changes_nothing() {
    for n in [0, 1, 2, 300] {
        let whole = run(&series(40.0, 7, |z, _| z)[..n]);
        assert_eq!(whole.without_leading_groups(0), whole);
        let least = whole.without_leading_groups(usize::MAX);
        assert_eq!(least.groups.len(), whole.groups.len().min(1));
        assert_eq!(least.n_samples, whole.groups.last().map_or(0, |group| group.n_samples));
        assert!(least.mean_position(0).is_none_or(f64::is_finite));
    }
}

#[test]
fn runs_that_are_short_or_stand_still_are_not_judged_and_no_number_is_broken() {
    assert_eq!(StartUp::of(&run(&[])), None);
    assert_eq!(StartUp::of(&run(&[0.4, 0.7])), None);
    assert_eq!(StartUp::of(&run(&series(40.0, 8, |z, _| z)[..31])), None);
    assert_eq!(StartUp::of(&run(&vec![0.25; 5000])), None);
    let stopped: Vec<f64> = (0..5000).map(|i| f64::from(u8::from(i < 40))).collect();
    let line: Vec<f64> = (0..5000).map(|i| 1e-3 * f64::from(i)).collect();
    let step: Vec<f64> = (0..700).map(|i| f64::from(u8::from(i >= 350))).collect();
    for values in [stopped, line.clone(), step, series(3.0, 9, |z, _| z)[..32].to_vec()] {
        let found = StartUp::of(&run(&values)).unwrap();
        assert!(found.effective_before > 0.0 && found.effective_before.is_finite(), "{found:?}");
        assert!(found.effective_after >= found.effective_before && found.effective_after.is_finite(), "{found:?}");
    }
    assert!(!StartUp::of(&run(&line)).unwrap().settles);
}
