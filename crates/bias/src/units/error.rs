//! What can be wrong with a unit or a temperature.

use std::fmt;

use serde::Serialize;

use super::PositionUnit;

/// A unit that is not known or does not fit, or a temperature that is none.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[non_exhaustive]
pub enum UnitError {
    /// The spelling is not that of a unit of this kind.
    Unknown {
        /// The kind of unit that was expected, such as "position unit".
        quantity: &'static str,
        /// The text that was found.
        found: String,
        /// The allowed values, as text for a message.
        allowed: &'static str,
    },
    /// The two units measure different things: a length, an angle, or a pure number.
    Incompatible {
        /// The unit of the axis or value to convert from.
        from: PositionUnit,
        /// The unit to convert to.
        to: PositionUnit,
    },
    /// A temperature must be a positive, finite number of kelvin.
    Temperature {
        /// The number that was found, in kelvin.
        found: f64,
    },
}

impl fmt::Display for UnitError {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Unknown { quantity, found, allowed } => {
                write!(formatter, "unknown {quantity} `{found}`: expected {allowed}")
            }
            Self::Incompatible { from, to } => write!(
                formatter,
                "`{from}` does not convert to `{to}`: expected two lengths, two angles or two pure \
                 numbers, found {} and {}; give both in units of the same kind",
                from.dimension(),
                to.dimension()
            ),
            Self::Temperature { found } => {
                write!(formatter, "`temperature` must be a positive, finite number of kelvin, found {found}")
            }
        }
    }
}

impl std::error::Error for UnitError {}
