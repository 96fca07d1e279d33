//! Units and physical constants, and every conversion between them.
//!
//! Values cross into kT ("reduced") and the axis' own position unit here and come back here. Energies
//! are molar: the electronvolt means eV times Avogadro's number, the calorie is 4.184 J.
//!
//! Spellings are read forgivingly: case does not matter, powers may be written `^2`, `**2`, `²` or
//! `-2`, and factors may stand in any order, as in `kJ/(mol nm^2)` or `kcal mol^-1 Å^-2`.

mod compound;
mod constants;
mod energy;
mod error;
mod force;
mod position;
mod temperature;
mod time;

pub use constants::{AVOGADRO, BOLTZMANN, CALORIE, ELEMENTARY_CHARGE, FARADAY, GAS_CONSTANT};
pub use energy::EnergyUnit;
pub use error::UnitError;
pub use force::{ForceConstantUnit, ForceUnit};
pub use position::{Dimension, PositionUnit};
pub use temperature::Temperature;
pub use time::TimeUnit;
