//! The README tells the truth.

use crate::workspace::{code, root, spandrel, stderr, stdout};
use std::fs;
use tempfile::TempDir;

#[test]
fn the_transcript_of_the_demo_is_what_the_program_prints() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    let (_, block) = readme.split_once("```text\n").unwrap();
    let (transcript, _) = block.split_once("```").unwrap();

    let folder = TempDir::new().unwrap();
    let result = folder.path().join("result");
    let job = root().join("demo/solute-across-slab.toml");
    let output = spandrel(&["solve", job.to_str().unwrap(), "--output", result.to_str().unwrap()]);
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    let printed = stdout(&output).replace(result.to_str().unwrap(), "demo/result");
    let (shown, cautions) = printed.split_once("These errors do not cover").unwrap();
    snapbox::assert_data_eq!(shown, transcript.to_owned());
    assert!(cautions.contains("motions slower than the runs"));
}

#[test]
fn the_test_command_of_the_readme_is_the_one_that_the_gates_run() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    let gates = fs::read_to_string(root().join(".ci/run")).unwrap();
    let command = "cargo test --workspace --locked";
    assert!(readme.contains(&format!("```sh\n{command}\n```")));
    assert!(gates.lines().any(|line| line == command));
}

#[test]
fn every_exit_code_is_in_the_readme() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    for status in spandrel_cli::ExitStatus::ALL {
        assert!(readme.contains(&format!("\n| {} | ", status.code())), "code {} is missing", status.code());
    }
}
