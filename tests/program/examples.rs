//! Every job in `config-examples` is checked and solved.

use crate::workspace::{code, root, rows, spandrel, stderr};
use std::fs;
use std::path::PathBuf;
use tempfile::TempDir;

fn examples() -> Vec<PathBuf> {
    let mut jobs: Vec<PathBuf> = fs::read_dir(root().join("config-examples"))
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "toml"))
        .collect();
    jobs.sort();
    jobs
}

#[test]
fn every_example_gives_a_profile_with_errors() {
    let folder = TempDir::new().unwrap();
    let jobs = examples();
    assert!(jobs.len() >= 10, "{} examples found", jobs.len());
    for job in jobs {
        let name = job.file_stem().unwrap().to_str().unwrap().to_owned();
        let check = spandrel(&["check", job.to_str().unwrap()]);
        assert_eq!(code(&check), 0, "{name}: {}", stderr(&check));
        let result = folder.path().join(&name);
        let solve = spandrel(&["solve", job.to_str().unwrap(), "--output", result.to_str().unwrap()]);
        assert_eq!(code(&solve), 0, "{name}: {}", stderr(&solve));
        let profile = rows(&fs::read_to_string(result.join("pmf.csv")).unwrap());
        let determined = profile.iter().filter(|row| row["status"] == "determined").count();
        assert!(2 * determined > profile.len(), "{name}: {determined} of {} bins have an error", profile.len());
    }
}

#[test]
fn the_readme_names_every_example() {
    let readme = fs::read_to_string(root().join("README.md")).unwrap();
    for job in examples() {
        let name = job.file_name().unwrap().to_str().unwrap();
        assert!(readme.contains(&format!("`{name}`")), "the README does not mention {name}");
    }
}
