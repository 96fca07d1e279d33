//! Numbers drawn from a solution, as values with derivatives that [`Influence`](crate::influence::Influence) turns into errors.

mod log_weight;

pub use log_weight::{free_energy_of_window, log_weight_of_bins};
