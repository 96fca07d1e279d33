//! The command line: job file, commands, output files, exit codes.
//!
//! Thin by design: files, clock, terminal and TOML live here, everything else in the libraries.
//!
//! ```text
//! arguments -> job -> pipeline (ingest's rows to solver's condenser, then the solver's stages) -> output
//! ```

mod arguments;
mod commands;
mod exit_status;
mod interrupt;
pub mod job;
mod messages;
mod output;
mod pipeline;
mod progress;

pub use exit_status::ExitStatus;

use arguments::{Arguments, Command, Common};
use clap::Parser;
use commands::{Failure, SolveRequest};
use interrupt::Interrupt;
use messages::Messages;
use std::process::ExitCode;

/// Name of the program.
pub const PROGRAM: &str = "spandrel";
/// Version of the program.
pub const VERSION: &str = env!("CARGO_PKG_VERSION");

/// Runs the program with the arguments of the process.
#[must_use]
pub fn main() -> ExitCode {
    let arguments = match Arguments::try_parse() {
        Ok(arguments) => arguments,
        Err(error) => {
            // Help and version come this way too, as a success.
            let _ = error.print();
            return if error.use_stderr() { ExitStatus::Usage.into() } else { ExitStatus::Success.into() };
        }
    };
    let (Command::Solve { common, .. } | Command::Check { common }) = &arguments.command;
    let messages = Messages::new(common.quiet);
    match run_on_threads(common, || run(&arguments.command, messages)) {
        Ok(()) => ExitStatus::Success.into(),
        Err(failure) => {
            messages.error(&failure.text);
            failure.status.into()
        }
    }
}

fn run(command: &Command, messages: Messages) -> Result<(), Failure> {
    let interrupt = Interrupt::listening();
    match command {
        Command::Solve { common, output, force } => {
            let request = SolveRequest { job: common.job.clone(), output: output.clone(), force: *force };
            commands::solve(&request, messages, &interrupt)
        }
        Command::Check { common } => commands::check(&common.job, messages, &interrupt),
    }
}

/// On as many threads as asked for; on the cores of the machine where that many cannot be started.
fn run_on_threads<T: Send>(common: &Common, work: impl FnOnce() -> T + Send) -> T {
    let pool = common
        .threads
        .and_then(|threads| rayon::ThreadPoolBuilder::new().num_threads(usize::from(threads)).build().ok());
    match pool {
        Some(pool) => pool.install(work),
        None => work(),
    }
}
