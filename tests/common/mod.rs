//! From series under known biases to a solution, and statements about many numbers at once.
#![allow(dead_code, reason = "each test file uses its own part")]
#![allow(clippy::unwrap_used, reason = "a test may fail loudly")]

use nalgebra::{DMatrix, DVector};
use spandrel_bias::{Axis, Bias};
use spandrel_solver::condense::{
    BinGrid, CellLattice, CellScheme, CondensedReplica, Condenser, DEFAULT_CELL_ERROR, required_level,
};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::influence::Influence;
use spandrel_solver::solve::{Links, Solution, SolveOptions, solve};
use statrs::distribution::{ChiSquared, ContinuousCDF, FisherSnedecor};
use std::ops::ControlFlow;

/// Two-sided probability outside of which a statement fails: under a fixed seed a right program does so once in 5000 statements.
pub const UNLIKELY: f64 = 1e-4;
/// Probability below which a statement is plainly false.
pub const REFUSED: f64 = 1e-6;
/// Halvings of a bin before its cells are coarsened to what the rule asks.
const FINEST_LEVEL: u32 = 12;

/// An ensemble with its solution.
pub struct Solved {
    pub ensemble: Ensemble,
    pub links: Links,
    pub solution: Solution,
    pub influence: Influence,
}

impl Solved {
    /// One series a window, on the cells that the program would choose.
    pub fn of(axis: &Axis, bins: BinGrid, biases: &[Bias], series: &[Vec<f64>]) -> Self {
        let breaks: Vec<f64> = biases.iter().flat_map(|bias| bias.breakpoints(0)).collect();
        let scheme = CellScheme::lattice(CellLattice::new(bins, FINEST_LEVEL, &breaks));
        let axes = [axis.clone()];
        let condense = |bias: &Bias, samples: &[f64]| {
            let mut condenser = Condenser::new(&scheme, &axes, bias).unwrap();
            for &x in samples {
                condenser.push(&[x]).unwrap();
            }
            condenser.finish()
        };
        let fine: Vec<CondensedReplica> =
            biases.iter().zip(series).map(|(bias, samples)| condense(bias, samples)).collect();
        let steepness = biases
            .iter()
            .zip(&fine)
            .map(|(bias, replica)| bias.largest_curvature(0).max(replica.mean_squared_slope[0]))
            .fold(0.0, f64::max);
        let level = required_level(bins.width(), steepness, DEFAULT_CELL_ERROR);
        assert!(level <= FINEST_LEVEL, "{level}");
        let windows = biases
            .iter()
            .zip(fine)
            .enumerate()
            .map(|(k, (bias, replica))| WindowData {
                name: format!("w{k}"),
                bias: bias.clone(),
                weight: 1.0,
                replicas: vec![replica.coarsened(level)],
            })
            .collect();
        let ensemble = Ensemble::assemble(&axes, bins, windows).unwrap();
        let links = Links::find(&ensemble);
        let options = SolveOptions::default();
        let solution = solve(&ensemble, &links, &options, &mut |_, _| ControlFlow::Continue(())).unwrap();
        let influence = Influence::of(&ensemble, &solution).unwrap();
        Self { ensemble, links, solution, influence }
    }

    /// Degrees of freedom of the least of the windows' parts of any covariance: its batches less one.
    pub fn fewest_degrees(&self) -> f64 {
        let batches = self.ensemble.streams.iter().map(|stream| stream.batches.unwrap().n_batches);
        batches.min().unwrap() as f64 - 1.0
    }
}

/// What the misses of many numbers say together: T² = dᵀ S⁻¹ d (Hotelling 1931).
///
/// S is a sum of parts, one a window, each from the window's own batches. Its degrees of freedom ν = (n + n²)/Σₖ {tr (Sₖ S⁻¹)² + (tr Sₖ
/// S⁻¹)²}/νₖ (Krishnamoorthy & Yu 2004) lie between the least νₖ and their sum, whatever the parts are. So the probability of a T² at least
/// as large lies between that of χ² with n degrees of freedom, at any number of batches, and that of F with n and ν − n + 1 degrees at
/// T² (ν − n + 1)/(ν n), at the least ν. n is kept well below that, so that S has full rank and the two lie close.
#[derive(Debug)]
pub struct Joint {
    pub n: usize,
    pub t_squared: f64,
    /// Probability at the least degrees of freedom.
    pub at_least_degrees: f64,
    /// Probability at any number of them.
    pub at_any_degrees: f64,
}

