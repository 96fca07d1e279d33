//! What the error bars of one method are worth.

use crate::jackknife::{Estimate, jackknife, ratio};
use crate::method::ErrorBar;
use crate::outcome::Replicate;

/// Least share of the replicates in which a bin has an interval for its coverage to be told.
const WORST_BIN_SHARE: f64 = 0.2;

/// Coverage of a single bin.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WorstBin {
    /// Which of the scored bins, from 0.
    pub place: usize,
    /// Share of its 95 % intervals that hold the truth, with its binomial standard error.
    pub coverage_95: Estimate,
}

/// Scores of one method on one system, over all replicates and scored bins. Shares are between 0 and 1; a score is `None` where too few
/// intervals were printed to give it an error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Score {
    /// Share of scored bins (refused replicates included) with an interval.
    pub printed: Option<Estimate>,
    /// Share of scored bins with an interval without reserve.
    pub determined: Option<Estimate>,
    /// Share of 95 % intervals that hold the truth.
    pub coverage_95: Option<Estimate>,
    /// Share of 68 % intervals that hold the truth.
    pub coverage_68: Option<Estimate>,
    /// Share of the 95 % intervals given without reserve that hold the truth.
    pub determined_95: Option<Estimate>,
    /// Coverage with the exact standard error and normal quantiles in place of each printed 95 % interval.
    pub oracle_95: Option<Estimate>,
    /// As `oracle_95`, for 68 %.
    pub oracle_68: Option<Estimate>,
    /// `coverage_95` less `oracle_95`: the luck of the draw cancels.
    pub excess_95: Option<Estimate>,
    /// `coverage_68` less `oracle_68`.
    pub excess_68: Option<Estimate>,
    /// Mean of z = (estimate − truth)/standard error.
    pub z_mean: Option<Estimate>,
    /// Standard deviation of z.
    pub z_deviation: Option<Estimate>,
    /// The same with the exact standard error.
    pub oracle_z_deviation: Option<Estimate>,
    /// Mean of the estimated variance over the exact one.
    pub relative_variance: Option<Estimate>,
    /// Share of replicates in which every 95 % interval holds the truth, among those with any: what a band for all bins at once promises.
    pub joint_95: Option<Estimate>,
    /// The bin with the lowest coverage among those with an interval in a fifth of the replicates.
    pub worst_bin: Option<WorstBin>,
    /// Median, and 90 % quantile, of the 95 % half width over that of the exact error.
    pub relative_width: Option<(f64, f64)>,
    /// Median, and 5 % quantile, of the degrees of freedom.
    pub degrees_of_freedom: Option<(f64, f64)>,
}

/// One printed interval beside the exact one.
struct Interval {
    place: usize,
    miss: f64,
    bar: ErrorBar,
    exact: ErrorBar,
}

