//! The flat-bottomed harmonic restraint.

use serde::Serialize;

use super::parameters;
use crate::{Axis, BiasError};

/// A flat-bottomed restraint: U = 0 while |d| ≤ w, and ½ k (|d| − w)² beyond, d being the way from the
/// center c (from its nearest image on an axis with a period) and w the half width.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct FlatBottomed {
    center: f64,
    half_width: f64,
    force_constant: f64,
}

impl FlatBottomed {
    /// A restraint that is free within `half_width` of `center` (both axis unit), with `force_constant` k
    /// (kT per squared axis unit). On an axis with a period the half width must be below half of it,
    /// which is checked when the bias is put together.
    ///
    /// # Errors
    /// [`BiasError`] unless `center` is finite, `half_width` 0 or more and finite, and `force_constant`
    /// positive and finite.
    pub fn new(center: f64, half_width: f64, force_constant: f64) -> Result<Self, BiasError> {
        if !(0.0..f64::INFINITY).contains(&half_width) {
            return Err(BiasError::HalfWidth { found: half_width });
        }
        Ok(Self {
            center: parameters::finite("center", center)?,
            half_width,
            force_constant: parameters::force_constant(force_constant)?,
        })
    }

    /// The center c, in the unit of the axis.
    #[must_use]
    pub const fn center(&self) -> f64 {
        self.center
    }

    /// The half width w of the flat bottom, in the unit of the axis.
    #[must_use]
    pub const fn half_width(&self) -> f64 {
        self.half_width
    }

    /// The force constant k of ½ k (|d| − w)², in kT per squared axis unit.
    #[must_use]
    pub const fn force_constant(&self) -> f64 {
        self.force_constant
    }

    /// How far `position` is past the nearer edge of the flat bottom, with its sign; 0 on the bottom.
    fn excess(&self, axis: &Axis, position: f64) -> f64 {
        let displacement = axis.displacement(position, self.center);
        let excess = displacement.abs() - self.half_width;
        if excess <= 0.0 { 0.0 } else { excess.copysign(displacement) }
    }

    pub(super) fn energy(&self, axis: &Axis, position: f64) -> f64 {
        let excess = self.excess(axis, position);
        0.5 * self.force_constant * (excess * excess)
    }

    pub(super) fn slope(&self, axis: &Axis, position: f64) -> f64 {
        self.force_constant * self.excess(axis, position)
    }

    pub(super) fn curvature(&self, axis: &Axis, position: f64) -> f64 {
        if self.excess(axis, position) == 0.0 { 0.0 } else { self.force_constant }
    }

    pub(super) fn minimum(&self, axis: &Axis, lower: f64, upper: f64) -> f64 {
        let distance = parameters::least_distance(axis, self.center, lower, upper);
        let excess = (distance - self.half_width).max(0.0);
        0.5 * self.force_constant * (excess * excess)
    }
}
