//! A condensed run without its first groups.

use super::cells::{Cells, LatticeCell};
use super::groups::Group;
use super::replica::CondensedReplica;
use std::sync::Arc;

impl CondensedReplica {
    /// The run without its first `n` groups; the last group always stays. Later stages take the result as they take any run.
    ///
    /// | what | afterwards |
    /// |---|---|
    /// | number of samples, groups, block means | those of the kept samples, exactly |
    /// | cells | those still visited, with the kept counts; mean positions within a lattice cell are those of the whole run |
    /// | running sums | counts and means exact; spread and lag-one products exact between blocks, those of the whole run within them; extremes at levels finer than a block those of the whole run |
    /// | mean squared slope, reference position | those of the whole run |
    ///
    /// Only the sum of the positions in a cell is known, not when they came; the kept sum is the kept count times the cell's mean position,
    /// rounded to the fixed-point step. That shifts a cell by a random part of its width that shrinks with the square root of its counts,
    /// and by the slope of the dropped samples' density across it, which is of second order in the width as is the error of cells itself.
    ///
    /// The spread within blocks hardly differs for an axis. For the bias energy of a run that comes from afar it is larger in the dropped
    /// part, so that the kept variance comes out too large and the energy's statistical inefficiency too small (by a quarter for a run that
    /// started four standard deviations away and lost a tenth).
    #[must_use]
    pub fn without_leading_groups(&self, n: usize) -> Self {
        let n = n.min(self.groups.len().saturating_sub(1));
        if n == 0 {
            return self.clone();
        }
        let n_dropped: u64 = self.groups[..n].iter().map(|group| group.n_samples).sum();
        let (cells, groups) = kept_cells(&self.cells, &self.groups[n..], n_dropped);
        let block_length = self.blocks.block_length();
        let blocks_dropped = usize::try_from(n_dropped / block_length).unwrap_or(usize::MAX);
        let channels = self.channels.iter().enumerate();
        Self {
            n_samples: self.n_samples - n_dropped,
            cells,
            groups,
            channels: channels
                .map(|(i, sums)| sums.without_leading_blocks(blocks_dropped, &self.blocks.channel(i), block_length))
                .collect(),
            blocks: self.blocks.without_leading(blocks_dropped),
            reference: self.reference.clone(),
            mean_squared_slope: self.mean_squared_slope.clone(),
        }
    }
}

/// The cells that the kept groups visit, and the groups on their new numbers.
fn kept_cells(cells: &Cells, groups: &[Group], n_dropped: u64) -> (Cells, Vec<Group>) {
    match cells {
        Cells::Samples { positions, n_axes } => {
            let first = usize::try_from(n_dropped).unwrap_or(usize::MAX);
            let kept = positions.get(first * n_axes..).unwrap_or_default().to_vec();
            let dropped = u32::try_from(n_dropped).unwrap_or(u32::MAX);
            let new_number: Vec<u32> =
                (0..u32::try_from(cells.len()).unwrap_or(u32::MAX)).map(|old| old.saturating_sub(dropped)).collect();
            let groups = groups.iter().map(|group| group.renumbered(&new_number)).collect();
            (Cells::Samples { positions: kept, n_axes: *n_axes }, groups)
        }
        Cells::Lattice { lattice, cells } => {
            let mut counts = vec![0_u64; cells.len()];
            for &(cell, count) in groups.iter().flat_map(|group| &group.entries) {
                counts[cell as usize] += u64::from(count);
            }
            let mut kept = Vec::new();
            let mut new_number = Vec::with_capacity(cells.len());
            for (cell, &count) in cells.iter().zip(&counts) {
                // Of a cell that is no longer visited no group asks for the number.
                new_number.push(u32::try_from(kept.len()).unwrap_or(u32::MAX));
                if count > 0 {
                    kept.push(LatticeCell { key: cell.key, count, position_sum: share_of_sum(cell, count) });
                }
            }
            let groups = groups.iter().map(|group| group.renumbered(&new_number)).collect();
            (Cells::Lattice { lattice: Arc::clone(lattice), cells: kept }, groups)
        }
    }
}

/// `count` times the cell's mean position, to the nearest integer. Whole part and remainder apart, so that no product leaves the range.
fn share_of_sum(cell: &LatticeCell, count: u64) -> i128 {
    let (all, kept) = (i128::from(cell.count), i128::from(count));
    let whole = cell.position_sum.div_euclid(all);
    let rest = cell.position_sum.rem_euclid(all);
    whole * kept + (rest * kept + all / 2) / all
}
