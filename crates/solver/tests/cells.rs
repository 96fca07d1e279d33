//! Bins, cells and the condenser.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{axis, bias, condense};
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Bias, Harmonic, Term};
use spandrel_solver::condense::{
    BinGrid, BinGridError, CellLattice, CellScheme, Cells, CondenseError, Condenser, required_level,
};
use spandrel_solver::ensemble::{Ensemble, EnsembleError, WindowData};
use spandrel_testkit::{Correlation, Restraint, stream, tolerance};
use std::sync::Arc;

fn series(n_samples: usize) -> Vec<f64> {
    let mut generator = stream(21, 4);
    Correlation::Exponential { time: 6.0 }.sample_latent(n_samples, &mut generator)
}

#[test]
fn decimal_numbers_on_an_edge_fall_into_the_bin_above_it() {
    for (width, decimals) in [(0.1, 1), (0.005, 3), (0.05, 2), (0.2, 1), (0.025, 3)] {
        let bins = BinGrid::new(0, 0.0, width, None).unwrap();
        for i in -300_i32..300 {
            let edge: f64 = format!("{:.decimals$}", f64::from(i) * width).parse().unwrap();
            assert_eq!(bins.bin_of(edge), Some(i64::from(i)), "{edge} with bins of {width}");
        }
    }
}

#[test]
fn images_of_a_position_fall_into_the_same_bin() {
    let bins = BinGrid::new(0, -180.0, 7.5, Some(360.0)).unwrap();
    assert_eq!(bins.n_bins_in_period(), Some(48));
    for x in [-180.0, -0.1, 3.3, 179.999] {
        for turns in [-2.0, -1.0, 1.0, 3.0] {
            assert_eq!(bins.bin_of(x + 360.0 * turns), bins.bin_of(x));
        }
    }
    assert_eq!(bins.bin_of(180.0), Some(0));
    // The largest number below the end of the period rounds to the end, which is the beginning.
    assert_eq!(bins.bin_of(180.0_f64.next_down()), Some(0));
}

#[test]
fn positions_out_of_reach_and_impossible_bins_are_refused() {
    let bins = BinGrid::new(0, 0.0, 0.5, None).unwrap();
    assert_eq!(bins.bin_of(f64::NAN), None);
    assert_eq!(bins.bin_of(f64::INFINITY), None);
    assert_eq!(bins.bin_of(3e6), None);
    assert!(matches!(BinGrid::new(0, 0.0, 0.0, None), Err(BinGridError::NotFinite { .. })));
    assert!(matches!(BinGrid::new(0, f64::NAN, 0.3, None), Err(BinGridError::NotFinite { .. })));
    assert_eq!(BinGrid::new(0, 0.0, 7.0, Some(360.0)), Err(BinGridError::PeriodNotWhole { period: 360.0, width: 7.0 }));
}

#[test]
fn a_stretch_touches_the_bins_that_it_reaches_into_and_no_others() {
    let bins = BinGrid::new(0, 0.0, 0.1, None).unwrap();
    assert_eq!(bins.touched_by(0.3, 0.5), Some((3, 2)));
    assert_eq!(bins.touched_by(0.31, 0.5), Some((3, 2)));
    assert_eq!(bins.touched_by(0.3, 0.51), Some((3, 3)));
    assert_eq!(bins.touched_by(0.5, 0.3), None);
    assert_eq!(bins.touched_by(f64::NAN, 0.3), None);
    let around = BinGrid::new(0, -180.0, 5.0, Some(360.0)).unwrap();
    assert_eq!(around.touched_by(170.0, 190.0), Some((70, 4)));
    assert_eq!(around.touched_by(-180.0, 180.0), Some((0, 72)));
    assert_eq!(around.touched_by(-180.0, 185.0), None);
}

