//! `summary.json`: everything that says where a result comes from and how far it goes.

use super::folder::ListedFile;
use crate::job::{ErrorMethod, Job, ResolvedJob};
use crate::pipeline::{Analysis, BAND_PROBABILITY, Part, ReadWindow};
use serde::Serialize;
use spandrel_ingest::SegmentReport;
use spandrel_solver::bootstrap::Bootstrap;
use spandrel_solver::findings::{Finding, FindingRecord};
use spandrel_solver::profile::Zero;
use spandrel_solver::solve::{Certificate, Link, Method};

/// Version of the summary's keys.
pub const SUMMARY_FORMAT: u32 = 1;

/// What no error bar here covers.
pub const NOT_COVERED: [&str; 4] = [
    "motions slower than the runs, in directions that no window restrains",
    "errors of the force field and of the simulation's settings",
    "the finite size of the simulated system",
    "the choice of the coordinate",
];

/// The whole of it.
#[derive(Debug, Serialize)]
pub struct Summary {
    program: &'static str,
    format: u32,
    version: &'static str,
    seed: u64,
    job: ResolvedJob,
    inputs: Vec<Input>,
    convergence: Vec<Convergence>,
    weakest_link: Option<NamedLink>,
    error_method: &'static str,
    error_checks: Vec<ErrorCheck>,
    profiles: Vec<ProfileSummary>,
    findings: Vec<FindingRecord>,
    not_covered: [&'static str; 4],
    files: Vec<ListedFile>,
}

/// One text file of a window.
#[derive(Debug, Serialize)]
struct Input {
    window: String,
    replica: usize,
    path: String,
    bytes: u64,
    sha256: String,
    rows_read: u64,
    rows_repeated: u64,
    rows_kept: u64,
    first_time: Option<f64>,
    last_time: Option<f64>,
}

/// How one group of windows was solved.
#[derive(Debug, Serialize)]
struct Convergence {
    group: usize,
    windows: Vec<String>,
    method: Method,
    iterations: u64,
    #[serde(flatten)]
    certificate: Certificate,
    tolerance: f64,
    points: usize,
}

/// The errors of one group estimated in other ways.
#[derive(Debug, Serialize)]
struct ErrorCheck {
    group: usize,
    bootstrap_replicates: Option<usize>,
    bootstrap_unsolved: Option<usize>,
    /// Standard error from the bootstrap over that from influences, where it is farthest from 1.
    bootstrap_over_influence: Option<f64>,
    windows_with_replicas: Option<usize>,
    /// Standard error between replicas over that along them, largest over the bins.
    between_over_along_replicas: Option<f64>,
}

impl ErrorCheck {
    fn of(group: usize, part: &Part) -> Self {
        let bootstrap = part.bootstrap.as_ref();
        let between = part.between_replicas.as_ref();
        let ratios = between.iter().flat_map(|between| &between.bins).flatten().map(|error| error.ratio);
        Self {
            group,
            bootstrap_replicates: bootstrap.map(|bootstrap| bootstrap.n_replicates),
            bootstrap_unsolved: bootstrap.map(|bootstrap| bootstrap.n_unsolved),
            bootstrap_over_influence: bootstrap.and_then(Bootstrap::farthest_ratio).map(|farthest| farthest.ratio),
            windows_with_replicas: between.map(|between| between.n_windows),
            between_over_along_replicas: ratios.reduce(|largest, ratio| if ratio > largest { ratio } else { largest }),
        }
    }
}

#[derive(Debug, Serialize)]
struct NamedLink {
    windows: [String; 2],
    linking_samples: f64,
}

#[derive(Debug, Serialize)]
struct ProfileSummary {
    group: usize,
    zero: Zero,
    zero_position: Option<f64>,
    bins: usize,
    sampled_bins: usize,
    bins_with_error: usize,
    largest_standard_error: Option<f64>,
    energy_unit: String,
    band_probability: f64,
    /// Pointwise probability of each interval of the band.
    band_pointwise_probability: Option<f64>,
}

impl Summary {
    /// Of a finished solve; `files` lists the other files of the result.
    #[must_use]
    pub fn new(job: &Job, read: &[ReadWindow], analysis: &Analysis, parts: &[Part], files: &[ListedFile]) -> Self {
        let name = |k: usize| analysis.ensemble.windows[k].name.clone();
        Self {
            program: crate::PROGRAM,
            format: SUMMARY_FORMAT,
            version: crate::VERSION,
            seed: job.solver.seed,
            job: job.resolved(),
            inputs: inputs(job, read),
            convergence: (1..)
                .zip(parts)
                .map(|(group, part)| Convergence {
                    group,
                    windows: part.windows.iter().map(|&k| name(k)).collect(),
                    method: part.solution.method,
                    iterations: part.solution.iterations,
                    certificate: part.solution.certificate,
                    tolerance: job.solver.options.tolerance,
                    points: analysis.ensemble.points.len(),
                })
                .collect(),
            weakest_link: analysis.links.weakest().map(|Link { windows: (i, j), linking_samples, .. }| NamedLink {
                windows: [name(*i), name(*j)],
                linking_samples: *linking_samples,
            }),
            error_method: match job.errors.method {
                ErrorMethod::Influence => "influence of each sample, batch means along each run",
                ErrorMethod::Bootstrap => "moving-block bootstrap, each replicate solved again",
            },
            error_checks: (1..).zip(parts).map(|(group, part)| ErrorCheck::of(group, part)).collect(),
            profiles: (1..).zip(parts).map(|(group, part)| profile_summary(job, group, part)).collect(),
            findings: analysis.findings.iter().map(Finding::record).collect(),
            not_covered: NOT_COVERED,
            files: files.to_vec(),
        }
    }

