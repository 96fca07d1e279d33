//! The report as a whole: all problems at once, files that are no job, and the table of keys.

use crate::support::{Folder, GOOD, report, with};
use snapbox::{IntoData, assert_data_eq, str};
use spandrel_cli::job::{KEYS, Section};

#[test]
fn the_good_job_has_no_problem() {
    Folder::new().load(GOOD).unwrap();
}

#[test]
fn all_problems_are_shown_at_once_in_the_order_of_the_file() {
    let report = report(&[
        ("temperature = 310.0", "temprature = 310.0"),
        ("unit = \"ps\"", "unit = \"minutes\""),
        ("\"left.txt\"", "\"lost.txt\""),
        ("center = 0.7", "centre = 0.7"),
        ("bin_width = 0.05", "bin_width = 0.04\nzero = \"maximum\""),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temprature`: unknown key in `[system]`
 --> job.toml:4:1
  |
4 | temprature = 310.0
  | ^^^^^^^^^^
  |
  = help: did you mean `temperature`?

error: `series.time.unit`: expected one of `fs`, `ps`, `ns` or `us`, found the text `minutes`
  --> job.toml:12:29
   |
12 | time = { column = 1, unit = "minutes" }
   |                             ^^^^^^^^^

error: `files`: expected a file, found nothing at `lost.txt`
  --> job.toml:17:10
   |
17 | files = ["lost.txt"]
   |          ^^^^^^^^^^
   |
   = help: did you mean `left.txt`?
   = help: paths are relative to the folder of the job

error: `bias.centre`: unknown key in a bias
  --> job.toml:20:1
   |
20 | centre = 0.7
   | ^^^^^^
   |
   = help: did you mean `center`?

error: `profile.zero`: expected `minimum`, found the text `maximum`
  --> job.toml:35:8
   |
35 | zero = "maximum"
   |        ^^^^^^^^^
   |
   = help: did you mean `minimum`?

5 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn all_faults_of_the_syntax_are_shown_and_nothing_else() {
    let report = report(&[
        ("temperature = 310.0", "temperature 310.0"),
        ("center = 0.7", "centre = 0.7"),
        ("bin_width = 0.05", "bin_width = 0,05"),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: expected TOML, found: key with no value, expected `=`
 --> job.toml:4:13
  |
4 | temperature 310.0
  |             ^

error: expected TOML, found: unexpected key or value, expected newline, `#`
  --> job.toml:34:14
   |
34 | bin_width = 0,05
   |              ^

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_key_given_twice_is_a_fault_of_the_syntax() {
    assert_data_eq!(
        report(&[("center = 0.7", "center = 0.7\ncenter = 0.8")]),
        str![[r#"
error: expected TOML, found: duplicate key
  --> job.toml:21:1
   |
21 | center = 0.8
   | ^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_empty_job_is_told_everything_that_is_needed() {
    assert_data_eq!(
        Folder::new().report(""),
        str![[r#"
error: `format`: expected the number 1, found no such key
 --> job.toml:1:1
  |
1 |
  | ^ no `format` in a job
  |
  = help: add it, as in `format = 1`

error: `system`: expected a table, found no such key
 --> job.toml:1:1
  |
1 |
  | ^ no `system` in a job
  |
  = help: add it, as in `[system]`

error: `axis`: expected one or more tables `[[axis]]`, found no such key
 --> job.toml:1:1
  |
1 |
  | ^ no `axis` in a job
  |
  = help: add it, as in `[[axis]]`

error: `series`: expected a table, found no such key
 --> job.toml:1:1
  |
1 |
  | ^ no `series` in a job
  |
  = help: add it, as in `[series]`

error: `window`: expected at least one window, found none
 --> job.toml:1:1
  |
1 |
  | ^
  |
  = help: add a `[[window]]` with `name` and `files`, or a `[window_table]`

error: `profile`: expected a table, found no such key
 --> job.toml:1:1
  |
1 |
  | ^ no `profile` in a job
  |
  = help: add it, as in `[profile]`

6 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_job_is_named() {
    assert_data_eq!(
        Folder::new().load_file("jobb.toml").unwrap_err(),
        str![[r#"
error: `jobb.toml`: expected a job file that can be read, found nothing by this name
 |
 = help: check the path; a job is a text file in TOML, often called `job.toml`

1 problem in jobb.toml
"#]]
        .raw()
    );
}

#[test]
fn a_folder_is_no_job() {
    let folder = Folder::new();
    folder.write("runs/z.txt", "");
    assert_data_eq!(
        folder.load_file("runs").unwrap_err(),
        str![[r#"
error: `runs`: expected a job file that can be read, found a folder
 |
 = help: check the path; a job is a text file in TOML, often called `job.toml`

1 problem in runs
"#]]
        .raw()
    );
}

#[test]
fn bytes_that_are_no_text_are_placed() {
    let folder = Folder::new();
    std::fs::write(folder.path("latin.toml"), b"format = 1\n# \xe5ngstr\xf6m\n").unwrap();
    assert_data_eq!(
        folder.load_file("latin.toml").unwrap_err(),
        str![[r#"
error: `latin.toml:2:3`: expected UTF-8 text, found other bytes
 |
 = help: save the job as UTF-8 text

1 problem in latin.toml
"#]]
        .raw()
    );
}

#[test]
fn line_ends_of_either_kind_give_the_same_places() {
    let folder = Folder::new();
    let job = with(&[("center = 0.7", "center = \"middle\"")]);
    let report = folder.report(&job);
    assert!(report.contains("--> job.toml:20:10"), "{report}");
    assert_eq!(folder.report(&job.replace('\n', "\r\n")), report);
}

/// A document in which the example of a key stands in its section.
fn document(section: Section, example: &str) -> String {
    let inline = |key: &str| format!("{key} = {{ {example} }}");
    match section {
        Section::Top => example.to_owned(),
        Section::Axis | Section::Window => format!("[[{}]]\n{example}", section.path()),
        Section::Time => format!("[series]\n{}", inline("time")),
        Section::SeriesColumn => format!("[series]\n{}", inline("columns.z")),
        Section::Discard => format!("[series]\n{}", inline("discard")),
        Section::Bias => format!("[[window]]\n[[window.bias]]\n{example}"),
        Section::TableValue => format!("[window_table]\n[[window_table.bias]]\n{}", inline("center")),
        Section::Stretch => format!("[exclude]\nstretches = [{{ {example} }}]"),
        Section::Zero => format!("[profile]\n{}", inline("zero")),
        _ => format!("[{}]\n{example}", section.path()),
    }
}

#[test]
fn the_example_of_every_key_is_read_without_a_complaint_about_it() {
    let folder = Folder::new();
    for key in KEYS {
        let job = if key.name == "format" {
            key.example.to_owned()
        } else {
            format!("format = 1\n{}\n", document(key.section, key.example))
        };
        let report = folder.report(&job);
        // Other keys are missing everywhere; this one is neither unknown nor of the wrong type.
        for complaint in ["unknown key", "expected TOML"] {
            assert!(!report.contains(complaint), "{key:?}\n{report}");
        }
        let path = match key.section.path() {
            "" => key.name.to_owned(),
            section => format!("{section}.{}", key.name),
        };
        let about = format!("error: `{path}`: expected");
        let complained = report.lines().any(|line| line.starts_with(&about) && !line.contains("found no such key"));
        let allowed = [
            "`axis.",
            "exclude.stretches.axis",
            "profile.axis",
            "bias.axis",
            "`bias.kind`",
            "`bias.file`",
            "window_table.file",
            "exclude.windows",
            "exclude.replicas",
        ];
        assert!(!complained || allowed.iter().any(|path| about.contains(path)), "{key:?}\n{report}");
    }
}

#[test]
fn no_key_is_documented_twice() {
    for (index, key) in KEYS.iter().enumerate() {
        assert!(!KEYS[..index].iter().any(|other| other.section == key.section && other.name == key.name), "{key:?}");
    }
}

#[test]
fn a_misspelt_key_is_not_missed_as_well() {
    let report = report(&[("bin_width", "bin_widht"), ("temperature", "temprature"), ("kind", "kinds")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temprature`: unknown key in `[system]`
 --> job.toml:4:1
  |
4 | temprature = 310.0
  | ^^^^^^^^^^
  |
  = help: did you mean `temperature`?

error: `bias.kinds`: unknown key in a bias
  --> job.toml:19:1
   |
19 | kinds = "harmonic"
   | ^^^^^
   |
   = help: did you mean `kind`?

error: `profile.bin_widht`: unknown key in `[profile]`
  --> job.toml:34:1
   |
34 | bin_widht = 0.05
   | ^^^^^^^^^
   |
   = help: did you mean `bin_width`?

3 problems in job.toml
"#]]
        .raw()
    );
}

/// Texts for the numbers below `count`, one after another.
fn repeated(count: u32, text: impl Fn(u32) -> String) -> String {
    (0..count).map(text).collect::<Vec<_>>().concat()
}

#[test]
fn twenty_of_very_many_problems_are_shown_and_the_rest_is_counted() {
    let windows = repeated(1000, |i| {
        format!("[[window]]\nname = \"w{i}\"\nfiles = [\"runs/old/w{i}.txt\"]\n[[window.bias]]\nkind = \"none\"\n")
    });
    let report = report(&[("[profile]", &format!("{windows}\n[profile]"))]);
    assert_eq!(report.matches("error: ").count(), 20, "{report}");
    assert!(report.contains("found nothing at `runs/old/w19.txt`"), "{report}");
    assert!(report.ends_with("\n\nand 980 more problems\n\n1000 problems in job.toml"), "{report}");
    assert_eq!(report.matches("   = help: there is no folder `runs`\n").count(), 20, "{report}");
}

#[test]
fn one_problem_beyond_twenty_is_one() {
    let unknown = repeated(21, |i| format!("key{i} = {i}\n"));
    let report = report(&[("energy_unit", &format!("{unknown}energy_unit"))]);
    assert!(report.ends_with("\n\nand 1 more problem\n\n21 problems in job.toml"), "{report}");
}

#[test]
fn a_file_of_data_given_as_a_job_is_one_problem() {
    let folder = Folder::new();
    let rows = repeated(1000, |i| format!("{i}.0 0.{i}\n"));
    folder.write("z.txt", &format!("# time z, k = 850\n\n{rows}"));
    assert_data_eq!(
        folder.load_file("z.txt").unwrap_err(),
        str![[r#"
error: expected a job in TOML, found a text without any key
 --> z.txt:3:1
  |
3 | 0.0 0.0
  | ^^^^^^^
  |
  = help: a job begins with `format = 1`; the files of the windows are named in it

1 problem in z.txt
"#]]
        .raw()
    );
}

#[test]
fn a_text_with_keys_of_another_kind_is_one_problem() {
    let folder = Folder::new();
    folder.write("run.ini", &"temp = 310 kelvin\nsteps = 5,000\n".repeat(40));
    assert_data_eq!(
        folder.load_file("run.ini").unwrap_err(),
        str![[r#"
error: expected a job in TOML, found a text with no key of a job: string values must be quoted, expected literal string
 --> run.ini:1:8
  |
1 | temp = 310 kelvin
  |        ^^^^^^^^^^
  |
  = help: a job begins with `format = 1`; the files of the windows are named in it

1 problem in run.ini
"#]]
        .raw()
    );
}

#[test]
fn the_first_five_faults_of_the_syntax_are_shown() {
    let broken = repeated(30, |i| format!("key{i} = 0,5\n"));
    let report = report(&[("[profile]", &format!("{broken}[profile]"))]);
    assert_eq!(report.matches("error: expected TOML").count(), 5, "{report}");
    assert_eq!(report.matches("= help: mend these first; there are more like them below").count(), 1, "{report}");
    assert!(report.ends_with("\n5 problems in job.toml"), "{report}");
}

#[test]
fn numbers_are_shown_without_the_digits_that_rounding_leaves() {
    for (typed, shown) in [
        ("-1.4937500000000001", "-1.49375"),
        ("-0.000000000045", "-4.5e-11"),
        ("-1e300", "-1e300"),
        ("-0.30000000000000004", "-0.3"),
        ("-0.0", "0"),
    ] {
        let report = report(&[("temperature = 310.0", &format!("temperature = {typed}"))]);
        let title = format!("error: `system.temperature`: expected a finite number above 0, found {shown}\n");
        assert!(report.starts_with(&title), "{report}");
    }
    let digits = "7".repeat(400);
    let report = report(&[("temperature = 310.0", &format!("temperature = {digits}.0"))]);
    let title = format!("expected a finite number above 0, found `{}…`, which is too large\n", "7".repeat(60));
    assert!(report.contains(&title), "{report}");
}