#[test]
fn coarsening_gives_the_very_bytes_of_coarser_cells() {
    let axis = axis(None);
    let bias = bias(&Restraint::Harmonic { center: 0.3, force_constant: 1.7 }, &axis);
    let bins = BinGrid::new(0, -0.2, 0.37, None).unwrap();
    let breaks = [0.11, -1.3, 0.9];
    let on =
        |level| condense(&CellScheme::lattice(CellLattice::new(bins, level, &breaks)), &axis, &bias, &series(5000));
    let coarse = on(2);
    assert_eq!(on(7).coarsened(4).coarsened(2), coarse);
    assert_eq!(coarse.clone().coarsened(5), coarse);
}

#[test]
fn groups_number_64_to_128_hold_powers_of_two_and_lose_no_sample() {
    let axis = axis(None);
    let bias = bias(&Restraint::None, &axis);
    let bins = BinGrid::new(0, 0.0, 0.5, None).unwrap();
    let scheme = CellScheme::lattice(CellLattice::new(bins, 3, &[]));
    for n in [1_usize, 63, 128, 129, 1000, 20_000, 20_001] {
        let values = series(n);
        let run = condense(&scheme, &axis, &bias, &values);
        assert!(run.groups.len() == n || (64..=128).contains(&run.groups.len()), "{n}: {} groups", run.groups.len());
        assert_eq!(run.groups.iter().map(|group| group.n_samples).sum::<u64>(), n as u64);
        let length = run.groups[0].n_samples;
        assert!(length.is_power_of_two());
        let (last, others) = run.groups.split_last().unwrap();
        assert!(others.iter().all(|group| group.n_samples == length) && last.n_samples < 2 * length);

        // Each group counts its own stretch of time.
        let Cells::Lattice { cells, .. } = &run.cells else { unreachable!("cells of a lattice") };
        let mut rest = values.as_slice();
        for group in &run.groups {
            let (stretch, later) = rest.split_at(usize::try_from(group.n_samples).unwrap());
            rest = later;
            for &(cell, count) in &group.entries {
                let lattice = cells[cell as usize].key.lattice;
                let low = 0.0625 * lattice as f64;
                let inside = stretch.iter().filter(|&&x| low <= x && x < low + 0.0625).count();
                assert_eq!(inside as u64, u64::from(count));
            }
        }
    }
}

#[test]
fn a_cell_stands_at_the_mean_position_of_its_samples() {
    let axis = axis(None);
    let bias = bias(&Restraint::None, &axis);
    let bins = BinGrid::new(0, 0.0, 1.0, None).unwrap();
    let scheme = CellScheme::lattice(CellLattice::new(bins, 0, &[0.5]));
    let run = condense(&scheme, &axis, &bias, &[0.1, 0.2, 0.45, 0.75, 2.5]);
    let data = WindowData { name: "w".into(), bias, weight: 1.0, replicas: vec![run] };
    let ensemble = Ensemble::assemble(&[axis], bins, vec![data]).unwrap();
    let positions: Vec<f64> = (0..ensemble.points.len()).map(|i| ensemble.points.position(i)[0]).collect();
    assert_eq!(positions.len(), 3);
    for (found, expected) in positions.iter().zip([0.25, 0.75, 2.5]) {
        // A fixed-point step is 2⁻⁴⁰ of a bin, 9e-13.
        assert!((found - expected).abs() < 1e-12, "{found} against {expected}");
    }
}

#[test]
fn cells_are_fine_enough_for_the_error_asked_for_and_not_finer_than_twice_that() {
    for (bin_width, steepness, cell_error) in [(0.05, 1e3, 1e-5), (3.0, 440.0, 1e-4), (0.2, 7.0, 1e-3)] {
        let level = required_level(bin_width, steepness, cell_error);
        let error = |level: i32| (bin_width * 0.5_f64.powi(level)).powi(2) * steepness / 24.0;
        let level = i32::try_from(level).unwrap();
        assert!(error(level) <= cell_error && error(level - 1) > cell_error, "level {level}");
    }
    assert_eq!(required_level(0.01, 0.0, 1e-5), 0);
}

