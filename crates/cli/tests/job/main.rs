//! The job file: what it means, and what it says about everything that can be wrong, word for word.
#![expect(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![expect(clippy::needless_raw_string_hashes, reason = "snapshots are written with them")]

mod axes;
mod bias;
mod examples;
mod profile;
mod reference;
mod reports;
mod support;
mod tables;
mod values;
mod windows;
