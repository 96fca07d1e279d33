//! Lays condensed windows on shared points.

use super::error::EnsembleError;
use super::shared_points::{has_axes, shared_points};
use super::window_data::WindowData;
use super::{Ensemble, Points, Stream, Window};
use crate::condense::{BinGrid, CondensedReplica};
use crate::series::{BatchRule, Inefficiency, InefficiencyMethod, MeanLag};
use spandrel_bias::Axis;
use std::collections::BTreeMap;

impl Ensemble {
    /// Lays the windows on shared points.
    ///
    /// Cells of a lattice are merged over all windows and stand at the pooled mean position of their samples; samples stay as they are.
    ///
    /// # Errors
    /// No window, a window without samples, a weight that is not positive, runs on different cells or axes, or a table with the rule
    /// that outside is an error and samples of other windows beyond its ends.
    pub fn assemble(axes: &[Axis], bins: BinGrid, windows: Vec<WindowData>) -> Result<Self, EnsembleError> {
        check(axes, &bins, &windows)?;
        let shared = shared_points(axes.len(), &bins, &windows)?;
        let mut weights = vec![0.0; shared.bins.len()];
        let mut numbers = shared.numbers.iter();
        let mut streams = Vec::new();
        let mut laid = Vec::with_capacity(windows.len());
        for (k, data) in windows.into_iter().enumerate() {
            let first_stream = streams.len();
            streams
                .extend(data.replicas.iter().zip(&mut numbers).map(|(replica, numbers)| stream(k, replica, numbers)));
            let window = window(data, axes, &streams[first_stream..]);
            for &(point, count) in &window.counts {
                weights[point as usize] += window.weight * count as f64;
            }
            laid.push(window);
        }
        let ensemble = Self {
            axes: axes.to_vec(),
            bins,
            windows: laid,
            points: Points::new(axes.len(), shared.positions, shared.bins, weights),
            streams,
        };
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
                    .map_err(|outside| EnsembleError::OutsideTable { window: window.name.clone(), outside })?;
            }
        }
        Ok(())
    }
}

fn check(axes: &[Axis], bins: &BinGrid, windows: &[WindowData]) -> Result<(), EnsembleError> {
    if windows.is_empty() {
        return Err(EnsembleError::NoWindows);
    }
    let n_axes = axes.len();
    for window in windows {
        let name = || window.name.clone();
        if window.replicas.is_empty() || window.replicas.iter().any(|replica| replica.n_samples == 0) {
            return Err(EnsembleError::NoSamples { window: name() });
        }
        if !(window.weight.is_finite() && window.weight > 0.0) {
            return Err(EnsembleError::Weight { window: name(), weight: window.weight });
        }
        let runs_fit = window.replicas.iter().all(|replica| has_axes(replica, n_axes));
        if !(runs_fit && bins.axis() < n_axes && window.bias.n_axes() == n_axes) {
            return Err(EnsembleError::Axes { window: name(), n_axes });
        }
    }
    Ok(())
}

fn stream(window: usize, replica: &CondensedReplica, numbers: &[u32]) -> Stream {
    let groups: Vec<_> = replica.groups.iter().map(|group| group.renumbered(numbers)).collect();
    let block_length = replica.blocks.block_length();
    let n_axes = replica.reference.len();
    let mut slowest: Option<MeanLag> = None;
    for axis in 0..n_axes {
        let Some(correlation) = MeanLag::of_block_means(&replica.blocks.channel(axis)) else { continue };
        if slowest.is_none_or(|so_far| correlation.mean_lag > so_far.mean_lag) {
            slowest = Some(correlation);
        }
    }
    let inefficiency = |method| Inefficiency::slowest(&replica.blocks, &replica.channels[..n_axes], method);
    Stream {
        window,
        n_samples: replica.n_samples,
        batches: slowest.and_then(|lag| BatchRule::new(replica.blocks.n_blocks(), block_length, groups.len(), &lag)),
        groups,
        inefficiency: inefficiency(InefficiencyMethod::InitialSequence),
        inefficiency_by_window: inefficiency(InefficiencyMethod::AutomaticWindow),
    }
}

fn window(data: WindowData, axes: &[Axis], streams: &[Stream]) -> Window {
    let mut counts: BTreeMap<u32, u64> = BTreeMap::new();
    for group in streams.iter().flat_map(|stream| &stream.groups) {
        for &(point, count) in &group.entries {
            *counts.entry(point).or_insert(0) += u64::from(count);
        }
    }
    let n_samples: u64 = data.replicas.iter().map(|replica| replica.n_samples).sum();
    let moments: Vec<(f64, f64)> =
        (0..axes.len()).map(|axis| pooled_moments(&axes[axis], axis, &data.replicas)).collect();
    let pooled = |of_stream: fn(&Stream) -> Option<Inefficiency>| pooled_inefficiency(n_samples, streams, of_stream);
    let inefficiency = pooled(|stream| stream.inefficiency);
    let known = |stream: &Stream| stream.inefficiency.map_or(1.0, |g| g.effective_samples(stream.n_samples));
    Window {
        name: data.name,
        bias: data.bias,
        weight: data.weight,
        n_samples,
        counts: counts.into_iter().collect(),
        mean: moments.iter().map(|(mean, _)| *mean).collect(),
        spread: moments.iter().map(|(_, spread)| *spread).collect(),
        effective_samples: streams.iter().map(known).sum(),
        inefficiency,
        inefficiency_by_window: pooled(|stream| stream.inefficiency_by_window),
    }
}

/// The inefficiency of all replicas together, N/Σ(N_r/g_r), with its standard error; `None` where one is not known.
fn pooled_inefficiency(
    n_samples: u64,
    streams: &[Stream],
    of_stream: fn(&Stream) -> Option<Inefficiency>,
) -> Option<Inefficiency> {
    let (mut effective, mut variance, mut method) = (0.0, 0.0, None);
    for stream in streams {
        let g = of_stream(stream)?;
        let part = g.effective_samples(stream.n_samples);
        effective += part;
        variance += (part * g.standard_error / g.value).powi(2);
        method = Some(g.method);
    }
    let value = n_samples as f64 / effective;
    Some(Inefficiency { value, standard_error: value * variance.sqrt() / effective, method: method? })
}

/// Mean and standard deviation over all replicas; on an axis with a period each replica is taken at the image nearest to the first.
fn pooled_moments(along: &Axis, axis: usize, replicas: &[CondensedReplica]) -> (f64, f64) {
    let first = replicas.first().and_then(|replica| replica.mean_position(axis)).unwrap_or(0.0);
    let parts = replicas.iter().filter_map(|replica| {
        let offset = along.displacement(replica.mean_position(axis)?, first);
        Some((replica.n_samples as f64, offset, replica.channels.get(axis)?.variance().unwrap_or(0.0)))
    });
    let total: f64 = parts.clone().map(|(n, _, _)| n).sum();
    let mean = parts.clone().map(|(n, offset, _)| n * offset).sum::<f64>() / total;
    let squares: f64 = parts.map(|(n, offset, variance)| (n - 1.0) * variance + n * (offset - mean).powi(2)).sum();
    (first + mean, (squares / (total - 1.0).max(1.0)).sqrt())
}