#[test]
fn axes_that_do_not_fit_are_refused() {
    let one = axis(None);
    let two = [one.clone(), Axis::new("y", PositionUnit::Nanometer, None).unwrap()];
    let bins = BinGrid::new(0, 0.0, 0.5, None).unwrap();
    let lattice = CellScheme::lattice(CellLattice::new(bins, 1, &[]));
    let of_one = bias(&Restraint::None, &one);
    let of_two = Bias::new(Arc::from(two.clone()), Vec::new()).unwrap();
    assert!(matches!(Condenser::new(&lattice, &two, &of_two), Err(CondenseError::Axes { n_axes: 2 })));
    let beyond = CellScheme::Samples(BinGrid::new(2, 0.0, 0.5, None).unwrap());
    assert!(matches!(Condenser::new(&beyond, &two, &of_two), Err(CondenseError::Axes { .. })));

    let run = condense(&lattice, &one, &of_one, &[0.1, 0.3]);
    let data = |name: &str, replica| WindowData {
        name: name.into(),
        bias: of_one.clone(),
        weight: 1.0,
        replicas: vec![replica],
    };
    let refused = Ensemble::assemble(&two, bins, vec![data("a", run.clone())]);
    assert_eq!(refused, Err(EnsembleError::Axes { window: "a".into(), n_axes: 2 }));
    let finer = condense(&CellScheme::lattice(CellLattice::new(bins, 2, &[])), &one, &of_one, &[0.1]);
    let mixed = Ensemble::assemble(std::slice::from_ref(&one), bins, vec![data("a", run.clone()), data("b", finer)]);
    assert_eq!(mixed, Err(EnsembleError::MixedCells { window: "b".into() }));
    assert_eq!(Ensemble::assemble(std::slice::from_ref(&one), bins, vec![]), Err(EnsembleError::NoWindows));
    let empty = condense(&lattice, &one, &of_one, &[]);
    let refused = Ensemble::assemble(std::slice::from_ref(&one), bins, vec![data("e", empty)]);
    assert_eq!(refused, Err(EnsembleError::NoSamples { window: "e".into() }));
    let weightless = WindowData { weight: f64::NAN, ..data("n", run) };
    assert!(matches!(Ensemble::assemble(&[one], bins, vec![weightless]), Err(EnsembleError::Weight { .. })));
}

#[test]
fn two_axes_with_one_cell_a_sample_give_the_same_profile_as_one_when_the_second_is_idle() {
    let first = axis(None);
    let second = Axis::new("y", PositionUnit::Nanometer, None).unwrap();
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let shape = |center: f64| Term { axis: 0, shape: Harmonic::new(center, 2.1).unwrap().into() };
    let solve_on = |axes: &[Axis]| {
        let data = [-0.4, 0.5].iter().enumerate().map(|(k, &center)| {
            let bias = Bias::new(Arc::from(axes.to_vec()), vec![shape(center)]).unwrap();
            let scheme = CellScheme::Samples(bins);
            let mut condenser = Condenser::new(&scheme, axes, &bias).unwrap();
            for (i, x) in series(800).into_iter().enumerate() {
                let row = [center + 0.6 * x, (i as f64 * 0.1).cos()];
                condenser.push(&row[..axes.len()]).unwrap();
            }
            let run = condenser.finish();
            WindowData { name: format!("w{k}"), bias, weight: 1.0, replicas: vec![run] }
        });
        let ensemble = Ensemble::assemble(axes, bins, data.collect()).unwrap();
        common::solved(&ensemble, &spandrel_solver::solve::SolveOptions::default()).free_energies[1]
    };
    let (one, two) = (solve_on(std::slice::from_ref(&first)), solve_on(&[first.clone(), second]));
    assert!((one - two).abs() < tolerance::SOLVERS, "{one} against {two}");
}
