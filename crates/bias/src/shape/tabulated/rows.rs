//! Checks of the rows of a table.

use super::TableError;

/// The two ends of a full period count as equal within this fraction of the table's spread in energy.
const EQUAL_ENDS_TOLERANCE: f64 = 1e-6;

/// Refuses columns that are no table: of unequal length, too short, not finite or not increasing.
pub(super) fn check_rows(positions: &[f64], energies: &[f64], least_rows: usize) -> Result<(), TableError> {
    if positions.len() != energies.len() {
        return Err(TableError::Columns { n_positions: positions.len(), n_energies: energies.len() });
    }
    if positions.len() < least_rows {
        return Err(TableError::TooShort { found: positions.len(), needed: least_rows });
    }
    for (column, values) in [("position", positions), ("energy", energies)] {
        if let Some(row) = values.iter().position(|value| !value.is_finite()) {
            return Err(TableError::NotFinite { row, column, found: values[row] });
        }
    }
    check_increasing(positions)
}

/// Refuses positions that do not increase strictly.
pub(super) fn check_increasing(positions: &[f64]) -> Result<(), TableError> {
    match positions.windows(2).position(|pair| pair[0] >= pair[1]) {
        Some(before) => Err(TableError::NotIncreasing {
            row: before + 1,
            previous: positions[before],
            found: positions[before + 1],
        }),
        None => Ok(()),
    }
}

/// Whether a table over a full period comes back to the energy it began with.
pub(super) fn ends_are_equal(energies: &[f64]) -> bool {
    let least = energies.iter().copied().fold(f64::INFINITY, f64::min);
    let largest = energies.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let difference = energies[0] - energies[energies.len() - 1];
    difference.abs() <= EQUAL_ENDS_TOLERANCE * (largest - least)
}
