//! The blocks of one run, and how many of them a replicate draws.

use super::block_length::block_length;
use crate::ensemble::{Ensemble, Stream};
use rand::RngExt;
use rand_chacha::ChaCha8Rng;
use serde::Serialize;

/// How one run is resampled: in blocks of consecutive groups on a ring, so that every group is drawn equally often (circular block
/// bootstrap: Politis & Romano 1992).
///
/// The spread of resampled means is short of the true one for two reasons: blocks hide what correlation carries from one into the next, and
/// they scatter about the mean of the same run, not about the true one. With V(j) = j h(j L/s) the variance of a sum of j groups of L samples
/// under an exponential correlation of mean lag s, h(u) = 1 − (1 − e⁻ᵘ)/u, the expected part that n/l blocks of l out of n groups show is
///
/// (1/l) · mean over the n blocks of their V − (l/n²) V(n),
///
/// where a block across the end of the run has the two V of its pieces, with what correlation is left between them. Independent groups show 1 − l/n.
/// A replicate therefore draws that part of n/l blocks, and each counts for more: the mean stays, the variance comes out whole, and no count
/// turns negative (for independent data this is the n − 1 draws out of n of Rao & Wu 1988).
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct BlockRule {
    /// Groups of the run, n.
    pub n_groups: usize,
    /// Groups in a block, l.
    pub block_length: usize,
    /// The part of the long-run variance that n/l blocks would show.
    pub shown_part: f64,
}

impl BlockRule {
    /// Blocks of a run, from the mean positions in its groups; on several axes, the longest that any of them asks for.
    ///
    /// `None` where the run supports no error, as for batch means.
    #[must_use]
    pub fn of(ensemble: &Ensemble, stream: &Stream) -> Option<Self> {
        let mean_lag = stream.batches?.mean_lag;
        let n_groups = stream.groups.len();
        let lengths = (0..ensemble.axes.len()).filter_map(|axis| block_length(&group_means(ensemble, stream, axis)));
        let longest = lengths.fold(1.0, |longest, length| if length > longest { length } else { longest });
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "at least 1, and no more than a third of the groups, rounded up"
        )]
        let block_length = longest.round() as usize;
        let lag_in_groups = mean_lag * n_groups as f64 / stream.n_samples as f64;
        Some(Self { n_groups, block_length, shown_part: shown_part(n_groups, block_length, lag_in_groups) })
    }

    /// Blocks without overlap that the run holds, n/l.
    #[must_use]
    pub fn n_blocks(&self) -> f64 {
        self.n_groups as f64 / self.block_length as f64
    }

    /// How often a replicate takes each group. On average over replicates 1/blocks is 1/(`part` × n/l), as the variance asks for, and there is
    /// at least one block: runs with less, of some two independent samples, are too short for an error anyway.
    pub(super) fn draw(&self, part: f64, generator: &mut ChaCha8Rng) -> Vec<u32> {
        let wanted = (part * self.n_blocks()).max(1.0);
        let fewer = wanted.floor();
        let probability_of_fewer = fewer * ((fewer + 1.0) / wanted - 1.0);
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "at most the number of groups")]
        let n_drawn = fewer as usize + usize::from(generator.random::<f64>() >= probability_of_fewer);
        let mut times = vec![0; self.n_groups];
        // A fixed width, so that the numbers do not depend on the machine's.
        let n_groups = u32::try_from(self.n_groups).unwrap_or(u32::MAX);
        for _ in 0..n_drawn {
            let start = generator.random_range(0..n_groups) as usize;
            for group in start..start + self.block_length {
                times[group % self.n_groups] += 1;
            }
        }
        times
    }
}

/// Mean position in each group along an axis, as the displacement from the window's mean.
fn group_means(ensemble: &Ensemble, stream: &Stream, axis: usize) -> Vec<f64> {
    let center = ensemble.windows[stream.window].mean[axis];
    let along = &ensemble.axes[axis];
    let displacement = |point: u32| along.displacement(ensemble.points.position(point as usize)[axis], center);
    let mean = |group: &crate::condense::Group| {
        let sum: f64 = group.entries.iter().map(|&(point, count)| f64::from(count) * displacement(point)).sum();
        sum / group.n_samples as f64
    };
    stream.groups.iter().map(mean).collect()
}

