//! `[solver]` and `[output]`.

use spandrel_solver::solve::Method;

use crate::job::mark::Typed;
use crate::job::model::CellChoice;
use crate::job::problem::Problems;
use crate::job::scalar::{Allowed, Scalar};
use crate::job::table::Table;

/// Below the lower end rounding in the sums decides; above the upper end the solution's error is no longer small beside a
/// statistical one.
const TOLERANCES: Allowed = Allowed::Within(1e-13, 1e-4);

/// Below the lower end there are more cells than samples; above the upper end the error of cells shows in the profile.
const CELL_ERRORS: Allowed = Allowed::Within(1e-8, 1e-2);

/// `[solver]`
#[derive(Debug, Default)]
pub(in crate::job) struct TypedSolver {
    /// How the likelihood is maximized.
    pub method: Option<Method>,
    /// kT.
    pub tolerance: Option<f64>,
    /// At least 1.
    pub max_iterations: Option<u64>,
    /// Whether groups that do not overlap are solved apart.
    pub allow_gaps: Option<bool>,
    /// What a cell is.
    pub cells: Option<CellChoice>,
    /// kT.
    pub cell_error: Option<f64>,
    /// Start of the random numbers.
    pub seed: Option<u64>,
}

impl TypedSolver {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let mut take = |name: &str, problems: &mut Problems| -> Option<Scalar> { table.take(name)?.scalar(problems) };
        let method = take("method", problems);
        let tolerance = take("tolerance", problems);
        let max_iterations = take("max_iterations", problems);
        let allow_gaps = take("allow_gaps", problems);
        let cells = take("cells", problems);
        let cell_error = take("cell_error", problems);
        let seed = take("seed", problems);
        table.finish(problems);
        Self {
            method: value(
                method.and_then(|scalar| scalar.word(&Method::ALL.map(|method| (method.name(), method)), problems)),
            ),
            tolerance: value(tolerance.and_then(|scalar| scalar.number(TOLERANCES, problems))),
            max_iterations: value(max_iterations.and_then(|scalar| scalar.whole(1, problems))),
            allow_gaps: value(allow_gaps.and_then(|scalar| scalar.flag(problems))),
            cells: value(cells.and_then(|scalar| scalar.word(&CellChoice::WORDS, problems))),
            cell_error: value(cell_error.and_then(|scalar| scalar.number(CELL_ERRORS, problems))),
            seed: value(seed.and_then(|scalar| scalar.whole(0, problems))),
        }
    }
}

fn value<T>(typed: Option<Typed<T>>) -> Option<T> {
    typed.map(|typed| typed.value)
}

/// `[output]`
#[derive(Debug, Default)]
pub(in crate::job) struct TypedOutput {
    /// Folder of the results.
    pub folder: Option<Typed<String>>,
    /// Whether the covariance of the bins is written.
    pub covariance: Option<bool>,
}

impl TypedOutput {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let folder = table.take("folder");
        let covariance = table.take("covariance");
        table.finish(problems);
        Self {
            folder: folder.and_then(|field| field.scalar(problems)?.text(problems)),
            covariance: value(covariance.and_then(|field| field.scalar(problems)?.flag(problems))),
        }
    }
}
