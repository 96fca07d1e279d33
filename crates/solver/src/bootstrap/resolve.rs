//! The maximum likelihood of one replicate, from the solution of all counts.

use super::envelope::Factor;
use super::warm_start::WarmStart;
use crate::solve::largest;

/// A replicate is solved when the Newton step of every f is below this, in kT; it is then taken. Errors are larger a thousand times and more.
pub const REPLICATE_TOLERANCE: f64 = 1e-8;

/// A factor from an earlier place serves on while each step is below this part of the one before.
const STEP_GAIN: f64 = 0.1;
/// Largest step, in kT.
const LONGEST_STEP: f64 = 2.0;
/// Below this step, in kT, the curvature hardly changes on the way and a decrease need not be checked: exp(0.1) is 1.1.
const SURE_STEP: f64 = 0.1;
/// Farthest change of an f, in kT, that the shares of the solution serve for: what they leave out, 1e-12 of a point, has then grown to e¹⁰ times that
/// at most. Steps of a bootstrap are a few errors long.
const REACH: f64 = 5.0;
/// Damped Newton steps on a convex function need a few; more than this means that there is no minimum in reach.
const MOST_STEPS: usize = 60;

/// Changes δ of the free energies by row at the maximum likelihood of the weights, in kT.
///
/// The first step is one with the curvature of all counts, which lands close; the curvature is then looked up again whenever the steps do
/// not shrink tenfold. `base` is its factor at the solution.
///
/// `None` if the windows no longer hang together in the replicate, or its minimum is out of reach.
pub(super) fn resolve(warm: &WarmStart, base: &Factor<'_>, weights: &[f64]) -> Option<Vec<f64>> {
    let mut delta = vec![0.0; warm.n_rows()];
    let mut own: Option<Factor<'_>> = None;
    let mut previous = f64::INFINITY;
    for _ in 0..MOST_STEPS {
        let gradient = warm.gradient(weights, &delta);
        let mut step = step_of(own.as_ref().unwrap_or(base), &gradient);
        let mut length = largest(&step);
        let mut fresh = false;
        let serves = length <= STEP_GAIN * previous;
        if !serves {
            own = Some(warm.hessian_factor(weights, &delta)?);
            step = step_of(own.as_ref()?, &gradient);
            length = largest(&step);
            fresh = true;
        }
        if !length.is_finite() {
            return None;
        }
        let fraction = if fresh && length > SURE_STEP {
            decreasing_fraction(warm, weights, &delta, &gradient, &step)?
        } else {
            (LONGEST_STEP / length).min(1.0)
        };
        for (d, s) in delta.iter_mut().zip(&step) {
            *d += fraction * s;
        }
        if largest(&delta) > REACH {
            return None;
        }
        if length < REPLICATE_TOLERANCE {
            return Some(delta);
        }
        previous = fraction * length;
    }
    None
}

fn step_of(factor: &Factor<'_>, gradient: &[f64]) -> Vec<f64> {
    let mut step: Vec<f64> = gradient.iter().map(|g| -g).collect();
    factor.solve(&mut step);
    step
}

