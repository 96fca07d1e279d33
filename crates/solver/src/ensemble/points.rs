//! The support of the solution.

use serde::Serialize;
use std::ops::Range;

/// Points of axis space that carry counts: cells at their pooled mean position, or single samples.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Points {
    n_axes: usize,
    positions: Vec<f64>,
    /// Output bin of each point.
    pub bins: Vec<i64>,
    /// m = Σₖ ωₖ nₖ of each point.
    pub weights: Vec<f64>,
}

impl Points {
    /// From positions (rows of `n_axes` values), with as many bins and weights as rows.
    pub(super) fn new(n_axes: usize, positions: Vec<f64>, bins: Vec<i64>, weights: Vec<f64>) -> Self {
        Self { n_axes, positions, bins, weights }
    }

    /// Number of points.
    #[must_use]
    pub fn len(&self) -> usize {
        self.bins.len()
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.bins.is_empty()
    }

    /// Position of point `i` on every axis.
    #[must_use]
    pub fn position(&self, i: usize) -> &[f64] {
        &self.positions[i * self.n_axes..(i + 1) * self.n_axes]
    }

    /// Points of an output bin: a contiguous range, empty where nothing was sampled.
    #[must_use]
    pub fn in_bin(&self, bin: i64) -> Range<usize> {
        self.bins.partition_point(|&b| b < bin)..self.bins.partition_point(|&b| b <= bin)
    }

    /// Smallest box around a range of points: lower and upper corner, one value an axis.
    pub(crate) fn bounding_box(&self, range: Range<usize>) -> (Vec<f64>, Vec<f64>) {
        let mut lower = vec![f64::INFINITY; self.n_axes];
        let mut upper = vec![f64::NEG_INFINITY; self.n_axes];
        for i in range {
            for (axis, &x) in self.position(i).iter().enumerate() {
                lower[axis] = if x < lower[axis] { x } else { lower[axis] };
                upper[axis] = if x > upper[axis] { x } else { upper[axis] };
            }
        }
        (lower, upper)
    }
}