/// The part of the variance that n/l blocks of l of n groups show at a mean lag in groups; 1 − l/n where that is 0.
fn shown_part(n: usize, l: usize, mean_lag: f64) -> f64 {
    let sum_variance = |groups: usize| {
        let j = groups as f64;
        let u = j / mean_lag;
        if mean_lag > 0.0 { j * (1.0 + (-u).exp_m1() / u) } else { j }
    };
    let whole = (n - l + 1) as f64 * sum_variance(l);
    // The pieces of a block across the end stand n − l groups apart in time: what is left of their correlation counts twice.
    let lost = |groups: usize| -(-(groups as f64) / mean_lag).exp_m1();
    let correlated = |j: usize| mean_lag * lost(j) * lost(l - j) * (-((n - l) as f64) / mean_lag).exp();
    let piece_by_piece = |j: usize| sum_variance(j) + sum_variance(l - j);
    let across: f64 = if mean_lag > 0.0 {
        (1..l).map(|j| piece_by_piece(j) + correlated(j)).sum()
    } else {
        (1..l).map(piece_by_piece).sum()
    };
    let (n_groups, length) = (n as f64, l as f64);
    (whole + across) / (n_groups * length) - length / (n_groups * n_groups) * sum_variance(n)
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::SeedableRng;

    /// The double sum over all groups, entry by entry: mean of the squared deviation of a block's sum from l times the mean, over l times
    /// the long-run variance. `covariance` is that of the means of two groups, by their distance.
    fn shown_by_brute_force(n: usize, l: usize, long_run: f64, covariance: impl Fn(usize) -> f64) -> f64 {
        let mut sum = 0.0;
        for start in 0..n {
            let mut coefficients = vec![-(l as f64) / n as f64; n];
            for i in start..start + l {
                coefficients[i % n] += 1.0;
            }
            for i in 0..n {
                for j in 0..n {
                    sum += coefficients[i] * coefficients[j] * covariance(i.abs_diff(j));
                }
            }
        }
        sum / (n * l) as f64 / long_run
    }

    #[test]
    fn shown_part_is_that_of_an_exponential_correlation() {
        for (n, l) in [(60, 1), (60, 20), (61, 13), (40, 7), (90, 30)] {
            for s in [0.4, 8.3, 70.0_f64] {
                // Covariances of means over stretches of length 1 under exp(−t/s), whose integral is 2s.
                let lost = -(-1.0 / s).exp_m1();
                let covariance = |distance: usize| match distance {
                    0 => 2.0 * (s - s * s * lost),
                    _ => (s * lost).powi(2) * (-(distance as f64 - 1.0) / s).exp(),
                };
                let expected = shown_by_brute_force(n, l, 2.0 * s, covariance);
                let found = shown_part(n, l, s);
                assert!((found - expected).abs() < 1e-11, "{n}, {l}, {s}: {found} against {expected}");
            }
            let independent = shown_by_brute_force(n, l, 1.0, |distance| f64::from(u8::from(distance == 0)));
            assert!((shown_part(n, l, 0.0) - independent).abs() < 1e-11, "{n}, {l}");
        }
    }

    #[test]
    fn mean_of_the_inverse_number_of_blocks_is_that_of_the_part_wanted() {
        let rule = BlockRule { n_groups: 64, block_length: 5, shown_part: 0.0 };
        let mut generator = ChaCha8Rng::seed_from_u64(8);
        for part in [0.23, 0.61, 0.94] {
            let n_draws = 20_000;
            let mut numbers = Vec::new();
            for _ in 0..n_draws {
                let drawn: u32 = rule.draw(part, &mut generator).iter().sum();
                numbers.push(f64::from(drawn) / 5.0);
            }
            let wanted = part * 64.0 / 5.0;
            assert!(numbers.iter().all(|b| (b - wanted).abs() < 1.0), "{part}");
            let mean = numbers.iter().map(|b| b.recip()).sum::<f64>() / f64::from(n_draws);
            // Two neighboring inverses differ by less than 1/b², a fair coin between them by half of it.
            let error = 0.5 / wanted.floor().powi(2) / f64::from(n_draws).sqrt();
            assert!((mean - wanted.recip()).abs() < 4.5 * error, "{part}: {mean} against {}", wanted.recip());
        }
    }

    #[test]
    fn every_group_is_drawn_equally_often() {
        let rule = BlockRule { n_groups: 17, block_length: 4, shown_part: 0.0 };
        let mut generator = ChaCha8Rng::seed_from_u64(9);
        let mut totals = vec![0.0; 17];
        for _ in 0..5000 {
            for (total, times) in totals.iter_mut().zip(rule.draw(0.7, &mut generator)) {
                *total += f64::from(times);
            }
        }
        let mean = totals.iter().sum::<f64>() / 17.0;
        // A group is in 4 of 17 blocks: less than binomial scatter, √mean.
        assert!(totals.iter().all(|total| (total - mean).abs() < 4.5 * mean.sqrt()), "{totals:?}");
    }

    #[test]
    fn a_run_without_a_whole_block_to_draw_still_has_one() {
        let rule = BlockRule { n_groups: 3, block_length: 1, shown_part: 0.0 };
        let mut generator = ChaCha8Rng::seed_from_u64(10);
        assert_eq!(rule.draw(0.05, &mut generator).iter().sum::<u32>(), 1);
    }
}
