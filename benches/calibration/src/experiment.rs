//! A system prepared for replicate experiments, and one of them from its samples to its profile.

use crate::error::CalibrationError;
use crate::method::Method;
use crate::outcome::{Outcome, Refusal, Replicate};
use crate::settings::Weighting;
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Bias, Harmonic, Linear, PeriodicHarmonic, Shape, Term};
use spandrel_solver::condense::{BinGrid, CellLattice, CellScheme, Condenser, DEFAULT_CELL_ERROR, required_level};
use spandrel_solver::ensemble::{Ensemble, WindowData};
use spandrel_solver::influence::Influence;
use spandrel_solver::profile::{Profile, ProfileError, ProfileRequest, Zero};
use spandrel_solver::solve::{Links, Solution, SolveError, SolveOptions, solve};
use spandrel_testkit::{Case, KnownSystem, Restraint};
use std::ops::ControlFlow;
use std::sync::Arc;

/// Steps of the sum that gives a window's mean squared bias slope: a cell level is a power of two, so a coarse sum will do.
const SLOPE_STEPS: u32 = 1000;

/// A system with all that its replicates share.
#[derive(Debug, Clone)]
pub struct Experiment {
    case: Case,
    axis: Axis,
    biases: Vec<Bias>,
    weights: Vec<f64>,
    scheme: CellScheme,
    bins: BinGrid,
    zero: usize,
    scored: Vec<usize>,
    /// Exact free-energy differences of the scored bins from the zero, kT.
    exact: Vec<f64>,
}

/// A replicate with its solution, for methods to draw errors from.
#[derive(Debug, Clone)]
pub struct Solved {
    /// The windows on shared points.
    pub ensemble: Ensemble,
    /// Their reduced free energies.
    pub solution: Solution,
    /// Influences of the samples.
    pub influence: Influence,
    /// The profile on the bins of the case, with its errors.
    pub profile: Profile,
}

impl Experiment {
    /// Prepares a case: cells as fine as the production rule asks for, the zero at the best sampled bin of the middle third, and every
    /// second bin from there scored.
    ///
    /// # Errors
    /// Restraints that the solver has no shape for, or fewer than three bins.
    pub fn new(case: Case, weighting: Weighting) -> Result<Self, CalibrationError> {
        let system = &case.system;
        let n_bins = case.edges.len().saturating_sub(1);
        if n_bins < 3 {
            return Err(CalibrationError::TooFewBins { n_bins });
        }
        let axis = Axis::new("x", PositionUnit::None, system.period())?;
        let width = (case.edges[n_bins] - case.edges[0]) / n_bins as f64;
        let bins = BinGrid::new(0, case.edges[0], width, system.period())?;
        let windows = system.windows().iter().enumerate();
        let biases = windows.map(|(k, window)| bias(k, &window.restraint, &axis)).collect::<Result<Vec<_>, _>>()?;
        let breaks: Vec<f64> = biases.iter().flat_map(|bias| bias.breakpoints(0)).collect();
        let level = required_level(width, steepness(&case, &biases), DEFAULT_CELL_ERROR);
        let zero = best_sampled(&case, n_bins / 3..n_bins - n_bins / 3);
        let scored: Vec<usize> = (zero % 2..n_bins).step_by(2).filter(|&bin| bin != zero).collect();
        let free_energy = |bin: usize| -system.probability(case.edges[bin], case.edges[bin + 1]).ln();
        Ok(Self {
            axis,
            weights: system.windows().iter().map(|window| weighting.of(window)).collect(),
            scheme: CellScheme::lattice(CellLattice::new(bins, level, &breaks)),
            bins,
            zero,
            exact: scored.iter().map(|&bin| free_energy(bin) - free_energy(zero)).collect(),
            scored,
            biases,
            case,
        })
    }

    /// The case.
    #[must_use]
    pub fn case(&self) -> &Case {
        &self.case
    }

    /// Number of the bin that is zero.
    #[must_use]
    pub fn zero(&self) -> usize {
        self.zero
    }

