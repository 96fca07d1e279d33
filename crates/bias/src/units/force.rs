//! Units of forces (and of energy slopes, which are the same) and of force constants.

use std::fmt;
use std::str::FromStr;

use serde::{Serialize, Serializer};

use super::{EnergyUnit, PositionUnit, Temperature, UnitError, compound};

/// A unit of force: energy over position, such as `kJ/mol/nm`.
///
/// On an axis without a unit it is written like an energy, `kJ/mol`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct ForceUnit {
    /// The unit of energy.
    pub energy: EnergyUnit,
    /// The unit of position that the energy is divided by.
    pub per: PositionUnit,
}

/// A unit of force constant: energy over position squared, such as `kcal/mol/Å^2`.
///
/// On an axis without a unit it is written like an energy, `kJ/mol`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct ForceConstantUnit {
    /// The unit of energy.
    pub energy: EnergyUnit,
    /// The unit of position by whose square the energy is divided.
    pub per: PositionUnit,
}

impl ForceUnit {
    /// A force of `value` in this unit, in kT per `axis_unit` at `temperature`.
    ///
    /// # Errors
    /// [`UnitError::Incompatible`] when `axis_unit` and [`per`](Self::per) measure different things.
    pub fn to_reduced(self, value: f64, axis_unit: PositionUnit, temperature: Temperature) -> Result<f64, UnitError> {
        let factor = axis_unit.factor_to(self.per)?;
        Ok(self.energy.to_reduced(value, temperature) * factor)
    }

    /// A force of `value` kT per `axis_unit` at `temperature`, in this unit.
    ///
    /// # Errors
    /// [`UnitError::Incompatible`] when `axis_unit` and [`per`](Self::per) measure different things.
    pub fn from_reduced(self, value: f64, axis_unit: PositionUnit, temperature: Temperature) -> Result<f64, UnitError> {
        let factor = self.per.factor_to(axis_unit)?;
        Ok(self.energy.from_reduced(value, temperature) * factor)
    }
}

impl ForceConstantUnit {
    /// A force constant of `value` in this unit, in kT per `axis_unit` squared at `temperature`.
    ///
    /// The units of angles mix as those of lengths do, so a constant in kJ/mol/rad² serves an axis in
    /// degrees:
    ///
    /// ```
    /// use spandrel_bias::units::{ForceConstantUnit, PositionUnit, Temperature};
    /// let temperature = Temperature::new(310.0)?;
    /// let per_radian: ForceConstantUnit = "kJ/mol/rad^2".parse()?;
    /// let per_degree: ForceConstantUnit = "kJ/mol/deg^2".parse()?;
    /// let reduced = per_radian.to_reduced(250.0, PositionUnit::Degree, temperature)?;
    /// let back = per_degree.from_reduced(reduced, PositionUnit::Degree, temperature)?;
    /// assert!((back / (250.0 * 1f64.to_radians().powi(2)) - 1.0).abs() < 1e-14);
    /// # Ok::<(), spandrel_bias::units::UnitError>(())
    /// ```
    ///
    /// # Errors
    /// [`UnitError::Incompatible`] when `axis_unit` and [`per`](Self::per) measure different things.
    pub fn to_reduced(self, value: f64, axis_unit: PositionUnit, temperature: Temperature) -> Result<f64, UnitError> {
        let factor = axis_unit.factor_to(self.per)?;
        Ok(self.energy.to_reduced(value, temperature) * factor * factor)
    }

    /// A force constant of `value` kT per `axis_unit` squared at `temperature`, in this unit.
    ///
    /// # Errors
    /// [`UnitError::Incompatible`] when `axis_unit` and [`per`](Self::per) measure different things.
    pub fn from_reduced(self, value: f64, axis_unit: PositionUnit, temperature: Temperature) -> Result<f64, UnitError> {
        let factor = self.per.factor_to(axis_unit)?;
        Ok(self.energy.from_reduced(value, temperature) * factor * factor)
    }
}

impl fmt::Display for ForceUnit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.per {
            PositionUnit::None => write!(formatter, "{}", self.energy),
            per => write!(formatter, "{}/{per}", self.energy),
        }
    }
}

impl fmt::Display for ForceConstantUnit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.per {
            PositionUnit::None => write!(formatter, "{}", self.energy),
            per => write!(formatter, "{}/{per}^2", self.energy),
        }
    }
}

impl Serialize for ForceUnit {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl Serialize for ForceConstantUnit {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl FromStr for ForceUnit {
    type Err = UnitError;

    fn from_str(text: &str) -> Result<Self, UnitError> {
        match compound::energy_and_position(text) {
            Some((energy, PositionUnit::None, _)) => Ok(Self { energy, per: PositionUnit::None }),
            Some((energy, per, -1)) => Ok(Self { energy, per }),
            _ => Err(UnitError::Unknown {
                quantity: "force unit",
                found: text.to_owned(),
                allowed: "an energy (`kJ/mol`, `kcal/mol`, `kT` or `eV`) over a position (`nm`, \
                          `angstrom`, `deg`, `rad`, or nothing on an axis without a unit), such as \
                          `kJ/mol/nm`",
            }),
        }
    }
}

impl FromStr for ForceConstantUnit {
    type Err = UnitError;

    fn from_str(text: &str) -> Result<Self, UnitError> {
        match compound::energy_and_position(text) {
            Some((energy, PositionUnit::None, _)) => Ok(Self { energy, per: PositionUnit::None }),
            Some((energy, per, -2)) => Ok(Self { energy, per }),
            _ => Err(UnitError::Unknown {
                quantity: "force constant unit",
                found: text.to_owned(),
                allowed: "an energy (`kJ/mol`, `kcal/mol`, `kT` or `eV`) over a squared position \
                          (`nm^2`, `angstrom^2`, `deg^2`, `rad^2`, or nothing on an axis without a \
                          unit), such as `kJ/mol/nm^2`",
            }),
        }
    }
}