    /// As the bytes of the file.
    ///
    /// # Errors
    /// None in practice: every value can be written.
    pub fn to_bytes(&self) -> Result<Vec<u8>, serde_json::Error> {
        let mut bytes = serde_json::to_vec_pretty(self)?;
        bytes.push(b'\n');
        Ok(bytes)
    }
}

fn inputs(job: &Job, read: &[ReadWindow]) -> Vec<Input> {
    let mut inputs = Vec::new();
    for (settings, window) in job.windows.iter().zip(read) {
        for (replica, run) in settings.replica_numbers.iter().zip(&window.replicas) {
            inputs.extend(run.report.segments.iter().map(|segment: &SegmentReport| Input {
                window: settings.name.clone(),
                replica: *replica,
                path: job.shown(&segment.path),
                bytes: segment.bytes,
                sha256: segment.sha256.clone(),
                rows_read: segment.rows_read,
                rows_repeated: segment.rows_repeated,
                rows_kept: segment.rows_kept,
                first_time: segment.first_time,
                last_time: segment.last_time,
            }));
        }
    }
    inputs
}

fn profile_summary(job: &Job, group: usize, part: &Part) -> ProfileSummary {
    let bins = &part.profile.bins;
    let errors = bins.iter().filter_map(|bin| bin.uncertainty.as_ref()).map(|error| error.standard_error);
    ProfileSummary {
        group,
        zero: part.profile.zero,
        zero_position: part.profile.zero_position,
        bins: bins.len(),
        sampled_bins: bins.iter().filter(|bin| bin.free_energy.is_some()).count(),
        bins_with_error: errors.clone().count(),
        largest_standard_error: errors
            .reduce(|largest, error| if error > largest { error } else { largest })
            .map(|error| job.energy_unit.from_reduced(error, job.temperature)),
        energy_unit: job.energy_unit.to_string(),
        band_probability: BAND_PROBABILITY,
        band_pointwise_probability: part.band.as_ref().map(|band| band.pointwise_probability),
    }
}
