//! From a system with a known answer to an ensemble.
#![allow(dead_code, reason = "each test file uses its own part")]
#![allow(clippy::unwrap_used, reason = "a test may fail loudly")]

use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Bias, Harmonic, Linear, PeriodicHarmonic, Shape, Term};
use spandrel_solver::condense::{
    BinGrid, CellLattice, CellScheme, CondensedReplica, Condenser, DEFAULT_CELL_ERROR, required_level,
};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::solve::{Links, Solution, SolveOptions, solve};
use spandrel_testkit::{KnownSystem, Restraint};
use std::ops::ControlFlow;
use std::sync::Arc;

pub enum CellChoice {
    Lattice,
    Samples,
}

pub fn axis(period: Option<f64>) -> Axis {
    Axis::new("x", PositionUnit::None, period).unwrap()
}

pub fn bias(restraint: &Restraint, axis: &Axis) -> Bias {
    let shape: Option<Shape> = match *restraint {
        Restraint::None => None,
        Restraint::Harmonic { center, force_constant } if axis.period().is_some() => {
            Some(PeriodicHarmonic::new(center, force_constant).unwrap().into())
        }
        Restraint::Harmonic { center, force_constant } => Some(Harmonic::new(center, force_constant).unwrap().into()),
        Restraint::Linear { slope } => Some(Linear::new(slope).unwrap().into()),
        Restraint::Custom(_) => unreachable!("no such restraint in these tests"),
    };
    Bias::new(Arc::from([axis.clone()]), shape.into_iter().map(|shape| Term { axis: 0, shape }).collect()).unwrap()
}

pub fn condense(scheme: &CellScheme, axis: &Axis, bias: &Bias, samples: &[f64]) -> CondensedReplica {
    let axes = [axis.clone()];
    let mut condenser = Condenser::new(scheme, &axes, bias).unwrap();
    for &x in samples {
        condenser.push(&[x]).unwrap();
    }
    condenser.finish()
}

/// Ensemble of series (one a window) under biases, with the cells that the job's rule would choose.
pub fn assemble(axis: &Axis, bins: BinGrid, biases: &[Bias], series: &[Vec<f64>], choice: &CellChoice) -> Ensemble {
    let condensed: Vec<CondensedReplica> = match choice {
        CellChoice::Samples => {
            let scheme = CellScheme::Samples(bins);
            biases.iter().zip(series).map(|(bias, samples)| condense(&scheme, axis, bias, samples)).collect()
        }
        CellChoice::Lattice => {
            let breaks: Vec<f64> = biases.iter().flat_map(|bias| bias.breakpoints(0)).collect();
            let finest = CellScheme::lattice(CellLattice::new(bins, 12, &breaks));
            let fine: Vec<CondensedReplica> =
                biases.iter().zip(series).map(|(bias, samples)| condense(&finest, axis, bias, samples)).collect();
            let steepness = biases
                .iter()
                .zip(&fine)
                .map(|(bias, replica)| bias.largest_curvature(0).max(replica.mean_squared_slope[0]))
                .fold(0.0, f64::max);
            let level = required_level(bins.width(), steepness, DEFAULT_CELL_ERROR);
            fine.into_iter().map(|replica| replica.coarsened(level)).collect()
        }
    };
    let windows = biases
        .iter()
        .zip(condensed)
        .enumerate()
        .map(|(k, (bias, replica))| WindowData {
            name: format!("w{k}"),
            bias: bias.clone(),
            weight: 1.0,
            replicas: vec![replica],
        })
        .collect();
    Ensemble::assemble(std::slice::from_ref(axis), bins, windows).unwrap()
}

/// One replicate experiment on a system, on bins of `width` from `origin`.
pub fn sampled(
    system: &impl KnownSystem,
    period: Option<f64>,
    origin: f64,
    width: f64,
    seed: u64,
    choice: &CellChoice,
) -> Ensemble {
    let axis = axis(period);
    let bins = BinGrid::new(0, origin, width, period).unwrap();
    let biases: Vec<Bias> = system.windows().iter().map(|window| bias(&window.restraint, &axis)).collect();
    assemble(&axis, bins, &biases, &system.sample_all(seed, 0), choice)
}

pub fn solved(ensemble: &Ensemble, options: &SolveOptions) -> Solution {
    let links = Links::find(ensemble);
    solve(ensemble, &links, options, &mut |_, _| ControlFlow::Continue(())).unwrap()
}
