//! The job as it was checked.
//!
//! What may live here: values that the rest of the program can use as they are. Energies are in kT and positions in their axis' unit,
//! names are resolved to indices, paths are found, patterns are expanded, defaults are filled in. What may not: places in a text,
//! anything that could still turn out to be wrong with the job itself.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use serde::Serialize;
use spandrel_bias::units::{EnergyUnit, PositionUnit, Temperature, TimeUnit};
use spandrel_bias::{Axis, Bias};
use spandrel_ingest::{Layout, Selection};
use spandrel_solver::condense::BinGrid;
use spandrel_solver::profile::ProfileRequest;
use spandrel_solver::solve::SolveOptions;

use super::paths::JobFolder;
use super::resolved::ResolvedTerm;

/// A job that can be run.
#[derive(Debug, Clone, PartialEq)]
pub struct Job {
    /// The job file, as it was given.
    pub path: PathBuf,
    /// The folder of the job file, to which its paths are relative.
    pub folder: PathBuf,
    /// Temperature of all windows.
    pub temperature: Temperature,
    /// Unit of energies in the results.
    pub energy_unit: EnergyUnit,
    /// The axes, at least one.
    pub axes: Arc<[Axis]>,
    /// How the text files of all windows are read; its columns stand in the order of the axes.
    pub layout: Layout,
    /// The column of each axis; a position in the axis' unit is the number in the file times the factor.
    pub columns: Vec<AxisColumn>,
    /// Unit of the times in `layout` and of the windows' time to discard; `None` where times are not known.
    pub time_unit: Option<TimeUnit>,
    /// The windows that take part, at least one, in the order of the job: first those of its own, then those of the table.
    pub windows: Vec<JobWindow>,
    /// What is left out.
    pub excluded: Excluded,
    /// The profile.
    pub profile: ProfileSettings,
    /// How the equations are solved.
    pub solver: SolverSettings,
    /// Where errors come from.
    pub errors: ErrorSettings,
    /// Folder of the results.
    pub output_folder: PathBuf,
    /// Whether the covariance of the bins is written.
    pub covariance: bool,
    /// Files that were read for the job besides the series: the job itself, the table of windows, tables of biases.
    pub auxiliary: Vec<AuxiliaryFile>,
}

impl Job {
    /// A path as it is shown in results and messages: relative to the job's folder.
    #[must_use]
    pub fn shown(&self, path: &Path) -> String {
        JobFolder::new(self.folder.clone()).shown(path)
    }
}

/// The unit of one axis in the text files.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct AxisColumn {
    /// Unit of the numbers in the files.
    pub unit: PositionUnit,
    /// What takes a number in the files to a position in the axis' unit.
    pub factor: f64,
}

/// A window that takes part.
#[derive(Debug, Clone, PartialEq)]
pub struct JobWindow {
    /// Name, unique in the job.
    pub name: String,
    /// The segments of each replica, in the order of time; neither list is empty.
    pub replicas: Vec<Vec<PathBuf>>,
    /// The number of each replica in the job, counted from 1: some may be left out.
    pub replica_numbers: Vec<usize>,
    /// The reduced bias.
    pub bias: Bias,
    /// Which frames of each replica are kept; a time is in the job's `time_unit`.
    pub selection: Selection,
    /// Whether each replica, besides, loses what it shows itself not to have settled.
    pub automatic_start: bool,
    /// The bias in the job's own words, with every default filled in.
    pub terms: Vec<ResolvedTerm>,
}

/// What is left out of a job.
#[derive(Debug, Clone, PartialEq, Default, Serialize)]
pub struct Excluded {
    /// Names of windows.
    pub windows: Vec<String>,
    /// Replicas of windows that otherwise take part.
    pub replicas: Vec<ExcludedReplica>,
    /// Stretches of an axis: samples there are left out of every window.
    pub stretches: Vec<Stretch>,
}

/// A replica that is left out.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct ExcludedReplica {
    /// Name of its window.
    pub window: String,
    /// Its number, counted from 1.
    pub replica: usize,
}

/// A stretch of an axis, both ends included. On an axis with a period it runs upward from one end to the other.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Stretch {
    /// Number of the axis, from 0.
    pub axis: usize,
    /// Lower end, in the axis' unit.
    pub from: f64,
    /// Upper end, in the axis' unit; above `from`, and on an axis with a period by less than that.
    pub to: f64,
}

impl Stretch {
    /// Whether a position on the stretch's own axis lies in it.
    #[must_use]
    pub fn contains(&self, axis: &Axis, position: f64) -> bool {
        (self.from..=self.to).contains(&axis.wrap(position, self.from))
    }
}

/// The profile that is asked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProfileSettings {
    /// The bins, along the axis of the profile.
    pub bins: BinGrid,
    /// Position of the lower edge of bin 0, in the axis' unit.
    pub origin: f64,
    /// Which of them are shown, and where the zero is.
    pub request: ProfileRequest,
}

/// How the equations are solved.
#[derive(Debug, Clone, PartialEq)]
pub struct SolverSettings {
    /// Method, tolerance and most iterations.
    pub options: SolveOptions,
    /// Whether groups of windows that do not overlap are solved each with its own zero.
    pub allow_gaps: bool,
    /// What a cell is.
    pub cells: CellChoice,
    /// Largest local error of a cell, in kT.
    pub cell_error: f64,
    /// Start of the random numbers.
    pub seed: u64,
}

/// Where errors come from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct ErrorSettings {
    /// Which errors are given.
    pub method: ErrorMethod,
    /// Replicates of the bootstrap; 0: none is made.
    pub bootstrap_replicates: usize,
}

/// Which errors are given.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum ErrorMethod {
    /// From the influence of each sample and batch means along each run.
    #[default]
    Influence,
    /// From solving again on runs drawn anew in blocks of time.
    Bootstrap,
}

impl ErrorMethod {
    /// The words of a job.
    pub(super) const WORDS: [(&'static str, Self); 2] =
        [("influence", Self::Influence), ("bootstrap", Self::Bootstrap)];
}

/// What a cell is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum CellChoice {
    /// Fine cells where they pay, one cell for each sample elsewhere.
    #[default]
    Auto,
    /// One cell for each sample.
    Samples,
}

impl CellChoice {
    /// The words of a job.
    pub(super) const WORDS: [(&'static str, Self); 2] = [("auto", Self::Auto), ("samples", Self::Samples)];
}

/// A file that was read for the job.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct AuxiliaryFile {
    /// What it is.
    pub role: AuxiliaryRole,
    /// Its path, relative to the job's folder.
    pub path: String,
    /// Its size.
    pub bytes: u64,
    /// The SHA-256 digest of its bytes, in 64 lower-case hexadecimal digits.
    pub sha256: String,
}

/// What an auxiliary file is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum AuxiliaryRole {
    /// The job file.
    Job,
    /// The table of windows.
    WindowTable,
    /// The table of a bias.
    BiasTable,
}
