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
