//! The cells that one run has visited.

use super::lattice::{CellKey, CellLattice};
use serde::Serialize;
use std::sync::Arc;

/// One visited cell of a lattice.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LatticeCell {
    /// Which cell.
    pub key: CellKey,
    /// Samples in it.
    pub count: u64,
    /// Sum of the samples' fixed-point positions: exact, so that the order of samples leaves no trace.
    pub position_sum: i128,
}

/// The visited cells of one run, in the order of their keys (lattice) or of time (samples).
#[derive(Debug, Clone, PartialEq, Serialize)]
pub enum Cells {
    /// Cells of a lattice along one axis.
    Lattice {
        /// Which lattice.
        lattice: Arc<CellLattice>,
        /// The cells, increasing in key.
        cells: Vec<LatticeCell>,
    },
    /// One cell a sample, for several axes or few samples.
    Samples {
        /// Positions, one row of as many values as there are axes a sample.
        positions: Vec<f64>,
        /// Number of axes.
        n_axes: usize,
    },
}

impl Cells {
    /// Number of cells.
    #[must_use]
    pub fn len(&self) -> usize {
        match self {
            Self::Lattice { cells, .. } => cells.len(),
            Self::Samples { positions, n_axes } => positions.len() / n_axes,
        }
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The same samples on cells halved at most `level` times, and the new number of each old cell.
    ///
    /// Unchanged where the cells are as coarse or coarser already, or are samples.
    pub(super) fn coarsened(self, level: u32) -> (Self, Option<Vec<u32>>) {
        match self {
            Self::Lattice { lattice, cells } if lattice.level() > level => {
                let finer = lattice.level();
                let mut merged: Vec<LatticeCell> = Vec::new();
                let mut new_number = Vec::with_capacity(cells.len());
                for cell in cells {
                    let key = CellKey { lattice: cell.key.lattice >> (finer - level), piece: cell.key.piece };
                    match merged.last_mut() {
                        Some(last) if last.key == key => {
                            last.count += cell.count;
                            last.position_sum += cell.position_sum;
                        }
                        _ => merged.push(LatticeCell { key, ..cell }),
                    }
                    new_number.push(u32::try_from(merged.len() - 1).unwrap_or(u32::MAX));
                }
                (Self::Lattice { lattice: Arc::new(lattice.at_level(level)), cells: merged }, Some(new_number))
            }
            as_it_is => (as_it_is, None),
        }
    }
}
