//! The batches of one replica, prepared for any quantity.

use super::quantity::Quantity;
use crate::ensemble::{Ensemble, Stream};
use rayon::prelude::*;
use std::collections::BTreeMap;

/// One batch: its counts, and the mean part of its samples that each window answers for.
#[derive(Debug, Clone)]
struct Batch {
    n_samples: f64,
    /// Point and count, increasing in point.
    entries: Vec<(u32, f64)>,
    /// Mean of Mⱼ wⱼ over the batch for each window of the stream.
    answered: Vec<f64>,
}

/// Batches of one replica.
#[derive(Debug, Clone)]
pub(super) struct StreamBatches {
    /// Windows that answer for any of its samples.
    present: Vec<u32>,
    batches: Vec<Batch>,
    /// ω √(N / ((a − 1) h)), more where it stands in for a replica without an error of its own: turns a length-weighted deviation into its part of the standard error.
    scale: f64,
}

impl StreamBatches {
    /// The batches of every replica that supports an error.
    pub(super) fn of_ensemble(ensemble: &Ensemble, answered: &[Vec<(u32, f64)>]) -> Vec<Self> {
        let mut supported = vec![0; ensemble.n_windows()];
        for stream in ensemble.streams.iter().filter(|stream| stream.batches.is_some()) {
            supported[stream.window] += stream.n_samples;
        }
        ensemble
            .streams
            .par_iter()
            .filter_map(|stream| {
                let window = &ensemble.windows[stream.window];
                // A replica that cannot show its own spread has that of its window's other replicas.
                let stands_for = window.n_samples as f64 / supported[stream.window] as f64;
                Self::of(stream, window.weight * stands_for.sqrt(), answered)
            })
            .collect()
    }

    fn of(stream: &Stream, weight: f64, answered: &[Vec<(u32, f64)>]) -> Option<Self> {
        let rule = stream.batches?;
        let mut present: Vec<u32> = stream
            .groups
            .iter()
            .flat_map(|group| &group.entries)
            .flat_map(|&(point, _)| answered[point as usize].iter().map(|&(k, _)| k))
            .collect();
        present.sort_unstable();
        present.dedup();
        let batches: Vec<Batch> = (0..rule.n_batches)
            .map(|i| {
                let mut counts: BTreeMap<u32, u64> = BTreeMap::new();
                for group in &stream.groups[rule.groups_of(i, stream.groups.len())] {
                    for &(point, count) in &group.entries {
                        *counts.entry(point).or_insert(0) += u64::from(count);
                    }
                }
                Batch::of(counts, &present, answered)
            })
            .collect();
        let degrees = (rule.n_batches - 1) as f64;
        let lengths: Vec<f64> = batches.iter().map(|batch| batch.n_samples).collect();
        let scale = weight * (stream.n_samples as f64 / (degrees * rule.shown_part(&lengths))).sqrt();
        Some(Self { present, batches, scale })
    }

    pub(super) fn n_batches(&self) -> usize {
        self.batches.len()
    }

    pub(super) fn n_samples(&self) -> f64 {
        self.batches.iter().map(|batch| batch.n_samples).sum()
    }

    /// Scaled deviations of the batch means of φ.
    pub(super) fn deviations(&self, quantity: &Quantity, pull: &[f64]) -> Vec<f64> {
        let means = self.means(quantity, pull);
        let center = self.mean_of(&means);
        self.batches.iter().zip(&means).map(|(batch, y)| self.scale * batch.n_samples.sqrt() * (y - center)).collect()
    }

    /// Mean of φ over the replica.
    pub(super) fn mean(&self, quantity: &Quantity, pull: &[f64]) -> f64 {
        self.mean_of(&self.means(quantity, pull))
    }

    /// Batch means of φ(x) = q(x) − Σⱼ pullⱼ Mⱼ wⱼ(x); what φ has besides is constant along a window.
    fn means(&self, quantity: &Quantity, pull: &[f64]) -> Vec<f64> {
        let mean = |batch: &Batch| {
            let indirect: f64 = self.present.iter().zip(&batch.answered).map(|(&k, s)| pull[k as usize] * s).sum();
            batch.direct_sum(quantity) / batch.n_samples - indirect
        };
        self.batches.iter().map(mean).collect()
    }

    fn mean_of(&self, batch_means: &[f64]) -> f64 {
        self.batches.iter().zip(batch_means).map(|(batch, y)| batch.n_samples * y).sum::<f64>() / self.n_samples()
    }
}

impl Batch {
    fn of(counts: BTreeMap<u32, u64>, present: &[u32], answered: &[Vec<(u32, f64)>]) -> Self {
        let mut sums = vec![0.0; present.len()];
        let mut n_samples = 0.0;
        let entries: Vec<(u32, f64)> = counts.into_iter().map(|(point, count)| (point, count as f64)).collect();
        for &(point, count) in &entries {
            n_samples += count;
            for &(k, s) in &answered[point as usize] {
                sums[present.partition_point(|&p| p < k)] += count * s;
            }
        }
        for sum in &mut sums {
            *sum /= n_samples;
        }
        Self { n_samples, entries, answered: sums }
    }

    fn direct_sum(&self, quantity: &Quantity) -> f64 {
        quantity
            .direct
            .iter()
            .map(|direct| {
                let end = direct.first + direct.values.len();
                let from = self.entries.partition_point(|&(point, _)| (point as usize) < direct.first);
                self.entries[from..]
                    .iter()
                    .take_while(|&&(point, _)| (point as usize) < end)
                    .map(|&(point, count)| count * direct.values[point as usize - direct.first])
                    .sum::<f64>()
            })
            .sum()
    }
}
