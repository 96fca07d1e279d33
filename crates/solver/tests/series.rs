//! Running statistics against certified values and closed forms.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

use spandrel_solver::series::{BatchRule, BlockMeans, Cascade, MeanLag};
use spandrel_testkit::{Correlation, autocorrelation, stream, tolerance};

fn cascade(values: impl IntoIterator<Item = f64>) -> Cascade {
    let mut cascade = Cascade::default();
    for value in values {
        cascade.push(value);
    }
    cascade
}

fn relative(found: f64, expected: f64) -> f64 {
    ((found - expected) / expected).abs()
}

/// NIST Statistical Reference Datasets, univariate, Lew: certified to fifteen digits.
#[test]
fn nist_lew_is_reproduced() {
    let data = include_str!("../../../tests/reference/nist-strd/lew.txt");
    let lew = cascade(data.lines().filter_map(|line| line.trim().parse().ok()));
    assert_eq!(lew.count(), 200);
    assert!(relative(lew.mean().unwrap(), -177.435) < tolerance::CERTIFIED_DIGITS_RELATIVE);
    let deviation = lew.variance().unwrap().sqrt();
    assert!(relative(deviation, 277.332_168_044_316) < tolerance::CERTIFIED_DIGITS_RELATIVE);
    let lag_one = lew.lag_one_autocorrelation(0).unwrap();
    assert!(relative(lag_one, -0.307_304_800_605_679) < tolerance::CERTIFIED_DIGITS_RELATIVE);
}

/// NIST Statistical Reference Datasets, univariate, `NumAcc4`: a spread of 0.1 on 10⁷. Its data are not exact in binary, which costs eight
/// of the sixteen digits: tolerances as in the reference's description.
#[test]
fn nist_numacc4_keeps_the_digits_that_the_data_have() {
    let pairs = (0..500).flat_map(|_| [10_000_000.1, 10_000_000.3]);
    let numacc4 = cascade(std::iter::once(10_000_000.2).chain(pairs));
    assert_eq!(numacc4.count(), 1001);
    assert!(relative(numacc4.mean().unwrap(), 10_000_000.2) < 1e-15);
    assert!(relative(numacc4.variance().unwrap().sqrt(), 0.1) < 1e-8);
    assert!(relative(numacc4.lag_one_autocorrelation(0).unwrap(), -0.999) < 1e-10);
}

#[test]
fn each_level_holds_the_statistics_of_its_block_means() {
    let mut generator = stream(3, 0);
    let series = Correlation::Exponential { time: 3.7 }.sample_latent(1000, &mut generator);
    let sums = cascade(series.iter().map(|z| 5.0 - 2.0 * z));
    for level in 0..6 {
        let length = 1 << level;
        let means: Vec<f64> =
            series.chunks_exact(length).map(|block| 5.0 - 2.0 * block.iter().sum::<f64>() / length as f64).collect();
        assert_eq!(sums.levels()[level].count, means.len() as u64);
        let expected = autocorrelation(&means, 1)[1];
        let found = sums.lag_one_autocorrelation(level).unwrap();
        assert!((found - expected).abs() < tolerance::SUMMATION_ORDER, "level {level}: {found} against {expected}");
    }
}

#[test]
fn extremes_are_those_of_the_series() {
    let sums = cascade([3.25, -8.5, 7.125, 0.0]);
    assert_eq!((sums.minimum(), sums.maximum()), (Some(-8.5), Some(7.125)));
    assert_eq!(Cascade::default().mean(), None);
    assert_eq!(cascade([2.0]).variance(), None);
    assert_eq!(cascade([2.0, 2.0, 2.0]).lag_one_autocorrelation(0), None);
}

#[test]
fn blocks_number_256_to_512_and_hold_plain_means_whatever_the_length() {
    for n in [512_usize, 513, 700, 1024, 1025, 5000, 70_001] {
        let mut blocks = BlockMeans::new(2);
        for i in 0..n {
            blocks.push(&[i as f64, -0.5 * i as f64]);
        }
        let length = usize::try_from(blocks.block_length()).unwrap();
        assert!((256..=512).contains(&blocks.n_blocks()), "{n} samples gave {} blocks", blocks.n_blocks());
        assert_eq!(blocks.n_blocks(), n / length);
        for (j, mean) in blocks.channel(1).iter().enumerate() {
            let expected = -0.5 * ((j * length) as f64 + (length - 1) as f64 / 2.0);
            assert!((mean - expected).abs() <= 1e-12 * expected.abs(), "block {j} of {n}: {mean} against {expected}");
        }
    }
}

#[test]
fn a_constant_series_has_no_correlation_to_speak_of() {
    assert_eq!(MeanLag::of_block_means(&[4.1; 30]), None);
    assert_eq!(MeanLag::of_block_means(&[4.1]), None);
    assert_eq!(MeanLag::of_block_means(&[]), None);
}

#[test]
fn batches_are_six_mean_lags_long_between_two_and_a_hundred() {
    let lag = |mean_lag: f64| MeanLag { mean_lag, block_inefficiency: 2.0 * mean_lag + 1.0, block_variance: 1.0 };
    assert_eq!(BatchRule::new(400, 8, 100, &lag(0.0)).unwrap().n_batches, 100);
    assert_eq!(BatchRule::new(400, 8, 80, &lag(0.0)).unwrap().n_batches, 80);
    assert_eq!(BatchRule::new(400, 8, 100, &lag(5.0)).unwrap().n_batches, 13);
    assert_eq!(BatchRule::new(400, 8, 100, &lag(200.0)).unwrap().n_batches, 2);
    assert_eq!(BatchRule::new(400, 8, 1, &lag(0.0)), None);
}

#[test]
fn short_batches_show_the_part_of_the_variance_that_an_exponential_correlation_leaves_them() {
    let lag = MeanLag { mean_lag: 5.0, block_inefficiency: 11.0, block_variance: 1.0 };
    let rule = BatchRule::new(300, 4, 100, &lag).unwrap();
    assert_eq!((rule.n_batches, rule.mean_lag), (10, 20.0));
    // h(u) = 1 − (1 − e⁻ᵘ)/u by hand: u = 6 and u = 3.
    let (six, three) = (0.833_746_458_696_111_1, 0.683_262_356_122_621_3);
    assert!((rule.shown_part(&[120.0; 10]) - six).abs() < tolerance::HANDBOOK_DIGITS);
    assert!((rule.shown_part(&[120.0, 60.0]) - f64::midpoint(six, three)).abs() < tolerance::HANDBOOK_DIGITS);
    let independent = BatchRule { n_batches: 10, mean_lag: 0.0 };
    assert!((independent.shown_part(&[3.0, 4.0]) - 1.0).abs() < f64::EPSILON);
}

#[test]
fn batches_cover_every_group_once() {
    for (n_groups, n_batches) in [(100, 7), (128, 100), (65, 2)] {
        let rule = BatchRule { n_batches, mean_lag: 0.0 };
        let covered: Vec<usize> = (0..n_batches).flat_map(|i| rule.groups_of(i, n_groups)).collect();
        assert_eq!(covered, (0..n_groups).collect::<Vec<_>>());
    }
}
