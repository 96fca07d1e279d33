//! Axes, units and bias terms: position in, energy and derivatives out.
//!
//! A [`Bias`] is the sum of [`Term`]s that was added to the potential in one window. Each term has a
//! [`Shape`] and acts on one [`Axis`]. Inside a bias all energies are in kT and all positions in the
//! unit of their axis; [`units`] is the one place where anything is converted.
//!
//! ```
//! use std::sync::Arc;
//! use spandrel_bias::units::{ForceConstantUnit, PositionUnit, Temperature};
//! use spandrel_bias::{Axis, Bias, Harmonic, Term};
//!
//! let temperature = Temperature::new(310.0)?;
//! let axis = Axis::new("distance", PositionUnit::Angstrom, None)?;
//! let unit: ForceConstantUnit = "kJ/mol/nm^2".parse()?;
//! let force_constant = unit.to_reduced(1500.0, axis.unit(), temperature)?;
//! let term = Term { axis: 0, shape: Harmonic::new(4.2, force_constant)?.into() };
//! let bias = Bias::new(Arc::from([axis]), vec![term])?;
//! assert!((bias.energy(&[4.7])? - 0.5 * force_constant * 0.25).abs() < 1e-12);
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```

mod axis;
mod bias;
mod error;
mod shape;
pub mod units;

pub use axis::{Axis, AxisError};
pub use bias::{Bias, Term};
pub use error::{BiasError, OutsideTable};
pub use shape::{
    FlatBottomed, Harmonic, HarmonicConvention, Interpolation, Linear, OneSidedHarmonic, OutsideRule, PeriodicHarmonic,
    Shape, Side, TableError, Tabulated,
};
