//! The program as its users meet it: files in, files and exit codes out.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod bad_input;
mod demo;
mod errors;
mod examples;
mod exit_codes;
mod output_folder;
mod readme;
mod results;
mod workspace;
