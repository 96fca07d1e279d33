//! Temperatures in kelvin.

use std::fmt;

use serde::Serialize;

use super::{CALORIE, EnergyUnit, FARADAY, GAS_CONSTANT, UnitError};

/// A temperature: positive, finite, in kelvin.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Serialize)]
#[serde(transparent)]
pub struct Temperature {
    kelvin: f64,
}

impl Temperature {
    /// A temperature of `kelvin` kelvin.
    ///
    /// # Errors
    /// [`UnitError::Temperature`] unless `kelvin` is positive and finite.
    pub fn new(kelvin: f64) -> Result<Self, UnitError> {
        if kelvin > 0.0 && kelvin < f64::INFINITY {
            Ok(Self { kelvin })
        } else {
            Err(UnitError::Temperature { found: kelvin })
        }
    }

    /// The temperature in kelvin.
    #[must_use]
    pub const fn kelvin(self) -> f64 {
        self.kelvin
    }

    /// The thermal energy R T in `unit`; 1 in units of kT.
    ///
    /// ```
    /// use spandrel_bias::units::{EnergyUnit, Temperature};
    /// let thermal_energy = Temperature::new(298.15)?.thermal_energy(EnergyUnit::KilojoulePerMole);
    /// assert!((thermal_energy - 2.4790).abs() < 5e-5);
    /// # Ok::<(), spandrel_bias::units::UnitError>(())
    /// ```
    #[must_use]
    pub fn thermal_energy(self, unit: EnergyUnit) -> f64 {
        match unit {
            EnergyUnit::KilojoulePerMole => GAS_CONSTANT * self.kelvin,
            EnergyUnit::KilocaloriePerMole => GAS_CONSTANT * self.kelvin / CALORIE,
            EnergyUnit::Kt => 1.0,
            EnergyUnit::ElectronVolt => GAS_CONSTANT * self.kelvin / FARADAY,
        }
    }
}

impl fmt::Display for Temperature {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{} K", self.kelvin)
    }
}
