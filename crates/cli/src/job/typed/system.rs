//! `[system]` and `[[axis]]`.

use spandrel_bias::units::{EnergyUnit, PositionUnit};

use crate::job::mark::{Mark, Optional, Typed, optional};
use crate::job::problem::Problems;
use crate::job::scalar::Allowed;
use crate::job::table::Table;

/// `[system]`
#[derive(Debug)]
pub(in crate::job) struct TypedSystem {
    /// Kelvin, above 0.
    pub temperature: Option<Typed<f64>>,
    /// Unit of the results.
    pub energy_unit: Option<Typed<EnergyUnit>>,
}

impl TypedSystem {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let temperature = table.require("temperature", problems);
        let energy_unit = table.require("energy_unit", problems);
        let system = Self {
            temperature: temperature.and_then(|field| field.scalar(problems)?.number(Allowed::Positive, problems)),
            energy_unit: energy_unit.and_then(|field| field.scalar(problems)?.unit(problems)),
        };
        table.finish(problems);
        system
    }
}

/// `[[axis]]`
#[derive(Debug)]
pub(in crate::job) struct TypedAxis {
    /// The header.
    pub mark: Mark,
    /// Not blank.
    pub name: Option<Typed<String>>,
    /// Unit of the axis.
    pub unit: Option<Typed<PositionUnit>>,
    /// Above 0.
    pub period: Optional<Typed<f64>>,
}

impl TypedAxis {
    /// Reads the section.
    pub fn read(mut table: Table<'_>, problems: &mut Problems) -> Self {
        let name = table.require("name", problems);
        let unit = table.require("unit", problems);
        let axis = Self {
            mark: table.mark,
            name: name.and_then(|field| field.scalar(problems)?.text(problems)),
            unit: unit.and_then(|field| field.scalar(problems)?.unit(problems)),
            period: optional(table.take("period"), |field| field.scalar(problems)?.number(Allowed::Positive, problems)),
        };
        table.finish(problems);
        axis
    }
}
