//! Units of energy.

use std::fmt;
use std::str::FromStr;

use serde::{Serialize, Serializer};

use super::{PositionUnit, Temperature, UnitError, compound};

/// The unit of energies.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum EnergyUnit {
    /// Kilojoule per mole, `kJ/mol`.
    KilojoulePerMole,
    /// Kilocalorie per mole, `kcal/mol`; the calorie is 4.184 J.
    KilocaloriePerMole,
    /// The thermal energy of the temperature at hand, `kT`.
    Kt,
    /// Electronvolt a particle, `eV`.
    ElectronVolt,
}

impl EnergyUnit {
    /// Every unit, in the order in which messages list them.
    pub const ALL: [Self; 4] = [Self::KilojoulePerMole, Self::KilocaloriePerMole, Self::Kt, Self::ElectronVolt];

    /// The symbol, which is also a spelling that parses.
    #[must_use]
    pub const fn symbol(self) -> &'static str {
        match self {
            Self::KilojoulePerMole => "kJ/mol",
            Self::KilocaloriePerMole => "kcal/mol",
            Self::Kt => "kT",
            Self::ElectronVolt => "eV",
        }
    }

    /// An energy of `value` in this unit, in kT at `temperature`.
    #[must_use]
    pub fn to_reduced(self, value: f64, temperature: Temperature) -> f64 {
        value / temperature.thermal_energy(self)
    }

    /// An energy of `value` kT at `temperature`, in this unit.
    #[must_use]
    pub fn from_reduced(self, value: f64, temperature: Temperature) -> f64 {
        value * temperature.thermal_energy(self)
    }
}

impl fmt::Display for EnergyUnit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.pad(self.symbol())
    }
}

impl Serialize for EnergyUnit {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.symbol())
    }
}

impl FromStr for EnergyUnit {
    type Err = UnitError;

    fn from_str(text: &str) -> Result<Self, UnitError> {
        match compound::energy_and_position(text) {
            Some((energy, PositionUnit::None, _)) => Ok(energy),
            _ => Err(UnitError::Unknown {
                quantity: "energy unit",
                found: text.to_owned(),
                allowed: "one of `kJ/mol`, `kcal/mol`, `kT` or `eV`",
            }),
        }
    }
}
