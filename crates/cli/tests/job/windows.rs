//! What a job says about windows, their files, and what is left out.

use crate::support::{Folder, report, with};
use snapbox::{IntoData, assert_data_eq, str};

#[test]
fn two_windows_of_one_name_are_both_shown() {
    let report = report(&[("name = \"right\"", "name = \"left\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.name`: expected a name for one window only, found `left` again
  --> job.toml:24:8
   |
16 | name = "left"
   |        ------ first here
...
24 | name = "left"
   |        ^^^^^^
   |
   = help: give independent starts of one window as its `replicas`, other windows another name

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_file_used_twice_is_shown_in_both_places() {
    let report = report(&[("\"right2.txt\"", "\"./left.txt\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `files`: expected every file once, found `left.txt` again
  --> job.toml:25:24
   |
17 | files = ["left.txt"]
   |          ---------- first here
...
25 | files = ["right1.txt", "./left.txt"]
   |                        ^^^^^^^^^^^^
   |
   = help: a file belongs to one replica of one window, and to one place in it

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_file_matched_by_two_patterns_is_shown_in_both_places() {
    let report = report(&[("\"right1.txt\", \"right2.txt\"", "\"right*.txt\", \"right?.txt\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `files`: expected every file once, found `right1.txt` and 1 more again
  --> job.toml:25:24
   |
25 | files = ["right*.txt", "right?.txt"]
   |          ------------  ^^^^^^^^^^^^
   |          |
   |          first here
   |
   = help: a file belongs to one replica of one window, and to one place in it

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_file_gets_the_nearest_name() {
    let report = report(&[("\"left.txt\"", "\"lefft.txt\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `files`: expected a file, found nothing at `lefft.txt`
  --> job.toml:17:10
   |
17 | files = ["lefft.txt"]
   |          ^^^^^^^^^^^
   |
   = help: did you mean `left.txt`?
   = help: paths are relative to the folder of the job

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_pattern_without_a_match_is_named() {
    let report = report(&[("\"left.txt\"", "\"left*.dat\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `files`: expected files that match `left*.dat`, found none
  --> job.toml:17:10
   |
17 | files = ["left*.dat"]
   |          ^^^^^^^^^^^
   |
   = help: paths are relative to the folder of the job; `*` does not reach into folders

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_folder_is_no_file() {
    let report = report(&[("\"left.txt\"", "\".\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `files`: expected a file, found the folder `.`
  --> job.toml:17:10
   |
17 | files = ["."]
   |          ^^^
   |
   = help: name the files in it, as in `./*.txt`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn no_file_at_all_is_refused() {
    let report = report(&[("files = [\"left.txt\"]", "files = []")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.files`: expected at least one path or pattern, found an empty list
  --> job.toml:17:9
   |
17 | files = []
   |         ^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn files_and_replicas_exclude_each_other() {
    let report = report(&[("files = [\"left.txt\"]", "files = [\"left.txt\"]\nreplicas = [[\"left.txt\"]]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `[[window]]`: expected only one of the keys `files`, `replicas`, found `files`, `replicas`
  --> job.toml:17:1
   |
17 | files = ["left.txt"]
   | ^^^^^
18 | replicas = [["left.txt"]]
   | --------
   |
   = help: keep one of them, such as `files`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn replicas_are_lists_of_lists() {
    let report = report(&[("files = [\"left.txt\"]", "replicas = [\"left.txt\"]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.replicas`: expected a list of paths or patterns for each replica, found the text `left.txt`
  --> job.toml:17:13
   |
17 | replicas = ["left.txt"]
   |             ^^^^^^^^^^
   |
   = help: put the segments of each replica into brackets, as in `replicas = [["z00a.txt"], ["z00b.txt"]]`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_window_of_another_temperature_is_refused() {
    let report = report(&[("name = \"right\"", "name = \"right\"\ntemperature = 340.0")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.temperature`: expected the temperature of the system, 310, found 340
  --> job.toml:25:15
   |
 4 | temperature = 310.0
   |               ----- the temperature of the system
...
25 | temperature = 340.0
   |               ^^^^^
   |
   = help: windows of one job have one temperature; solve windows of another temperature in a job of their own

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_excluded_window_that_is_not_there_gets_the_nearest_name() {
    let report = report(&[("[profile]", "[exclude]\nwindows = [\"rigth\", \"up*\"]\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `exclude.windows`: expected the name of a window, found `rigth`
  --> job.toml:32:12
   |
32 | windows = ["rigth", "up*"]
   |            ^^^^^^^
   |
   = help: did you mean `right`?
   = help: the windows are `left`, `right`

error: `exclude.windows`: expected a pattern that fits a window, found `up*`
  --> job.toml:32:21
   |
32 | windows = ["rigth", "up*"]
   |                     ^^^^^
   |
   = help: the windows are `left`, `right`

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_excluded_replica_must_be_there() {
    let report = report(&[("[profile]", "[exclude]\nreplicas = [\"left/2\", \"right\", \"rihgt/1\"]\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `exclude.replicas`: expected a replica of window `left` from 1 to 1, found 2
  --> job.toml:32:13
   |
32 | replicas = ["left/2", "right", "rihgt/1"]
   |             ^^^^^^^^

error: `exclude.replicas`: expected a window and the number of a replica, found `right`
  --> job.toml:32:23
   |
32 | replicas = ["left/2", "right", "rihgt/1"]
   |                       ^^^^^^^
   |
   = help: write them as `name/number`, counted from 1, as in `z00/2`

error: `exclude.replicas`: expected the name of a window, found `rihgt`
  --> job.toml:32:32
   |
32 | replicas = ["left/2", "right", "rihgt/1"]
   |                                ^^^^^^^^^
   |
   = help: did you mean `right`?
   = help: the windows are `left`, `right`

3 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn all_windows_excluded_leave_no_job() {
    let report = report(&[("[profile]", "[exclude]\nwindows = [\"left\"]\nreplicas = [\"right/1\"]\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `exclude`: expected at least one window to take part, found all 2 left out
  --> job.toml:32:12
   |
32 | windows = ["left"]
   |            ^^^^^^
   |
   = help: take a window off `exclude`, or remove its `exclude = true`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_stretch_runs_upward() {
    let report = report(&[(
        "[profile]",
        "[exclude]\nstretches = [{ axis = \"y\", from = 0.8, to = 0.9 }, { from = 0.9, to = 0.8 }]\n\n[profile]",
    )]);
    assert_data_eq!(
        report,
        str![[r#"
error: `exclude.stretches.axis`: expected the name of an axis, `z`, found `y`
  --> job.toml:32:23
   |
32 | stretches = [{ axis = "y", from = 0.8, to = 0.9 }, { from = 0.9, to = 0.8 }]
   |                       ^^^

error: `exclude.stretches.to`: expected a number above `from`, 0.9, found 0.8
  --> job.toml:32:71
   |
32 | stretches = [{ axis = "y", from = 0.8, to = 0.9 }, { from = 0.9, to = 0.8 }]
   |                                                             ---       ^^^
   |                                                             |
   |                                                             `from`

2 problems in job.toml
"#]]
        .raw()
    );
}

/// The report on the good job with its folder changed first.
fn report_in(folder: &Folder, changes: &[(&str, &str)]) -> String {
    folder.report(&with(changes))
}

#[test]
fn a_file_of_another_window_is_not_what_was_meant() {
    let folder = Folder::new();
    // Both windows of the job use files of near names, one of them below.
    folder.write("left2.txt", "0.0 0.7\n");
    let report = report_in(&folder, &[("\"left.txt\"", "\"left1.txt\""), ("\"right1.txt\"", "\"left2.txt\"")]);
    assert!(report.contains("= help: did you mean `left.txt`?"), "{report}");
    let report = report_in(
        &folder,
        &[("\"left.txt\"", "\"left1.txt\""), ("\"right1.txt\", \"right2.txt\"", "\"./left2.txt\", \"left.txt\"")],
    );
    assert!(report.contains("found nothing at `left1.txt`") && !report.contains("did you mean"), "{report}");
}

#[test]
fn a_file_of_an_excluded_window_is_not_what_was_meant() {
    for files in ["\"left2.txt\"", "\"left?.txt\""] {
        let folder = Folder::new();
        folder.write("left2.txt", "0.0 0.7\n");
        std::fs::remove_file(folder.path("left.txt")).unwrap();
        let excluded = "[exclude]\nwindows = [\"right\"]\n\n[profile]";
        let report = report_in(
            &folder,
            &[("\"left.txt\"", "\"left1.txt\""), ("\"right1.txt\", \"right2.txt\"", files), ("[profile]", excluded)],
        );
        assert!(report.contains("found nothing at `left1.txt`") && !report.contains("did you mean"), "{report}");
    }
}

#[test]
fn neither_a_folder_nor_the_job_is_what_was_meant() {
    let folder = Folder::new();
    folder.write("lost.tx/a", "");
    let report = report_in(&folder, &[("\"left.txt\"", "\"lost.txt\""), ("\"right1.txt\"", "\"jobb.toml\"")]);
    assert!(report.contains("found nothing at `jobb.toml`"), "{report}");
    assert!(report.contains("= help: did you mean `left.txt`?"), "{report}");
    assert_eq!(report.matches("did you mean").count(), 1, "{report}");
}

#[test]
fn a_missing_folder_is_named_as_far_as_it_is_missing() {
    let folder = Folder::new();
    folder.write("runs/a.txt", "");
    let report = report_in(
        &folder,
        &[("\"left.txt\"", "\"runs/old/first/left.txt\""), ("\"right1.txt\"", "\"../absent/right1.txt\"")],
    );
    assert!(report.contains("= help: there is no folder `runs/old`\n"), "{report}");
    assert!(report.contains("= help: there is no folder `../absent`\n"), "{report}");
}
