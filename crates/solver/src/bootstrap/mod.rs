//! The errors once more by other ways, as a check.
//!
//! - [`Bootstrap`] draws the runs anew in blocks of time and solves each replicate again: no derivative, no normal approximation;
//! - [`BetweenReplicas`] compares independent starts of the same window: no assumption about correlation in time.
//!
//! Neither changes an answer. A [`disagreement`](Bootstrap::disagreement) with the errors from influences says that one of the
//! assumptions behind them does not hold.

mod between_replicas;
mod block_length;
mod blocks;
mod envelope;
mod options;
mod ordering;
mod replicates;
mod resampler;
mod resolve;
mod result;
mod run;
mod strips;
mod summary;
mod targets;
mod warm_start;

pub use between_replicas::{BetweenReplicas, ReplicaError};
pub use block_length::block_length;
pub use blocks::BlockRule;
pub use options::{BootstrapError, BootstrapOptions, FEWEST_REPLICATES, ReplicateProgress};
pub use resolve::REPLICATE_TOLERANCE;
pub use result::{Bootstrap, DISAGREEMENT, ErrorRatio, MOST_MISSING, Place, ResampledError};
