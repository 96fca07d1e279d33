//! Systems with known answers, exact samplers and named tolerances for tests.
//!
//! Energies are in kT, positions in whatever unit the caller has in mind. This crate stands on none of the others, so that
//! all of them can be tested with it.
//!
//! | module | holds |
//! |---|---|
//! | [`restraint`], [`window`], [`potential`] | what a system is made of |
//! | [`harmonic_system`] | closed forms: biases on a parabola |
//! | [`one_dimensional_system`] | any smooth potential, by quadrature |
//! | [`cases`] | the standard experiments of the calibration tests |
//! | [`ising`] | energies of the square-lattice Ising model from its density of states |
//! | [`correlation`] | latent series with set autocorrelation times |
//! | [`bennett`], [`mod@autocorrelation`] | slow, independent implementations of two estimators |
//! | [`tolerance`] | every tolerance with its reason |
//! | [`table`] | reader for the reference tables |
//! | [`rng`] | seeded random streams |

pub mod autocorrelation;
pub mod bennett;
pub mod cases;
pub mod correlation;
mod density;
pub mod error;
pub mod harmonic_system;
pub mod ising;
pub mod known_system;
mod normal;
pub mod one_dimensional_system;
pub mod potential;
pub mod restraint;
pub mod rng;
pub mod table;
pub mod tolerance;
pub mod window;

pub use autocorrelation::autocorrelation;
pub use bennett::bennett_difference;
pub use cases::Case;
pub use correlation::Correlation;
pub use error::SystemError;
pub use harmonic_system::HarmonicSystem;
pub use ising::DensityOfStates;
pub use known_system::KnownSystem;
pub use one_dimensional_system::OneDimensionalSystem;
pub use potential::Potential;
pub use restraint::Restraint;
pub use rng::{Generator, stream};
pub use table::{Table, TableError};
pub use window::Window;
