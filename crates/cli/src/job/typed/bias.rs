//! One term of a bias, of a window or for every row of the table of windows.

use crate::job::keys::Section;
use crate::job::mark::{Mark, Typed};
use crate::job::problem::Problems;
use crate::job::scalar::Scalar;
use crate::job::table::Table;

/// A term as it was typed. Which keys it needs depends on its kind, which may stand in a table of windows: so the values are kept
/// as they are, and are read when the term is checked.
#[derive(Debug)]
pub(in crate::job) struct TypedBias {
    /// The header.
    pub mark: Mark,
    /// The known keys that are there, each with its place and value.
    pub inputs: Vec<(&'static str, Mark, BiasInput)>,
    /// Keys that were probably meant by keys that do not exist.
    pub misspelt: Vec<&'static str>,
}

/// The value of one key of a term.
#[derive(Debug)]
pub(in crate::job) enum BiasInput {
    /// Typed in the job.
    Given(Scalar),
    /// To be taken from this column of the table of windows.
    Column(Typed<String>),
    /// At fault, and reported.
    Faulty,
}

impl TypedBias {
    /// Reads one term; columns are allowed where a table of windows is at hand.
    pub fn read(mut table: Table<'_>, columns_allowed: bool, problems: &mut Problems) -> Self {
        let mut inputs = Vec::new();
        for key in Section::Bias.keys() {
            let key_mark = table.key_mark(key.name);
            let (Some(key_mark), Some(field)) = (key_mark, table.take(key.name)) else {
                continue;
            };
            let input = if field.is_table() && columns_allowed {
                read_column(field.table(Section::TableValue, problems), problems)
            } else if field.is_table() {
                problems.push(
                    field
                        .problem(key.takes)
                        .help("only the values of `[[window_table.bias]]` can be taken from a column"),
                );
                None
            } else {
                field.scalar(problems).map(BiasInput::Given)
            };
            inputs.push((key.name, key_mark, input.unwrap_or(BiasInput::Faulty)));
        }
        let mark = table.mark;
        let misspelt = table.misspelt();
        table.finish(problems);
        Self { mark, inputs, misspelt }
    }
}

fn read_column(table: Option<Table<'_>>, problems: &mut Problems) -> Option<BiasInput> {
    let mut table = table?;
    let column = table.require("column", problems);
    let column = column.and_then(|field| field.scalar(problems)?.text(problems));
    table.finish(problems);
    column.map(BiasInput::Column)
}
