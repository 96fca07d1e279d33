//! One small file a command.

mod check;
mod failure;
mod solve;

pub use check::check;
pub use failure::Failure;
pub use solve::{SolveRequest, solve};
