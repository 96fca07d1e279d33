//! Lays condensed windows on shared points.

use super::{Ensemble, Points, Stream, Window};
use crate::condense::{BinGrid, CellKey, Cells, CondensedReplica};
use crate::series::{BatchRule, MeanLag};
use spandrel_bias::{Axis, Bias, OutsideTable};
use std::collections::BTreeMap;
use std::fmt;

/// A window as it is handed in: its condensed runs and what is known of it.
#[derive(Debug, Clone, PartialEq)]
pub struct WindowData {
    /// Name, unique in the ensemble.
    pub name: String,
    /// Reduced bias (kT).
    pub bias: Bias,
    /// Statistical weight ω of one sample, positive.
    pub weight: f64,
    /// One or more independent runs, all condensed on the same cells.
    pub replicas: Vec<CondensedReplica>,
}

/// Why windows cannot be laid together.
#[derive(Debug, Clone, PartialEq)]
pub enum EnsembleError {
    /// There is no window.
    NoWindows,
    /// A window without a sample.
    NoSamples {
        /// Its name.
        window: String,
    },
    /// A weight that is not positive and finite.
    Weight {
        /// The window's name.
        window: String,
        /// The weight given.
        weight: f64,
    },
    /// Runs were condensed on different cells.
    MixedCells,
    /// A window's table does not reach a place that another window sampled.
    OutsideTable {
        /// Name of the window with the table.
        window: String,
        /// Where its table ends and which position it misses.
        outside: OutsideTable,
    },
}

impl fmt::Display for EnsembleError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoWindows => write!(f, "no window is left to solve"),
            Self::NoSamples { window } => write!(f, "window `{window}` has no sample"),
            Self::Weight { window, weight } => {
                write!(
                    f,
                    "window `{window}` has weight {weight}, expected a positive finite number"
                )
            }
            Self::MixedCells => write!(f, "runs were condensed on different cells"),
            Self::OutsideTable { window, outside } => {
                write!(
                    f,
                    "the bias table of window `{window}` misses a place that another window sampled: {outside}"
                )
            }
        }
    }
}

impl std::error::Error for EnsembleError {}

impl Ensemble {
    /// Lays the windows on shared points.
    ///
    /// Cells of a lattice are merged over all windows and stand at the pooled mean position of their samples; samples stay as they are.
    ///
    /// # Errors
    /// No window, a window without samples, a weight that is not positive, runs on different cells, or a table with the rule
    /// that outside is an error and samples of other windows beyond its ends.
    pub fn assemble(axes: &[Axis], bins: BinGrid, windows: Vec<WindowData>) -> Result<Self, EnsembleError> {
        check(&windows)?;
        let (positions, point_bins, numbers) = shared_points(axes.len(), &bins, &windows)?;
        let mut ensemble = Self {
            axes: axes.to_vec(),
            bins,
            windows: Vec::with_capacity(windows.len()),
            points: Points::new(axes.len(), positions, point_bins, Vec::new()),
            streams: Vec::new(),
        };
        let mut weights = vec![0.0; ensemble.points.len()];
        let mut numbers = numbers.into_iter();
        for (k, data) in windows.into_iter().enumerate() {
            let first_stream = ensemble.streams.len();
            for replica in &data.replicas {
                let numbers = numbers.next().unwrap_or_default();
                ensemble.streams.push(stream(k, axes.len(), replica, &numbers));
            }
            let window = window(data, &ensemble.streams[first_stream..]);
            for &(point, count) in &window.counts {
                weights[point as usize] += window.weight * count as f64;
            }
            ensemble.windows.push(window);
        }
        ensemble.points.weights = weights;
        ensemble.check_tables()?;
        Ok(ensemble)
    }

    /// Every window's bias must be known wherever any window has a point.
    fn check_tables(&self) -> Result<(), EnsembleError> {
        for window in self.windows.iter().filter(|window| window.bias.has_limited_domain()) {
            for i in 0..self.points.len() {
                window
                    .bias
                    .energy(self.points.position(i))
                    .map_err(|outside| EnsembleError::OutsideTable {
                        window: window.name.clone(),
                        outside,
                    })?;
            }
        }
        Ok(())
    }
}

fn check(windows: &[WindowData]) -> Result<(), EnsembleError> {
    if windows.is_empty() {
        return Err(EnsembleError::NoWindows);
    }
    for window in windows {
        if window.replicas.is_empty() || window.replicas.iter().any(|replica| replica.n_samples == 0) {
            return Err(EnsembleError::NoSamples {
                window: window.name.clone(),
            });
        }
        if !(window.weight.is_finite() && window.weight > 0.0) {
            return Err(EnsembleError::Weight {
                window: window.name.clone(),
                weight: window.weight,
            });
        }
    }
    Ok(())
}

/// Positions and bins of the shared points, and for each replica in turn the point of each of its cells.
type SharedPoints = (Vec<f64>, Vec<i64>, Vec<Vec<u32>>);

fn shared_points(n_axes: usize, bins: &BinGrid, windows: &[WindowData]) -> Result<SharedPoints, EnsembleError> {
    let replicas: Vec<&CondensedReplica> = windows.iter().flat_map(|window| &window.replicas).collect();
    let on_lattice = replicas
        .iter()
        .filter(|replica| matches!(replica.cells, Cells::Lattice { .. }))
        .count();
    if on_lattice == replicas.len() {
        shared_cells(bins, &replicas)
    } else if on_lattice == 0 {
        Ok(shared_samples(n_axes, bins, &replicas))
    } else {
        Err(EnsembleError::MixedCells)
    }
}

