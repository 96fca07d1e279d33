//! Where along the axis windows do not hang together.

use crate::ensemble::Ensemble;
use serde::Serialize;

/// A place on the axis where neighboring windows belong to different groups.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct UncoveredStretch {
    /// Window below it.
    pub below: usize,
    /// Window above it; on an axis with a period it comes after the stretch on the way around.
    pub above: usize,
    /// Where the samples of the one end and those of the other begin, along the axis of the bins, in the axis' unit.
    ///
    /// `None` where they reach past each other, yet too thinly to link the two: by less than one independent sample.
    pub range: Option<(f64, f64)>,
}

impl UncoveredStretch {
    /// All of them, in the order of the axis; none for a single group.
    pub(super) fn between(ensemble: &Ensemble, groups: &[Vec<usize>]) -> Vec<Self> {
        if groups.len() < 2 {
            return Vec::new();
        }
        let mut group_of = vec![0; ensemble.n_windows()];
        for (number, group) in groups.iter().enumerate() {
            for &k in group {
                group_of[k] = number;
            }
        }
        let along = Along::of(ensemble);
        let mut order: Vec<usize> = (0..ensemble.n_windows()).collect();
        order.sort_by(|&a, &b| along.place(a).total_cmp(&along.place(b)).then(a.cmp(&b)));
        let mut neighbors: Vec<(usize, usize, f64)> =
            order.windows(2).map(|pair| (pair[0], pair[1], along.place(pair[1]) - along.place(pair[0]))).collect();
        if let (Some(period), Some(&first), Some(&last)) = (along.period(), order.first(), order.last()) {
            neighbors.push((last, first, along.place(first) + period - along.place(last)));
        }
        neighbors
            .into_iter()
            .filter(|&(below, above, _)| group_of[below] != group_of[above])
            .map(|(below, above, distance)| Self { below, above, range: along.free_range(below, above, distance) })
            .collect()
    }
}

/// The axis of the bins, with the windows' places on it.
struct Along<'a> {
    ensemble: &'a Ensemble,
    axis: usize,
    lowest: f64,
}

impl<'a> Along<'a> {
    fn of(ensemble: &'a Ensemble) -> Self {
        Self { ensemble, axis: ensemble.bins.axis(), lowest: ensemble.bins.lower_edge(0) }
    }

    fn period(&self) -> Option<f64> {
        self.ensemble.axes[self.axis].period()
    }

    fn wrapped(&self, x: f64) -> f64 {
        if self.period().is_some() { self.ensemble.axes[self.axis].wrap(x, self.lowest) } else { x }
    }

    fn place(&self, k: usize) -> f64 {
        self.wrapped(self.ensemble.windows[k].mean[self.axis])
    }

    /// How far the samples of a window reach from its mean, upward (`sign` = 1) or downward (−1).
    fn reach(&self, k: usize, sign: f64) -> f64 {
        let window = &self.ensemble.windows[k];
        let axis = &self.ensemble.axes[self.axis];
        let position = |point: u32| self.ensemble.points.position(point as usize)[self.axis];
        window
            .counts
            .iter()
            .map(|&(point, _)| sign * axis.displacement(position(point), window.mean[self.axis]))
            .fold(0.0, |so_far: f64, x| if x > so_far { x } else { so_far })
    }

    fn free_range(&self, below: usize, above: usize, distance: f64) -> Option<(f64, f64)> {
        let (up, down) = (self.reach(below, 1.0), self.reach(above, -1.0));
        (up + down < distance).then(|| (self.wrapped(self.place(below) + up), self.wrapped(self.place(above) - down)))
    }
}
