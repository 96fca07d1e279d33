//! One reaction coordinate.

use std::fmt;

use serde::Serialize;

use crate::units::PositionUnit;

/// One reaction coordinate: a name, the unit of its positions and, if it closes on itself, its period.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Axis {
    name: String,
    unit: PositionUnit,
    period: Option<f64>,
}

/// What can be wrong with an axis.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[non_exhaustive]
pub enum AxisError {
    /// The name is empty or blank.
    EmptyName,
    /// The period is not a positive, finite number.
    Period {
        /// The name of the axis.
        axis: String,
        /// The period that was found.
        found: f64,
    },
}

impl Axis {
    /// An axis called `name` with positions in `unit`; `period`, in the same unit, if it is periodic.
    ///
    /// # Errors
    /// [`AxisError`] when the name is blank, or the period not positive and finite.
    pub fn new(name: impl Into<String>, unit: PositionUnit, period: Option<f64>) -> Result<Self, AxisError> {
        let name = name.into();
        if name.trim().is_empty() {
            return Err(AxisError::EmptyName);
        }
        match period {
            Some(length) if !(length > 0.0 && length < f64::INFINITY) => {
                Err(AxisError::Period { axis: name, found: length })
            }
            _ => Ok(Self { name, unit, period }),
        }
    }

    /// The name.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The unit of positions.
    #[must_use]
    pub const fn unit(&self) -> PositionUnit {
        self.unit
    }

    /// The period in the unit of the axis, if there is one.
    #[must_use]
    pub const fn period(&self) -> Option<f64> {
        self.period
    }

    /// The way from `center` to `position`: on an axis of period P that to the nearest image, in
    /// [−P/2, P/2); otherwise `position` − `center`.
    ///
    /// ```
    /// use spandrel_bias::{Axis, units::PositionUnit};
    /// let torsion = Axis::new("torsion", PositionUnit::Degree, Some(360.0))?;
    /// assert_eq!(torsion.displacement(-170.0, 165.0), 25.0);
    /// # Ok::<(), spandrel_bias::AxisError>(())
    /// ```
    #[must_use]
    pub fn displacement(&self, position: f64, center: f64) -> f64 {
        let difference = position - center;
        match self.period {
            Some(period) => into_period(difference, -0.5 * period, period),
            None => difference,
        }
    }

    /// The image of `position` in [`lower`, `lower` + P) on an axis of period P; otherwise `position`.
    #[must_use]
    pub fn wrap(&self, position: f64, lower: f64) -> f64 {
        match self.period {
            Some(period) => into_period(position, lower, period),
            None => position,
        }
    }
}

/// `value` plus the multiple of `period` that brings it into [`lower`, `lower` + `period`).
pub(crate) fn into_period(value: f64, lower: f64, period: f64) -> f64 {
    let upper = lower + period;
    // Most values are in place already and are handed back bit for bit.
    if lower <= value && value < upper {
        return value;
    }
    let shifted = value - period * ((value - lower) / period).floor();
    // Rounding can leave the result a hair outside; both ends are images of each other.
    if shifted < lower || shifted >= upper { lower } else { shifted }
}

impl fmt::Display for AxisError {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::EmptyName => formatter.write_str("`name` of an axis is empty: expected a name to report it by"),
            Self::Period { axis, found } => write!(
                formatter,
                "`period` of axis `{axis}` must be a positive, finite number, found {found}; leave it \
                 out if the axis does not close on itself"
            ),
        }
    }
}

impl std::error::Error for AxisError {}
