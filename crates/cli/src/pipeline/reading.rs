//! Text to condensed runs.

use crate::interrupt::Interrupt;
use crate::job::{CellChoice, Job, JobWindow};
use crate::messages::Messages;
use crate::progress::Progress;
use rayon::prelude::*;
use spandrel_ingest::{Chunk, IngestError, Place, ReadError, SeriesReport, read_series};
use spandrel_solver::condense::{
    CellLattice, CellScheme, CondenseError, CondensedReplica, Condenser, MAX_LEVEL, StartUp, required_level,
};
use std::path::PathBuf;

/// One window as it was read.
#[derive(Debug)]
pub struct ReadWindow {
    /// Its replicas.
    pub replicas: Vec<ReadReplica>,
}

/// One run as it was read.
#[derive(Debug)]
pub struct ReadReplica {
    /// What its files held.
    pub report: SeriesReport,
    /// Kept frames that lay in an excluded stretch of an axis and were left out.
    pub excluded: u64,
    /// What the run shows of its beginning; `None` where it is too short to say.
    pub start: Option<StartUp>,
    /// Samples at its beginning that were cut because the run had not settled.
    pub cut: u64,
    /// The run in condensed form, without them.
    pub condensed: CondensedReplica,
}

/// Why the series cannot be used.
#[derive(Debug)]
pub enum ReadingError {
    /// One problem for each run that has one, in the order of the job.
    Problems(Vec<ReadingProblem>),
    /// The user asked to stop.
    Interrupted,
}

/// What is wrong with one run.
#[derive(Debug)]
pub enum ReadingProblem {
    /// A file is at fault.
    Ingest(IngestError),
    /// A sample cannot be taken in.
    Sample {
        /// Where it stands.
        place: Option<Place>,
        /// What is wrong with it.
        error: CondenseError,
    },
    /// Excluded stretches of the axes leave nothing of the run.
    NothingLeft {
        /// Name of the window.
        window: String,
        /// First file of the run.
        file: PathBuf,
    },
}

/// Reads and condenses all windows, files in parallel.
///
/// Cells must be fine enough for the steepest place that any window visits, which is known only afterwards: a first guess from the biases'
/// curvature is checked, and where it was too coarse everything is condensed once more. The result does not depend on the guess.
///
/// # Errors
/// The first problem of every run that has one, or a wish to stop.
pub fn read_windows(job: &Job, messages: Messages, interrupt: &Interrupt) -> Result<Vec<ReadWindow>, ReadingError> {
    if job.axes.len() > 1 || job.solver.cells == CellChoice::Samples {
        return Ok(settled(job, read_on(job, &CellScheme::Samples(job.profile.bins), messages, interrupt)?));
    }
    let bins = job.profile.bins;
    let along = bins.axis();
    let breaks: Vec<f64> = job.windows.iter().flat_map(|window| window.bias.breakpoints(along)).collect();
    let largest =
        |values: &mut dyn Iterator<Item = f64>| values.fold(0.0, |so_far: f64, x| if x > so_far { x } else { so_far });
    let curvature = largest(&mut job.windows.iter().map(|window| window.bias.largest_curvature(along)));
    let level_for = |steepness: f64| required_level(bins.width(), steepness, job.solver.cell_error);
    let mut level = (level_for(curvature) + 1).min(MAX_LEVEL);
    loop {
        let scheme = CellScheme::lattice(CellLattice::new(bins, level, &breaks));
        let windows = read_on(job, &scheme, messages, interrupt)?;
        let mut slopes = windows
            .iter()
            .flat_map(|window| &window.replicas)
            .map(|replica| replica.condensed.mean_squared_slope[along]);
        let needed = level_for(largest(&mut slopes).max(curvature));
        if needed <= level {
            return Ok(settled(job, windows.into_iter().map(|window| window.coarsened(needed)).collect()));
        }
        level = needed;
    }
}

/// The windows with the start of each run judged and, where the job says so and the gain is evident, cut.
fn settled(job: &Job, windows: Vec<ReadWindow>) -> Vec<ReadWindow> {
    let cut = |automatic: bool, replica: ReadReplica| {
        let start = StartUp::of(&replica.condensed);
        match start {
            Some(start) if automatic && start.evident => ReadReplica {
                cut: start.samples_dropped,
                condensed: replica.condensed.without_leading_groups(start.groups_dropped),
                start: Some(start),
                ..replica
            },
            start => ReadReplica { start, ..replica },
        }
    };
    job.windows
        .par_iter()
        .zip(windows)
        .map(|(settings, window)| ReadWindow {
            replicas: window.replicas.into_iter().map(|replica| cut(settings.automatic_start, replica)).collect(),
        })
        .collect()
}

