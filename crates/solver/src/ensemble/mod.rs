//! All windows laid on shared cells, with the reduced bias of every window in every cell at hand.
//!
//! ```text
//! [WindowData { name, bias, weight, replicas }] -> Ensemble { windows, points, streams }
//! ```
//! The solver sees points with counts; whether a point was a cell or a single sample makes no difference to it.

mod assemble;
mod error;
mod points;
mod restrict;
mod shared_points;
mod window_data;

pub use error::EnsembleError;
pub use points::Points;
pub use window_data::WindowData;

use crate::condense::{BinGrid, Group};
use crate::series::{BatchRule, Inefficiency};
use serde::Serialize;
use spandrel_bias::{Axis, Bias};

/// One window: a bias, and what its samples weigh.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Window {
    /// Name, unique in the ensemble.
    pub name: String,
    /// Reduced bias (kT; positions in the axes' units).
    pub bias: Bias,
    /// Statistical weight ω of one sample; 1 unless asked otherwise.
    pub weight: f64,
    /// Samples of all replicas.
    pub n_samples: u64,
    /// Samples on each point that the window visited: point number and count, increasing in the former.
    pub counts: Vec<(u32, u64)>,
    /// Mean position on each axis; on an axis with a period that image of it which lies near the center of the bias.
    pub mean: Vec<f64>,
    /// Standard deviation on each axis.
    pub spread: Vec<f64>,
    /// Effective number of independent samples: Σ N/g over its replicas. A replica whose g is unknown counts as one sample.
    pub effective_samples: f64,
    /// Statistical inefficiency of the slowest axis over all replicas by the initial sequence; `None` where a series does not support one.
    pub inefficiency: Option<Inefficiency>,
    /// The same by the automatic window.
    pub inefficiency_by_window: Option<Inefficiency>,
}

impl Window {
    /// M = ω N, the weight of the window in the likelihood.
    #[must_use]
    pub fn total_weight(&self) -> f64 {
        self.weight * self.n_samples as f64
    }

    /// Samples that make one effective sample.
    #[must_use]
    pub fn samples_per_effective_sample(&self) -> f64 {
        self.n_samples as f64 / self.effective_samples
    }

    /// Reduced bias at a position, kT.
    ///
    /// Tables were checked to reach every point when the ensemble was assembled; beyond them the window has no weight.
    #[must_use]
    pub fn reduced_bias(&self, position: &[f64]) -> f64 {
        self.bias.energy(position).unwrap_or(f64::INFINITY)
    }
}

/// One replica of a window as a stretch of time: the unit over which batch means are formed.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Stream {
    /// Number of its window.
    pub window: usize,
    /// Samples in it.
    pub n_samples: u64,
    /// Counts on points by stretches of time.
    pub groups: Vec<Group>,
    /// How it is cut into batches; `None` where the series supports no error: one group, or a constant coordinate.
    pub batches: Option<BatchRule>,
    /// Statistical inefficiency of its slowest axis by the initial sequence.
    pub inefficiency: Option<Inefficiency>,
    /// The same by the automatic window.
    pub inefficiency_by_window: Option<Inefficiency>,
}

/// All windows on shared points.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Ensemble {
    /// The axes.
    pub axes: Vec<Axis>,
    /// Output bins, to which every point belongs.
    pub bins: BinGrid,
    /// The windows.
    pub windows: Vec<Window>,
    /// The points, ordered along the axis of the bins.
    pub points: Points,
    /// One entry a replica, window by window.
    pub streams: Vec<Stream>,
}

impl Ensemble {
    /// Number of windows.
    #[must_use]
    pub fn n_windows(&self) -> usize {
        self.windows.len()
    }
}
