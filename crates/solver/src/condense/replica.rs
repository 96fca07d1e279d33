//! One condensed run.

use super::cells::Cells;
use super::groups::Group;
use crate::series::{BlockMeans, Cascade};
use serde::Serialize;

/// Everything that later stages need of one run (a replica of a window, its segments joined).
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CondensedReplica {
    /// Samples taken in.
    pub n_samples: u64,
    /// Cells visited.
    pub cells: Cells,
    /// Counts on the cells by stretches of time: 64 to 128 of them, fewer in runs shorter than 64 samples.
    pub groups: Vec<Group>,
    /// Block means of each axis (on an axis with a period: of the displacement from [`reference`](Self::reference)) and, last, of the bias
    /// energy in kT.
    pub blocks: BlockMeans,
    /// Running sums of the same channels.
    pub channels: Vec<Cascade>,
    /// Position from which displacements on axes with a period are counted; 0 on others. One value an axis.
    pub reference: Vec<f64>,
    /// Mean over the samples of the squared bias slope b′² along each axis, kT² per squared unit of the axis.
    pub mean_squared_slope: Vec<f64>,
}

impl CondensedReplica {
    /// The same run on cells halved at most `level` times: exactly what condensing on those cells would have given. Cells that are as
    /// coarse or coarser already stay as they are.
    #[must_use]
    pub fn coarsened(self, level: u32) -> Self {
        let (cells, new_number) = self.cells.coarsened(level);
        let groups = match new_number {
            Some(new_number) => self.groups.iter().map(|group| group.renumbered(&new_number)).collect(),
            None => self.groups,
        };
        Self { cells, groups, ..self }
    }

    /// Mean position on an axis; `None` without samples.
    #[must_use]
    pub fn mean_position(&self, axis: usize) -> Option<f64> {
        Some(self.channels.get(axis)?.mean()? + self.reference[axis])
    }
}
