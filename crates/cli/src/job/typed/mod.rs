//! The job as it was typed.
//!
//! What may live here: values with their places, of the right type and in the range that the value alone tells, units as they were
//! named, words as enums. A key that is missing or at fault is `None`; where it had to be there, the problem is already reported.
//! What may not: converted numbers, resolved names, defaults taken from another key, anything that was looked up on the disk.

mod bias;
mod errors;
mod exclude;
mod profile;
mod series;
mod solver;
mod system;
mod window;

pub(super) use bias::{BiasInput, TypedBias};
pub(super) use errors::TypedErrors;
pub(super) use exclude::{TypedExclude, TypedStretch};
pub(super) use profile::{TypedBins, TypedProfile, TypedZero};
pub(super) use series::{SEPARATORS, TypedColumn, TypedDiscard, TypedSeries, TypedTime};
pub(super) use solver::{TypedOutput, TypedSolver};
pub(super) use system::{TypedAxis, TypedSystem};
pub(super) use window::{TypedWindow, TypedWindowTable};

use super::keys::Section;
use super::mark::Mark;
use super::problem::{Problem, Problems};
use super::table::Table;

/// The version of the job format that is read.
pub(super) const FORMAT: u64 = 1;

/// A job as it was typed.
#[derive(Debug)]
pub(super) struct TypedJob {
    /// `[system]`
    pub system: Option<TypedSystem>,
    /// `[[axis]]`
    pub axes: Vec<TypedAxis>,
    /// `[series]`
    pub series: Option<TypedSeries>,
    /// `[[window]]`
    pub windows: Vec<TypedWindow>,
    /// `[window_table]`
    pub window_table: Option<TypedWindowTable>,
    /// `[exclude]`
    pub exclude: TypedExclude,
    /// `[profile]`
    pub profile: Option<TypedProfile>,
    /// `[solver]`
    pub solver: TypedSolver,
    /// `[errors]`
    pub errors: TypedErrors,
    /// `[output]`
    pub output: TypedOutput,
    /// The beginning of the file.
    pub mark: Mark,
}

impl TypedJob {
    /// Reads the sections. `None` for a format that is not known: nothing else can then be judged.
    pub fn read(mut top: Table<'_>, problems: &mut Problems) -> Option<Self> {
        let format = top.require("format", problems);
        if let Some(format) = format.and_then(|field| field.scalar(problems)) {
            let version = format.whole(1, problems);
            if version.is_some_and(|version| version.value != FORMAT) {
                problems.push(
                    format
                        .problem(&format!("the number {FORMAT}"))
                        .help("this version of the program reads jobs of format 1 only"),
                );
                return None;
            }
        }
        let job = Self {
            system: required(&mut top, "system", Section::System, problems)
                .map(|table| TypedSystem::read(table, problems)),
            axes: match top.require("axis", problems) {
                None => Vec::new(),
                Some(field) => field
                    .tables(Section::Axis, problems)
                    .into_iter()
                    .map(|table| TypedAxis::read(table, problems))
                    .collect(),
            },
            series: required(&mut top, "series", Section::Series, problems)
                .map(|table| TypedSeries::read(table, problems)),
            windows: {
                if !top.has("window") && !top.has("window_table") {
                    problems.push(
                        Problem::at(top.mark, "`window`: expected at least one window, found none")
                            .help("add a `[[window]]` with `name` and `files`, or a `[window_table]`"),
                    );
                }
                let field = top.take("window");
                let tables = field.map(|field| field.tables(Section::Window, problems));
                tables.into_iter().flatten().map(|table| TypedWindow::read(table, problems)).collect()
            },
            window_table: top
                .take("window_table")
                .and_then(|field| field.table(Section::WindowTable, problems))
                .map(|table| TypedWindowTable::read(table, problems)),
            exclude: top
                .take("exclude")
                .and_then(|field| field.table(Section::Exclude, problems))
                .map(|table| TypedExclude::read(table, problems))
                .unwrap_or_default(),
            profile: required(&mut top, "profile", Section::Profile, problems)
                .map(|table| TypedProfile::read(table, problems)),
            solver: top
                .take("solver")
                .and_then(|field| field.table(Section::Solver, problems))
                .map(|table| TypedSolver::read(table, problems))
                .unwrap_or_default(),
            errors: top
                .take("errors")
                .and_then(|field| field.table(Section::Errors, problems))
                .map(|table| TypedErrors::read(table, problems))
                .unwrap_or_default(),
            output: top
                .take("output")
                .and_then(|field| field.table(Section::Output, problems))
                .map(|table| TypedOutput::read(table, problems))
                .unwrap_or_default(),
            mark: top.mark,
        };
        top.finish(problems);
        Some(job)
    }
}

fn required<'d>(top: &mut Table<'d>, name: &str, section: Section, problems: &mut Problems) -> Option<Table<'d>> {
    top.require(name, problems)?.table(section, problems)
}