fn shared_cells(bins: &BinGrid, replicas: &[&CondensedReplica]) -> Result<SharedPoints, EnsembleError> {
    let mut merged: BTreeMap<CellKey, (u64, i128)> = BTreeMap::new();
    let mut common_level = None;
    for replica in replicas {
        if let Cells::Lattice { level, cells } = &replica.cells {
            if *common_level.get_or_insert(*level) != *level {
                return Err(EnsembleError::MixedCells);
            }
            for cell in cells {
                let sums = merged.entry(cell.key).or_insert((0, 0));
                sums.0 += cell.count;
                sums.1 += cell.position_sum;
            }
        }
    }
    let level = common_level.unwrap_or(0);
    let positions = merged
        .values()
        .map(|&(count, sum)| bins.position_of(sum, count))
        .collect();
    let point_bins = merged.keys().map(|key| key.lattice >> level).collect();
    let keys: Vec<CellKey> = merged.into_keys().collect();
    let numbers = replicas
        .iter()
        .map(|replica| match &replica.cells {
            Cells::Lattice { cells, .. } => cells
                .iter()
                .map(|cell| point_number(keys.partition_point(|key| *key < cell.key)))
                .collect(),
            Cells::Samples { .. } => Vec::new(),
        })
        .collect();
    Ok((positions, point_bins, numbers))
}

fn shared_samples(n_axes: usize, bins: &BinGrid, replicas: &[&CondensedReplica]) -> SharedPoints {
    let mut samples: Vec<(i64, &[f64], usize, usize)> = Vec::new();
    for (r, replica) in replicas.iter().enumerate() {
        if let Cells::Samples { positions, .. } = &replica.cells {
            for (i, position) in positions.chunks_exact(n_axes).enumerate() {
                // The condenser takes in nothing that the bins cannot reach.
                samples.push((bins.bin_of(position[bins.axis()]).unwrap_or(i64::MAX), position, r, i));
            }
        }
    }
    let along = bins.axis();
    samples.sort_by(|a, b| {
        a.0.cmp(&b.0)
            .then(a.1[along].total_cmp(&b.1[along]))
            .then((a.2, a.3).cmp(&(b.2, b.3)))
    });
    let mut numbers: Vec<Vec<u32>> = replicas.iter().map(|replica| vec![0; replica.cells.len()]).collect();
    for (point, &(_, _, r, i)) in samples.iter().enumerate() {
        numbers[r][i] = point_number(point);
    }
    let positions = samples.iter().flat_map(|sample| sample.1).copied().collect();
    let point_bins = samples.iter().map(|sample| sample.0).collect();
    (positions, point_bins, numbers)
}

fn point_number(i: usize) -> u32 {
    u32::try_from(i).unwrap_or(u32::MAX)
}

fn stream(window: usize, n_axes: usize, replica: &CondensedReplica, numbers: &[u32]) -> Stream {
    let groups: Vec<_> = replica.groups.iter().map(|group| group.renumbered(numbers)).collect();
    let mut slowest: Option<MeanLag> = None;
    let mut inefficiency: Option<f64> = None;
    for axis in 0..n_axes {
        let Some(correlation) = MeanLag::of_block_means(&replica.blocks.channel(axis)) else {
            continue;
        };
        if slowest.is_none_or(|so_far| correlation.mean_lag > so_far.mean_lag) {
            slowest = Some(correlation);
        }
        let variance = replica.channels[axis].variance().unwrap_or(0.0);
        if variance > 0.0 {
            let g = correlation.statistical_inefficiency(replica.blocks.block_length(), variance);
            inefficiency = Some(inefficiency.map_or(g, |so_far| so_far.max(g)));
        }
    }
    Stream {
        window,
        n_samples: replica.n_samples,
        batches: slowest.and_then(|lag| BatchRule::new(replica.blocks.n_blocks(), groups.len(), &lag)),
        groups,
        inefficiency,
    }
}

fn window(data: WindowData, streams: &[Stream]) -> Window {
    let mut counts: BTreeMap<u32, u64> = BTreeMap::new();
    for group in streams.iter().flat_map(|stream| &stream.groups) {
        for &(point, count) in &group.entries {
            *counts.entry(point).or_insert(0) += u64::from(count);
        }
    }
    let n_samples: u64 = data.replicas.iter().map(|replica| replica.n_samples).sum();
    // All replicas of a window share its bias and with it the reference of axes with a period, unless the bias has no center;
    // then the first replica's reference serves and later ones are moved to it.
    let references = &data.replicas[0].reference;
    let (mut mean, mut spread) = (
        Vec::with_capacity(references.len()),
        Vec::with_capacity(references.len()),
    );
    for (axis, reference) in references.iter().enumerate() {
        let moments = data.replicas.iter().map(|replica| {
            let n = replica.n_samples as f64;
            let shift = replica.reference[axis] - reference;
            let center = replica.channels[axis].mean().unwrap_or(0.0) + shift;
            (n, center, replica.channels[axis].variance().unwrap_or(0.0))
        });
        let total = n_samples as f64;
        let pooled_mean = moments.clone().map(|(n, center, _)| n * center).sum::<f64>() / total;
        let pooled_variance = moments
            .map(|(n, center, variance)| (n - 1.0) * variance + n * (center - pooled_mean).powi(2))
            .sum::<f64>()
            / (total - 1.0).max(1.0);
        mean.push(pooled_mean + reference);
        spread.push(pooled_variance.sqrt());
    }
    // The replicas' effective samples add up.
    let effective: Option<f64> = streams
        .iter()
        .map(|stream| stream.inefficiency.map(|g| stream.n_samples as f64 / g))
        .sum();
    Window {
        name: data.name,
        bias: data.bias,
        weight: data.weight,
        n_samples,
        counts: counts.into_iter().collect(),
        mean,
        spread,
        inefficiency: effective.map(|effective| n_samples as f64 / effective),
    }
}