    /// Numbers of the scored bins.
    #[must_use]
    pub fn scored(&self) -> &[usize] {
        &self.scored
    }

    /// Middle of a bin, in the unit of the system.
    #[must_use]
    pub fn center(&self, bin: usize) -> f64 {
        f64::midpoint(self.case.edges[bin], self.case.edges[bin + 1])
    }

    /// Samples, solves and scores replicate number `replicate` of `seed`.
    ///
    /// # Errors
    /// What no replicate should meet; a refusal that users meet too is an outcome.
    pub fn run(&self, seed: u64, replicate: u64) -> Result<Replicate, CalibrationError> {
        Ok(self.solved(&self.case.system.sample_all(seed, replicate))?.map(|solved| self.outcome(&solved)))
    }

    /// From series (one a window) to a profile, as any data would go.
    ///
    /// # Errors
    /// As [`Self::run`].
    pub fn solved(&self, series: &[Vec<f64>]) -> Result<Result<Solved, Refusal>, CalibrationError> {
        let ensemble = self.ensemble(series)?;
        let solution = match solve(&ensemble, &Links::find(&ensemble), &SolveOptions::default(), &mut |_, _| {
            ControlFlow::Continue(())
        }) {
            Ok(solution) => solution,
            Err(SolveError::NotLinked(_)) => return Ok(Err(Refusal::NotLinked)),
            Err(SolveError::NotConverged { .. } | SolveError::Interrupted) => return Ok(Err(Refusal::NotConverged)),
        };
        let Some(influence) = Influence::of(&ensemble, &solution) else { return Ok(Err(Refusal::NotConverged)) };
        let request = ProfileRequest {
            first_bin: Some(0),
            last_bin: i64::try_from(self.case.edges.len() - 2).ok(),
            zero: Zero::Position { position: self.center(self.zero) },
        };
        match Profile::draw(&ensemble, &influence, &request) {
            Ok(profile) => Ok(Ok(Solved { ensemble, solution, influence, profile })),
            Err(ProfileError::ZeroNotSampled { .. }) => Ok(Err(Refusal::ZeroNotSampled)),
            Err(other) => Err(other.into()),
        }
    }

    fn ensemble(&self, series: &[Vec<f64>]) -> Result<Ensemble, CalibrationError> {
        let axes = std::slice::from_ref(&self.axis);
        let mut windows = Vec::with_capacity(series.len());
        for (k, ((bias, samples), &weight)) in self.biases.iter().zip(series).zip(&self.weights).enumerate() {
            let mut condenser = Condenser::new(&self.scheme, axes, bias)?;
            for &x in samples {
                condenser.push(&[x])?;
            }
            let replicas = vec![condenser.finish()];
            windows.push(WindowData { name: k.to_string(), bias: bias.clone(), weight, replicas });
        }
        Ok(Ensemble::assemble(axes, self.bins, windows)?)
    }

    fn outcome(&self, solved: &Solved) -> Outcome {
        let miss = |(&bin, exact): (&usize, &f64)| Some(solved.profile.bins[bin].free_energy? - exact);
        Outcome {
            misses: self.scored.iter().zip(&self.exact).map(miss).collect(),
            error_bars: Method::ALL.iter().map(|method| method.error_bars(solved, &self.scored)).collect(),
        }
    }
}

fn bias(window: usize, restraint: &Restraint, axis: &Axis) -> Result<Bias, CalibrationError> {
    let shape: Option<Shape> = match *restraint {
        Restraint::None => None,
        Restraint::Harmonic { center, force_constant } if axis.period().is_some() => {
            Some(PeriodicHarmonic::new(center, force_constant)?.into())
        }
        Restraint::Harmonic { center, force_constant } => Some(Harmonic::new(center, force_constant)?.into()),
        Restraint::Linear { slope } => Some(Linear::new(slope)?.into()),
        Restraint::Custom(_) => return Err(CalibrationError::Restraint { window, found: format!("{restraint:?}") }),
    };
    let terms = shape.into_iter().map(|shape| Term { axis: 0, shape }).collect();
    Ok(Bias::new(Arc::from([axis.clone()]), terms)?)
}

