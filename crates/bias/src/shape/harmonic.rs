//! The harmonic restraint.

use serde::Serialize;

use super::parameters;
use crate::BiasError;

/// How a force constant k enters the energy of a harmonic term.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum HarmonicConvention {
    /// U = ½ k (x − c)²: the curvature is k.
    Half,
    /// U = k (x − c)²: the curvature is 2 k.
    Full,
}

impl HarmonicConvention {
    /// The force constant in the convention ½ k (x − c)², which every shape here takes, of a constant
    /// that was given in this one.
    #[must_use]
    pub fn half_force_constant(self, force_constant: f64) -> f64 {
        match self {
            Self::Half => force_constant,
            Self::Full => 2.0 * force_constant,
        }
    }
}

/// A harmonic restraint, U = ½ k (x − c)², on an axis without a period.
///
/// On a periodic axis the formula would depend on the image of x, so [`PeriodicHarmonic`] is to be used.
///
/// [`PeriodicHarmonic`]: crate::PeriodicHarmonic
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Harmonic {
    center: f64,
    force_constant: f64,
}

impl Harmonic {
    /// A harmonic about `center` (axis unit), with `force_constant` k (kT per squared axis unit).
    ///
    /// # Errors
    /// [`BiasError`] unless `center` is finite and `force_constant` positive and finite.
    pub fn new(center: f64, force_constant: f64) -> Result<Self, BiasError> {
        Ok(Self {
            center: parameters::finite("center", center)?,
            force_constant: parameters::force_constant(force_constant)?,
        })
    }

    /// The center c, in the unit of the axis.
    #[must_use]
    pub const fn center(&self) -> f64 {
        self.center
    }

    /// The force constant k of ½ k (x − c)², in kT per squared axis unit.
    #[must_use]
    pub const fn force_constant(&self) -> f64 {
        self.force_constant
    }

    pub(super) fn energy(&self, position: f64) -> f64 {
        let displacement = position - self.center;
        0.5 * self.force_constant * (displacement * displacement)
    }

    pub(super) fn slope(&self, position: f64) -> f64 {
        self.force_constant * (position - self.center)
    }

    pub(super) fn minimum(&self, lower: f64, upper: f64) -> f64 {
        self.energy(self.center.max(lower).min(upper))
    }
}
