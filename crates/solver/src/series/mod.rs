//! Statistics of one correlated series, from running sums and block means alone.
//!
//! A series is never kept. While it streams past, [`Cascade`] keeps sums at each level of pairwise merging and [`BlockMeans`]
//! keeps 256 to 512 means. [`Inefficiency`] reads both: how many samples count as one. [`MeanLag`] and [`BatchRule`] turn the means into the
//! batches from which every long-run variance of the crate is formed.

mod autocorrelation;
mod batches;
mod blocks;
mod cascade;
mod correlation;
mod inefficiency;
mod sequence;
mod tail;
mod trend;

pub use autocorrelation::Autocorrelation;
pub(crate) use autocorrelation::Transform;
pub use batches::{BatchRule, MAX_BATCHES};
pub use blocks::{BlockMeans, MAX_BLOCKS};
pub use cascade::{Cascade, LevelSums};
pub use correlation::MeanLag;
pub(crate) use inefficiency::inefficiency_of_means;
pub use inefficiency::{Inefficiency, InefficiencyMethod};
pub(crate) use trend::trend_probability;
