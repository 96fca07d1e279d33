//! The study in short: few replicates, with bounds wide enough for them and narrow enough to fail.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

use spandrel_calibration::{
    ErrorBar, Estimate, Experiment, Method, Oracle, Replicate, Report, Score, Settings, System, Weighting, replicates,
};
use spandrel_testkit::tolerance;
use statrs::distribution::{ChiSquared, ContinuousCDF};

/// Neighboring bins of one profile say nearly the same, so a replicate counts as four independent statements, whatever its bins.
const STATEMENTS: f64 = 4.0;

/// What the coverage of an honest interval from an estimated error may differ from that with the exact one: Student's t is exact for
/// means of Gaussian batches only, and its intervals are a little wide.
const EXCESS: f64 = 0.02;

#[derive(Clone)]
struct Study {
    experiment: Experiment,
    oracle: Oracle,
    settings: Settings,
    replicates: Vec<Replicate>,
}

fn study(system: System, n_replicates: u64, weighting: Weighting) -> Study {
    let settings = Settings { n_replicates, seed: 20_817, weighting };
    let experiment = Experiment::new(system.case().unwrap(), weighting).unwrap();
    let oracle = Oracle::of(experiment.case(), weighting, experiment.zero(), experiment.scored()).unwrap();
    let replicates = replicates(&experiment, &settings).unwrap();
    Study { experiment, oracle, settings, replicates }
}

impl Study {
    fn score(&self) -> Score {
        Score::of(&self.replicates, 0, &self.oracle.standard_errors)
    }

    /// The same with every error bar multiplied by a factor.
    fn with_errors_scaled(&self, factor: f64) -> Self {
        let mut scaled = self.clone();
        for outcome in scaled.replicates.iter_mut().flatten() {
            for bar in outcome.error_bars.iter_mut().flatten() {
                *bar = bar.map(|bar: ErrorBar| bar.scaled(factor));
            }
        }
        scaled
    }

    /// Coverage of 95 % and 68 % intervals, each by itself and against the oracle's on the same bins. The standard error is the greater of
    /// that from the spread between replicates, which few of them can make too small, and the binomial one.
    fn faults(&self) -> Vec<String> {
        let score = self.score();
        let mut faults = Vec::new();
        let levels = [(0.95, score.coverage_95, score.excess_95), (0.68, score.coverage_68, score.excess_68)];
        for (level, coverage, excess) in levels {
            let (coverage, excess) = (coverage.unwrap(), excess.unwrap());
            let binomial = (level * (1.0 - level) / (STATEMENTS * self.settings.n_replicates as f64)).sqrt();
            let bound = tolerance::STANDARD_ERRORS * coverage.standard_error.max(binomial);
            if (coverage.value - level).abs() >= bound {
                faults.push(format!("{level}: coverage {coverage:?}, allowed {bound}"));
            }
            let bound = EXCESS + tolerance::STANDARD_ERRORS * excess.standard_error;
            if excess.value.abs() >= bound {
                faults.push(format!("{level}: excess {excess:?}, allowed {bound}"));
            }
        }
        faults
    }

    fn assert_calibrated(&self) {
        assert!(self.replicates.iter().all(Result::is_ok));
        let faults = self.faults();
        assert!(faults.is_empty(), "{faults:#?}");
    }

    /// Σ (estimate − truth)²/σ² over the replicates is chi-square distributed for each bin; refused with 1e-6 a side, shared by all bins.
    fn assert_errors_are_as_large_as_the_oracle_says(&self) {
        let n = self.replicates.len() as f64;
        let distribution = ChiSquared::new(n).unwrap();
        let probability = 1e-6 / self.experiment.scored().len() as f64;
        let allowed = distribution.inverse_cdf(probability)..distribution.inverse_cdf(1.0 - probability);
        for (place, error) in self.oracle.standard_errors.iter().enumerate() {
            let miss = |replicate: &Replicate| replicate.as_ref().unwrap().misses[place].unwrap();
            let sum: f64 = self.replicates.iter().map(|replicate| (miss(replicate) / error).powi(2)).sum();
            assert!(allowed.contains(&sum), "bin {place}: {sum}, allowed {allowed:?}");
        }
        // All bins together, where the spread between replicates knows how far they say the same.
        let report = Report::of(System::Independent, self.settings, &self.experiment, &self.oracle, &self.replicates);
        let Estimate { value, standard_error } = report.oracle.relative_root_mean_square.unwrap();
        assert!((value - 1.0).abs() < tolerance::STANDARD_ERRORS * standard_error, "{value} ± {standard_error}");
    }
}

#[test]
fn independent_samples() {
    let study = study(System::Independent, 60, Weighting::Unit);
    study.assert_calibrated();
    study.assert_errors_are_as_large_as_the_oracle_says();
    // Batch means of independent samples are an unbiased estimate of the variance of the linear term; what is beyond it goes with one
    // over the some 2500 samples of a bin.
    let variance = study.score().relative_variance.unwrap();
    assert!((variance.value - 1.0).abs() < tolerance::STANDARD_ERRORS * variance.standard_error, "{variance:?}");
    assert!(study.score().printed.unwrap().value >= 1.0);
}

#[test]
fn thirty_five_effective_samples_a_window() {
    let study = study(System::LongMemory35, 60, Weighting::Unit);
    study.assert_calibrated();
    study.assert_errors_are_as_large_as_the_oracle_says();
}

#[test]
fn two_correlation_times() {
    study(System::TwoTimes, 40, Weighting::Unit).assert_calibrated();
}

#[test]
fn a_periodic_axis() {
    let study = study(System::Periodic, 40, Weighting::Unit);
    study.assert_calibrated();
    study.assert_errors_are_as_large_as_the_oracle_says();
}

#[test]
fn uneven_windows_weighted_by_their_inefficiency() {
    let study = study(System::Uneven, 60, Weighting::InverseG);
    study.assert_calibrated();
    study.assert_errors_are_as_large_as_the_oracle_says();
}

#[test]
fn errors_that_are_a_third_too_small_or_half_too_large_are_found_out() {
    let honest = study(System::Uneven, 60, Weighting::Unit);
    for factor in [0.67, 1.5] {
        let study = honest.with_errors_scaled(factor);
        assert!(!study.faults().is_empty(), "{factor}: {:?}", study.score());
    }
}

#[test]
fn numbers_are_the_same_for_any_number_of_threads() {
    let with_threads = |n_threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(n_threads).build().unwrap();
        pool.install(|| study(System::LongMemory12, 5, Weighting::Unit).replicates)
    };
    assert_eq!(with_threads(1), with_threads(3));
    assert_eq!(with_threads(1)[0].as_ref().unwrap().error_bars.len(), Method::ALL.len());
}
