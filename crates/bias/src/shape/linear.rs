//! The constant force.

use serde::Serialize;

use super::parameters;
use crate::BiasError;

/// A constant force, U = s x, on an axis without a period.
///
/// The parameter is the slope s of the energy; the force on the system is −s.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Linear {
    slope: f64,
}

impl Linear {
    /// An energy that rises by `slope` kT per axis unit.
    ///
    /// # Errors
    /// [`BiasError`] unless `slope` is finite.
    pub fn new(slope: f64) -> Result<Self, BiasError> {
        Ok(Self { slope: parameters::finite("slope", slope)? })
    }

    /// The slope of the energy, in kT per axis unit.
    #[must_use]
    pub const fn slope(&self) -> f64 {
        self.slope
    }

    pub(super) fn energy(self, position: f64) -> f64 {
        self.slope * position
    }

    pub(super) fn minimum(self, lower: f64, upper: f64) -> f64 {
        if self.slope > 0.0 {
            self.energy(lower)
        } else if self.slope < 0.0 {
            self.energy(upper)
        } else {
            0.0
        }
    }
}
