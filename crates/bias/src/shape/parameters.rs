//! Checks and distances that several shapes share.

use crate::{Axis, BiasError};

/// `value`, if it is finite.
pub(super) fn finite(field: &'static str, value: f64) -> Result<f64, BiasError> {
    if value.is_finite() { Ok(value) } else { Err(BiasError::NotFinite { field, found: value }) }
}

/// `value`, if it can be a force constant: positive and finite.
pub(super) fn force_constant(value: f64) -> Result<f64, BiasError> {
    if value > 0.0 && value < f64::INFINITY { Ok(value) } else { Err(BiasError::ForceConstant { found: value }) }
}

/// The shortest distance from any image of `center` to the stretch from `lower` to `upper`.
///
/// On an axis with a period the result is a few units of rounding low rather than high, so that bounds
/// drawn from it hold for positions that round differently.
pub(super) fn least_distance(axis: &Axis, center: f64, lower: f64, upper: f64) -> f64 {
    let Some(period) = axis.period() else {
        return (center.max(lower).min(upper) - center).abs();
    };
    let length = upper - lower;
    if length >= period {
        return 0.0;
    }
    let first = axis.displacement(lower, center);
    let last = first + length;
    if (first <= 0.0 && last >= 0.0) || last >= period {
        return 0.0;
    }
    // Between two images the distance has a single maximum, so its minimum lies at an end.
    let nearest = first.abs().min(last.abs()).min((period - last).abs());
    let rounding = 8.0 * f64::EPSILON * (period + lower.abs().max(upper.abs()) + center.abs());
    (nearest - rounding).max(0.0)
}
