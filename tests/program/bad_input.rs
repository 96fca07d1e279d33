//! The most likely wrong inputs: each is met with the place, the finding and advice, or read with a finding.

use crate::workspace::{Workspace, code, series, stderr, stdout};

/// Both windows fine but for one text in place of the first one's series.
fn with_low(text: &str) -> (i32, String) {
    let workspace = Workspace::new();
    workspace.write("low.txt", text);
    let output = workspace.solve();
    (code(&output), stderr(&output))
}

#[test]
fn faults_of_a_series_are_named_with_file_line_and_advice() {
    let good = series(0.2, 50);
    for (text, place, found) in [
        (format!("{good}50.0 ****\n"), "low.txt:52", "`****`"),
        (format!("{good}50.0 inf\n"), "low.txt:52", "`inf`"),
        (format!("{good}50.0 1e999\n"), "low.txt:52", "`1e999`"),
        (format!("{good}50.0\n"), "low.txt:52", "1"),
        (format!("{good}50.0 0.2 0.3\n"), "low.txt:52", "3"),
        (String::new(), "low.txt", "row"),
        ("# only a comment\n".to_owned(), "low.txt", "row"),
    ] {
        let (code, message) = with_low(&text);
        assert_eq!(code, 4, "{message}");
        assert!(message.contains(place) && message.contains(found), "{message}");
        assert!(message.contains("help:"), "{message}");
    }
}

#[test]
fn a_column_that_is_not_there_is_named() {
    let workspace = Workspace::new();
    workspace.change_job("columns = { x = 2 }", "columns = { x = 7 }");
    let output = workspace.solve();
    assert_eq!(code(&output), 4);
    assert!(stderr(&output).contains("column 7"), "{}", stderr(&output));

    let workspace = Workspace::new();
    workspace.change_job("columns = { x = 2 }", "columns = { x = \"y\" }");
    let output = workspace.solve();
    assert_eq!(code(&output), 4);
    assert!(stderr(&output).contains("`y`") && stderr(&output).contains("`x`"), "{}", stderr(&output));
}

#[test]
fn a_line_cut_off_by_a_killed_run_is_left_out_and_reported() {
    for cut in ["600.0 0.1", "600.0 0.19", "600."] {
        let workspace = Workspace::new();
        workspace.write("low.txt", &(series(0.2, 600) + cut));
        let output = workspace.solve();
        assert_eq!(code(&output), 0, "{}", stderr(&output));
        let text = stdout(&output);
        assert!(text.contains("cut-last-line: low.txt:602"), "{text}");
        assert!(text.contains("1,200 samples"), "{text}");
    }
}

#[test]
fn frames_written_twice_are_kept_once_and_reported() {
    let workspace = Workspace::new();
    let whole = series(0.2, 600);
    let lines: Vec<&str> = whole.lines().collect();
    // Frames 380 to 399 again, after a restart.
    let twice = [&lines[..401], &lines[381..]].concat().join("\n") + "\n";
    workspace.write("low.txt", &twice);
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    let text = stdout(&output);
    assert!(text.contains("repeated-frames: low.txt:402: 20 frames"), "{text}");
    assert!(text.contains("1,200 samples"), "{text}");
}

#[test]
fn windows_line_ends_a_byte_order_mark_and_fortran_exponents_change_nothing() {
    let plain = Workspace::new();
    assert_eq!(code(&plain.solve()), 0);
    let odd = Workspace::new();
    let whole = series(0.2, 600);
    let text = whole.lines().map(|line| match line.split_once(' ') {
        Some((time, x)) if !line.starts_with('#') => format!("{time}D+00 {x}D0\r\n"),
        _ => format!("{line}\r\n"),
    });
    odd.write("low.txt", &("\u{feff}".to_owned() + &text.collect::<String>()));
    let output = odd.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert_eq!(plain.read("result/pmf.csv"), odd.read("result/pmf.csv"));
}

#[test]
fn a_window_that_never_moves_is_named_and_no_bin_gets_an_error() {
    let workspace = Workspace::new();
    let frozen = (0..600).map(|i| format!("{i}.0 0.25")).collect::<Vec<_>>().join("\n") + "\n";
    workspace.write("low.txt", &frozen);
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(stdout(&output).contains("no-error-support: the 600 samples of window `low`"), "{}", stdout(&output));
    let profile = crate::workspace::rows(&workspace.read("result/pmf.csv"));
    assert!(profile.iter().all(|row| row["standard_error"].is_empty()));
}

#[test]
fn positions_far_from_every_bin_are_refused_with_their_line() {
    let (code, message) = with_low(&(series(0.2, 20) + "20.0 3e9\n"));
    assert_eq!(code, 4);
    assert!(message.contains("low.txt:22") && message.contains("3000000000"), "{message}");
}
