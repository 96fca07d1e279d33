//! What may be written where.

use crate::workspace::{Workspace, code, stderr};
use std::fs;

#[test]
fn a_result_is_not_replaced_without_force() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    let before = workspace.read("result/summary.json");
    let again = workspace.solve();
    assert_eq!(code(&again), 7);
    assert!(stderr(&again).contains("holds an earlier result"), "{}", stderr(&again));
    assert_eq!(workspace.read("result/summary.json"), before);
}

#[test]
fn force_replaces_what_an_earlier_result_lists_and_nothing_else() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    workspace.write("result/notes.txt", "mine");
    workspace.change_job("bin_width = 0.05", "bin_width = 0.1");
    let before = workspace.read("result/pmf.csv");
    assert_eq!(code(&workspace.run("solve", &["--force"])), 0);
    assert_ne!(workspace.read("result/pmf.csv"), before);
    assert_eq!(workspace.read("result/notes.txt"), "mine");
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt", "result"]);
}

#[test]
fn a_listed_file_that_was_changed_since_is_not_replaced() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    workspace.write("result/pmf.csv", "annotated by hand");
    let output = workspace.run("solve", &["--force"]);
    assert_eq!(code(&output), 7);
    assert!(stderr(&output).contains("was changed since"), "{}", stderr(&output));
    assert_eq!(workspace.read("result/pmf.csv"), "annotated by hand");
    assert_eq!(workspace.entries(), ["high.txt", "job.toml", "low.txt", "result"]);
}

#[test]
fn a_folder_of_other_files_is_never_written_to() {
    let workspace = Workspace::new();
    fs::create_dir(workspace.path("result")).unwrap();
    workspace.write("result/pmf.csv", "somebody else's");
    for arguments in [&[][..], &["--force"]] {
        let output = workspace.run("solve", arguments);
        assert_eq!(code(&output), 7);
        assert!(stderr(&output).contains("not a result of this program"), "{}", stderr(&output));
    }
    assert_eq!(workspace.read("result/pmf.csv"), "somebody else's");
}

#[test]
fn an_empty_folder_and_a_new_one_in_new_parents_are_fine() {
    let workspace = Workspace::new();
    fs::create_dir(workspace.path("result")).unwrap();
    assert_eq!(code(&workspace.solve()), 0);
    let deep = workspace.path("a/b/c");
    assert_eq!(code(&workspace.run("solve", &["--output", deep.to_str().unwrap()])), 0);
    assert!(deep.join("summary.json").is_file());
}

#[test]
fn a_file_that_another_result_listed_is_removed_only_by_name() {
    let workspace = Workspace::new();
    assert_eq!(code(&workspace.solve()), 0);
    // A summary that lists a path outside the folder is not one of ours.
    let summary = workspace.read("result/summary.json").replace("\"profile.svg\"", "\"../low.txt\"");
    workspace.write("result/summary.json", &summary);
    let output = workspace.run("solve", &["--force"]);
    assert_eq!(code(&output), 7, "{}", stderr(&output));
    assert!(workspace.path("low.txt").is_file());
}
