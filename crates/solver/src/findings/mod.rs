//! Conclusions about the data: what, where, how sure, how bad, what to do about it.
//!
//! A finding is data. It only looks at finished results and never changes an answer; its text is made in one place.

mod catalog;
mod finding;
mod look;
mod look_at_errors;

pub use catalog::{Severity, ThresholdOrigin};
pub use finding::{Finding, FindingRecord};
pub use look::{look_at_ensemble, look_at_links, look_at_profile};
pub use look_at_errors::{look_at_bootstrap, look_at_replicas};
