//! What stands in the files.

use crate::workspace::{Workspace, code, rows, series, stderr, stdout};
use std::fs;

fn summary(workspace: &Workspace) -> serde_json::Value {
    serde_json::from_str(&workspace.read("result/summary.json")).unwrap()
}

#[test]
fn every_file_carries_its_format_and_none_holds_a_number_that_is_none() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    assert!(workspace.read("result/pmf.csv").starts_with("# pmf.csv, format 1, spandrel "));
    assert!(workspace.read("result/windows.csv").starts_with("# windows.csv, format 1, spandrel "));
    assert_eq!(summary(&workspace)["format"], 1);
    for file in ["pmf.csv", "windows.csv", "profile.svg", "summary.json"] {
        let text = workspace.read(&format!("result/{file}"));
        let mut words = text.split(|c: char| !c.is_alphanumeric());
        assert!(words.all(|word| !["nan", "inf", "infinity"].contains(&word.to_lowercase().as_str())), "{file}");
        assert!(!text.contains(workspace.path("").to_str().unwrap()), "{file} names a place on this machine");
    }
}

#[test]
fn the_summary_says_where_the_result_comes_from() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    let summary = summary(&workspace);
    assert_eq!(summary["program"], "spandrel");
    assert_eq!(summary["job"]["temperature"], 300.0);
    assert_eq!(summary["job"]["windows"][0]["bias"][0]["convention"], "half");
    assert!(summary["seed"].is_u64());
    assert!(summary["convergence"][0]["newton_step"].as_f64().unwrap() < 1e-10);
    let input = &summary["inputs"][0];
    assert_eq!((&input["path"], &input["rows_read"]), (&"low.txt".into(), &600.into()));
    assert_eq!(input["sha256"].as_str().unwrap().len(), 64);
    let listed: Vec<&str> =
        summary["files"].as_array().unwrap().iter().map(|file| file["name"].as_str().unwrap()).collect();
    assert_eq!(listed, ["pmf.csv", "windows.csv", "profile.svg"]);
}

#[test]
fn intervals_lie_around_the_free_energy_and_the_zero_has_none() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    let profile = rows(&workspace.read("result/pmf.csv"));
    let zeros: Vec<_> = profile.iter().filter(|row| row["status"] == "zero").collect();
    assert_eq!(zeros.len(), 1);
    assert_eq!((zeros[0]["free_energy"].as_str(), zeros[0]["standard_error"].as_str()), ("0", ""));
    for row in profile.iter().filter(|row| row["status"] == "determined") {
        let number = |column: &str| row[column].parse::<f64>().unwrap();
        assert!(number("interval_lower") < number("free_energy") && number("free_energy") < number("interval_upper"));
        assert!(number("standard_error") > 0.0);
    }
}

#[test]
fn energies_come_in_the_unit_asked_for() {
    let in_unit = |unit: &str| {
        let workspace = Workspace::new();
        workspace.change_job("energy_unit = \"kJ/mol\"", &format!("energy_unit = \"{unit}\""));
        let stated = "force_constant = 60.0\nforce_constant_unit = \"kJ/mol/nm^2\"";
        workspace.change_job("force_constant = 60.0", stated);
        assert_eq!(code(&workspace.solve()), 0);
        let profile = rows(&workspace.read("result/pmf.csv"));
        profile.iter().map(|row| row["free_energy"].parse::<f64>().unwrap()).fold(0.0, f64::max)
    };
    let (joule, calorie, thermal) = (in_unit("kJ/mol"), in_unit("kcal/mol"), in_unit("kT"));
    // Ten digits are written.
    assert!((joule / calorie / 4.184 - 1.0).abs() < 1e-9);
    assert!((joule / thermal / (8.314_462_618_153_24e-3 * 300.0) - 1.0).abs() < 1e-9);
}

#[test]
fn gaps_give_one_profile_a_group_where_the_job_allows_them() {
    let workspace = Workspace::new();
    workspace.write("high.txt", &series(2.45, 600));
    workspace.change_job("center = 0.45", "center = 2.45");
    workspace.change_job("[output]", "[solver]\nallow_gaps = true\n\n[output]");
    // A zero that only the first group covers; the second falls back on its lowest bin.
    workspace.change_job("bin_width = 0.05", "bin_width = 0.05\nfrom = -0.5\nto = 3.0\nzero = { position = 0.22 }");
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    assert!(stdout(&output).contains("not-linked"), "{}", stdout(&output));
    let profile = rows(&workspace.read("result/pmf.csv"));
    for group in ["1", "2"] {
        assert_eq!(profile.iter().filter(|row| row["group"] == group && row["status"] == "zero").count(), 1);
    }
    assert!(workspace.read("result/pmf.csv").contains("the bin at x = 0.225 nm; the lowest bin, x = "));
    // No bin between the two.
    let center = |row: &std::collections::HashMap<String, String>| row["position"].parse::<f64>().unwrap();
    assert!(profile.iter().all(|row| center(row) < 0.6 || center(row) > 2.0));
}

#[test]
fn excluded_windows_and_stretches_leave_no_trace_in_the_profile() {
    let workspace = Workspace::new();
    workspace.change_job("[output]", "[exclude]\nstretches = [{ axis = \"x\", from = 0.3, to = 0.4 }]\n\n[output]");
    assert_eq!(code(&workspace.solve()), 0);
    let profile = rows(&workspace.read("result/pmf.csv"));
    let empty: Vec<&str> =
        profile.iter().filter(|row| row["status"] == "unsampled").map(|row| row["position"].as_str()).collect();
    assert_eq!(empty, ["0.325", "0.375"]);
    let windows = rows(&workspace.read("result/windows.csv"));
    for row in &windows {
        let number = |column: &str| row[column].parse::<u32>().unwrap();
        assert!(number("samples_excluded") > 0);
        assert_eq!(number("samples_kept") + number("samples_excluded"), number("frames_read"));
    }

    let workspace = Workspace::new();
    workspace.change_job("[output]", "[exclude]\nwindows = [\"high\"]\n\n[output]");
    assert_eq!(code(&workspace.solve()), 0);
    assert_eq!(rows(&workspace.read("result/windows.csv")).len(), 1);
}

#[test]
fn windows_with_a_handful_of_samples_get_no_error_and_a_finding() {
    let workspace = Workspace::new();
    workspace.write("low.txt", &series(0.2, 2));
    let output = workspace.solve();
    assert_eq!(code(&output), 0, "{}", stderr(&output));
    let profile = rows(&workspace.read("result/pmf.csv"));
    assert!(profile.iter().all(|row| row["standard_error"].is_empty() || row["status"] != "not-determined"));
    assert!(profile.iter().all(|row| row["standard_error"] != "0"));
}

#[test]
fn quiet_prints_nothing_and_check_writes_nothing() {
    let workspace = Workspace::new();
    let before = workspace.entries();
    let check = workspace.run("check", &[]);
    assert_eq!(code(&check), 0);
    assert!(stdout(&check).starts_with("Read 2 windows"), "{}", stdout(&check));
    assert_eq!(workspace.entries(), before);
    let solve = workspace.run("solve", &["--quiet"]);
    assert_eq!((stdout(&solve), stderr(&solve)), (String::new(), String::new()));
    assert!(fs::metadata(workspace.path("result/pmf.csv")).is_ok());
}
