//! What can be wrong with a bias.

use std::fmt;

use serde::Serialize;

use crate::shape::TableError;

/// A position for which a tabulated term has no energy.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct OutsideTable {
    /// Index of the axis.
    pub axis: usize,
    /// The position, as it was asked for.
    pub position: f64,
    /// First position of the table.
    pub lower: f64,
    /// Last position of the table.
    pub upper: f64,
}

/// A bias, a term or a table that cannot be built as asked.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[non_exhaustive]
pub enum BiasError {
    /// A bias needs at least one axis.
    NoAxes,
    /// A term acts on an axis that does not exist.
    UnknownAxis {
        /// Index of the term.
        term: usize,
        /// The axis it names, by index.
        axis: usize,
        /// How many axes there are.
        n_axes: usize,
    },
    /// The shape is not defined on an axis with a period.
    PeriodNotAllowed {
        /// Index of the term.
        term: usize,
        /// The name of the axis.
        axis: String,
        /// The shape, in words.
        shape: &'static str,
        /// What to use in its place.
        advice: &'static str,
    },
    /// The shape needs an axis with a period.
    PeriodNeeded {
        /// Index of the term.
        term: usize,
        /// The name of the axis.
        axis: String,
    },
    /// A flat bottom that leaves no room for walls within one period.
    FlatBottomTooWide {
        /// Index of the term.
        term: usize,
        /// The name of the axis.
        axis: String,
        /// The half width that was found.
        half_width: f64,
        /// The period of the axis.
        period: f64,
    },
    /// A table that was prepared for an axis with another period, or with none.
    TableForAnotherAxis {
        /// Index of the term.
        term: usize,
        /// The name of the axis.
        axis: String,
        /// The period the table was prepared for.
        prepared_for: Option<f64>,
        /// The period of the axis.
        period: Option<f64>,
    },
    /// A number that must be finite is not.
    NotFinite {
        /// The name of the parameter.
        field: &'static str,
        /// The number that was found.
        found: f64,
    },
    /// A force constant that is not positive and finite.
    ForceConstant {
        /// The number that was found.
        found: f64,
    },
    /// A half width that is negative or not finite.
    HalfWidth {
        /// The number that was found.
        found: f64,
    },
    /// A table that cannot serve as a bias.
    Table(TableError),
}

impl fmt::Display for OutsideTable {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { axis, position, lower, upper } = self;
        write!(
            formatter,
            "position {position} on axis {axis} lies outside the bias table, which covers {lower} to \
             {upper}; extend the table, or state that its energy is held or its slope extended outside"
        )
    }
}

impl std::error::Error for OutsideTable {}

impl fmt::Display for BiasError {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoAxes => formatter.write_str("a bias needs at least one axis, found none"),
            Self::UnknownAxis { term, axis, n_axes } => write!(
                formatter,
                "`axis` of bias term {term} is {axis}, expected an index below {n_axes}, the number of axes"
            ),
            Self::PeriodNotAllowed { term, axis, shape, advice } => write!(
                formatter,
                "bias term {term} is {shape}, which is ambiguous on axis `{axis}` because it has a \
                 period; {advice}"
            ),
            Self::PeriodNeeded { term, axis } => write!(
                formatter,
                "bias term {term} is a periodic harmonic, but axis `{axis}` has no `period`; give the \
                 axis its period, or use a harmonic"
            ),
            Self::FlatBottomTooWide { term, axis, half_width, period } => write!(
                formatter,
                "`half_width` of bias term {term} must be below half the period of axis `{axis}`, \
                 which is {period}; found {half_width}"
            ),
            Self::TableForAnotherAxis { term, axis, prepared_for, period } => write!(
                formatter,
                "the table of bias term {term} was prepared for an axis with {}, but axis `{axis}` has \
                 {}; prepare it for the axis it acts on",
                PeriodInWords(*prepared_for),
                PeriodInWords(*period)
            ),
            Self::NotFinite { field, found } => {
                write!(formatter, "`{field}` must be a finite number, found {found}")
            }
            Self::ForceConstant { found } => write!(
                formatter,
                "`force_constant` must be a positive, finite number, found {found}; leave the term out \
                 where no bias acted"
            ),
            Self::HalfWidth { found } => {
                write!(formatter, "`half_width` must be a finite number of 0 or more, found {found}")
            }
            Self::Table(table) => table.fmt(formatter),
        }
    }
}

impl std::error::Error for BiasError {}

impl From<TableError> for BiasError {
    fn from(table: TableError) -> Self {
        Self::Table(table)
    }
}

struct PeriodInWords(Option<f64>);

impl fmt::Display for PeriodInWords {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.0 {
            Some(period) => write!(formatter, "period {period}"),
            None => formatter.write_str("no period"),
        }
    }
}
