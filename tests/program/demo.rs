//! The demo against the truth from which it was made.

use crate::workspace::{code, root, rows, spandrel, stderr};
use std::fs;
use tempfile::TempDir;

#[test]
fn demo_gives_the_profile_from_which_its_data_were_made() {
    let folder = TempDir::new().unwrap();
    let result = folder.path().join("result");
    let job = root().join("demo/solute-across-slab.toml");
    let output = spandrel(&["solve", job.to_str().unwrap(), "--output", result.to_str().unwrap()]);
    assert_eq!(code(&output), 0, "{}", stderr(&output));

    let truth = rows(&fs::read_to_string(root().join("demo/data/truth.csv")).unwrap());
    let profile = rows(&fs::read_to_string(result.join("pmf.csv")).unwrap());
    assert_eq!(profile.len(), truth.len());
    let number = |text: &str| text.parse::<f64>().unwrap();
    let kt = 8.314_462_618_153_24e-3 * 310.0;
    // The zero is the mean density between 1.3 and 1.5 nm.
    let exact: Vec<f64> = truth.iter().map(|row| number(&row["free_energy_kJ_per_mol"])).collect();
    let last = &exact[exact.len() - 4..];
    let zero = -kt * (last.iter().map(|f| (-f / kt).exp()).sum::<f64>() / 4.0).ln();
    let z: Vec<f64> = profile
        .iter()
        .zip(&exact)
        .filter(|(row, _)| row["status"] == "determined")
        .map(|(row, exact)| (number(&row["free_energy"]) - (exact - zero)) / number(&row["standard_error"]))
        .collect();
    assert!(z.len() > 50, "{} bins have an error", z.len());
    // The errors grow from the zero outward, so all 60 bins hang together: a common deviation of up to 3.5 standard errors is chance.
    let mean_square = z.iter().map(|z| z * z).sum::<f64>() / z.len() as f64;
    assert!(mean_square < 3.5 * 3.5, "mean square z {mean_square}");
}

#[test]
fn one_thread_and_two_and_a_second_run_give_the_same_bytes() {
    let folder = TempDir::new().unwrap();
    let job = root().join("demo/solute-across-slab.toml");
    let run = |name: &str, threads: &str| {
        let result = folder.path().join(name);
        let arguments =
            ["solve", job.to_str().unwrap(), "--output", result.to_str().unwrap(), "--threads", threads, "--quiet"];
        let output = spandrel(&arguments);
        assert_eq!(code(&output), 0, "{}", stderr(&output));
        ["pmf.csv", "windows.csv", "profile.svg", "summary.json"].map(|file| fs::read(result.join(file)).unwrap())
    };
    let first = run("first", "1");
    assert_eq!(first, run("second", "2"));
    assert_eq!(first, run("third", "2"));
}
