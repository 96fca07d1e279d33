//! The shapes a bias term can have.

mod flat_bottomed;
mod harmonic;
mod linear;
mod one_sided;
mod parameters;
mod periodic_harmonic;
mod tabulated;
mod term_shape;

pub use flat_bottomed::FlatBottomed;
pub use harmonic::{Harmonic, HarmonicConvention};
pub use linear::Linear;
pub use one_sided::{OneSidedHarmonic, Side};
pub use periodic_harmonic::PeriodicHarmonic;
pub use tabulated::{Interpolation, OutsideRule, TableError, Tabulated};
pub use term_shape::Shape;
