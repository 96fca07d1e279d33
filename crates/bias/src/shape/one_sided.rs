//! The one-sided harmonic wall.

use serde::Serialize;

use super::parameters;
use crate::BiasError;

/// The side of its bound on which a one-sided restraint acts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Side {
    /// It acts above the bound, and so keeps positions below it.
    Above,
    /// It acts below the bound, and so keeps positions above it.
    Below,
}

/// A harmonic wall, U = ½ k (x − b)² on one side of the bound b and 0 on the other, on an axis without a
/// period.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct OneSidedHarmonic {
    side: Side,
    bound: f64,
    force_constant: f64,
}

impl OneSidedHarmonic {
    /// A wall that acts on `side` of `bound` (axis unit), with `force_constant` k (kT per squared axis
    /// unit).
    ///
    /// # Errors
    /// [`BiasError`] unless `bound` is finite and `force_constant` positive and finite.
    pub fn new(side: Side, bound: f64, force_constant: f64) -> Result<Self, BiasError> {
        Ok(Self {
            side,
            bound: parameters::finite("bound", bound)?,
            force_constant: parameters::force_constant(force_constant)?,
        })
    }

    /// The side on which it acts.
    #[must_use]
    pub const fn side(&self) -> Side {
        self.side
    }

    /// The bound b, in the unit of the axis.
    #[must_use]
    pub const fn bound(&self) -> f64 {
        self.bound
    }

    /// The force constant k of ½ k (x − b)², in kT per squared axis unit.
    #[must_use]
    pub const fn force_constant(&self) -> f64 {
        self.force_constant
    }

    /// How far `position` is past the bound, with its sign; 0 on the free side.
    fn excess(&self, position: f64) -> f64 {
        let displacement = position - self.bound;
        let free = match self.side {
            Side::Above => displacement <= 0.0,
            Side::Below => displacement >= 0.0,
        };
        if free { 0.0 } else { displacement }
    }

    pub(super) fn energy(&self, position: f64) -> f64 {
        let excess = self.excess(position);
        0.5 * self.force_constant * (excess * excess)
    }

    pub(super) fn slope(&self, position: f64) -> f64 {
        self.force_constant * self.excess(position)
    }

    pub(super) fn curvature(&self, position: f64) -> f64 {
        if self.excess(position) == 0.0 { 0.0 } else { self.force_constant }
    }

    pub(super) fn minimum(&self, lower: f64, upper: f64) -> f64 {
        match self.side {
            Side::Above => self.energy(lower),
            Side::Below => self.energy(upper),
        }
    }
}