/// Largest over the windows of max(expected b′², largest |b″|): what the rule for the cells takes from data, from the exact
/// distributions.
fn steepness(case: &Case, biases: &[Bias]) -> f64 {
    let mean_squared_slope = |(k, bias): (usize, &Bias)| {
        let mut gradient = [0.0];
        let sum: f64 = (0..SLOPE_STEPS)
            .map(|i| {
                let x = case.system.window_quantile(k, (f64::from(i) + 0.5) / f64::from(SLOPE_STEPS));
                // Only tables have positions without a slope, and no restraint here is one.
                bias.gradient(&[x], &mut gradient).map_or(0.0, |()| gradient[0] * gradient[0])
            })
            .sum();
        (sum / f64::from(SLOPE_STEPS)).max(bias.largest_curvature(0))
    };
    biases.iter().enumerate().map(mean_squared_slope).fold(0.0, f64::max)
}

/// The bin with the largest expected number of effective samples, Σₖ Nₖ Pₖ/gₖ.
fn best_sampled(case: &Case, bins: std::ops::Range<usize>) -> usize {
    let effective = |bin: usize| -> f64 {
        let of_window = |(k, window): (usize, &spandrel_testkit::Window)| {
            let probability = case.system.window_probability(k, case.edges[bin], case.edges[bin + 1]);
            window.n_samples as f64 * probability / window.correlation.statistical_inefficiency()
        };
        case.system.windows().iter().enumerate().map(of_window).sum()
    };
    let first = bins.start;
    bins.map(|bin| (bin, effective(bin))).max_by(|a, b| a.1.total_cmp(&b.1)).map_or(first, |(bin, _)| bin)
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::system::System;

    #[test]
    fn cells_are_those_that_the_rule_takes_from_the_data() {
        for system in System::ALL {
            let experiment = Experiment::new(system.case().unwrap(), Weighting::Unit).unwrap();
            let CellScheme::Lattice(lattice) = &experiment.scheme else { panic!("no lattice") };
            let axes = std::slice::from_ref(&experiment.axis);
            let series = experiment.case.system.sample_all(5, 0);
            let steepness = experiment.biases.iter().zip(&series).map(|(bias, samples)| {
                let mut condenser = Condenser::new(&experiment.scheme, axes, bias).unwrap();
                for &x in samples {
                    condenser.push(&[x]).unwrap();
                }
                condenser.finish().mean_squared_slope[0].max(bias.largest_curvature(0))
            });
            let level = required_level(experiment.bins.width(), steepness.fold(0.0, f64::max), DEFAULT_CELL_ERROR);
            // Few effective samples a window scatter the mean squared slope of the steepest one by up to a half, so by one level.
            assert!(level.abs_diff(lattice.level()) <= 1, "{system:?}: {level} against {}", lattice.level());
        }
    }

    #[test]
    fn scored_bins_are_every_second_one_but_the_zero_which_stands_in_the_middle_third() {
        for system in System::ALL {
            let experiment = Experiment::new(system.case().unwrap(), Weighting::Unit).unwrap();
            let n_bins = experiment.case.edges.len() - 1;
            assert!((n_bins / 3..n_bins - n_bins / 3).contains(&experiment.zero()), "{system:?}");
            let scored = experiment.scored();
            assert!(scored.iter().all(|bin| bin.abs_diff(experiment.zero()) % 2 == 0 && *bin != experiment.zero()));
            assert!(scored.len() + 1 >= n_bins / 2, "{system:?}: {scored:?}");
        }
    }

    #[test]
    fn a_system_of_two_bins_is_refused() {
        let case = Case { edges: vec![0.0, 0.03, 0.06], ..System::Independent.case().unwrap() };
        let refused = Experiment::new(case, Weighting::Unit);
        assert!(matches!(refused, Err(CalibrationError::TooFewBins { n_bins: 2 })), "{refused:?}");
    }
}
