//! The potential of mean force on output bins, with its uncertainty.

mod band;
mod request;
mod result;
mod support;
mod zero;

pub use band::SimultaneousBand;
pub use request::{ProfileError, ProfileRequest, Zero};
pub use result::{BinStatus, Profile, ProfileBin};
pub use support::FEWEST_EFFECTIVE_SAMPLES;
