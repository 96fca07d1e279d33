//! Which windows hang together, and a first guess of their free energies.

use super::pair::{PairSolution, solve_pair};
use crate::ensemble::Ensemble;
use rayon::prelude::*;
use serde::Serialize;
use std::collections::{BTreeMap, BTreeSet};

/// Effective linking samples below which two windows are not linked: not one independent sample of either would be the other's.
pub const LEAST_LINK: f64 = 1.0;

/// Partners looked at for each window, by overlap of the visited points and by distance of the means.
const PARTNERS: usize = 6;
/// Neighboring points over which visits are compared.
const STRETCH: u32 = 64;
/// Most pairs tried to join what the partners left apart.
const MOST_EXTRA_PAIRS: usize = 20_000;

/// Two linked windows.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Link {
    /// Numbers of the windows, the smaller first.
    pub windows: (usize, usize),
    /// f of the second less f of the first, in kT, from these two alone.
    pub difference: f64,
    /// Effective number of samples of either window that the other answers for.
    pub linking_samples: f64,
}

/// A place on the axis where neighboring windows are not linked.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct UncoveredStretch {
    /// Window below it.
    pub below: usize,
    /// Window above it (below it in number, on an axis with a period, where the stretch crosses the end of the period).
    pub above: usize,
    /// Its ends along the axis of the bins, in the axis' unit: where the samples of the one end and those of the other begin.
    pub from: f64,
    /// See `from`.
    pub to: f64,
}

/// How the windows hang together.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Links {
    /// The strongest links that join all windows of a group: a maximum spanning tree each.
    pub tree: Vec<Link>,
    /// Windows that hang together, each group in increasing order, groups by their first window.
    pub groups: Vec<Vec<usize>>,
    /// First guess of the reduced free energies in kT, along the tree; the first window of each group at 0.
    pub start: Vec<f64>,
    /// Where neighboring windows belong to different groups; empty for one group.
    pub uncovered: Vec<UncoveredStretch>,
}

impl Links {
    /// Solves the likely pairs and joins the windows by their strongest links.
    #[must_use]
    pub fn find(ensemble: &Ensemble) -> Self {
        let mut links = solved(ensemble, &likely_pairs(ensemble));
        let mut forest = Forest::of(ensemble.n_windows(), &mut links);
        let rest = pairs_between(ensemble, &forest.groups());
        if !rest.is_empty() {
            links.extend(solved(ensemble, &rest));
            forest = Forest::of(ensemble.n_windows(), &mut links);
        }
        let groups = forest.groups();
        let start = start_along(ensemble.n_windows(), &forest.tree, &groups);
        let uncovered = uncovered_stretches(ensemble, &groups);
        Self {
            tree: forest.tree,
            groups,
            start,
            uncovered,
        }
    }

    /// The links among the windows of one group, numbered as in the ensemble restricted to that group.
    #[must_use]
    pub fn within(&self, group: &[usize]) -> Self {
        let place = |k: usize| group.binary_search(&k).ok();
        let tree = self.tree.iter().filter_map(|link| {
            Some(Link { windows: (place(link.windows.0)?, place(link.windows.1)?), ..*link })
        });
        Self {
            tree: tree.collect(),
            groups: vec![(0..group.len()).collect()],
            start: group.iter().map(|&k| self.start[k]).collect(),
            uncovered: Vec::new(),
        }
    }

    /// The link by which the whole tree hangs.
    #[must_use]
    pub fn weakest(&self) -> Option<&Link> {
        self.tree
            .iter()
            .min_by(|a, b| a.linking_samples.total_cmp(&b.linking_samples))
    }
}

fn solved(ensemble: &Ensemble, pairs: &[(usize, usize)]) -> Vec<Link> {
    pairs
        .par_iter()
        .map(|&(i, j)| {
            let PairSolution {
                difference,
                linking_samples,
            } = solve_pair(ensemble, i, j);
            Link {
                windows: (i, j),
                difference,
                linking_samples,
            }
        })
        .collect()
}

