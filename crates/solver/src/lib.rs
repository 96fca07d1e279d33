//! All the statistics of Spandrel: from the samples of many restrained simulations to one free-energy profile with its errors.
//!
//! The data go one way, each stage a plain value that the next one reads:
//!
//! ```text
//! rows -> condense -> ensemble -> solve -> influence -> quantities -> profile -> findings
//! ```
//!
//! - [`condense`]: rows of one run in, counts on fine cells and block means out, in one pass and flat memory;
//! - [`ensemble`]: all windows on shared points;
//! - [`solve`]: maximum likelihood, with a certificate of how exact the result is;
//! - [`influence`]: the one door for errors of any quantity;
//! - [`quantities`]: numbers drawn from a solution;
//! - [`profile`]: the potential of mean force on output bins;
//! - [`bootstrap`]: the errors once more by other ways, as a check;
//! - [`findings`]: what all of this says about the data, as data.
//!
//! Energies are in kT and positions in the user's unit throughout. Nothing here reads a file, prints, or looks at a clock.

pub mod bootstrap;
pub mod condense;
pub mod ensemble;
pub mod findings;
pub mod influence;
mod math;
pub mod profile;
pub mod quantities;
pub mod series;
pub mod solve;
