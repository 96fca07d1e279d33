//! Points that say the same, taken together.

use crate::ensemble::Ensemble;
use crate::influence::Influence;

/// Farthest that the shares of a strip's points are from those of its first one: half the sum of their absolute differences, the part of a sample
/// that would be answered for by other windows.
///
/// Inside a strip shares scatter by some 0.05/√12 where across a window they scatter by some 0.3: 0.2 % of the variance is not seen.
const SHARE_RESOLUTION: f64 = 0.05;
/// The same for ln D; inside a strip the weights of a bin's points scatter by a hundredth.
const DENSITY_RESOLUTION: f64 = 0.05;

/// Neighboring points of one bin whose shares and denominators differ too little to matter for an error.
///
/// Points are so fine that no bin edge and no curvature of a bias shows; noise needs no such care. A strip has the mean shares of its points
/// weighted with their counts, so that the solution stays the exact one, and some twenty strips a window stand for thousands of points.
#[derive(Debug)]
pub(super) struct Strips {
    /// Strip of each point, non-decreasing.
    of_points: Vec<u32>,
    /// m of each strip.
    weights: Vec<f64>,
}

impl Strips {
    /// Lays strips over the points.
    pub(super) fn lay(ensemble: &Ensemble, influence: &Influence) -> Self {
        Self::with_resolution(ensemble, influence, 1.0)
    }

    /// With the resolutions multiplied by a factor; 0 takes only points together that are equal.
    pub(super) fn with_resolution(ensemble: &Ensemble, influence: &Influence, factor: f64) -> Self {
        let bins = &ensemble.points.bins;
        let mut of_points = Vec::with_capacity(bins.len());
        let mut weights: Vec<f64> = Vec::new();
        let mut first = 0;
        for (point, weight) in ensemble.points.weights.iter().enumerate() {
            let alike = point > 0
                && bins[point] == bins[first]
                && (influence.log_denominator(point) - influence.log_denominator(first)).abs()
                    <= factor * DENSITY_RESOLUTION
                && distance(influence.answered(point), influence.answered(first)) <= factor * SHARE_RESOLUTION;
            match weights.last_mut() {
                Some(last) if alike => *last += weight,
                _ => {
                    first = point;
                    weights.push(*weight);
                }
            }
            of_points.push(u32::try_from(weights.len() - 1).unwrap_or(u32::MAX));
        }
        Self { of_points, weights }
    }

    /// Number of strips.
    pub(super) fn len(&self) -> usize {
        self.weights.len()
    }

    /// Strip of a point.
    pub(super) fn of_point(&self, point: usize) -> usize {
        self.of_points[point] as usize
    }

    /// m of each strip.
    pub(super) fn weights(&self) -> &[f64] {
        &self.weights
    }

    /// Part of its strip's m that a point has.
    pub(super) fn part_of_strip(&self, ensemble: &Ensemble, point: usize) -> f64 {
        ensemble.points.weights[point] / self.weights[self.of_point(point)]
    }

    /// Counts on points, increasing in point, as counts on strips.
    pub(super) fn counts(&self, entries: &[(u32, u32)]) -> Vec<(u32, f64)> {
        let mut counts: Vec<(u32, f64)> = Vec::new();
        for &(point, count) in entries {
            let strip = self.of_points[point as usize];
            match counts.last_mut() {
                Some(last) if last.0 == strip => last.1 += f64::from(count),
                _ => counts.push((strip, f64::from(count))),
            }
        }
        counts.shrink_to_fit();
        counts
    }
}

/// ½ Σ |s − t| of two lists of shares, each increasing in window.
fn distance(one: &[(u32, f64)], other: &[(u32, f64)]) -> f64 {
    let (mut i, mut j) = (0, 0);
    let mut sum = 0.0;
    while i < one.len() || j < other.len() {
        let (k, l) = (one.get(i).map_or(u32::MAX, |entry| entry.0), other.get(j).map_or(u32::MAX, |entry| entry.0));
        let (mut s, mut t) = (0.0, 0.0);
        if k <= l {
            s = one[i].1;
            i += 1;
        }
        if l <= k {
            t = other[j].1;
            j += 1;
        }
        sum += (s - t).abs();
    }
    0.5 * sum
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn distance_is_the_part_that_changes_hands() {
        let one = [(1, 0.25), (4, 0.5), (7, 0.25)];
        let other = [(4, 0.75), (7, 0.125), (9, 0.125)];
        // Binary fractions: exact.
        for (one, other, expected) in
            [(&one[..], &other[..], 0.375), (&other, &one, 0.375), (&one, &one, 0.0), (&one[..1], &[], 0.125)]
        {
            assert!((distance(one, other) - expected).abs() < f64::EPSILON, "{one:?}, {other:?}");
        }
    }
}
