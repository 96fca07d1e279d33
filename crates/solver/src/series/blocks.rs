//! Block means of several series that stream past side by side.

use serde::Serialize;

/// Most blocks kept; when one more would start, neighbors merge and the block length doubles. Between 256 and 512 blocks
/// the correlation of the block means resolves every motion from 1/512 of a run upward.
pub const MAX_BLOCKS: usize = 512;

/// Means of consecutive blocks of a few channels (each axis, then the bias energy).
///
/// Block lengths are powers of two counted from the first sample, so the result does not depend on how the samples were delivered.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BlockMeans {
    pub(super) n_channels: usize,
    block_length: u64,
    /// Complete blocks, one row of `n_channels` means a block.
    pub(super) means: Vec<f64>,
    partial_sums: Vec<f64>,
    partial_count: u64,
}

impl BlockMeans {
    /// No samples yet, of `n_channels` channels.
    #[must_use]
    pub fn new(n_channels: usize) -> Self {
        Self { n_channels, block_length: 1, means: Vec::new(), partial_sums: vec![0.0; n_channels], partial_count: 0 }
    }

    /// Takes one value of every channel in (a slice of `n_channels` values).
    pub fn push(&mut self, values: &[f64]) {
        for (sum, value) in self.partial_sums.iter_mut().zip(values) {
            *sum += value;
        }
        self.partial_count += 1;
        if self.partial_count < self.block_length {
            return;
        }
        let length = self.block_length as f64;
        self.means.extend(self.partial_sums.iter().map(|sum| sum / length));
        self.partial_sums.fill(0.0);
        self.partial_count = 0;
        if self.n_blocks() > MAX_BLOCKS {
            self.double_block_length();
        }
    }

    /// Merges neighbors; an odd last block becomes the partial one again.
    fn double_block_length(&mut self) {
        let n_pairs = self.n_blocks() / 2;
        let width = self.n_channels;
        let mut merged = Vec::with_capacity(n_pairs * width);
        for pair in self.means.chunks_exact(2 * width) {
            for channel in 0..width {
                merged.push(f64::midpoint(pair[channel], pair[width + channel]));
            }
        }
        let odd = &self.means[2 * n_pairs * width..];
        if !odd.is_empty() {
            for (sum, mean) in self.partial_sums.iter_mut().zip(odd) {
                *sum = mean * self.block_length as f64;
            }
            self.partial_count = self.block_length;
        }
        self.means = merged;
        self.block_length *= 2;
    }

    /// Samples in each complete block.
    #[must_use]
    pub fn block_length(&self) -> u64 {
        self.block_length
    }

    /// Complete blocks. The samples after the last of them (less than one block) are in no block mean.
    #[must_use]
    pub fn n_blocks(&self) -> usize {
        self.means.len() / self.n_channels.max(1)
    }

    /// The block means of one channel, in the order of time.
    #[must_use]
    pub fn channel(&self, channel: usize) -> Vec<f64> {
        self.means.iter().skip(channel).step_by(self.n_channels).copied().collect()
    }
}
