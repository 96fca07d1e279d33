//! The job as it is written into results: every default filled in, every path relative, in plain words.

use std::path::PathBuf;

use serde::ser::SerializeMap;
use serde::{Serialize, Serializer};
use spandrel_bias::Axis;
use spandrel_bias::units::{EnergyUnit, PositionUnit, Temperature, TimeUnit};
use spandrel_ingest::{Column, Selection, Separator, TimeSource};
use spandrel_solver::profile::Zero;
use spandrel_solver::solve::Method;

use super::model::{AuxiliaryFile, AxisColumn, CellChoice, ErrorSettings, Excluded, Job, JobWindow};
use super::paths::JobFolder;
use super::typed::FORMAT;

/// A term of a bias in the job's own words and units.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct ResolvedTerm {
    settings: Vec<(&'static str, Setting)>,
}

/// The value of one key.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Setting {
    /// A number.
    Number(f64),
    /// Anything else.
    Text(String),
}

impl ResolvedTerm {
    /// The value of a key.
    #[must_use]
    pub fn get(&self, key: &str) -> Option<&Setting> {
        self.settings.iter().find(|(name, _)| *name == key).map(|(_, setting)| setting)
    }

    pub(super) fn set(&mut self, key: &'static str, setting: Setting) {
        self.settings.push((key, setting));
    }
}

impl Serialize for ResolvedTerm {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(self.settings.len()))?;
        for (key, setting) in &self.settings {
            map.serialize_entry(key, setting)?;
        }
        map.end()
    }
}

/// A whole job; see the module.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedJob {
    /// Version of the job format.
    pub format: u64,
    /// Name of the job file.
    pub job: String,
    /// Kelvin.
    pub temperature: Temperature,
    /// Unit of energies in the results.
    pub energy_unit: EnergyUnit,
    /// The axes.
    pub axes: Vec<Axis>,
    /// How the text files are read.
    pub series: ResolvedSeries,
    /// The windows that take part.
    pub windows: Vec<ResolvedWindow>,
    /// What is left out.
    pub excluded: Excluded,
    /// The profile.
    pub profile: ResolvedProfile,
    /// How the equations are solved.
    pub solver: ResolvedSolver,
    /// Where errors come from.
    pub errors: ErrorSettings,
    /// Folder of the results.
    pub output_folder: String,
    /// Whether the covariance of the bins is written.
    pub covariance: bool,
    /// Files that were read besides the series.
    pub auxiliary: Vec<AuxiliaryFile>,
}

/// How the text files are read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedSeries {
    /// What stands between two columns.
    pub separator: Separator,
    /// Prefixes of comment lines.
    pub comments: Vec<String>,
    /// Where times come from.
    pub time: TimeSource,
    /// Unit of times.
    pub time_unit: Option<TimeUnit>,
    /// The columns, in the order of the axes.
    pub columns: Vec<ResolvedColumn>,
}

/// The column of an axis.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedColumn {
    /// Name of the axis.
    pub axis: String,
    /// The column.
    pub column: Column,
    /// Unit of its numbers.
    pub unit: PositionUnit,
}

/// A window.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedWindow {
    /// Its name.
    pub name: String,
    /// Its replicas.
    pub replicas: Vec<ResolvedReplica>,
    /// The terms of its bias; none for a window without bias.
    pub bias: Vec<ResolvedTerm>,
    /// Which frames are kept.
    pub selection: Selection,
    /// Whether each replica, besides, loses what it shows itself not to have settled.
    pub automatic_start: bool,
}

/// A replica.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct ResolvedReplica {
    /// Its number in its window, counted from 1.
    pub number: usize,
    /// Its segments, relative to the job's folder.
    pub segments: Vec<String>,
}

/// The profile.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedProfile {
    /// Name of its axis.
    pub axis: String,
    /// Lower end; `None` for the sampled range.
    pub from: Option<f64>,
    /// Upper end; `None` for the sampled range.
    pub to: Option<f64>,
    /// Width of a bin.
    pub bin_width: f64,
    /// A position at which a bin begins.
    pub origin: f64,
    /// Where the free energy is zero.
    pub zero: Zero,
}

/// How the equations are solved.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ResolvedSolver {
    /// The method.
    pub method: Method,
    /// Largest Newton step, in kT.
    pub tolerance: f64,
    /// Most iterations; `None` leaves it to the method.
    pub max_iterations: Option<u64>,
    /// Whether groups that do not overlap are solved apart.
    pub allow_gaps: bool,
    /// What a cell is.
    pub cells: CellChoice,
    /// Largest local error of a cell, in kT.
    pub cell_error: f64,
    /// Start of the random numbers.
    pub seed: u64,
}

impl Job {
    /// The job with every default filled in, for results. Paths are relative to the job's folder.
    #[must_use]
    pub fn resolved(&self) -> ResolvedJob {
        let folder = JobFolder::new(self.folder.clone());
        let axis_name = |index: usize| self.axes.get(index).map_or_else(String::new, |axis| axis.name().to_owned());
        let columns = self.layout.columns.iter().zip(&self.columns).enumerate();
        let bins = self.profile.bins;
        let request = self.profile.request;
        ResolvedJob {
            format: FORMAT,
            job: self.path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default(),
            temperature: self.temperature,
            energy_unit: self.energy_unit,
            axes: self.axes.to_vec(),
            series: ResolvedSeries {
                separator: self.layout.separator,
                comments: self.layout.comments.clone(),
                time: self.layout.time.clone(),
                time_unit: self.time_unit,
                columns: columns
                    .map(|(index, (column, AxisColumn { unit, .. }))| ResolvedColumn {
                        axis: axis_name(index),
                        column: column.clone(),
                        unit: *unit,
                    })
                    .collect(),
            },
            windows: self.windows.iter().map(|window| window.resolved(&folder)).collect(),
            excluded: self.excluded.clone(),
            profile: ResolvedProfile {
                axis: axis_name(bins.axis()),
                from: request.first_bin.map(|bin| bins.lower_edge(bin)),
                to: request.last_bin.map(|bin| bins.lower_edge(bin + 1)),
                bin_width: bins.width(),
                origin: self.profile.origin,
                zero: request.zero,
            },
            solver: ResolvedSolver {
                method: self.solver.options.method,
                tolerance: self.solver.options.tolerance,
                max_iterations: self.solver.options.max_iterations,
                allow_gaps: self.solver.allow_gaps,
                cells: self.solver.cells,
                cell_error: self.solver.cell_error,
                seed: self.solver.seed,
            },
            errors: self.errors,
            output_folder: folder.shown(&self.output_folder),
            covariance: self.covariance,
            auxiliary: self.auxiliary.clone(),
        }
    }
}

impl JobWindow {
    fn resolved(&self, folder: &JobFolder) -> ResolvedWindow {
        let replica = |(&number, segments): (&usize, &Vec<PathBuf>)| ResolvedReplica {
            number,
            segments: segments.iter().map(|segment| folder.shown(segment)).collect(),
        };
        ResolvedWindow {
            name: self.name.clone(),
            replicas: self.replica_numbers.iter().zip(&self.replicas).map(replica).collect(),
            bias: self.terms.clone(),
            selection: self.selection,
            automatic_start: self.automatic_start,
        }
    }
}
