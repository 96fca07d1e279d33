//! From what was typed to a job that can be run: everything that takes two values, a name, a unit or a look at the disk.

mod axes;
mod bias;
mod bias_tables;
mod candidate;
mod digest;
mod exclude;
mod files;
mod fitting_bins;
mod kind;
mod missing;
mod natural;
mod output;
mod profile;
mod rows;
mod series;
mod shapes;
mod tabulated;
mod term;
mod term_inputs;
mod term_values;
mod units;
mod window_table;
mod windows;

use std::path::Path;

use spandrel_bias::units::{EnergyUnit, Temperature};
use spandrel_solver::bootstrap::BootstrapOptions;
use spandrel_solver::condense::DEFAULT_CELL_ERROR;
use spandrel_solver::solve::SolveOptions;

use self::axes::Axes;
use self::bias::BiasContext;
use self::bias_tables::BiasTables;
use self::candidate::Candidate;
use self::exclude::Exclusion;
use self::files::Files;
use self::series::Series;
use self::windows::WindowChecks;
use super::model::{AuxiliaryFile, AuxiliaryRole, ErrorMethod, ErrorSettings, Job, SolverSettings};
use super::paths::JobFolder;
use super::problem::{Problem, Problems};
use super::typed::{TypedErrors, TypedJob, TypedSolver};

/// Start of the random numbers where the job gives none.
const DEFAULT_SEED: u64 = 1;

/// Checks a job. Without a problem there is a job; with one there may still be none.
pub(super) fn check(typed: TypedJob, path: &Path, text: &str, problems: &mut Problems) -> Option<Job> {
    let folder = JobFolder::new(path.parent().unwrap_or(Path::new("")).to_owned());
    let axes = Axes::check(&typed.axes, problems);
    let system_temperature = typed.system.as_ref().and_then(|system| system.temperature);
    let temperature = system_temperature.and_then(|typed| Temperature::new(typed.value).ok());
    let energy_unit = typed.system.as_ref().and_then(|system| system.energy_unit).map(|unit| unit.value);
    let series = Series::check(typed.series, &axes, problems);

    let mut auxiliary = vec![AuxiliaryFile {
        role: AuxiliaryRole::Job,
        path: folder.shown(path),
        bytes: text.len() as u64,
        sha256: digest::sha256(text.as_bytes()),
    }];
    let mut missing = Vec::new();
    let mut candidates: Vec<Candidate> = typed.windows.into_iter().map(Candidate::from_window).collect();
    if let Some(table) = &typed.window_table {
        let (rows, file) = window_table::candidates(table, &folder, &mut missing, problems);
        candidates.extend(rows);
        auxiliary.extend(file);
    }
    windows::check_names(&candidates, problems);
    let exclusion = Exclusion::check(&typed.exclude, &candidates, &axes, problems);
    if !candidates.is_empty() && (0..candidates.len()).all(|index| exclusion.window(index)) {
        let asked = typed.exclude.windows.first().or(typed.exclude.replicas.first());
        let first = asked.or(candidates.iter().find_map(|window| window.name.as_ref()));
        problems.push(
            Problem::at(
                first.map_or(typed.mark, |first| first.mark),
                format!(
                    "`exclude`: expected at least one window to take part, found all {} left out",
                    candidates.len()
                ),
            )
            .help("take a window off `exclude`, or remove its `exclude = true`"),
        );
    }

    // Where temperature or unit are at fault nothing comes of the job; any value then serves to check the rest.
    let stand_in = Temperature::new(1.0).ok();
    let mut windows = Vec::new();
    if let Some(temperature) = temperature.or(stand_in) {
        let mut files = Files::new(&folder);
        let mut tables = BiasTables::new(&folder, series.layout.separator, series.layout.comments.clone());
        let checks = WindowChecks {
            series: &series,
            bias: BiasContext { axes: &axes, temperature, energy_unit: energy_unit.unwrap_or(EnergyUnit::Kt) },
            temperature: system_temperature,
            exclusion: &exclusion,
        };
        windows = checks.check(&candidates, &mut files, &mut tables, problems);
        let (missing_series, mut in_use) = files.finish(problems);
        let (missing_tables, table_files) = tables.finish();
        missing.extend(missing_series);
        missing.extend(missing_tables);
        auxiliary.extend(table_files);
        in_use.extend(auxiliary.iter().map(|file| missing::identity(&folder.join(&file.path))));
        missing::report(missing, &in_use, problems);
    }

    let profile = typed.profile.as_ref().and_then(|typed| profile::check(typed, &axes, problems));
    let output_folder = output::check(&typed.output, path, &folder, typed.mark, problems);
    Some(Job {
        path: path.to_owned(),
        folder: folder.path().to_owned(),
        temperature: temperature?,
        energy_unit: energy_unit?,
        axes: axes.whole?,
        time_unit: series.time_unit(),
        columns: series.columns?,
        layout: series.layout,
        windows,
        excluded: exclusion.excluded,
        profile: profile?,
        solver: solver_settings(&typed.solver),
        errors: error_settings(&typed.errors),
        output_folder,
        covariance: typed.output.covariance.unwrap_or(false),
        auxiliary,
    })
}

fn error_settings(typed: &TypedErrors) -> ErrorSettings {
    let method = typed.method.unwrap_or_default();
    let default = match method {
        ErrorMethod::Influence => 0,
        ErrorMethod::Bootstrap => BootstrapOptions::default().n_replicates,
    };
    ErrorSettings { method, bootstrap_replicates: typed.bootstrap_replicates.unwrap_or(default) }
}

fn solver_settings(typed: &TypedSolver) -> SolverSettings {
    let defaults = SolveOptions::default();
    SolverSettings {
        options: SolveOptions {
            method: typed.method.unwrap_or(defaults.method),
            tolerance: typed.tolerance.unwrap_or(defaults.tolerance),
            max_iterations: typed.max_iterations,
        },
        allow_gaps: typed.allow_gaps.unwrap_or(false),
        cells: typed.cells.unwrap_or_default(),
        cell_error: typed.cell_error.unwrap_or(DEFAULT_CELL_ERROR),
        seed: typed.seed.unwrap_or(DEFAULT_SEED),
    }
}
