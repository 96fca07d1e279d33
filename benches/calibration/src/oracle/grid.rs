//! One window on a grid of its latent variable: x = CDF⁻¹(Φ(z)), the very map that it is sampled by.

use spandrel_testkit::{Case, KnownSystem, OneDimensionalSystem, Restraint};
use statrs::distribution::{ContinuousCDF, Normal};
use std::f64::consts::TAU;

/// Nodes on [−1, 1] and weights of the five-point Gauss–Legendre rule (Abramowitz & Stegun 1964, table 25.4).
const GAUSS: [(f64, f64); 5] = [
    (-0.906_179_845_938_664, 0.236_926_885_056_189_08),
    (-0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.0, 0.568_888_888_888_888_9),
    (0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.906_179_845_938_664, 0.236_926_885_056_189_08),
];

/// The grid ends where 6e-16 of the probability lies beyond.
const LARGEST_Z: f64 = 8.0;

/// Panels of width 0.1 between the ends. A Hermite function of order n turns √n/10 radians on one; five nodes integrate it to 3e-6 up to
/// n = 2000.
const PANELS: u32 = 160;

/// A place where integrands are looked up.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Node {
    /// Latent variable.
    pub z: f64,
    /// Probability that the node stands for.
    pub weight: f64,
    /// Position; in a periodic system within the first period.
    pub x: f64,
    /// Output bin.
    pub bin: Option<usize>,
}

/// Nodes of a window, in the order of z. Panels end where output bins do, so that integrands may jump there.
pub(super) fn nodes(case: &Case, window: usize) -> Vec<Node> {
    let system = &case.system;
    let standard = Normal::standard();
    let start = start_of_order(system, window);
    let (lower, _) = system.range();
    let position = |z: f64| {
        let below = start + standard.cdf(z);
        // Only a periodic system has a start above zero, and there the order goes on at the lower end.
        system.window_quantile(window, if start > 0.0 && below >= 1.0 { below - 1.0 } else { below })
    };

    let even = (0..=PANELS).map(|i| LARGEST_Z * (2.0 * f64::from(i) / f64::from(PANELS) - 1.0));
    let jumps = case.edges.iter().map(|&edge| {
        let below = system.window_probability(window, lower, edge) - start;
        let below = if below < 0.0 { below + 1.0 } else { below };
        standard.inverse_cdf(below.clamp(0.0, 1.0))
    });
    let mut cuts: Vec<f64> = even.chain(jumps.filter(|z| z.abs() < LARGEST_Z)).collect();
    cuts.sort_by(f64::total_cmp);
    cuts.dedup();

    let mut nodes = Vec::with_capacity(GAUSS.len() * cuts.len());
    for pair in cuts.windows(2) {
        let (middle, half) = (f64::midpoint(pair[0], pair[1]), 0.5 * (pair[1] - pair[0]));
        // A panel lies in one bin, and its middle is the place farthest from any doubt which.
        let bin = bin_of(&case.edges, position(middle));
        for (place, share) in GAUSS {
            let z = middle + half * place;
            let density = (-0.5 * z * z).exp() / TAU.sqrt();
            nodes.push(Node { z, weight: half * share * density, x: position(z), bin });
        }
    }
    nodes
}

/// Probability below the point where a window's order starts: half a period from its center, or the lower end.
fn start_of_order(system: &OneDimensionalSystem, window: usize) -> f64 {
    match (system.period(), &system.windows()[window].restraint) {
        (Some(period), Restraint::Harmonic { center, .. }) => {
            let (lower, _) = system.range();
            let start = lower + (center - 0.5 * period - lower).rem_euclid(period);
            system.window_probability(window, lower, start)
        }
        _ => 0.0,
    }
}

fn bin_of(edges: &[f64], x: f64) -> Option<usize> {
    let place = edges.partition_point(|&edge| edge <= x);
    (place > 0 && place < edges.len()).then(|| place - 1)
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use spandrel_testkit::{cases, tolerance};

    #[test]
    fn nodes_carry_the_probability_of_each_bin() {
        for case in [cases::uneven().unwrap(), cases::periodic().unwrap()] {
            for window in 0..case.system.windows().len() {
                let nodes = nodes(&case, window);
                for (bin, edges) in case.edges.windows(2).enumerate() {
                    let found: f64 = nodes.iter().filter(|node| node.bin == Some(bin)).map(|node| node.weight).sum();
                    let expected = case.system.window_probability(window, edges[0], edges[1]);
                    assert!((found - expected).abs() < tolerance::QUANTILE, "{window}, {bin}: {found}, {expected}");
                }
            }
        }
    }

    #[test]
    fn nodes_have_the_mean_and_variance_of_the_window() {
        let case = cases::uneven().unwrap();
        for window in 0..case.system.windows().len() {
            let nodes = nodes(&case, window);
            let mean: f64 = nodes.iter().map(|node| node.weight * node.x).sum();
            let variance: f64 = nodes.iter().map(|node| node.weight * (node.x - mean).powi(2)).sum();
            assert!((mean - case.system.window_mean(window)).abs() < tolerance::QUANTILE);
            assert!((variance - case.system.window_variance(window)).abs() < tolerance::QUANTILE);
        }
    }

    #[test]
    fn order_across_the_periodic_boundary_keeps_neighbors_together() {
        let case = cases::periodic().unwrap();
        // The last window stands at 172.5 degrees; its samples reach over the boundary.
        let inner: Vec<Node> = nodes(&case, 23).into_iter().filter(|node| node.z.abs() < 4.0).collect();
        assert!(inner.iter().any(|node| node.x < 0.0) && inner.iter().any(|node| node.x > 0.0));
        for pair in inner.windows(2) {
            let step = (pair[1].x - pair[0].x).rem_euclid(360.0);
            assert!(step < 3.0, "{pair:?}");
        }
    }
}