impl ReadWindow {
    fn coarsened(self, level: u32) -> Self {
        let coarsen = |replica: ReadReplica| ReadReplica { condensed: replica.condensed.coarsened(level), ..replica };
        Self { replicas: self.replicas.into_iter().map(coarsen).collect() }
    }
}

fn read_on(
    job: &Job,
    scheme: &CellScheme,
    messages: Messages,
    interrupt: &Interrupt,
) -> Result<Vec<ReadWindow>, ReadingError> {
    let files = job.windows.iter().flat_map(|window| window.replicas.iter().flatten());
    let total = files.filter_map(|path| std::fs::metadata(path).ok()).map(|metadata| metadata.len()).sum();
    let progress = Progress::bytes(messages, "reading", total);
    let runs: Vec<(&JobWindow, &[PathBuf])> = job
        .windows
        .iter()
        .flat_map(|window| window.replicas.iter().map(move |segments| (window, segments.as_slice())))
        .collect();
    let outcomes: Vec<Result<ReadReplica, RunError>> = runs
        .par_iter()
        .map(|(window, segments)| read_run(job, window, segments, scheme, &progress, interrupt))
        .collect();

    let mut problems = Vec::new();
    let mut replicas = Vec::with_capacity(outcomes.len());
    for outcome in outcomes {
        match outcome {
            Ok(replica) => replicas.push(replica),
            Err(RunError::Problem(problem)) => problems.push(*problem),
            Err(RunError::Interrupted) => return Err(ReadingError::Interrupted),
        }
    }
    if !problems.is_empty() {
        return Err(ReadingError::Problems(problems));
    }
    let mut replicas = replicas.into_iter();
    Ok(job
        .windows
        .iter()
        .map(|window| ReadWindow { replicas: replicas.by_ref().take(window.replicas.len()).collect() })
        .collect())
}

enum RunError {
    Problem(Box<ReadingProblem>),
    Interrupted,
}

fn problem(problem: ReadingProblem) -> RunError {
    RunError::Problem(Box::new(problem))
}

fn read_run(
    job: &Job,
    window: &JobWindow,
    segments: &[PathBuf],
    scheme: &CellScheme,
    progress: &Progress,
    interrupt: &Interrupt,
) -> Result<ReadReplica, RunError> {
    let mut condenser = Condenser::new(scheme, &job.axes, &window.bias)
        .map_err(|error| problem(ReadingProblem::Sample { place: None, error }))?;
    let mut position = vec![0.0; job.axes.len()];
    let mut excluded = 0;
    let mut seen = (0, 0);
    let mut take = |chunk: &Chunk<'_>| -> Result<(), RunError> {
        if interrupt.requested() {
            return Err(RunError::Interrupted);
        }
        let before = if seen.0 == chunk.segment() { seen.1 } else { 0 };
        progress.advance(chunk.bytes_read().saturating_sub(before));
        seen = (chunk.segment(), chunk.bytes_read());
        for (number, row) in chunk.rows().enumerate() {
            for ((x, value), column) in position.iter_mut().zip(row).zip(&job.columns) {
                *x = value * column.factor;
            }
            if job
                .excluded
                .stretches
                .iter()
                .any(|stretch| stretch.contains(&job.axes[stretch.axis], position[stretch.axis]))
            {
                excluded += 1;
                continue;
            }
            condenser
                .push(&position)
                .map_err(|error| problem(ReadingProblem::Sample { place: chunk.place(number), error }))?;
        }
        Ok(())
    };
    let report = read_series(segments, &job.layout, &window.selection, &mut take).map_err(|error| match error {
        ReadError::Ingest(error) => problem(ReadingProblem::Ingest(error)),
        ReadError::Sink(stopped) => stopped,
    })?;
    let condensed = condenser.finish();
    if condensed.n_samples == 0 {
        let file = segments.first().cloned().unwrap_or_default();
        return Err(problem(ReadingProblem::NothingLeft { window: window.name.clone(), file }));
    }
    Ok(ReadReplica { report, excluded, start: None, cut: 0, condensed })
}