/// The longest of the step, at most [`LONGEST_STEP`], its half, quarter… that lowers the likelihood by a thousandth of what its slope promises.
fn decreasing_fraction(
    warm: &WarmStart,
    weights: &[f64],
    delta: &[f64],
    gradient: &[f64],
    step: &[f64],
) -> Option<f64> {
    let here = warm.value(weights, delta);
    let slope: f64 = gradient.iter().zip(step).map(|(g, s)| g * s).sum();
    let mut fraction = (LONGEST_STEP / largest(step)).min(1.0);
    for _ in 0..40 {
        let trial: Vec<f64> = delta.iter().zip(step).map(|(d, s)| d + fraction * s).collect();
        if warm.value(weights, &trial) <= here + 1e-3 * fraction * slope {
            return Some(fraction);
        }
        fraction *= 0.5;
    }
    None
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::bootstrap::blocks::BlockRule;
    use crate::bootstrap::resampler::{LANES, Resampler};
    use crate::bootstrap::strips::Strips;
    use crate::condense::{BinGrid, CellScheme, Condenser};
    use crate::ensemble::{Ensemble, WindowData};
    use crate::influence::Influence;
    use crate::solve::{Links, Solution, SolveOptions, solve};
    use spandrel_bias::units::PositionUnit;
    use spandrel_bias::{Axis, Bias, Harmonic, Term};
    use std::ops::ControlFlow;
    use std::sync::Arc;

    /// Center, force constant and weight of each window.
    const WINDOWS: [(f64, f64, f64); 5] =
        [(1.7, 2.3, 1.7), (0.2, 3.1, 1.0), (2.9, 4.4, 0.6), (0.9, 5.7, 0.4), (2.2, 8.9, 0.9)];
    const GAUGE: usize = 0;

    fn series(k: usize) -> Vec<f64> {
        let (center, ..) = WINDOWS[k];
        (0..128).map(|i| center + 0.7 * (f64::from(i) * (0.9 + 0.13 * k as f64)).sin()).collect()
    }

    fn ensemble(series: &[Vec<f64>]) -> Ensemble {
        let axes = [Axis::new("x", PositionUnit::None, None).unwrap()];
        let bins = BinGrid::new(0, 0.0, 0.5, None).unwrap();
        let scheme = CellScheme::Samples(bins);
        let data = WINDOWS.iter().zip(series).enumerate().map(|(k, (&(center, force_constant, weight), samples))| {
            let shape = Harmonic::new(center, force_constant).unwrap().into();
            let bias = Bias::new(Arc::from(axes.clone()), vec![Term { axis: 0, shape }]).unwrap();
            let mut condenser = Condenser::new(&scheme, &axes, &bias).unwrap();
            for &x in samples {
                condenser.push(&[x]).unwrap();
            }
            WindowData { name: k.to_string(), bias: bias.clone(), weight, replicas: vec![condenser.finish()] }
        });
        Ensemble::assemble(&axes, bins, data.collect()).unwrap()
    }

    fn solved(ensemble: &Ensemble) -> Solution {
        let links = Links::find(ensemble);
        solve(ensemble, &links, &SolveOptions::default(), &mut |_, _| ControlFlow::Continue(())).unwrap()
    }

    /// How often each sample of a window is taken: the `n` highest twice, the `n` lowest not at all.
    fn times(k: usize, n: usize) -> Vec<u32> {
        let samples = series(k);
        let mut sorted = samples.clone();
        sorted.sort_by(f64::total_cmp);
        samples.iter().map(|x| u32::from(*x >= sorted[n]) + u32::from(*x >= sorted[128 - n])).collect()
    }

    /// δ by window of the replicate with those times.
    fn resolved(ensemble: &Ensemble, solution: &Solution, n: usize) -> Vec<f64> {
        let influence = Influence::of(ensemble, solution).unwrap();
        let strips = Strips::with_resolution(ensemble, &influence, 0.0);
        let mut weights = vec![0.0; strips.len()];
        for (k, stream) in ensemble.streams.iter().enumerate() {
            for (group, times) in stream.groups.iter().zip(times(k, n)) {
                for (strip, count) in strips.counts(&group.entries) {
                    weights[strip as usize] += ensemble.windows[k].weight * count * f64::from(times);
                }
            }
        }
        let warm = WarmStart::new(ensemble, &influence, &strips, GAUGE);
        let base = warm.hessian_factor(strips.weights(), &vec![0.0; warm.n_rows()]).unwrap();
        let at_rest = resolve(&warm, &base, strips.weights()).unwrap();
        assert!(largest(&at_rest) < REPLICATE_TOLERANCE, "{at_rest:?}");
        let delta = resolve(&warm, &base, &weights).unwrap();
        warm.rows().iter().map(|row| row.map_or(0.0, |row| delta[row])).collect()
    }

    #[test]
    fn a_replicate_has_the_free_energies_of_a_solve_from_nothing() {
        let all: Vec<Vec<f64>> = (0..WINDOWS.len()).map(series).collect();
        let ensemble_of_all = ensemble(&all);
        let solution = solved(&ensemble_of_all);
        for n in [3, 9, 17, 32] {
            let repeated = |(k, samples): (usize, &Vec<f64>)| {
                let repeat = |(x, times): (&f64, u32)| std::iter::repeat_n(*x, times as usize);
                samples.iter().zip(times(k, n)).flat_map(repeat).collect()
            };
            let anew = solved(&ensemble(&all.iter().enumerate().map(repeated).collect::<Vec<_>>())).free_energies;
            let delta = resolved(&ensemble_of_all, &solution, n);
            for k in 0..WINDOWS.len() {
                let change = anew[k] - solution.free_energies[k];
                // The last step, below 1e-8, leaves a tenth of itself at most; the solves are exact to 1e-10.
                assert!((delta[k] - change).abs() < 1.2e-9, "{n}, window {k}: {} against {change}", delta[k]);
            }
            assert!(largest(&delta) > 0.01 * n as f64, "{delta:?}");
        }
    }

    #[test]
    fn strips_move_no_error_by_a_hundredth() {
        let ensemble = ensemble(&(0..WINDOWS.len()).map(series).collect::<Vec<_>>());
        let influence = Influence::of(&ensemble, &solved(&ensemble)).unwrap();
        let blocks = vec![Some(BlockRule { n_groups: 128, block_length: 1, shown_part: 0.9 }); WINDOWS.len()];
        // The same draws in both.
        let errors = |resolution: f64| {
            let strips = Strips::with_resolution(&ensemble, &influence, resolution);
            let warm = WarmStart::new(&ensemble, &influence, &strips, GAUGE);
            let base = warm.hessian_factor(strips.weights(), &vec![0.0; warm.n_rows()]).unwrap();
            let resampler = Resampler::new(&ensemble, &strips, &blocks, 31);
            let mut squares = vec![0.0; warm.n_rows()];
            for first in (0..800_u64).step_by(LANES) {
                let drawn = resampler.draw(first..first + LANES as u64);
                for lane in 0..LANES {
                    let weights: Vec<f64> = drawn.iter().map(|lanes| lanes[lane]).collect();
                    let delta = resolve(&warm, &base, &weights).unwrap();
                    squares.iter_mut().zip(&delta).for_each(|(square, d)| *square += d * d);
                }
            }
            (strips.len(), warm.rows().iter().flatten().map(|&row| squares[row].sqrt()).collect::<Vec<_>>())
        };
        let ((n_points, fine), (n_strips, coarse)) = (errors(0.0), errors(1.0));
        assert!(3 * n_strips < n_points, "{n_strips} strips for {n_points} points");
        for (fine, coarse) in fine.iter().zip(&coarse) {
            assert!((coarse / fine - 1.0).abs() < 0.01, "{coarse} against {fine}");
        }
    }

    #[test]
    fn a_replicate_whose_windows_fall_apart_has_no_solution() {
        let ensemble = ensemble(&(0..WINDOWS.len()).map(series).collect::<Vec<_>>());
        let influence = Influence::of(&ensemble, &solved(&ensemble)).unwrap();
        let strips = Strips::lay(&ensemble, &influence);
        let warm = WarmStart::new(&ensemble, &influence, &strips, GAUGE);
        let base = warm.hessian_factor(strips.weights(), &vec![0.0; warm.n_rows()]).unwrap();
        // All weight where a single window answers.
        let mut weights = vec![0.0; strips.len()];
        weights[0] = 500.0;
        assert_eq!(resolve(&warm, &base, &weights), None);
    }
}
