//! Autocorrelation, statistical inefficiency and batch means against closed forms and independent libraries.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

use rand_distr::{Distribution, StandardNormal};
use spandrel_solver::series::{
    Autocorrelation, BatchRule, BlockMeans, Cascade, Inefficiency, InefficiencyMethod, MeanLag,
};
use spandrel_testkit::{Correlation, Table, autocorrelation, stream, tolerance};
use statrs::distribution::{ContinuousCDF, StudentsT};

const SERIES: &str = include_str!("../../../tests/reference/autocorrelation/series.csv");
const ACF: &str = include_str!("../../../tests/reference/autocorrelation/acf.csv");
const QUANTILES: &str = include_str!("../../../tests/reference/autocorrelation/student_t.csv");

const METHODS: [InefficiencyMethod; 2] = [InefficiencyMethod::InitialSequence, InefficiencyMethod::AutomaticWindow];

fn condensed(series: impl IntoIterator<Item = f64>) -> (BlockMeans, Cascade) {
    let (mut blocks, mut sums) = (BlockMeans::new(1), Cascade::default());
    for x in series {
        blocks.push(&[x]);
        sums.push(x);
    }
    (blocks, sums)
}

fn inefficiency(series: impl IntoIterator<Item = f64>, method: InefficiencyMethod) -> Option<Inefficiency> {
    let (blocks, sums) = condensed(series);
    Inefficiency::slowest(&blocks, &[sums], method)
}

fn mean_and_error(values: &[f64]) -> (f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    (mean, (values.iter().map(|x| (x - mean).powi(2)).sum::<f64>() / (n * (n - 1.0))).sqrt())
}

/// statsmodels (tests/reference/autocorrelation).
#[test]
fn autocorrelation_agrees_with_a_general_purpose_library_at_every_lag() {
    let (series, expected): (Table, Table) = (SERIES.parse().unwrap(), ACF.parse().unwrap());
    for name in ["autoregression", "moving_average", "drifting"] {
        let found = Autocorrelation::of(&series.column(name).unwrap()).unwrap().rho;
        let expected = expected.column(name).unwrap();
        assert_eq!(found.len(), expected.len());
        for (lag, (found, expected)) in found.iter().zip(expected).enumerate() {
            assert!((found - expected).abs() < tolerance::SUMMATION_ORDER, "{name}, {lag}: {found}, {expected}");
        }
    }
}

/// SciPy (tests/reference/autocorrelation): the quantiles that every interval rests on.
#[test]
fn quantiles_of_student_agree_with_a_general_purpose_library() {
    let table: Table = QUANTILES.parse().unwrap();
    assert_eq!(table.rows().len(), 24);
    for row in table.rows() {
        let [degrees, probability, expected] = row[..] else { unreachable!("three columns") };
        let found = StudentsT::new(0.0, 1.0, degrees).unwrap().inverse_cdf(probability);
        assert!((found / expected - 1.0).abs() < 1e-9, "{degrees}, {probability}: {found} against {expected}");
    }
}

#[test]
fn transform_and_definition_agree_for_any_length_and_unit() {
    let mut generator = stream(41, 0);
    for n in [2, 3, 5, 17, 256, 511, 512] {
        let z = Correlation::Exponential { time: 2.7 }.sample_latent(n, &mut generator);
        for (scale, offset) in [(1.0, -3.0), (3e-120, 0.0), (7e120, 0.0)] {
            let series: Vec<f64> = z.iter().map(|z| scale * z + offset).collect();
            let found = Autocorrelation::of(&series).unwrap().rho;
            let expected = autocorrelation(&series, n);
            assert_eq!(found.len(), expected.len());
            for (found, expected) in found.iter().zip(expected) {
                assert!((found - expected).abs() < tolerance::SUMMATION_ORDER, "{n}, {scale}: {found}, {expected}");
            }
        }
    }
}

