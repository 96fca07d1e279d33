//! Resampled counts on the strips.

use super::blocks::BlockRule;
use super::strips::Strips;
use crate::condense::Group;
use crate::ensemble::{Ensemble, Stream};
use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use rayon::prelude::*;
use std::ops::Range;

/// Replicates drawn in one pass over the counts of all groups.
pub(super) const LANES: usize = 8;

/// One run to be resampled.
struct Run {
    /// Samples in each group and their counts on the strips.
    groups: Vec<(f64, Vec<(u32, f64)>)>,
    n_samples: f64,
    /// ω of its window.
    weight: f64,
    /// Its blocks and the part of them that a replicate draws; `None` where the run is taken as it is.
    blocks: Option<(BlockRule, f64)>,
}

/// Draws the weights of the strips anew.
pub(super) struct Resampler {
    runs: Vec<Run>,
    n_strips: usize,
    seed: u64,
}

impl Resampler {
    /// With the blocks of each stream of the ensemble.
    ///
    /// A replica that cannot show its own spread stays as it is, and its window's others scatter as much more.
    pub(super) fn new(ensemble: &Ensemble, strips: &Strips, blocks: &[Option<BlockRule>], seed: u64) -> Self {
        let mut supported = vec![0_u64; ensemble.n_windows()];
        for (stream, _) in ensemble.streams.iter().zip(blocks).filter(|(_, blocks)| blocks.is_some()) {
            supported[stream.window] += stream.n_samples;
        }
        let run = |(stream, blocks): (&Stream, &Option<BlockRule>)| {
            let window = &ensemble.windows[stream.window];
            let supported_part = supported[stream.window] as f64 / window.n_samples as f64;
            let counts = |group: &Group| (group.n_samples as f64, strips.counts(&group.entries));
            Run {
                groups: stream.groups.iter().map(counts).collect(),
                n_samples: stream.n_samples as f64,
                weight: window.weight,
                blocks: blocks.map(|blocks| (blocks, blocks.shown_part * supported_part)),
            }
        };
        Self { runs: ensemble.streams.par_iter().zip(blocks).map(run).collect(), n_strips: strips.len(), seed }
    }

    /// Weights m* of the strips in up to [`LANES`] replicates: one row a strip, one lane a replicate.
    ///
    /// Each replicate has a random stream of its own, so it is the same whichever others are drawn with it. The resampled counts of a run are
    /// scaled to its number of samples: its groups need not be of one length, and the totals M then stay.
    pub(super) fn draw(&self, replicates: Range<u64>) -> Vec<[f64; LANES]> {
        let mut generators: Vec<ChaCha8Rng> =
            replicates.take(LANES).map(|number| generator(self.seed, number)).collect();
        let mut weights = vec![[0.0; LANES]; self.n_strips];
        for run in &self.runs {
            let factors = run.factors(&mut generators);
            for ((_, counts), factors) in run.groups.iter().zip(&factors) {
                for &(strip, count) in counts {
                    for (weight, factor) in weights[strip as usize].iter_mut().zip(factors) {
                        *weight += count * factor;
                    }
                }
            }
        }
        weights
    }
}

impl Run {
    /// What a sample of each group counts in each replicate.
    fn factors(&self, generators: &mut [ChaCha8Rng]) -> Vec<[f64; LANES]> {
        let Some((blocks, part)) = self.blocks else { return vec![[self.weight; LANES]; self.groups.len()] };
        let mut factors = vec![[0.0; LANES]; self.groups.len()];
        for (lane, generator) in generators.iter_mut().enumerate() {
            let times = blocks.draw(part, generator);
            let drawn: f64 = times.iter().zip(&self.groups).map(|(&t, (n_samples, _))| f64::from(t) * n_samples).sum();
            let scale = self.weight * self.n_samples / drawn;
            for (factors, &times) in factors.iter_mut().zip(&times) {
                factors[lane] = scale * f64::from(times);
            }
        }
        factors
    }
}

