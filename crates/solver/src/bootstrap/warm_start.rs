//! The likelihood of resampled counts, around the solution of the counts themselves.

use super::envelope::{Envelope, Factor};
use super::ordering::narrow_order;
use super::strips::Strips;
use crate::ensemble::Ensemble;
use crate::influence::Influence;
use std::collections::BTreeMap;

/// Shares at the solution, flat, for all windows but the gauge window.
///
/// With s(c) the shares of strip c at the solution and f = f⁰ + δ, D grows by the factor g(c) = 1 + Σₖ sₖ(c) (exp δₖ − 1): the gauge window has δ = 0 and
/// needs no entry, and no replicate needs an exponential a strip.
#[derive(Debug)]
pub(super) struct WarmStart {
    /// Row of each window, in the order of the envelope; `None` for the gauge window.
    rows: Vec<Option<usize>>,
    /// Mₖ by row.
    totals: Vec<f64>,
    offsets: Vec<usize>,
    /// Rows with weight on each strip, increasing.
    entry_rows: Vec<u32>,
    shares: Vec<f64>,
    envelope: Envelope,
}

impl WarmStart {
    /// Around the solution for which the influence was prepared.
    pub(super) fn new(ensemble: &Ensemble, influence: &Influence, strips: &Strips, gauge: usize) -> Self {
        let shares = shares_of_strips(ensemble, influence, strips);
        let order: Vec<usize> =
            narrow_order(&overlaps(ensemble.n_windows(), &shares)).into_iter().filter(|&k| k != gauge).collect();
        let mut rows = vec![None; ensemble.n_windows()];
        for (row, &k) in order.iter().enumerate() {
            rows[k] = Some(row);
        }
        let mut first: Vec<usize> = (0..order.len()).collect();
        let mut warm = Self {
            totals: order.iter().map(|&k| ensemble.windows[k].total_weight()).collect(),
            rows,
            offsets: vec![0],
            entry_rows: Vec::new(),
            shares: Vec::new(),
            envelope: Envelope::new(Vec::new()),
        };
        for of_strip in &shares {
            let mut entries: Vec<(usize, f64)> =
                of_strip.iter().filter_map(|(&k, &share)| Some((warm.rows[k as usize]?, share))).collect();
            entries.sort_unstable_by_key(|&(row, _)| row);
            for &(row, share) in &entries {
                first[row] = first[row].min(entries[0].0);
                warm.entry_rows.push(u32::try_from(row).unwrap_or(u32::MAX));
                warm.shares.push(share);
            }
            warm.offsets.push(warm.shares.len());
        }
        warm.envelope = Envelope::new(first);
        warm
    }

    /// Number of free windows.
    pub(super) fn n_rows(&self) -> usize {
        self.totals.len()
    }

    /// Row of each window; `None` for the gauge window.
    pub(super) fn rows(&self) -> &[Option<usize>] {
        &self.rows
    }

    /// Σ m* ln g − Σ Mₖ δₖ, the change of the likelihood from the solution.
    pub(super) fn value(&self, weights: &[f64], delta: &[f64]) -> f64 {
        let grown = self.growth_of_denominators(delta);
        let logarithms = weights.iter().zip(&grown).filter(|(m, _)| **m > 0.0).map(|(m, g)| m * g.ln());
        logarithms.sum::<f64>() - self.totals.iter().zip(delta).map(|(m, d)| m * d).sum::<f64>()
    }

    /// Σ m* s exp(δ)/g − M by row, in samples.
    pub(super) fn gradient(&self, weights: &[f64], delta: &[f64]) -> Vec<f64> {
        let change: Vec<f64> = delta.iter().map(|d| d.exp_m1()).collect();
        let mut sums = vec![0.0; self.totals.len()];
        for (strip, &weight) in weights.iter().enumerate() {
            if weight > 0.0 {
                let (rows, shares) = self.of_strip(strip);
                let per_sum = weight / grown(rows, shares, &change);
                for (&row, share) in rows.iter().zip(shares) {
                    sums[row as usize] += share * per_sum;
                }
            }
        }
        sums.iter().zip(delta).zip(&self.totals).map(|((sum, d), total)| sum * d.exp() - total).collect()
    }

    /// The Cholesky factor of the Hessian; `None` where some windows share next to no samples in the replicate.
    pub(super) fn hessian_factor(&self, weights: &[f64], delta: &[f64]) -> Option<Factor<'_>> {
        let change: Vec<f64> = delta.iter().map(|d| d.exp_m1()).collect();
        let growth: Vec<f64> = delta.iter().map(|d| d.exp()).collect();
        let mut hessian = self.envelope.zeros();
        let mut parts: Vec<f64> = Vec::new();
        for (strip, &weight) in weights.iter().enumerate() {
            if weight > 0.0 {
                let (rows, shares) = self.of_strip(strip);
                let sum = grown(rows, shares, &change);
                parts.clear();
                parts.extend(rows.iter().zip(shares).map(|(&row, share)| share * growth[row as usize] / sum));
                for (i, (&row, part)) in rows.iter().zip(&parts).enumerate() {
                    let row = row as usize;
                    let weighted = weight * part;
                    for (&column, other) in rows[..i].iter().zip(&parts) {
                        hessian[self.envelope.entry(row, column as usize)] -= weighted * other;
                    }
                    hessian[self.envelope.entry(row, row)] += weighted * (1.0 - part);
                }
            }
        }
        self.envelope.factor(hessian)
    }

    /// g of every strip.
    pub(super) fn growth_of_denominators(&self, delta: &[f64]) -> Vec<f64> {
        let change: Vec<f64> = delta.iter().map(|d| d.exp_m1()).collect();
        let grown_at = |strip: usize| {
            let (rows, shares) = self.of_strip(strip);
            grown(rows, shares, &change)
        };
        (0..self.offsets.len() - 1).map(grown_at).collect()
    }

    fn of_strip(&self, strip: usize) -> (&[u32], &[f64]) {
        let range = self.offsets[strip]..self.offsets[strip + 1];
        (&self.entry_rows[range.clone()], &self.shares[range])
    }
}

fn grown(rows: &[u32], shares: &[f64], change: &[f64]) -> f64 {
    1.0 + rows.iter().zip(shares).map(|(&row, share)| share * change[row as usize]).sum::<f64>()
}

/// Mean shares of the points of each strip, weighted with their m.
fn shares_of_strips(ensemble: &Ensemble, influence: &Influence, strips: &Strips) -> Vec<BTreeMap<u32, f64>> {
    let mut shares: Vec<BTreeMap<u32, f64>> = vec![BTreeMap::new(); strips.len()];
    for point in 0..ensemble.points.len() {
        let part = strips.part_of_strip(ensemble, point);
        let of_strip = &mut shares[strips.of_point(point)];
        for &(k, share) in influence.answered(point) {
            *of_strip.entry(k).or_insert(0.0) += part * share;
        }
    }
    shares
}

/// The windows that each window has strips in common with.
fn overlaps(n_windows: usize, shares: &[BTreeMap<u32, f64>]) -> Vec<Vec<u32>> {
    let mut neighbors: Vec<Vec<u32>> = vec![Vec::new(); n_windows];
    for of_strip in shares {
        for &k in of_strip.keys() {
            for &other in of_strip.keys() {
                let of_k = &mut neighbors[k as usize];
                if let (true, Err(place)) = (k != other, of_k.binary_search(&other)) {
                    of_k.insert(place, other);
                }
            }
        }
    }
    neighbors
}
