//! Complaints about units that do not fit their axis.

use std::fmt::Display;

use spandrel_bias::units::PositionUnit;

use crate::job::mark::Typed;
use crate::job::problem::Problem;

/// A position unit of another kind than the axis'.
pub(super) fn other_kind(path: &str, unit: Typed<PositionUnit>, axis: &str, axis_unit: Typed<PositionUnit>) -> Problem {
    let expected = axis_unit.value.dimension();
    mismatch(path, &unit, &format!("a unit of {expected}"), axis, axis_unit)
}

/// A unit that does not fit its axis.
pub(super) fn mismatch<U: Display>(
    path: &str,
    unit: &Typed<U>,
    expected: &str,
    axis: &str,
    axis_unit: Typed<PositionUnit>,
) -> Problem {
    Problem::at(unit.mark, format!("`{path}`: expected {expected}, found `{}`", unit.value))
        .label(axis_unit.mark, format!("axis `{axis}` is in {}", axis_unit.value))
}
