//! Pairs of windows that are worth solving.

use crate::ensemble::Ensemble;
use std::collections::{BTreeMap, BTreeSet};

/// Partners looked at for each window, by overlap of the visited points and by distance of the means.
const PARTNERS: usize = 6;
/// Neighboring points over which visits are compared.
const STRETCH: u32 = 64;
/// Most pairs tried to join what the partners left apart.
const MOST_EXTRA_PAIRS: usize = 20_000;

/// Pairs that visited the same stretches most, and pairs whose means lie closest in units of their spreads.
pub(super) fn likely_pairs(ensemble: &Ensemble) -> Vec<(usize, usize)> {
    let mut visitors: BTreeMap<u32, Vec<(usize, f64)>> = BTreeMap::new();
    for (k, window) in ensemble.windows.iter().enumerate() {
        let mut parts: BTreeMap<u32, u64> = BTreeMap::new();
        for &(point, count) in &window.counts {
            *parts.entry(point / STRETCH).or_insert(0) += count;
        }
        for (stretch, count) in parts {
            visitors.entry(stretch).or_default().push((k, count as f64 / window.n_samples as f64));
        }
    }
    let mut common: BTreeMap<(usize, usize), f64> = BTreeMap::new();
    for present in visitors.values() {
        for (a, &(i, p)) in present.iter().enumerate() {
            for &(j, q) in &present[a + 1..] {
                *common.entry((i, j)).or_insert(0.0) += p.min(q);
            }
        }
    }
    let n = ensemble.n_windows();
    let mut by_overlap: Vec<Vec<(usize, f64)>> = vec![Vec::new(); n];
    for (&(i, j), &overlap) in &common {
        by_overlap[i].push((j, -overlap));
        by_overlap[j].push((i, -overlap));
    }
    let mut pairs = BTreeSet::new();
    for (i, mut partners) in by_overlap.into_iter().enumerate() {
        keep_nearest(&mut partners);
        let mut near: Vec<(usize, f64)> =
            (0..n).filter(|&j| j != i).map(|j| (j, scaled_distance(ensemble, i, j))).collect();
        keep_nearest(&mut near);
        for (j, _) in partners.into_iter().chain(near) {
            pairs.insert((i.min(j), i.max(j)));
        }
    }
    pairs.into_iter().collect()
}

fn keep_nearest(partners: &mut Vec<(usize, f64)>) {
    partners.sort_by(|a, b| a.1.total_cmp(&b.1).then(a.0.cmp(&b.0)));
    partners.truncate(PARTNERS);
}

/// All pairs of windows of different groups, the nearest ones if there are very many.
pub(super) fn pairs_between(ensemble: &Ensemble, groups: &[Vec<usize>]) -> Vec<(usize, usize)> {
    let mut pairs: Vec<(usize, usize)> = Vec::new();
    for (a, group) in groups.iter().enumerate() {
        for other in &groups[a + 1..] {
            pairs.extend(group.iter().flat_map(|&i| other.iter().map(move |&j| (i.min(j), i.max(j)))));
        }
    }
    if pairs.len() > MOST_EXTRA_PAIRS {
        let mut with_distance: Vec<(f64, (usize, usize))> =
            pairs.into_iter().map(|(i, j)| (scaled_distance(ensemble, i, j), (i, j))).collect();
        with_distance.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        with_distance.truncate(MOST_EXTRA_PAIRS);
        pairs = with_distance.into_iter().map(|(_, pair)| pair).collect();
    }
    pairs
}

/// Distance of two windows' means in units of their spreads, summed in squares over the axes.
fn scaled_distance(ensemble: &Ensemble, i: usize, j: usize) -> f64 {
    let (a, b) = (&ensemble.windows[i], &ensemble.windows[j]);
    ensemble
        .axes
        .iter()
        .enumerate()
        .map(|(axis, along)| {
            let distance = along.displacement(a.mean[axis], b.mean[axis]);
            let spread = a.spread[axis] + b.spread[axis];
            if distance == 0.0 { 0.0 } else { (distance / spread).powi(2) }
        })
        .sum()
}