/// g = (1 + ρ)/(1 − ρ) for an autoregression, and its average over the variance for two.
///
/// Claims: on average either estimate is within a tenth of the truth, and value ± 2 standard errors holds it in at least 88 % of the runs.
/// The bounds carry the error of the replicates.
#[test]
fn inefficiency_of_autoregressions_and_its_standard_error_hold() {
    let mut generator = stream(43, 0);
    let two_times = Correlation::TwoTimes { slow_share: 0.2, fast_time: 2.0, slow_time: 100.0 };
    for (correlation, n_samples) in [
        (Correlation::Exponential { time: 0.7 }, 460),
        (Correlation::Exponential { time: 0.7 }, 30_000),
        (Correlation::Exponential { time: 21.0 }, 3000),
        (Correlation::Exponential { time: 21.0 }, 30_000),
        (two_times, 30_000),
    ] {
        let exact = correlation.statistical_inefficiency();
        let runs: Vec<Vec<f64>> = (0..200).map(|_| correlation.sample_latent(n_samples, &mut generator)).collect();
        for method in METHODS {
            let found: Vec<Inefficiency> =
                runs.iter().map(|run| inefficiency(run.iter().copied(), method).unwrap()).collect();
            let (mean, error) = mean_and_error(&found.iter().map(|g| g.value / exact).collect::<Vec<_>>());
            let bound = 0.1 + tolerance::STANDARD_ERRORS * error;
            assert!((mean - 1.0).abs() < bound, "{correlation:?}, {n_samples}, {method:?}: {mean} ± {error}");
            let held = found.iter().filter(|g| (g.value - exact).abs() < 2.0 * g.standard_error).count();
            let least = 200.0 * 0.88 - tolerance::STANDARD_ERRORS * (200.0_f64 * 0.88 * 0.12).sqrt();
            assert!(held as f64 > least, "{correlation:?}, {n_samples}, {method:?}: {held} of 200");
        }
    }
}

/// Moving average Σ θᵢ ε: g = (Σ θ)²/Σ θ² (Box & Jenkins 1976, 3.3). Its memory is over within a block, where block means alone are
/// uncertain by √(2/B) = 8 %; the running sums know better.
#[test]
fn memory_shorter_than_a_block_is_read_off_the_running_sums() {
    let theta = [1.0, 0.9, -0.4, 0.6];
    let exact = theta.iter().sum::<f64>().powi(2) / theta.iter().map(|t| t * t).sum::<f64>();
    let (mut values, mut quoted) = (Vec::new(), Vec::new());
    for run in 0..200 {
        let noise: Vec<f64> = StandardNormal.sample_iter(stream(47, run)).take(60_000).collect();
        let series = noise.windows(4).map(|e| e.iter().zip(theta).map(|(e, t)| e * t).sum::<f64>());
        let found = inefficiency(series, InefficiencyMethod::InitialSequence).unwrap();
        values.push(found.value);
        quoted.push(found.standard_error);
    }
    values.sort_by(f64::total_cmp);
    quoted.sort_by(f64::total_cmp);
    let (median, middle_half) = (values[100], values[150] - values[50]);
    assert!((median / exact - 1.0).abs() < 0.03, "{median} against {exact}");
    assert!(middle_half / exact < 0.08 && quoted[100] / exact < 0.08, "{middle_half}, {}", quoted[100]);
}

/// ε − ε/2 has g = 0.2: fewer samples are never taken for more.
#[test]
fn samples_that_avoid_each_other_count_once() {
    let noise: Vec<f64> = StandardNormal.sample_iter(stream(53, 0)).take(5000).collect();
    for method in METHODS {
        let found = inefficiency(noise.windows(2).map(|e| e[1] - 0.5 * e[0]), method).unwrap();
        assert!((found.value - 1.0).abs() < f64::EPSILON, "{found:?}");
        assert!((found.effective_samples(4999) - 4999.0).abs() < f64::EPSILON);
    }
}

