//! `[errors]`.

use spandrel_solver::bootstrap::FEWEST_REPLICATES;

use crate::job::mark::Typed;
use crate::job::model::ErrorMethod;
use crate::job::problem::Problems;
use crate::job::table::Table;

/// `[errors]`
#[derive(Debug, Default)]
pub(in crate::job) struct TypedErrors {
    /// Which errors are given.
    pub method: Option<ErrorMethod>,
    /// Replicates of the bootstrap.
    pub bootstrap_replicates: Option<usize>,
}

impl TypedErrors {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let method = table.take("method");
        let replicates = table.take("bootstrap_replicates");
        table.finish(problems);
        let least = u32::try_from(FEWEST_REPLICATES).unwrap_or(u32::MAX);
        let method = method.and_then(|field| field.scalar(problems)?.word(&ErrorMethod::WORDS, problems));
        let replicates: Option<Typed<u64>> =
            replicates.and_then(|field| field.scalar(problems)?.whole(least, problems));
        Self {
            method: method.map(|method| method.value),
            bootstrap_replicates: replicates.and_then(|replicates| usize::try_from(replicates.value).ok()),
        }
    }
}