impl Joint {
    /// `fewest_degrees` is the least of the νₖ.
    pub fn of(misses: &[f64], covariance: &DMatrix<f64>, fewest_degrees: f64) -> Self {
        let n = misses.len();
        let misses = DVector::from_column_slice(misses);
        let factor = covariance.clone().cholesky().expect("a covariance of full rank");
        let t_squared = misses.dot(&factor.solve(&misses));
        let (size, rest) = (n as f64, fewest_degrees - n as f64 + 1.0);
        let ratio = t_squared * rest / (fewest_degrees * size);
        Self {
            n,
            t_squared,
            at_least_degrees: FisherSnedecor::new(size, rest).unwrap().sf(ratio),
            at_any_degrees: ChiSquared::new(size).unwrap().sf(t_squared),
        }
    }

    /// Neither too large, even at the least degrees of freedom, nor too small, even at any number of them.
    pub fn is_likely(&self) -> bool {
        self.at_least_degrees >= UNLIKELY && self.at_any_degrees <= 1.0 - UNLIKELY
    }

    /// Too large beyond doubt.
    pub fn is_refused(&self) -> bool {
        self.at_least_degrees < REFUSED
    }
}

pub fn is_likely(probability: f64) -> bool {
    (UNLIKELY..=1.0 - UNLIKELY).contains(&probability)
}

/// Number of independent normal numbers whose mean square spreads as much as that of the numbers with these covariances, each in units of
/// its own standard error: n²/Σ ρ², since squares of jointly normal numbers correlate by ρ². Counts of |z| below a bound correlate by no
/// more (Lancaster 1957).
pub fn independent_number(covariance: &DMatrix<f64>) -> f64 {
    let n = covariance.nrows();
    let squared_correlation =
        |i: usize, j: usize| covariance[(i, j)].powi(2) / (covariance[(i, i)] * covariance[(j, j)]);
    let sum: f64 = (0..n).flat_map(|i| (0..n).map(move |j| (i, j))).map(|(i, j)| squared_correlation(i, j)).sum();
    (n * n) as f64 / sum
}

/// Misses in standard errors.
pub fn z_scores(misses: &[f64], covariance: &DMatrix<f64>) -> Vec<f64> {
    misses.iter().enumerate().map(|(i, miss)| miss / covariance[(i, i)].sqrt()).collect()
}

pub fn mean_square(values: &[f64]) -> f64 {
    values.iter().map(|x| x * x).sum::<f64>() / values.len() as f64
}

pub fn largest_magnitude(values: &[f64]) -> f64 {
    values.iter().fold(0.0, |largest, x| x.abs().max(largest))
}

/// Probability of a mean square of `independent` standard normal numbers at least this large.
pub fn probability_of_mean_square(mean_square: f64, independent: f64) -> f64 {
    ChiSquared::new(independent).unwrap().sf(independent * mean_square)
}

/// Differences of neighboring numbers.
pub fn neighbor_differences(values: &[f64]) -> Vec<f64> {
    values.windows(2).map(|pair| pair[1] - pair[0]).collect()
}

/// Covariance of the differences of neighboring numbers.
pub fn neighbor_covariance(covariance: &DMatrix<f64>) -> DMatrix<f64> {
    let n = covariance.nrows() - 1;
    DMatrix::from_fn(n, n, |i, j| {
        covariance[(i + 1, j + 1)] + covariance[(i, j)] - covariance[(i + 1, j)] - covariance[(i, j + 1)]
    })
}

/// Numbers less their mean.
pub fn centered(values: &[f64]) -> Vec<f64> {
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    values.iter().map(|x| x - mean).collect()
}

/// Covariance of numbers less their mean.
pub fn centered_covariance(covariance: &DMatrix<f64>) -> DMatrix<f64> {
    let n = covariance.nrows() as f64;
    let projector = DMatrix::identity(covariance.nrows(), covariance.nrows()).add_scalar(-1.0 / n);
    &projector * covariance * &projector
}
