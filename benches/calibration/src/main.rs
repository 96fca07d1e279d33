//! The calibration study as a program.

use clap::Parser;
use spandrel_calibration::arguments::Arguments;
use spandrel_calibration::{CsvFile, measure, table};
use std::error::Error;
use std::io::{self, Write};
use std::process::ExitCode;

fn main() -> ExitCode {
    match run(&Arguments::parse()) {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => {
            // Nothing is left to be done about a closed standard error.
            let _ = writeln!(io::stderr(), "error: {error}");
            ExitCode::FAILURE
        }
    }
}

fn run(arguments: &Arguments) -> Result<(), Box<dyn Error>> {
    if let Some(n_threads) = arguments.threads {
        rayon::ThreadPoolBuilder::new().num_threads(n_threads.into()).build_global()?;
    }
    let file = arguments.csv.as_deref().map(CsvFile::prepare).transpose()?;
    let settings = arguments.settings();
    let mut reports = Vec::new();
    for system in arguments.systems() {
        writeln!(io::stderr(), "{}: {} replicates", system.name(), settings.n_replicates)?;
        reports.push(measure(system, &settings)?);
    }
    let mut out = io::stdout().lock();
    let (n_replicates, seed, weights) = (settings.n_replicates, settings.seed, settings.weighting.name());
    writeln!(out, "{n_replicates} replicates, seed {seed}, weights {weights}")?;
    write!(out, "{}", table(&reports))?;
    out.flush()?;
    if let Some(file) = file {
        file.write(&reports)?;
    }
    Ok(())
}