fn generator(seed: u64, replicate: u64) -> ChaCha8Rng {
    let mut generator = ChaCha8Rng::seed_from_u64(seed);
    generator.set_stream(replicate);
    generator
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::condense::{BinGrid, CellScheme, CondensedReplica, Condenser};
    use crate::ensemble::WindowData;
    use crate::influence::Influence;
    use crate::solve::{Links, SolveOptions, solve};
    use spandrel_bias::units::PositionUnit;
    use spandrel_bias::{Axis, Bias};
    use std::ops::ControlFlow;
    use std::sync::Arc;

    const WEIGHT: f64 = 0.7;

    fn position(i: u32) -> f64 {
        0.5 + 0.45 * (f64::from(i) * 1.9).sin()
    }

    /// One window without a bias, of a run of 100 samples, a group each, and a run of as many as given, each of them on one place.
    fn ensemble(n_others: usize) -> Ensemble {
        let axes = [Axis::new("x", PositionUnit::None, None).unwrap()];
        let bins = BinGrid::new(0, 0.0, 0.01, None).unwrap();
        let scheme = CellScheme::Samples(bins);
        let bias = Bias::new(Arc::from(axes.clone()), Vec::new()).unwrap();
        let condensed = |samples: Vec<f64>| -> CondensedReplica {
            let mut condenser = Condenser::new(&scheme, &axes, &bias).unwrap();
            for x in samples {
                condenser.push(&[x]).unwrap();
            }
            condenser.finish()
        };
        let mut replicas = vec![condensed((0..100).map(position).collect())];
        if n_others > 0 {
            replicas.push(condensed(vec![1.5; n_others]));
        }
        let data = WindowData { name: "free".into(), bias: bias.clone(), weight: WEIGHT, replicas };
        Ensemble::assemble(&axes, bins, vec![data]).unwrap()
    }

    fn strips(ensemble: &Ensemble) -> Strips {
        let links = Links::find(ensemble);
        let solution =
            solve(ensemble, &links, &SolveOptions::default(), &mut |_, _| ControlFlow::Continue(())).unwrap();
        Strips::with_resolution(ensemble, &Influence::of(ensemble, &solution).unwrap(), 0.0)
    }

    /// Over 4000 replicates, the mean square deviation of Σ m* x over the first run from that of the counts themselves.
    fn noise(ensemble: &Ensemble, shown_part: f64) -> f64 {
        let strips = strips(ensemble);
        let mut blocks = vec![Some(BlockRule { n_groups: 100, block_length: 1, shown_part })];
        blocks.resize(ensemble.streams.len(), None);
        let resampler = Resampler::new(ensemble, &strips, &blocks, 6);
        // Mean position of each strip of the first run.
        let mut positions = vec![(0.0, 0.0); strips.len()];
        for group in &ensemble.streams[0].groups {
            for &(point, _) in &group.entries {
                let at = &mut positions[strips.of_point(point as usize)];
                *at = (at.0 + ensemble.points.position(point as usize)[0], at.1 + 1.0);
            }
        }
        let mean = (0..100).map(position).sum::<f64>() / 100.0;
        let mut squares = 0.0;
        for first in (0..4000_u64).step_by(LANES) {
            let drawn = resampler.draw(first..first + LANES as u64);
            for lane in 0..LANES {
                let total: f64 = drawn.iter().map(|lanes| lanes[lane]).sum();
                assert!((total - ensemble.windows[0].total_weight()).abs() < 1e-9, "{total}");
                let sum: f64 = drawn
                    .iter()
                    .zip(&positions)
                    .filter(|(_, at)| at.1 > 0.0)
                    .map(|(lanes, at)| lanes[lane] * (at.0 / at.1 - mean))
                    .sum();
                squares += sum * sum;
            }
        }
        squares / 4000.0
    }

    #[test]
    fn noise_is_that_of_as_many_draws_as_the_part_asks_for() {
        let one_run = ensemble(0);
        let mean = (0..100).map(position).sum::<f64>() / 100.0;
        // Bins of 0.01 hold samples so close together that their strips blur the variance by (0.01/0.45)² at most.
        let variance = (0..100).map(|i| (position(i) - mean).powi(2)).sum::<f64>() / 100.0;
        for shown_part in [0.25, 0.6, 0.99] {
            // ω N times the mean of b draws.
            let expected = (WEIGHT * 100.0).powi(2) * variance / (100.0 * shown_part);
            let found = noise(&one_run, shown_part);
            let bound = 4.5 * (2.0_f64 / 4000.0).sqrt() + (0.01_f64 / 0.45).powi(2);
            assert!((found / expected - 1.0).abs() < bound, "{shown_part}: {found} against {expected}");
        }
    }

    #[test]
    fn a_run_that_stays_as_it_is_hands_its_noise_to_the_other() {
        // 25 of 125 samples show nothing: the rest scatters 125/100 times as much.
        let ratio = noise(&ensemble(25), 0.8) / noise(&ensemble(0), 0.8);
        let bound = 4.5 * (4.0_f64 / 4000.0).sqrt();
        assert!((ratio / 1.25 - 1.0).abs() < bound, "{ratio}");
    }

    #[test]
    fn a_replicate_is_the_same_whatever_is_drawn_with_it() {
        let ensemble = ensemble(0);
        let blocks = [Some(BlockRule { n_groups: 100, block_length: 3, shown_part: 0.71 })];
        let resampler = Resampler::new(&ensemble, &strips(&ensemble), &blocks, 6);
        let lane = |drawn: &[[f64; LANES]], lane: usize| drawn.iter().map(|lanes| lanes[lane]).collect::<Vec<_>>();
        let (first, later) = (resampler.draw(0..8), resampler.draw(5..7));
        assert_eq!(lane(&first, 5), lane(&later, 0));
        assert_eq!(lane(&first, 6), lane(&later, 1));
        assert_ne!(lane(&first, 5), lane(&first, 6));
    }
}
