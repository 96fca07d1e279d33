//! What can be wrong with a bias table.

use std::fmt;

use serde::Serialize;

/// A table that cannot serve as a bias.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[non_exhaustive]
pub enum TableError {
    /// The two columns differ in length.
    Columns {
        /// How many positions there are.
        n_positions: usize,
        /// How many energies there are.
        n_energies: usize,
    },
    /// There are too few rows for the interpolation.
    TooShort {
        /// How many rows there are.
        found: usize,
        /// How many are needed.
        needed: usize,
    },
    /// A number is not finite.
    NotFinite {
        /// The row, counted from 0.
        row: usize,
        /// The column: `position` or `energy`.
        column: &'static str,
        /// The number that was found.
        found: f64,
    },
    /// The positions do not increase strictly.
    NotIncreasing {
        /// The offending row, counted from 0.
        row: usize,
        /// The position in the row before.
        previous: f64,
        /// The position in this row.
        found: f64,
    },
    /// The table is longer than the period of its axis.
    BeyondPeriod {
        /// The name of the axis.
        axis: String,
        /// The length of the table.
        span: f64,
        /// The period of the axis.
        period: f64,
    },
}

impl fmt::Display for TableError {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Columns { n_positions, n_energies } => write!(
                formatter,
                "a bias table needs one energy a position, found {n_positions} positions and \
                 {n_energies} energies"
            ),
            Self::TooShort { found, needed } => {
                write!(formatter, "a bias table with this interpolation needs at least {needed} rows, found {found}")
            }
            Self::NotFinite { row, column, found } => write!(
                formatter,
                "`{column}` in row {} of a bias table must be a finite number, found {found}",
                row + 1
            ),
            Self::NotIncreasing { row, previous, found } => write!(
                formatter,
                "`position` in row {} of a bias table must be above that of the row before, \
                 {previous}, found {found}; sort the table and keep each position once",
                row + 1
            ),
            Self::BeyondPeriod { axis, span, period } => write!(
                formatter,
                "a bias table on axis `{axis}` must span at most the period, {period}, found {span}; \
                 keep one period of it"
            ),
        }
    }
}

impl std::error::Error for TableError {}