impl Score {
    /// Scores method number `method` against the exact standard errors (one a scored bin, kT).
    #[must_use]
    pub fn of(replicates: &[Replicate], method: usize, standard_errors: &[f64]) -> Self {
        let intervals: Vec<Vec<Interval>> =
            replicates.iter().map(|replicate| printed(replicate, method, standard_errors)).collect();
        let n_scored = standard_errors.len() as f64;
        let share = |counts: &dyn Fn(&Interval) -> bool| {
            let part = |own: &Vec<Interval>| [own.iter().filter(|interval| counts(interval)).count() as f64, n_scored];
            jackknife(&intervals.iter().map(part).collect::<Vec<_>>(), |[count, all]| ratio(*count, *all))
        };
        let mean = |of: &dyn Fn(&Interval) -> f64| {
            let part = |own: &Vec<Interval>| [own.iter().map(of).sum::<f64>(), own.len() as f64];
            jackknife(&intervals.iter().map(part).collect::<Vec<_>>(), |[sum, n]| ratio(*sum, *n))
        };
        let deviation = |z: &dyn Fn(&Interval) -> f64| {
            let part = |own: &Vec<Interval>| {
                [own.iter().map(z).sum::<f64>(), own.iter().map(|i| z(i).powi(2)).sum::<f64>(), own.len() as f64]
            };
            jackknife(&intervals.iter().map(part).collect::<Vec<_>>(), |[sum, squares, n]| {
                Some((ratio(*squares, *n)? - ratio(*sum, *n)?.powi(2)).max(0.0).sqrt())
            })
        };
        let all = || intervals.iter().flatten();
        Self {
            printed: share(&|_| true),
            determined: share(&|i| i.bar.determined),
            coverage_95: mean(&|i| held(i.miss, i.bar.half_width_95)),
            coverage_68: mean(&|i| held(i.miss, i.bar.half_width_68)),
            determined_95: determined(&intervals),
            oracle_95: mean(&|i| held(i.miss, i.exact.half_width_95)),
            oracle_68: mean(&|i| held(i.miss, i.exact.half_width_68)),
            excess_95: mean(&|i| held(i.miss, i.bar.half_width_95) - held(i.miss, i.exact.half_width_95)),
            excess_68: mean(&|i| held(i.miss, i.bar.half_width_68) - held(i.miss, i.exact.half_width_68)),
            z_mean: mean(&|i| i.miss / i.bar.standard_error),
            z_deviation: deviation(&|i| i.miss / i.bar.standard_error),
            oracle_z_deviation: deviation(&|i| i.miss / i.exact.standard_error),
            relative_variance: mean(&|i| (i.bar.standard_error / i.exact.standard_error).powi(2)),
            joint_95: joint(&intervals),
            worst_bin: worst_bin(&intervals, standard_errors.len()),
            relative_width: quantiles(all().map(|i| i.bar.half_width_95 / i.exact.half_width_95), [0.5, 0.9]),
            degrees_of_freedom: quantiles(all().map(|i| i.bar.degrees_of_freedom), [0.5, 0.05]),
        }
    }
}

fn printed(replicate: &Replicate, method: usize, standard_errors: &[f64]) -> Vec<Interval> {
    let Ok(outcome) = replicate else { return Vec::new() };
    let bars = outcome.error_bars.get(method).into_iter().flatten();
    bars.zip(&outcome.misses)
        .zip(standard_errors)
        .enumerate()
        .filter_map(|(place, ((bar, miss), &exact))| {
            Some(Interval { place, miss: (*miss)?, bar: (*bar)?, exact: ErrorBar::exact(exact) })
        })
        .collect()
}

/// 1 if an interval of this half width holds the truth, 0 if not.
pub(crate) fn held(miss: f64, half_width: f64) -> f64 {
    f64::from(u8::from(miss.abs() <= half_width))
}

fn determined(intervals: &[Vec<Interval>]) -> Option<Estimate> {
    let part = |own: &Vec<Interval>| {
        let without_reserve = own.iter().filter(|i| i.bar.determined);
        without_reserve.fold([0.0, 0.0], |[sum, n], i| [sum + held(i.miss, i.bar.half_width_95), n + 1.0])
    };
    jackknife(&intervals.iter().map(part).collect::<Vec<_>>(), |[sum, n]| ratio(*sum, *n))
}

fn joint(intervals: &[Vec<Interval>]) -> Option<Estimate> {
    let part = |own: &Vec<Interval>| {
        let all_held = own.iter().all(|i| i.miss.abs() <= i.bar.half_width_95);
        let any = !own.is_empty();
        [f64::from(u8::from(any && all_held)), f64::from(u8::from(any))]
    };
    jackknife(&intervals.iter().map(part).collect::<Vec<_>>(), |[held, any]| ratio(*held, *any))
}

fn worst_bin(intervals: &[Vec<Interval>], n_scored: usize) -> Option<WorstBin> {
    let mut counts = vec![(0.0, 0.0); n_scored];
    for interval in intervals.iter().flatten() {
        let (n_held, n) = &mut counts[interval.place];
        *n_held += held(interval.miss, interval.bar.half_width_95);
        *n += 1.0;
    }
    let least = (WORST_BIN_SHARE * intervals.len() as f64).max(1.0);
    counts
        .into_iter()
        .enumerate()
        .filter(|(_, (_, n))| *n >= least)
        .map(|(place, (n_held, n))| {
            let value = n_held / n;
            let standard_error = (value * (1.0 - value) / n).sqrt();
            WorstBin { place, coverage_95: Estimate { value, standard_error } }
        })
        .min_by(|a, b| a.coverage_95.value.total_cmp(&b.coverage_95.value))
}

