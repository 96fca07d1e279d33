//! The tabulated bias.

mod error;
mod evaluate;
mod minimum;
mod rows;
mod segment;
mod spline;
mod table;

pub use error::TableError;
pub use table::{Interpolation, OutsideRule, Tabulated};
