//! Statistics of one correlated series, from running sums and block means alone.
//!
//! A series is never kept. While it streams past, [`Cascade`] keeps sums at each level of pairwise merging and [`BlockMeans`]
//! keeps 256 to 512 means; [`MeanLag`] and [`BatchRule`] turn the latter into the statistical inefficiency and into the batches
//! from which every long-run variance of the crate is formed.

mod batches;
mod blocks;
mod cascade;
mod correlation;

pub use batches::{BatchRule, MAX_BATCHES};
pub use blocks::{BlockMeans, MAX_BLOCKS};
pub use cascade::{Cascade, LevelSums};
pub use correlation::MeanLag;
