//! The cells of one axis: every output bin halved a number of times, and cut where a bias has a kink.

use super::bins::{BinGrid, FRACTION_BITS};
use serde::Serialize;

/// Largest local error of a cell, in kT, when nothing else is asked. It adds up along the windows to some five times as much.
pub const DEFAULT_CELL_ERROR: f64 = 1e-5;

/// Most times that a bin is halved.
pub const MAX_LEVEL: u32 = 30;

/// Name of a cell. Ordered by position along the axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
pub struct CellKey {
    /// Number of the undivided cell from the origin.
    pub lattice: i64,
    /// Breaks at or below the cell's lower edge.
    pub piece: u32,
}

/// Cells of width `bin width / 2^level` along one axis, cut at given breaks.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CellLattice {
    bins: BinGrid,
    level: u32,
    /// Fixed-point positions, increasing.
    breaks: Vec<i64>,
}

impl CellLattice {
    /// Each bin of `bins` halved `level` times (0 to [`MAX_LEVEL`]; more is taken as that), cut at `breaks` (positions in the axis' unit,
    /// in any order, wrapped into the first period; those that are not finite or out of reach are left out).
    #[must_use]
    pub fn new(bins: BinGrid, level: u32, breaks: &[f64]) -> Self {
        let mut breaks: Vec<i64> = breaks.iter().filter_map(|&x| bins.fixed_point(x)).collect();
        breaks.sort_unstable();
        breaks.dedup();
        Self { bins, level: level.min(MAX_LEVEL), breaks }
    }

    /// The bins that the cells divide.
    #[must_use]
    pub fn bins(&self) -> &BinGrid {
        &self.bins
    }

    /// Times that each bin is halved.
    #[must_use]
    pub fn level(&self) -> u32 {
        self.level
    }

    /// The same lattice with each bin halved `level` times.
    #[must_use]
    pub fn at_level(&self, level: u32) -> Self {
        Self { level: level.min(MAX_LEVEL), ..self.clone() }
    }

    /// The cell that holds `x`, and `x` as a fixed-point number; `None` if `x` is not finite or out of reach.
    pub(super) fn locate(&self, x: f64) -> Option<(CellKey, i64)> {
        let fixed = self.bins.fixed_point(x)?;
        let piece = self.breaks.partition_point(|&b| b <= fixed);
        let piece = u32::try_from(piece).unwrap_or(u32::MAX);
        Some((CellKey { lattice: fixed >> (FRACTION_BITS - self.level), piece }, fixed))
    }
}

/// Number of times that a bin must be halved so that no cell errs by more than `cell_error` kT.
///
/// A cell of width h that stands for its samples by their mean position errs by (b′² − b″) h²/24 in the reduced free energy of a window
/// with reduced bias b. `steepness` is the largest over all windows of max(mean of b′² over the window's samples, largest |b″|), in
/// kT/unit² and kT²/unit²; `bin_width` is in the axis' unit.
#[must_use]
pub fn required_level(bin_width: f64, steepness: f64, cell_error: f64) -> u32 {
    (0..MAX_LEVEL)
        .find(|&level| {
            let width = bin_width / f64::from(1_u32 << level);
            width * width * steepness / 24.0 <= cell_error
        })
        .unwrap_or(MAX_LEVEL)
}
