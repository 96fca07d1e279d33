//! The points that the runs of all windows have in common.

use super::error::EnsembleError;
use super::window_data::WindowData;
use crate::condense::{BinGrid, CellKey, CellLattice, Cells, CondensedReplica, LatticeCell};
use std::collections::BTreeMap;

/// Points, and where the cells of each run went.
pub(super) struct SharedPoints {
    /// Rows of one value an axis.
    pub positions: Vec<f64>,
    /// Output bin of each point.
    pub bins: Vec<i64>,
    /// For each replica in turn the point of each of its cells.
    pub numbers: Vec<Vec<u32>>,
}

/// Merges the cells of all runs (at the pooled mean position of their samples), or lines their samples up.
pub(super) fn shared_points(
    n_axes: usize,
    bins: &BinGrid,
    windows: &[WindowData],
) -> Result<SharedPoints, EnsembleError> {
    let mut on_lattice: Vec<(&CellLattice, &[LatticeCell])> = Vec::new();
    let mut on_samples: Vec<&[f64]> = Vec::new();
    for window in windows {
        for replica in &window.replicas {
            let fits = match &replica.cells {
                Cells::Lattice { lattice, cells } => {
                    on_lattice.push((lattice, cells));
                    on_samples.is_empty() && **lattice == *on_lattice[0].0 && lattice.bins() == bins
                }
                Cells::Samples { positions, .. } => {
                    on_samples.push(positions);
                    on_lattice.is_empty()
                }
            };
            if !fits {
                return Err(EnsembleError::MixedCells { window: window.name.clone() });
            }
        }
    }
    let shared = match on_lattice.first() {
        Some((lattice, _)) => merged_cells(lattice, on_lattice.iter().map(|(_, cells)| *cells)),
        None => lined_up_samples(n_axes, bins, &on_samples),
    };
    if u32::try_from(shared.bins.len()).is_ok() { Ok(shared) } else { Err(EnsembleError::TooManyPoints) }
}

/// Number of a point; [`shared_points`] refuses more points than can be numbered.
fn number(i: usize) -> u32 {
    u32::try_from(i).unwrap_or(u32::MAX)
}

fn merged_cells<'a>(lattice: &CellLattice, runs: impl Iterator<Item = &'a [LatticeCell]> + Clone) -> SharedPoints {
    let mut merged: BTreeMap<CellKey, (u64, i128)> = BTreeMap::new();
    for cell in runs.clone().flatten() {
        let sums = merged.entry(cell.key).or_insert((0, 0));
        sums.0 += cell.count;
        sums.1 += cell.position_sum;
    }
    let positions = merged.values().map(|&(count, sum)| lattice.bins().position_of(sum, count)).collect();
    let bins = merged.keys().map(|key| key.lattice >> lattice.level()).collect();
    let keys: Vec<CellKey> = merged.into_keys().collect();
    let numbers = runs
        .map(|cells| cells.iter().map(|cell| number(keys.partition_point(|key| *key < cell.key))).collect())
        .collect();
    SharedPoints { positions, bins, numbers }
}

fn lined_up_samples(n_axes: usize, bins: &BinGrid, runs: &[&[f64]]) -> SharedPoints {
    let along = bins.axis();
    let mut samples: Vec<(i64, &[f64], usize, usize)> = Vec::new();
    for (run, positions) in runs.iter().enumerate() {
        for (i, position) in positions.chunks_exact(n_axes).enumerate() {
            // The condenser takes in nothing that the bins cannot reach.
            samples.push((bins.bin_of(position[along]).unwrap_or(i64::MAX), position, run, i));
        }
    }
    samples.sort_by(|a, b| a.0.cmp(&b.0).then(a.1[along].total_cmp(&b.1[along])).then((a.2, a.3).cmp(&(b.2, b.3))));
    let mut numbers: Vec<Vec<u32>> = runs.iter().map(|positions| vec![0; positions.len() / n_axes]).collect();
    for (point, &(_, _, run, i)) in samples.iter().enumerate() {
        numbers[run][i] = number(point);
    }
    SharedPoints {
        positions: samples.iter().flat_map(|sample| sample.1).copied().collect(),
        bins: samples.iter().map(|sample| sample.0).collect(),
        numbers,
    }
}

/// A run's cells must have as many axes as the ensemble.
pub(super) fn has_axes(replica: &CondensedReplica, n_axes: usize) -> bool {
    let cells_fit = match &replica.cells {
        Cells::Lattice { .. } => n_axes == 1,
        Cells::Samples { n_axes: of_cells, .. } => *of_cells == n_axes,
    };
    cells_fit && replica.channels.len() == n_axes + 1 && replica.reference.len() == n_axes
}
