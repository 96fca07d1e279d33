//! `[profile]`.

use crate::job::keys::Section;
use crate::job::mark::{Mark, Optional, Typed, optional};
use crate::job::problem::Problems;
use crate::job::scalar::{Allowed, Scalar, ScalarValue};
use crate::job::table::{Field, Table};

/// `[profile]`
#[derive(Debug)]
pub(in crate::job) struct TypedProfile {
    /// The header.
    pub mark: Mark,
    /// Name of the axis.
    pub axis: Optional<Typed<String>>,
    /// Lower end.
    pub from: Optional<Typed<f64>>,
    /// Upper end.
    pub to: Optional<Typed<f64>>,
    /// Width or number of bins.
    pub bins: Option<TypedBins>,
    /// A position at which a bin begins.
    pub origin: Optional<Typed<f64>>,
    /// Where the free energy is zero.
    pub zero: Option<TypedZero>,
}

/// How the bins are given.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(in crate::job) enum TypedBins {
    /// By their width, above 0.
    Width(Typed<f64>),
    /// By their number, at least 1.
    Number(Typed<u64>),
}

/// `zero` of `[profile]`
#[derive(Debug, Clone, Copy, PartialEq)]
pub(in crate::job) enum TypedZero {
    /// The minimum.
    Minimum,
    /// A position.
    Position(Typed<f64>),
    /// The mean over a range.
    Range {
        /// Lower end.
        from: Typed<f64>,
        /// Upper end.
        to: Typed<f64>,
    },
}

impl TypedProfile {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let which = table.exactly_one(&["bin_width", "bins"], problems);
        let axis = table.take("axis");
        let mut number = |name: &str, problems: &mut Problems| {
            optional(table.take(name), |field| field.scalar(problems)?.number(Allowed::Finite, problems))
        };
        let from = number("from", problems);
        let to = number("to", problems);
        let origin = number("origin", problems);
        let width = table.take("bin_width");
        let width = width.and_then(|field| field.scalar(problems)?.number(Allowed::Positive, problems));
        let bins = table.take("bins");
        let bins = bins.and_then(|field| field.scalar(problems)?.whole(1, problems));
        let zero = table.take("zero").map(|field| read_zero(&field, problems));
        let profile = Self {
            mark: table.mark,
            axis: optional(axis, |field| field.scalar(problems)?.text(problems)),
            from,
            to,
            bins: match which {
                Some("bin_width") => width.map(TypedBins::Width),
                Some(_) => bins.map(TypedBins::Number),
                None => None,
            },
            origin,
            zero: zero.unwrap_or(Some(TypedZero::Minimum)),
        };
        table.finish(problems);
        profile
    }
}

fn read_zero(field: &Field<'_>, problems: &mut Problems) -> Option<TypedZero> {
    if !field.is_table() {
        let scalar: Scalar = field.scalar(problems)?;
        if matches!(scalar.value, ScalarValue::Number(_) | ScalarValue::Whole(_)) {
            problems.push(
                scalar
                    .problem("`minimum`, or a table")
                    .help(format!("for a position write `zero = {{ position = {} }}`", scalar.value.found())),
            );
            return None;
        }
        return Some(scalar.word(&[("minimum", TypedZero::Minimum)], problems)?.value);
    }
    let mut table = field.table(Section::Zero, problems)?;
    let which = table.exactly_one(&["position", "from"], problems);
    let range = which == Some("from");
    let mut number = |name: &str, needed: bool, problems: &mut Problems| {
        let field = if needed { table.require(name, problems) } else { table.take(name) };
        field.and_then(|field| field.scalar(problems)?.number(Allowed::Finite, problems))
    };
    let position = number("position", which == Some("position"), problems);
    let from = number("from", range, problems);
    let to = if which == Some("position") { None } else { number("to", range, problems) };
    table.finish(problems);
    match which? {
        "position" => position.map(TypedZero::Position),
        _ => Some(TypedZero::Range { from: from?, to: to? }),
    }
}
