//! The program from its command line to its table and file.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

use std::fs;
use std::path::Path;
use std::process::{Command, Output};
use tempfile::TempDir;

fn run(threads: &str, csv: &Path) -> Output {
    let systems = ["--system", "long-memory-5", "--system", "long-memory-35"];
    Command::new(env!("CARGO_BIN_EXE_spandrel-calibration"))
        .args(systems)
        .args(["--replicates", "3", "--seed", "83", "--weights", "inverse-g", "--threads", threads, "--csv"])
        .arg(csv)
        .output()
        .unwrap()
}

#[test]
fn table_and_file_are_whole_and_the_same_for_any_number_of_threads() {
    let folder = TempDir::new().unwrap();
    let (one, three) = (folder.path().join("one.csv"), folder.path().join("three.csv"));
    let output = run("1", &one);
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    assert_eq!(output.stdout, run("3", &three).stdout);
    assert_eq!(fs::read(&one).unwrap(), fs::read(&three).unwrap());
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 2);

    let text = String::from_utf8(output.stdout).unwrap();
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(lines[0], "3 replicates, seed 83, weights inverse-g");
    // The last column stands on the right, so lines that are in line end together.
    let lengths: Vec<usize> = lines[1..4].iter().map(|line| line.chars().count()).collect();
    assert_eq!(lengths, vec![lengths[0]; 3], "{text}");
    assert!(lines[2].starts_with("long-memory-5 ") && lines[3].starts_with("long-memory-35 "), "{text}");

    let mut reader = csv::Reader::from_path(&one).unwrap();
    let columns = reader.headers().unwrap().clone();
    let column = |name: &str| columns.iter().position(|column| column == name).unwrap();
    let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), 2);
    assert_eq!((&rows[1][column("system")], &rows[1][column("weights")]), ("long-memory-35", "inverse-g"));
    // Coverage is made of the bins of three replicates.
    let coverage: f64 = rows[1][column("coverage_95")].parse().unwrap();
    assert!((0.0..=1.0).contains(&coverage));
    let rms: f64 = rows[1][column("rms_kt")].parse().unwrap();
    assert!(rms > 0.0);
}

#[test]
fn a_file_that_cannot_be_written_is_said_before_anything_is_measured() {
    let folder = TempDir::new().unwrap();
    let output = run("1", &folder.path().join("missing").join("scores.csv"));
    let message = String::from_utf8(output.stderr).unwrap();
    assert!(!output.status.success() && output.stdout.is_empty());
    assert!(message.starts_with("error: `") && message.contains("scores.csv"), "{message}");
    assert!(!message.contains("replicates"), "{message}");
}

#[test]
fn a_single_replicate_is_refused_since_it_has_no_spread() {
    let output = Command::new(env!("CARGO_BIN_EXE_spandrel-calibration")).args(["--replicates", "1"]).output().unwrap();
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("--replicates"));
}
