//! A run without its beginning, from block means and running sums alone.

use super::BlockMeans;
use super::cascade::{Cascade, LevelSums};

impl BlockMeans {
    /// The means without the first `n` blocks (all of them, if there are fewer). The incomplete block after the last one stays.
    #[must_use]
    pub fn without_leading(&self, n: usize) -> Self {
        let mut kept = self.clone();
        kept.means.drain(..(n * self.n_channels).min(self.means.len()));
        kept
    }
}

impl Cascade {
    /// The sums without the samples of the first `n` blocks of `block_length` samples (a power of two), of which `means` are all means.
    ///
    /// Counts and means are exact, and so is everything at the levels of whole blocks. Within a block nothing is known about when: the
    /// spread and the lag-one covariance of the finer levels are those of the whole run, moved by as much as the variance of the block
    /// means moves without the dropped ones. The extremes of the finer levels stay those of the whole run.
    #[must_use]
    pub(crate) fn without_leading_blocks(&self, n: usize, means: &[f64], block_length: u64) -> Self {
        let n = n.min(means.len());
        let mut kept = Self { reference: self.reference, levels: Vec::new() };
        for mean in &means[n..] {
            kept.push_difference(mean - self.reference);
        }
        let level_of_blocks = block_length.ilog2() as usize;
        let variance = |sums: &Self, level: usize| sums.levels.get(level).map_or(0.0, LevelSums::population_variance);
        let moved = variance(&kept, 0) - variance(self, level_of_blocks);
        let dropped_sum: f64 = means[..n].iter().map(|mean| mean - self.reference).sum();
        let finer = self.levels.iter().take(level_of_blocks).enumerate().map(|(level, sums)| {
            let in_a_block = block_length >> level;
            sums.moved(n as u64 * in_a_block, dropped_sum * in_a_block as f64, moved)
        });
        Self { reference: self.reference, levels: finer.chain(kept.levels).collect() }
    }
}

impl LevelSums {
    /// Sums of the values without `dropped_count` of them that add up to `dropped_sum`, their variance and lag-one covariance larger by
    /// `moved` than before.
    fn moved(&self, dropped_count: u64, dropped_sum: f64, moved: f64) -> Self {
        let count = self.count.saturating_sub(dropped_count);
        let sum = self.sum - dropped_sum;
        let n = count.max(1) as f64;
        let mean = sum / n;
        let variance = (self.population_variance() + moved).max(0.0);
        let covariance = (self.centered_lag_products() / self.count as f64 + moved).clamp(-variance, variance);
        // The first value is not known; put at the mean it drops out of the centered products.
        let uncentered = mean * (2.0 * sum - mean - self.last) - (n - 1.0) * mean * mean;
        let mut kept = self.clone();
        kept.count = count;
        kept.sum = sum;
        kept.sum_of_squares = n * (variance + mean * mean);
        kept.sum_of_lag_products = n * covariance + uncentered;
        kept.first = mean;
        kept
    }
}
