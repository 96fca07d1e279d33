//! Writes the demo's data into a folder: `cargo run -p spandrel-testkit --example make_demo -- OUTPUT_FOLDER`.

mod scenario;

use std::error::Error;
use std::fs;
use std::path::PathBuf;

fn main() -> Result<(), Box<dyn Error>> {
    let mut arguments = std::env::args_os().skip(1);
    let (Some(folder), None) = (arguments.next().map(PathBuf::from), arguments.next()) else {
        return Err("expected one argument, the folder to write into".into());
    };
    let files = scenario::files()?;
    fs::create_dir_all(&folder)?;
    for (name, text) in files {
        fs::write(folder.join(name), text)?;
    }
    Ok(())
}
