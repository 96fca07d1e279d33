//! One test an exit code.

use crate::workspace::{Workspace, code, root, series, spandrel, stderr, stdout};

#[test]
fn zero_when_done() {
    let workspace = Workspace::new();
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(stdout(&output).starts_with("Profile along x: 2 windows, 2 runs, 1,200 samples, 300 K\n"));
    assert_eq!(stderr(&output), "");
    assert_eq!(code(&spandrel(&["--version"])), 0);
    assert_eq!(code(&spandrel(&["--help"])), 0);
}

#[test]
fn two_for_a_command_line_that_cannot_be_understood() {
    for arguments in [&[][..], &["solv", "job.toml"], &["solve"], &["solve", "job.toml", "--threads", "0"]] {
        let output = spandrel(arguments);
        assert_eq!(code(&output), 2, "{arguments:?}");
        assert_eq!(stdout(&output), "");
    }
}

#[test]
fn three_for_a_job_with_problems() {
    let workspace = Workspace::new();
    workspace.change_job("temperature = 300.0", "temperatur = 300.0");
    workspace.change_job("bin_width = 0.05", "bin_width = -0.05");
    for command in ["solve", "check"] {
        let output = workspace.run(command, &[]);
        assert_eq!(code(&output), 3);
        let text = stderr(&output);
        assert!(text.contains("job.toml:4:1") && text.contains("did you mean `temperature`"), "{text}");
        assert!(text.contains("job.toml:32:13") && text.contains("2 problems"), "{text}");
    }
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
    assert_eq!(code(&spandrel(&["solve", "no-such-job.toml"])), 3);
}

#[test]
fn four_for_a_series_that_cannot_be_read() {
    let workspace = Workspace::new();
    workspace.write("low.txt", "# time x\n0.0 0.21\n1.0 oops\n2.0 0.2\n");
    workspace.write("high.txt", "# time x\n0.0 0.44\n1.0 nan\n");
    for command in ["solve", "check"] {
        let output = workspace.run(command, &[]);
        assert_eq!(code(&output), 4);
        let text = stderr(&output);
        assert!(text.contains("low.txt:3") && text.contains("`oops`"), "{text}");
        assert!(text.contains("high.txt:3") && text.contains("`nan`"), "both files are reported: {text}");
    }
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
}

#[test]
fn five_for_windows_that_are_not_linked() {
    let workspace = Workspace::new();
    workspace.write("high.txt", &series(2.45, 600));
    workspace.change_job("center = 0.45", "center = 2.45");
    for command in ["solve", "check"] {
        let output = workspace.run(command, &[]);
        assert_eq!(code(&output), 5);
        let text = stderr(&output);
        assert!(text.contains("group 1: low") && text.contains("group 2: high"), "{text}");
        // The windows reach at most 0.3 from their centers.
        assert!(text.contains("not covered: x from 0.49") && text.contains("to 2.16"), "{text}");
        assert!(text.contains("allow_gaps"), "{text}");
    }
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
}

/// The torsion of the reference data, in place of the small job.
fn torsion(solver: &str) -> Workspace {
    let workspace = Workspace::new();
    let data = root().join("tests/reference/butane-torsion");
    let job = std::fs::read_to_string(root().join("tests/program/torsion.toml")).unwrap();
    workspace.write("job.toml", &(job.replace("DATA", data.to_str().unwrap()) + solver));
    workspace
}

#[test]
fn six_for_a_solve_that_stops_short() {
    let workspace = torsion("\n[solver]\nmethod = \"self-consistent\"\nmax_iterations = 2\n");
    let output = workspace.solve();
    assert_eq!(code(&output), 6, "{}", stderr(&output));
    let text = stderr(&output);
    assert!(text.contains("`self-consistent` stopped after 2 iterations"), "{text}");
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
}

#[test]
fn seven_for_results_that_cannot_be_written() {
    let workspace = Workspace::new();
    workspace.write("taken", "a file where the folder should be");
    let taken = workspace.path("taken");
    let output = workspace.run("solve", &["--output", taken.to_str().unwrap()]);
    assert_eq!(code(&output), 7);
    assert!(stderr(&output).contains("exists and is not a folder"), "{}", stderr(&output));
}

#[test]
fn eight_for_a_zero_that_was_not_sampled() {
    let workspace = Workspace::new();
    workspace.change_job("bin_width = 0.05", "bin_width = 0.05\nzero = { position = 3.0 }");
    let output = workspace.solve();
    assert_eq!(code(&output), 8);
    assert!(stderr(&output).contains("nothing was sampled"), "{}", stderr(&output));
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
}

#[cfg(unix)]
#[test]
fn a_hundred_and_thirty_when_interrupted_and_nothing_is_left_behind() {
    use crate::workspace::command;
    use std::process::{Command, Stdio};

    // An iteration that would go on for a very long time.
    let workspace =
        torsion("\n[solver]\nmethod = \"self-consistent\"\ntolerance = 1e-13\nmax_iterations = 1000000000\n");
    let path = workspace.path("job.toml");
    let mut process =
        command(&["solve", path.to_str().unwrap()]).stdout(Stdio::null()).stderr(Stdio::piped()).spawn().unwrap();
    // Once the hidden folder is there, signals are listened to.
    while !workspace.entries().iter().any(|name| name.starts_with(".spandrel-partial-")) {
        assert_eq!(process.try_wait().unwrap(), None, "it ended before it began");
        std::thread::yield_now();
    }
    assert!(Command::new("kill").args(["-INT", &process.id().to_string()]).status().unwrap().success());
    let output = process.wait_with_output().unwrap();
    assert_eq!(code(&output), 130, "{}", stderr(&output));
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt"]);
}