/// Pairs that visited the same stretches most, and pairs whose means lie closest in units of their spreads.
fn likely_pairs(ensemble: &Ensemble) -> Vec<(usize, usize)> {
    let mut visitors: BTreeMap<u32, Vec<(usize, f64)>> = BTreeMap::new();
    for (k, window) in ensemble.windows.iter().enumerate() {
        let mut parts: BTreeMap<u32, u64> = BTreeMap::new();
        for &(point, count) in &window.counts {
            *parts.entry(point / STRETCH).or_insert(0) += count;
        }
        for (stretch, count) in parts {
            visitors
                .entry(stretch)
                .or_default()
                .push((k, count as f64 / window.n_samples as f64));
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
        let mut near: Vec<(usize, f64)> = (0..n)
            .filter(|&j| j != i)
            .map(|j| (j, scaled_distance(ensemble, i, j)))
            .collect();
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
fn pairs_between(ensemble: &Ensemble, groups: &[Vec<usize>]) -> Vec<(usize, usize)> {
    let mut pairs: Vec<(usize, usize)> = Vec::new();
    for (a, group) in groups.iter().enumerate() {
        for other in &groups[a + 1..] {
            pairs.extend(
                group
                    .iter()
                    .flat_map(|&i| other.iter().map(move |&j| (i.min(j), i.max(j)))),
            );
        }
    }
    if pairs.len() > MOST_EXTRA_PAIRS {
        let mut with_distance: Vec<(f64, (usize, usize))> = pairs
            .into_iter()
            .map(|(i, j)| (scaled_distance(ensemble, i, j), (i, j)))
            .collect();
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
            if distance == 0.0 {
                0.0
            } else {
                (distance / spread).powi(2)
            }
        })
        .sum()
}

/// Windows joined by their strongest links first (Kruskal).
struct Forest {
    parent: Vec<usize>,
    tree: Vec<Link>,
}

impl Forest {
    fn of(n_windows: usize, links: &mut [Link]) -> Self {
        links.sort_by(|a, b| {
            b.linking_samples
                .total_cmp(&a.linking_samples)
                .then(a.windows.cmp(&b.windows))
        });
        let mut forest = Self {
            parent: (0..n_windows).collect(),
            tree: Vec::new(),
        };
        for link in links.iter().filter(|link| link.linking_samples >= LEAST_LINK) {
            let (a, b) = (forest.root(link.windows.0), forest.root(link.windows.1));
            if a != b {
                forest.parent[a.max(b)] = a.min(b);
                forest.tree.push(*link);
            }
        }
        forest
    }

    fn root(&self, mut k: usize) -> usize {
        while self.parent[k] != k {
            k = self.parent[k];
        }
        k
    }

    fn groups(&self) -> Vec<Vec<usize>> {
        let mut groups: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
        for k in 0..self.parent.len() {
            groups.entry(self.root(k)).or_default().push(k);
        }
        groups.into_values().collect()
    }
}

fn start_along(n_windows: usize, tree: &[Link], groups: &[Vec<usize>]) -> Vec<f64> {
    let mut neighbors: Vec<Vec<(usize, f64)>> = vec![Vec::new(); n_windows];
    for link in tree {
        let (i, j) = link.windows;
        neighbors[i].push((j, link.difference));
        neighbors[j].push((i, -link.difference));
    }
    let mut start = vec![f64::NAN; n_windows];
    for group in groups {
        start[group[0]] = 0.0;
        let mut reached = vec![group[0]];
        while let Some(k) = reached.pop() {
            for &(j, difference) in &neighbors[k] {
                if start[j].is_nan() {
                    start[j] = start[k] + difference;
                    reached.push(j);
                }
            }
        }
    }
    start
}

fn uncovered_stretches(ensemble: &Ensemble, groups: &[Vec<usize>]) -> Vec<UncoveredStretch> {
    if groups.len() < 2 {
        return Vec::new();
    }
    let along = ensemble.bins.axis();
    let mut group_of = vec![0; ensemble.n_windows()];
    for (number, group) in groups.iter().enumerate() {
        for &k in group {
            group_of[k] = number;
        }
    }
    let lowest = ensemble.bins.lower_edge(0);
    let place = |k: usize| {
        let axis = &ensemble.axes[along];
        let mean = ensemble.windows[k].mean[along];
        if axis.period().is_some() {
            axis.wrap(mean, lowest)
        } else {
            mean
        }
    };
    let mut order: Vec<usize> = (0..ensemble.n_windows()).collect();
    order.sort_by(|&a, &b| place(a).total_cmp(&place(b)).then(a.cmp(&b)));
    let mut neighbors: Vec<(usize, usize)> = order.windows(2).map(|pair| (pair[0], pair[1])).collect();
    if ensemble.axes[along].period().is_some()
        && let (Some(&first), Some(&last)) = (order.first(), order.last())
    {
        neighbors.push((last, first));
    }
    neighbors
        .into_iter()
        .filter(|&(below, above)| group_of[below] != group_of[above])
        .map(|(below, above)| {
            let reach = |k: usize, sign: f64| {
                let window = &ensemble.windows[k];
                let axis = &ensemble.axes[along];
                let mean = window.mean[along];
                let furthest = window
                    .counts
                    .iter()
                    .map(|&(point, _)| sign * axis.displacement(ensemble.points.position(point as usize)[along], mean));
                let furthest = furthest.fold(0.0, |so_far: f64, x| if x > so_far { x } else { so_far });
                let end = mean + sign * furthest;
                if axis.period().is_some() {
                    axis.wrap(end, lowest)
                } else {
                    end
                }
            };
            UncoveredStretch {
                below,
                above,
                from: reach(below, 1.0),
                to: reach(above, -1.0),
            }
        })
        .collect()
}
