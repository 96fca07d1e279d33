//! The harmonic restraint about the nearest image of its center.

use serde::Serialize;

use super::parameters;
use crate::{Axis, BiasError};

/// A harmonic restraint on an axis of period P, U = ½ k d², d being the way from the nearest image of
/// the center, in [−P/2, P/2).
///
/// The energy is continuous; its slope jumps at the antipode c + P/2.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct PeriodicHarmonic {
    center: f64,
    force_constant: f64,
}

impl PeriodicHarmonic {
    /// A harmonic about the images of `center` (axis unit), with `force_constant` k (kT per squared axis
    /// unit).
    ///
    /// # Errors
    /// [`BiasError`] unless `center` is finite and `force_constant` positive and finite.
    pub fn new(center: f64, force_constant: f64) -> Result<Self, BiasError> {
        Ok(Self {
            center: parameters::finite("center", center)?,
            force_constant: parameters::force_constant(force_constant)?,
        })
    }

    /// The center c, in the unit of the axis, as it was given.
    #[must_use]
    pub const fn center(&self) -> f64 {
        self.center
    }

    /// The force constant k of ½ k d², in kT per squared axis unit.
    #[must_use]
    pub const fn force_constant(&self) -> f64 {
        self.force_constant
    }

    pub(super) fn energy(&self, axis: &Axis, position: f64) -> f64 {
        let displacement = axis.displacement(position, self.center);
        0.5 * self.force_constant * (displacement * displacement)
    }

    pub(super) fn slope(&self, axis: &Axis, position: f64) -> f64 {
        self.force_constant * axis.displacement(position, self.center)
    }

    pub(super) fn minimum(&self, axis: &Axis, lower: f64, upper: f64) -> f64 {
        let distance = parameters::least_distance(axis, self.center, lower, upper);
        0.5 * self.force_constant * (distance * distance)
    }
}
