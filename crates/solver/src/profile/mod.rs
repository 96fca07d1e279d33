//! The potential of mean force on output bins, with its uncertainty.

mod request;
mod result;

pub use request::{ProfileError, ProfileRequest, Zero};
pub use result::{BinStatus, FEWEST_EFFECTIVE_SAMPLES, Profile, ProfileBin};