#[test]
fn the_slowest_channel_counts_and_a_constant_one_does_not() {
    let fast = Correlation::Exponential { time: 1.3 }.sample_latent(8000, &mut stream(59, 0));
    let slow = Correlation::Exponential { time: 17.0 }.sample_latent(8000, &mut stream(59, 1));
    let mut blocks = BlockMeans::new(3);
    let mut sums = vec![Cascade::default(); 3];
    for (fast, slow) in fast.iter().zip(&slow) {
        let row = [6.5, *fast, *slow];
        blocks.push(&row);
        sums.iter_mut().zip(row).for_each(|(sums, x)| sums.push(x));
    }
    let method = InefficiencyMethod::AutomaticWindow;
    let of = |channel: usize| {
        Inefficiency::of_channel(&blocks.channel(channel), blocks.block_length(), &sums[channel], method)
    };
    assert_eq!(of(0), None);
    assert_eq!(Inefficiency::slowest(&blocks, &sums, method), of(2));
    assert_eq!(Inefficiency::slowest(&blocks, &sums[..2], method), of(1));
    assert_eq!(Inefficiency::slowest(&blocks, &sums[..1], method), None);
    assert!(of(2).unwrap().value > 3.0 * of(1).unwrap().value);
}

#[test]
fn runs_that_say_nothing_about_memory_have_no_inefficiency_and_no_run_has_a_broken_one() {
    for method in METHODS {
        for series in [vec![], vec![2.0], vec![2.0, 3.0], vec![4.1; 6], vec![4.1; 3000]] {
            assert_eq!(inefficiency(series, method), None);
        }
        let step = |n: usize| (0..n).map(move |i| f64::from(u8::from(i >= n / 2)));
        let line = |n: usize| (0..n).map(|i| 1e6 + 1e-3 * i as f64);
        let alternating = |n: usize| (0..n).map(|i| f64::from(u8::from(i % 2 == 0)));
        for n in (7..60).chain([512, 513, 2000]) {
            let alternation = inefficiency(alternating(n), method);
            // Means of two are all equal: nothing to see between blocks.
            assert_eq!(alternation.is_none(), n > 512, "{n}");
            let found = [inefficiency(step(n), method), inefficiency(line(n), method)];
            for found in found.map(Option::unwrap).into_iter().chain(alternation) {
                assert!(found.value >= 1.0 && found.value.is_finite(), "{n}: {found:?}");
                assert!(found.standard_error > 0.0 && found.standard_error.is_finite(), "{n}: {found:?}");
            }
        }
    }
    assert_eq!(Autocorrelation::of(&[1.0, f64::NAN, 3.0]), None);
    assert_eq!(Autocorrelation::of(&[1.0, f64::INFINITY, 3.0]), None);
}

