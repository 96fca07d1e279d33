//! Files in, rows and reports or faults out.

#![expect(clippy::unwrap_used, reason = "a test may panic")]

mod common;
mod faults;
mod layouts;
mod series;
mod table;
