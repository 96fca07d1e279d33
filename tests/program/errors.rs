//! Errors in their several forms.

use crate::workspace::{Workspace, code, rows, series, stderr, stdout};
use spandrel_testkit::{Correlation, stream};
use std::fmt::Write as _;

fn summary(workspace: &Workspace) -> serde_json::Value {
    serde_json::from_str(&workspace.read("result/summary.json")).unwrap()
}

#[test]
fn the_covariance_has_the_squared_errors_on_its_diagonal_and_is_symmetric() {
    let workspace = Workspace::new();
    workspace.change_job("folder = \"result\"", "folder = \"result\"\ncovariance = true");
    assert_eq!(code(&workspace.solve()), 0);
    let profile = rows(&workspace.read("result/pmf.csv"));
    let covariance = rows(&workspace.read("result/covariance.csv"));
    let with_error: Vec<_> = profile.iter().filter(|row| !row["standard_error"].is_empty()).collect();
    assert!(with_error.len() > 5);
    assert_eq!(with_error.len(), covariance.len());
    for (bin, row) in with_error.iter().zip(&covariance) {
        let (position, number) = (&bin["position"], |text: &str| text.parse::<f64>().unwrap());
        assert_eq!(*position, row["position"]);
        // Ten digits are written.
        assert!((number(&row[position]) / number(&bin["standard_error"]).powi(2) - 1.0).abs() < 1e-8);
        for other in &covariance {
            assert_eq!(row[&other["position"]], other[position]);
        }
    }
}

#[test]
fn the_band_lies_around_the_interval_of_every_bin() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    let profile = rows(&workspace.read("result/pmf.csv"));
    for row in profile.iter().filter(|row| row["status"] == "determined") {
        let number = |column: &str| row[column].parse::<f64>().unwrap();
        assert!(number("band_lower") < number("interval_lower") && number("interval_upper") < number("band_upper"));
    }
    let pointwise = summary(&workspace)["profiles"][0]["band_pointwise_probability"].as_f64().unwrap();
    // More than one bin's worth, less than a hundred independent ones.
    assert!(pointwise > 0.95 && pointwise < 1.0 - 0.05 / 100.0, "{pointwise}");
}

/// The small job with samples that remember each other for some three frames.
fn with_memory() -> Workspace {
    let workspace = Workspace::new();
    for (number, (file, center)) in (0..).zip([("low.txt", 0.2), ("high.txt", 0.45)]) {
        let latent = Correlation::Exponential { time: 3.2 }.sample_latent(1500, &mut stream(8, number));
        let lines = latent.iter().enumerate().map(|(i, z)| format!("{i}.0 {:.5}", center + 0.17 * z));
        workspace.write(file, &(lines.collect::<Vec<_>>().join("\n") + "\n"));
    }
    workspace
}

#[test]
fn a_bootstrap_is_made_as_a_check_or_gives_the_errors_itself() {
    let check = with_memory();
    check.change_job("[output]", "[errors]\nbootstrap_replicates = 400\n\n[output]");
    assert_eq!(code(&check.solve()), 0);
    let of_check = summary(&check);
    assert!(of_check["error_method"].as_str().unwrap().starts_with("influence"));
    assert_eq!(of_check["error_checks"][0]["bootstrap_replicates"], 400);
    let ratio = of_check["error_checks"][0]["bootstrap_over_influence"].as_f64().unwrap();
    assert!((1.0 / 1.5..1.5).contains(&ratio), "{ratio}");

    let bootstrap = with_memory();
    bootstrap.change_job("[output]", "[errors]\nmethod = \"bootstrap\"\nbootstrap_replicates = 400\n\n[output]");
    assert_eq!(code(&bootstrap.solve()), 0);
    assert!(summary(&bootstrap)["error_method"].as_str().unwrap().contains("bootstrap"));
    let (one, other) = (rows(&check.read("result/pmf.csv")), rows(&bootstrap.read("result/pmf.csv")));
    let mut differ = 0;
    for (a, b) in one.iter().zip(&other) {
        assert_eq!(a["free_energy"], b["free_energy"]);
        differ += usize::from(a["standard_error"] != b["standard_error"]);
    }
    assert!(differ > 5, "{differ} errors differ");
}

/// A series that comes from afar: its first part decays towards the center.
fn relaxing(center: f64, n: u32, decay: f64) -> String {
    let mut text = String::from("# time x\n");
    for (i, line) in series(center, n).lines().skip(1).enumerate() {
        let (time, x) = line.split_once(' ').unwrap();
        let offset = 1.2 * (-(i as f64) / decay).exp();
        let _ = writeln!(text, "{time} {:.5}", x.parse::<f64>().unwrap() + offset);
    }
    text
}

#[test]
fn a_beginning_that_had_not_settled_is_reported_and_cut_on_request() {
    let workspace = Workspace::new();
    workspace.write("low.txt", &relaxing(0.2, 2000, 60.0));
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(stdout(&output).contains("unsettled-start: window `low`"), "{}", stdout(&output));
    assert_eq!(rows(&workspace.read("result/windows.csv"))[0]["samples_cut"], "0");

    workspace.change_job("columns = { x = 2 }", "columns = { x = 2 }\ndiscard = { automatic = true }");
    let output = workspace.run("solve", &["--force"]);
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(!stdout(&output).contains("unsettled-start"), "{}", stdout(&output));
    let windows = rows(&workspace.read("result/windows.csv"));
    let number = |row: usize, column: &str| windows[row][column].parse::<u32>().unwrap();
    // Five decay times leave 0.008 of the offset.
    assert!((60..600).contains(&number(0, "samples_cut")), "{}", number(0, "samples_cut"));
    assert_eq!(number(0, "samples_kept") + number(0, "samples_cut"), 2000);
    assert_eq!(number(1, "samples_cut"), 0);
}

#[test]
fn a_window_that_drifts_to_its_end_is_named() {
    let workspace = Workspace::new();
    let mut drifting = String::from("# time x\n");
    for (i, line) in series(0.2, 2000).lines().skip(1).enumerate() {
        let (time, x) = line.split_once(' ').unwrap();
        let _ = writeln!(drifting, "{time} {:.5}", x.parse::<f64>().unwrap() - 0.3 + 0.0003 * i as f64);
    }
    workspace.write("low.txt", &drifting);
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(stdout(&output).contains("never-settles: window `low`"), "{}", stdout(&output));
}