/// Vector autoregression xₜ = A xₜ₋₁ + εₜ: the long-run covariance of its mean is (I − A)⁻¹ Σ (I − A)⁻ᵀ (H. Lütkepohl 2005, New
/// Introduction to Multiple Time Series Analysis, 2.1).
///
/// Both channels follow one slow mode (eigenvalues of A: 0.93 and 0.57), so the correction for short batches suits both. Batch means of the
/// whole vector under the batches of its slowest channel, averaged over runs: each entry within a twentieth of the product of the exact
/// deviations, and the intervals of one linear combination hold the mean in 95 % of the runs.
#[test]
fn batch_means_reproduce_the_long_run_covariance_of_a_vector_autoregression() {
    const A: [[f64; 2]; 2] = [[0.8, 0.15], [0.2, 0.7]];
    // Noise ε = (u, 0.7 u + 0.4 v) with independent standard normal u, v.
    let noise = [[1.0, 0.7], [0.7, 0.7 * 0.7 + 0.4 * 0.4]];
    let m = [[1.0 - A[0][0], -A[0][1]], [-A[1][0], 1.0 - A[1][1]]];
    let determinant = m[0][0] * m[1][1] - m[0][1] * m[1][0];
    let inverse = [[m[1][1] / determinant, -m[0][1] / determinant], [-m[1][0] / determinant, m[0][0] / determinant]];
    let exact = |i: usize, j: usize| -> f64 {
        (0..2).flat_map(|k| (0..2).map(move |l| (k, l))).map(|(k, l)| inverse[i][k] * noise[k][l] * inverse[j][l]).sum()
    };
    let (n_runs, n_samples) = (400_u64, 12_000_usize);
    let combination = [0.6, 1.7];
    let mut entries = vec![Vec::new(); 3];
    let mut held = 0;
    for run in 0..n_runs {
        let mut generator = stream(61, run);
        let mut draw = || -> f64 { StandardNormal.sample(&mut generator) };
        let mut x = [0.0; 2];
        let mut blocks = BlockMeans::new(2);
        for t in 0..n_samples + 500 {
            let (u, v) = (draw(), draw());
            x = [A[0][0] * x[0] + A[0][1] * x[1] + u, A[1][0] * x[0] + A[1][1] * x[1] + 0.7 * u + 0.4 * v];
            // 500 steps forget the start: 0.93⁵⁰⁰ is 2e-16.
            if t >= 500 {
                blocks.push(&x);
            }
        }
        let channels = [blocks.channel(0), blocks.channel(1)];
        let n_blocks = blocks.n_blocks();
        let lag = channels.iter().map(|means| MeanLag::of_block_means(means).unwrap());
        let slowest = lag.reduce(|a, b| if b.mean_lag > a.mean_lag { b } else { a }).unwrap();
        let rule = BatchRule::new(n_blocks, blocks.block_length(), n_blocks, &slowest).unwrap();
        let lengths: Vec<f64> = (0..rule.n_batches)
            .map(|i| (rule.groups_of(i, n_blocks).len() as u64 * blocks.block_length()) as f64)
            .collect();
        let total: f64 = lengths.iter().sum();
        let deviations: Vec<Vec<f64>> = channels
            .iter()
            .map(|means| {
                let center = means.iter().sum::<f64>() / n_blocks as f64;
                (0..rule.n_batches)
                    .map(|i| {
                        let batch = &means[rule.groups_of(i, n_blocks)];
                        batch.iter().sum::<f64>() / batch.len() as f64 - center
                    })
                    .collect()
            })
            .collect();
        let degrees = (rule.n_batches - 1) as f64;
        let covariance = |i: usize, j: usize| {
            let products = lengths.iter().zip(deviations[i].iter().zip(&deviations[j]));
            products.map(|(l, (a, b))| l * a * b).sum::<f64>() / (degrees * rule.shown_part(&lengths))
        };
        let found = [covariance(0, 0), covariance(0, 1), covariance(1, 1)];
        for ((entry, found), (i, j)) in entries.iter_mut().zip(found).zip([(0, 0), (0, 1), (1, 1)]) {
            entry.push((found - exact(i, j)) / (exact(i, i) * exact(j, j)).sqrt());
        }
        let [a, b] = combination;
        let variance = a * a * found[0] + 2.0 * a * b * found[1] + b * b * found[2];
        let mean = a * channels[0].iter().sum::<f64>() / n_blocks as f64
            + b * channels[1].iter().sum::<f64>() / n_blocks as f64;
        let half_width = StudentsT::new(0.0, 1.0, degrees).unwrap().inverse_cdf(0.975) * (variance / total).sqrt();
        held += u32::from(mean.abs() <= half_width);
    }
    for (name, entry) in ["11", "12", "22"].iter().zip(&entries) {
        let (mean, error) = mean_and_error(entry);
        assert!(mean.abs() < 0.05 + tolerance::STANDARD_ERRORS * error, "entry {name}: off by {mean} ± {error}");
    }
    let coverage = f64::from(held) / n_runs as f64;
    let error = (0.95 * 0.05 / n_runs as f64).sqrt();
    assert!((coverage - 0.95).abs() < tolerance::STANDARD_ERRORS * error, "coverage {coverage} ± {error}");
}
