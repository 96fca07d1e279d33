//! Solutions against numbers made by independent programs.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{CellChoice, assemble, axis, solved};
use spandrel_bias::{Bias, Harmonic, Linear, Term};
use spandrel_solver::condense::BinGrid;
use spandrel_solver::ensemble::Ensemble;
use spandrel_solver::influence::Influence;
use spandrel_solver::quantities::free_energy_of_window;
use spandrel_solver::solve::{Method, SolveOptions};
use spandrel_testkit::{Table, tolerance};
use std::sync::Arc;

const SAMPLES: &str = include_str!("../../../tests/reference/dense-likelihood/samples.csv");
const WINDOWS: &str = include_str!("../../../tests/reference/dense-likelihood/windows.csv");
const FREE_ENERGIES: &str = include_str!("../../../tests/reference/dense-likelihood/f.csv");
const COVARIANCE: &str = include_str!("../../../tests/reference/dense-likelihood/covariance_f.csv");

/// The windows of the reference: ½k(x − c)² + s x.
fn dense_case(choice: &CellChoice) -> Ensemble {
    let axis = axis(None);
    // Its kinds are told by the numbers as well.
    let numbers = ["harmonic", "linear", "none"].iter().fold(WINDOWS.to_owned(), |text, kind| text.replace(kind, "0"));
    let windows: Table = numbers.parse().unwrap();
    let column = |name: &str| windows.column(name).unwrap();
    let biases: Vec<Bias> = column("center_nm")
        .into_iter()
        .zip(column("force_constant_kT_per_nm2"))
        .zip(column("slope_kT_per_nm"))
        .map(|((center, force_constant), slope)| {
            let mut terms = Vec::new();
            if force_constant > 0.0 {
                terms.push(Term { axis: 0, shape: Harmonic::new(center, force_constant).unwrap().into() });
            }
            if slope != 0.0 {
                terms.push(Term { axis: 0, shape: Linear::new(slope).unwrap().into() });
            }
            Bias::new(Arc::from([axis.clone()]), terms).unwrap()
        })
        .collect();
    let samples: Table = SAMPLES.parse().unwrap();
    let mut series = vec![Vec::new(); biases.len()];
    for row in samples.rows() {
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a window number")]
        series[row[0] as usize].push(row[1]);
    }
    assemble(&axis, BinGrid::new(0, 0.0, 0.05, None).unwrap(), &biases, &series, choice)
}

/// Dense maximum likelihood by SciPy and, at 50 digits, by mpmath (tests/reference/dense-likelihood).
#[test]
fn free_energies_agree_with_a_dense_solution_by_general_purpose_libraries() {
    let expected = FREE_ENERGIES.parse::<Table>().unwrap().column("f_kT").unwrap();
    let ensemble = dense_case(&CellChoice::Samples);
    for method in [Method::Newton, Method::TrustRegion, Method::SelfConsistent, Method::LimitedMemory] {
        let solution = solved(&ensemble, &SolveOptions { method, ..SolveOptions::default() });
        for (k, (found, expected)) in solution.free_energies.iter().zip(&expected).enumerate() {
            assert!(
                (found - expected).abs() < tolerance::SOLVERS,
                "{method:?}, window {k}: {found} against {expected}"
            );
        }
    }
    let on_cells = solved(&dense_case(&CellChoice::Lattice), &SolveOptions::default());
    for (found, expected) in on_cells.free_energies.iter().zip(&expected) {
        assert!((found - expected).abs() < tolerance::CELLS, "{found} against {expected}");
    }
}

/// Asymptotic covariance for independent samples (Shirts & Chodera 2008) by SciPy (tests/reference/dense-likelihood).
///
/// The influence route estimates it from the samples: a standard deviation that rests on some 200 samples in 100 batches a window is off
/// by 1/√(2·100) = 7 %, and by less where several windows share it; four times that bounds the ratio.
#[test]
fn errors_of_free_energies_agree_with_the_asymptotic_formula_for_independent_samples() {
    let covariance: Table = COVARIANCE.parse().unwrap();
    let ensemble = dense_case(&CellChoice::Samples);
    let solution = solved(&ensemble, &SolveOptions::default());
    let influence = Influence::of(&ensemble, &solution).unwrap();
    for k in 1..ensemble.n_windows() {
        let quantity = free_energy_of_window(&solution.free_energies, k);
        let found = influence.uncertainty(&influence.deviations(&quantity)).standard_error;
        let row = &covariance.rows()[k];
        let expected = row[row.len() - ensemble.n_windows() + k].sqrt();
        assert!((found / expected - 1.0).abs() < 0.28, "window {k}: {found} against {expected}");
    }
}