/// Two quantiles of some numbers; `None` of none.
fn quantiles(values: impl Iterator<Item = f64>, at: [f64; 2]) -> Option<(f64, f64)> {
    let mut sorted: Vec<f64> = values.collect();
    sorted.sort_by(f64::total_cmp);
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a rank, between 0 and the last one")]
    let quantile = |p: f64| sorted.get((p * (sorted.len().max(1) - 1) as f64).round() as usize).copied();
    Some((quantile(at[0])?, quantile(at[1])?))
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::outcome::{Outcome, Refusal};

    fn bar(half_width_68: f64, half_width_95: f64, determined: bool) -> ErrorBar {
        ErrorBar { standard_error: 0.5, degrees_of_freedom: 12.0, half_width_68, half_width_95, determined }
    }

    /// Three replicates of two bins: one refused; misses 0.3, −1.2 with intervals; 0.6 with one and a bin without.
    fn replicates() -> Vec<Replicate> {
        let of = |misses: [Option<f64>; 2], bars: [Option<ErrorBar>; 2]| {
            Ok(Outcome { misses: misses.to_vec(), error_bars: vec![bars.to_vec()] })
        };
        vec![
            of([Some(0.3), Some(-1.2)], [Some(bar(0.4, 1.0, true)), Some(bar(0.5, 1.1, false))]),
            Err(Refusal::NotLinked),
            of([Some(0.6), None], [Some(bar(0.55, 1.3, true)), None]),
        ]
    }

    #[test]
    fn counts_are_those_of_a_hand_made_study() {
        let score = Score::of(&replicates(), 0, &[0.2, 0.7]);
        let value = |estimate: Option<Estimate>| estimate.unwrap().value;
        let close = |found: f64, expected: f64| assert!((found - expected).abs() < 1e-14, "{found}, {expected}");
        close(value(score.printed), 3.0 / 6.0);
        close(value(score.determined), 2.0 / 6.0);
        close(value(score.coverage_95), 2.0 / 3.0);
        close(value(score.coverage_68), 1.0 / 3.0);
        close(value(score.determined_95), 1.0);
        // Exact half widths 1.96 σ: 0.39 holds 0.3 but not 0.6, 1.37 holds 1.2; at 68 % (0.199 and 0.696) none is held.
        close(value(score.oracle_95), 2.0 / 3.0);
        close(value(score.oracle_68), 0.0);
        close(value(score.excess_95), 0.0);
        close(value(score.excess_68), 1.0 / 3.0);
        let z = [0.6, -2.4, 1.2];
        close(value(score.z_mean), z.iter().sum::<f64>() / 3.0);
        let mean = z.iter().sum::<f64>() / 3.0;
        close(value(score.z_deviation), (z.iter().map(|z| (z - mean).powi(2)).sum::<f64>() / 3.0).sqrt());
        close(value(score.relative_variance), (6.25 + 0.25 / 0.49 + 6.25) / 3.0);
        close(value(score.joint_95), 0.5);
        let worst = score.worst_bin.unwrap();
        assert_eq!(worst.place, 1);
        close(worst.coverage_95.value, 0.0);
        assert_eq!(score.degrees_of_freedom, Some((12.0, 12.0)));
    }

    #[test]
    fn a_study_without_intervals_has_a_share_of_none_and_no_coverage() {
        let refused = vec![Err(Refusal::NotConverged); 3];
        let score = Score::of(&refused, 0, &[0.2, 0.7]);
        assert_eq!(score.printed, Some(Estimate { value: 0.0, standard_error: 0.0 }));
        assert!(score.coverage_95.is_none() && score.worst_bin.is_none() && score.relative_width.is_none());
    }
}
