//! The `spandrel` program; everything it does stands in the library crates.

use std::process::ExitCode;

fn main() -> ExitCode {
    spandrel_cli::main()
}
