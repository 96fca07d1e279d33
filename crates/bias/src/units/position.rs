//! Units of positions along an axis.

use std::f64::consts::PI;
use std::fmt;
use std::str::FromStr;

use serde::{Serialize, Serializer};

use super::UnitError;

/// What a position measures. Only units of the same dimension convert into each other.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Dimension {
    /// A length.
    Length,
    /// A plane angle.
    Angle,
    /// A pure number.
    None,
}

impl fmt::Display for Dimension {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(match self {
            Self::Length => "a length",
            Self::Angle => "an angle",
            Self::None => "a pure number",
        })
    }
}

/// The unit of positions along an axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum PositionUnit {
    /// Nanometer, `nm`.
    Nanometer,
    /// Angstrom, `Å`; 10 Å are 1 nm.
    Angstrom,
    /// Degree of arc, `deg`.
    Degree,
    /// Radian, `rad`; π rad are 180 deg.
    Radian,
    /// A pure number, `none`.
    None,
}

impl PositionUnit {
    /// Every unit, in the order in which messages list them.
    pub const ALL: [Self; 5] = [Self::Nanometer, Self::Angstrom, Self::Degree, Self::Radian, Self::None];

    /// The symbol, which is also a spelling that parses.
    #[must_use]
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::Nanometer => "nm",
            Self::Angstrom => "Å",
            Self::Degree => "deg",
            Self::Radian => "rad",
            Self::None => "none",
        }
    }

    /// What a position in this unit measures.
    #[must_use]
    pub const fn dimension(self) -> Dimension {
        match self {
            Self::Nanometer | Self::Angstrom => Dimension::Length,
            Self::Degree | Self::Radian => Dimension::Angle,
            Self::None => Dimension::None,
        }
    }

    /// The factor that takes a value in this unit to one in `other`.
    ///
    /// # Errors
    /// [`UnitError::Incompatible`] unless both are lengths, both are angles or both are pure numbers.
    ///
    /// ```
    /// use spandrel_bias::units::PositionUnit::{Angstrom, Degree, Nanometer};
    /// assert_eq!(Nanometer.factor_to(Angstrom)?, 10.0);
    /// assert!(Nanometer.factor_to(Degree).is_err());
    /// # Ok::<(), spandrel_bias::units::UnitError>(())
    /// ```
    pub fn factor_to(self, other: Self) -> Result<f64, UnitError> {
        match (self, other) {
            (from, to) if from == to => Ok(1.0),
            (Self::Nanometer, Self::Angstrom) => Ok(10.0),
            (Self::Angstrom, Self::Nanometer) => Ok(0.1),
            (Self::Degree, Self::Radian) => Ok(PI / 180.0),
            (Self::Radian, Self::Degree) => Ok(180.0 / PI),
            (from, to) => Err(UnitError::Incompatible { from, to }),
        }
    }

    /// The unit of this name, already in lower case and composed form.
    pub(super) fn from_name(name: &str) -> Option<Self> {
        match name {
            "nm" | "nanometer" | "nanometers" | "nanometre" | "nanometres" => Some(Self::Nanometer),
            "å" | "a" | "angstrom" | "angstroms" | "ångström" | "ångströms" | "ångstrom" | "ångstroms" => {
                Some(Self::Angstrom)
            }
            "deg" | "degree" | "degrees" | "°" => Some(Self::Degree),
            "rad" | "radian" | "radians" => Some(Self::Radian),
            "none" | "1" | "unitless" | "dimensionless" => Some(Self::None),
            _ => None,
        }
    }
}

impl fmt::Display for PositionUnit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.pad(self.symbol())
    }
}

impl Serialize for PositionUnit {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.symbol())
    }
}

impl FromStr for PositionUnit {
    type Err = UnitError;

    fn from_str(text: &str) -> Result<Self, UnitError> {
        Self::from_name(&super::compound::normalized(text)).ok_or_else(|| UnitError::Unknown {
            quantity: "position unit",
            found: text.to_owned(),
            allowed: "one of `nm`, `angstrom`, `deg`, `rad` or `none`",
        })
    }
}
