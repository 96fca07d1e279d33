//! Which windows hang together, and a first guess of their free energies.

use super::candidates::{likely_pairs, pairs_between};
use super::pair::{PairSolution, solve_pair};
use super::uncovered::UncoveredStretch;
use crate::ensemble::Ensemble;
use rayon::prelude::*;
use serde::Serialize;
use std::collections::BTreeMap;

/// Effective linking samples below which two windows are not linked: not one independent sample of either would be the other's.
pub const LEAST_LINK: f64 = 1.0;

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
        let uncovered = UncoveredStretch::between(ensemble, &groups);
        Self { tree: forest.tree, groups, start, uncovered }
    }

    /// The links among the windows of one group, numbered as in the ensemble restricted to that group.
    #[must_use]
    pub fn within(&self, group: &[usize]) -> Self {
        let place = |k: usize| group.binary_search(&k).ok();
        let tree = self
            .tree
            .iter()
            .filter_map(|link| Some(Link { windows: (place(link.windows.0)?, place(link.windows.1)?), ..*link }));
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
        self.tree.iter().min_by(|a, b| a.linking_samples.total_cmp(&b.linking_samples))
    }
}

fn solved(ensemble: &Ensemble, pairs: &[(usize, usize)]) -> Vec<Link> {
    pairs
        .par_iter()
        .map(|&(i, j)| {
            let PairSolution { difference, linking_samples } = solve_pair(ensemble, i, j);
            Link { windows: (i, j), difference, linking_samples }
        })
        .collect()
}

/// Windows joined by their strongest links first (Kruskal).
struct Forest {
    parent: Vec<usize>,
    tree: Vec<Link>,
}

impl Forest {
    fn of(n_windows: usize, links: &mut [Link]) -> Self {
        links.sort_by(|a, b| b.linking_samples.total_cmp(&a.linking_samples).then(a.windows.cmp(&b.windows)));
        let mut forest = Self { parent: (0..n_windows).collect(), tree: Vec::new() };
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
