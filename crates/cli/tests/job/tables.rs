//! What a job says about tables of windows and of biases, word for word.

use crate::support::{Folder, GOOD, report, with};
use snapbox::{IntoData, assert_data_eq, str};

const TABLE_KEYS: &str = r#"
[window_table]
file = "windows.csv"
name_column = "name"
files_column = "file"
[[window_table.bias]]
kind = "harmonic"
center = { column = "center" }
force_constant = { column = "k" }
"#;

/// The report on the good job with a table of two windows of its own in place of the job's.
fn table_report(table: &str, changes: &[(&str, &str)]) -> String {
    let folder = Folder::new();
    folder.write("windows.csv", table);
    folder.report(&table_job(changes))
}

fn table_job(changes: &[(&str, &str)]) -> String {
    let keys = changes.iter().fold(TABLE_KEYS.to_owned(), |keys, (from, to)| {
        assert!(keys.contains(from), "`{from}` is not in the keys");
        keys.replacen(from, to, 1)
    });
    let (start, end) = (GOOD.find("[[window]]").unwrap_or(0), GOOD.find("[profile]").unwrap_or(0));
    format!("{}{keys}\n{}", &GOOD[..start], &GOOD[end..])
}

const TABLE: &str = "name,file,center,k\nleft,left.txt,0.7,850\nright,right1.txt;right2.txt,0.9,850\n";

#[test]
fn a_table_of_windows_serves_as_well_as_windows_in_the_job() {
    let folder = Folder::new();
    folder.write("windows.csv", TABLE);
    let from_table = folder.load(&table_job(&[])).unwrap_or_else(|report| panic!("{report}"));
    let from_job = folder.load(GOOD).unwrap_or_else(|report| panic!("{report}"));
    assert_eq!(from_table.windows, from_job.windows);
}

#[test]
fn rows_of_one_name_are_replicas_where_a_column_tells_them_apart() {
    let folder = Folder::new();
    folder.write("windows.csv", "name,start,file,center,k\na,x,left.txt,0.7,850\na,y,right1.txt,0.7,850\n");
    let job = table_job(&[("name_column", "replica_column = \"start\"\nname_column")]);
    let job = folder.load(&job).unwrap_or_else(|report| panic!("{report}"));
    assert_eq!(job.windows.len(), 1);
    assert_eq!(job.windows[0].replicas, [[folder.path("left.txt")], [folder.path("right1.txt")]]);
}

#[test]
fn windows_without_names_are_numbered_where_their_files_do_not_name_them() {
    let folder = Folder::new();
    folder.write("windows.csv", TABLE);
    let job = folder.load(&table_job(&[("name_column = \"name\"\n", "")])).unwrap_or_else(|report| panic!("{report}"));
    let names: Vec<&str> = job.windows.iter().map(|window| window.name.as_str()).collect();
    assert_eq!(names, ["w0", "w1"]);
}

#[test]
fn patterns_are_expanded_in_natural_order() {
    let folder = Folder::new();
    for part in [10, 9, 2] {
        folder.write(&format!("run [a]/part{part}.txt"), "0.0 0.7\n");
    }
    folder.write("run [a]/.hidden.txt", "");
    let job =
        folder.load(&with(&[("\"left.txt\"", "\"run [[]a]/*.txt\"")])).unwrap_or_else(|report| panic!("{report}"));
    let names: Vec<_> = job.windows[0].replicas[0].iter().filter_map(|path| path.file_name()?.to_str()).collect();
    assert_eq!(names, ["part2.txt", "part9.txt", "part10.txt"]);
}

#[test]
fn a_folder_that_looks_like_a_pattern_is_none() {
    let folder = Folder::new();
    folder.write("[jobs] *?/run1.txt", "0.0 0.7\n");
    folder.write("[jobs] *?/run2.txt", "0.0 0.7\n");
    let job = with(&[("\"left.txt\"", "\"run?.txt\""), ("\"right1.txt\", \"right2.txt\"", "\"../left.txt\"")]);
    folder.write("[jobs] *?/job.toml", &job);
    let job = folder.load_file("[jobs] *?/job.toml").unwrap_or_else(|report| panic!("{report}"));
    assert_eq!(job.windows[0].replicas[0].len(), 2);
}

#[test]
fn a_missing_table_of_windows_is_named() {
    let report = Folder::new().report(&table_job(&[]));
    assert_data_eq!(
        report,
        str![[r#"
error: `window_table.file`: expected a file, found nothing at `windows.csv`
  --> job.toml:17:8
   |
17 | file = "windows.csv"
   |        ^^^^^^^^^^^^^
   |
   = help: paths are relative to the folder of the job

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_empty_table_of_windows_is_refused() {
    assert_data_eq!(
        table_report("# nothing yet\nname,file,center,k\n", &[]),
        str![[r#"
error: `window_table.file`: expected a header and at least one row, found none in `windows.csv`
  --> job.toml:17:8
   |
17 | file = "windows.csv"
   |        ^^^^^^^^^^^^^
   |
   = help: the first line that is no comment names the columns, each line below it is a window

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_column_gets_the_nearest_name() {
    let report =
        table_report(&TABLE.replace("center", "centre"), &[("files_column = \"file\"", "files_column = \"path\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window_table.files_column`: expected a column of the table, `name`, `file`, `centre`, `k`, found `path`
  --> job.toml:19:16
   |
19 | files_column = "path"
   |                ^^^^^^
   |
  ::: windows.csv:1:1
   |
 1 | name,file,centre,k
   | ------------------ the header

error: `window_table.bias.center`: expected a column of the table, `name`, `file`, `centre`, `k`, found `center`
  --> job.toml:22:21
   |
22 | center = { column = "center" }
   |                     ^^^^^^^^
   |
  ::: windows.csv:1:1
   |
 1 | name,file,centre,k
   | ------------------ the header
   |
   = help: did you mean `centre`?

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_column_that_is_there_twice_is_refused() {
    assert_data_eq!(
        table_report(&TABLE.replace(",center,k", ",k,k"), &[("\"center\"", "\"k\"")]),
        str![[r#"
error: `window_table.bias.center`: expected one column `k`, found several
  --> job.toml:22:21
   |
22 | center = { column = "k" }
   |                     ^^^
   |
  ::: windows.csv:1:11
   |
 1 | name,file,k,k
   |           - - another
   |           |
   |           one
   |
   = help: give the columns different names

error: `window_table.bias.force_constant`: expected one column `k`, found several
  --> job.toml:23:29
   |
23 | force_constant = { column = "k" }
   |                             ^^^
   |
  ::: windows.csv:1:11
   |
 1 | name,file,k,k
   |           - - another
   |           |
   |           one
   |
   = help: give the columns different names

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_cell_that_is_no_number_is_shown_in_the_table() {
    let table = "name,file,center,k\nleft,left.txt,0.7,850\n\n# the next one is wrong\nright,right1.txt,  wide , nan\n";
    assert_data_eq!(
        table_report(table, &[]),
        str![[r#"
error: `bias.center`: expected a finite number, found `wide`
  --> windows.csv:5:20
   |
 5 | right,right1.txt,  wide , nan
   |                    ^^^^
   |
  ::: job.toml:22:21
   |
22 | center = { column = "center" }
   |                     -------- taken from this column

error: `bias.force_constant`: expected a finite number above 0, found `nan`
  --> windows.csv:5:27
   |
 5 | right,right1.txt,  wide , nan
   |                           ^^^
   |
  ::: job.toml:23:29
   |
23 | force_constant = { column = "k" }
   |                             --- taken from this column

2 problems in windows.csv
"#]]
        .raw()
    );
}

#[test]
fn a_row_with_a_cell_too_few_is_shown_with_the_header() {
    assert_data_eq!(
        table_report("name,file,center,k\nleft,left.txt,0.7\n", &[]),
        str![[r#"
error: expected 4 cells in a row, as in the header, found 3
 --> windows.csv:2:1
  |
1 | name,file,center,k
  | ------------------ the header
2 | left,left.txt,0.7
  | ^^^^^^^^^^^^^^^^^
  |
  = help: put cells that hold a comma into double quotes

1 problem in windows.csv
"#]]
        .raw()
    );
}

#[test]
fn a_file_of_a_row_that_is_missing_is_shown_in_the_table() {
    assert_data_eq!(
        table_report(&TABLE.replace("left.txt", "left.text"), &[]),
        str![[r#"
error: `files`: expected a file, found nothing at `left.text`
 --> windows.csv:2:6
  |
2 | left,left.text,0.7,850
  |      ^^^^^^^^^
  |
  = help: did you mean `left.txt`?
  = help: paths are relative to the folder of the job

1 problem in windows.csv
"#]]
        .raw()
    );
}

#[test]
fn two_rows_of_one_name_are_both_shown() {
    assert_data_eq!(
        table_report(&TABLE.replace("right,", "left,"), &[]),
        str![[r#"
error: `window.name`: expected a name for one window only, found `left` again
 --> windows.csv:3:1
  |
2 | left,left.txt,0.7,850
  | ---- first here
3 | left,right1.txt;right2.txt,0.9,850
  | ^^^^
  |
  = help: give independent starts of one window as its `replicas`, other windows another name

1 problem in windows.csv
"#]]
        .raw()
    );
}

#[test]
fn replicas_of_one_window_have_one_bias_and_one_place_each() {
    let table = "name,start,file,center,k\na,1,left.txt,0.7,850\na,2,right1.txt,0.8,850\na,1,right2.txt,0.7,850\n";
    assert_data_eq!(
        table_report(table, &[("name_column", "replica_column = \"start\"\nname_column")]),
        str![[r#"
error: `bias.center`: expected `0.7`, as in the first replica of window `a`, found `0.8`
 --> windows.csv:3:16
  |
2 | a,1,left.txt,0.7,850
  |              --- the first replica
3 | a,2,right1.txt,0.8,850
  |                ^^^
  |
  = help: replicas of a window have the same bias; give windows of another bias another name

error: `window_table.replica_column`: expected a replica of window `a` once, found `1` again
 --> windows.csv:4:3
  |
2 | a,1,left.txt,0.7,850
  |   - first here
3 | a,2,right1.txt,0.8,850
4 | a,1,right2.txt,0.7,850
  |   ^
  |
  = help: put the segments of one replica into one row, with `;` between them

2 problems in windows.csv
"#]]
        .raw()
    );
}

#[test]
fn replicas_need_names() {
    assert_data_eq!(
        table_report(TABLE, &[("name_column = \"name\"", "replica_column = \"name\"")]),
        str![[r#"
error: `window_table.replica_column`: expected a `name_column` beside it, found no such key
  --> job.toml:18:18
   |
18 | replica_column = "name"
   |                  ^^^^^^
   |
   = help: rows are replicas of one window where their names are equal, so a column must hold the names

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_fault_that_all_rows_share_is_reported_once() {
    let changes = [("{ column = \"k\" }", "850.0\nforce_constant_unit = \"kJ/mol/deg^2\"")];
    assert_data_eq!(
        table_report(TABLE, &changes),
        str![[r#"
error: `bias.force_constant_unit`: expected an energy over a squared length, found `kJ/mol/deg^2`
  --> job.toml:24:23
   |
 9 | unit = "nm"
   |        ---- axis `z` is in nm
...
24 | force_constant_unit = "kJ/mol/deg^2"
   |                       ^^^^^^^^^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_table_of_a_bias_is_named() {
    let report = report(&[(
        "kind = \"harmonic\"\ncenter = 0.7\nforce_constant = 850.0",
        "kind = \"tabulated\"\nfile = \"bias.txt\"",
    )]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.file`: expected a file, found nothing at `bias.txt`
  --> job.toml:20:8
   |
20 | file = "bias.txt"
   |        ^^^^^^^^^^
   |
   = help: paths are relative to the folder of the job

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_table_of_a_bias_must_increase() {
    let folder = Folder::new();
    folder.write("bias.txt", "# z energy\n0.6 4.0\n0.8 0.5\n0.7 3.0\n");
    let job = with(&[(
        "kind = \"harmonic\"\ncenter = 0.7\nforce_constant = 850.0",
        "kind = \"tabulated\"\nfile = \"bias.txt\"\ninterpolation = \"cubic\"\noutside = \"clamp\"",
    )]);
    assert_data_eq!(
        folder.report(&job),
        str![[r#"
error: `bias.outside`: expected `error`, `hold` or `extend`, found the text `clamp`
  --> job.toml:22:11
   |
22 | outside = "clamp"
   |           ^^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
    assert_data_eq!(
        folder.report(&job.replace("clamp", "hold")),
        str![[r#"
error: `bias.file`: expected positions that increase, found 0.7 after 0.8
  --> bias.txt:4:1
   |
 4 | 0.7 3.0
   | ^^^^^^^
   |
  ::: job.toml:20:8
   |
20 | file = "bias.txt"
   |        ---------- the table is asked for here
   |
   = help: sort the table and keep each position once

1 problem in bias.txt
"#]]
        .raw()
    );
}

#[test]
fn a_fault_in_a_table_of_a_bias_is_placed_in_its_file() {
    let folder = Folder::new();
    folder.write("bias.txt", "# z energy\n0.6 4.0\n0.8 lots\n0.9 3.0\n");
    let job = with(&[(
        "kind = \"harmonic\"\ncenter = 0.7\nforce_constant = 850.0",
        "kind = \"tabulated\"\nfile = \"bias.txt\"\nposition_unit = \"angstrom\"",
    )]);
    assert_data_eq!(
        folder.report(&job),
        str![[r#"
error: `bias.file`: expected a number in column 2, found `lots`
  --> bias.txt:3:5
   |
 3 | 0.8 lots
   |     ^^^^
   |
  ::: job.toml:20:8
   |
20 | file = "bias.txt"
   |        ---------- the table is asked for here
   |
   = help: repair the field, choose another column, or add the beginning of the line to the comment prefixes

1 problem in bias.txt
"#]]
        .raw()
    );
}

#[test]
fn a_table_with_other_separators_is_told_so_once() {
    for (sign, what, rest) in [
        (";", "semicolons", "; several files of one row stay separated by `;`"),
        ("\t", "tabs", ""),
        ("   ", "blanks", ""),
    ] {
        let report = table_report(&TABLE.replace("right1.txt;right2.txt", "right1.txt").replace(',', sign), &[]);
        let title = format!(
            "error: `window_table.file`: expected commas between the columns, found {what}\n  --> windows.csv:1:1\n"
        );
        assert!(report.starts_with(&title), "{report}");
        let help =
            format!("= help: write commas in place of the {what}, and points in place of any decimal commas{rest}\n");
        assert!(report.contains(&help), "{report}");
        assert!(report.ends_with("\n1 problem in windows.csv"), "{report}");
    }
}

#[test]
fn a_table_of_one_column_may_have_blanks_in_its_name() {
    let folder = Folder::new();
    folder.write("windows.csv", "the file\nleft.txt\nright1.txt\n");
    let job = table_job(&[
        ("name_column = \"name\"\nfiles_column = \"file\"", "files_column = \"the file\""),
        ("{ column = \"center\" }", "0.7"),
        ("{ column = \"k\" }", "850.0"),
    ]);
    assert_eq!(folder.load(&job).unwrap_or_else(|report| panic!("{report}")).windows.len(), 2);
}

#[test]
fn problems_in_several_files_are_counted_apart() {
    let report = table_report(
        &TABLE.replace("0.7", "wide").replace("0.9", "high"),
        &[("[window_table]", "[window_tables]\n[window_table]")],
    );
    assert!(report.ends_with("\n3 problems: 1 in job.toml, 2 in windows.csv"), "{report}");
}

#[test]
fn a_table_that_is_a_folder_does_not_offer_itself() {
    let folder = Folder::new();
    folder.write("windows.csv/a", "");
    assert_data_eq!(
        folder.report(&table_job(&[])),
        str![[r#"
error: `window_table.file`: expected a file, found the folder `windows.csv`
  --> job.toml:17:8
   |
17 | file = "windows.csv"
   |        ^^^^^^^^^^^^^
   |
   = help: name the table in it

1 problem in job.toml
"#]]
        .raw()
    );
}

/// The good job with tabulated biases in both windows.
fn tabulated_job(left: &str, right: &str) -> String {
    let harmonic = |center: &str| format!("kind = \"harmonic\"\ncenter = {center}\nforce_constant = 850.0");
    let tabulated = |file: &str| format!("kind = \"tabulated\"\nfile = \"{file}\"");
    with(&[(&harmonic("0.7"), &tabulated(left)), (&harmonic("0.9"), &tabulated(right))])
}

#[test]
fn a_table_of_a_bias_that_is_a_folder_does_not_offer_itself() {
    let folder = Folder::new();
    folder.write("bias.txt/a", "");
    folder.write("wall.txt", "0.6 4.0\n0.8 0.5\n");
    assert_data_eq!(
        folder.report(&tabulated_job("bias.txt", "wall.txt")),
        str![[r#"
error: `bias.file`: expected a file, found the folder `bias.txt`
  --> job.toml:20:8
   |
20 | file = "bias.txt"
   |        ^^^^^^^^^^
   |
   = help: name the table in it

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn the_table_of_another_bias_is_not_what_was_meant() {
    let folder = Folder::new();
    folder.write("bias2.txt", "0.6 4.0\n0.8 0.5\n");
    let report = folder.report(&tabulated_job("bias1.txt", "bias2.txt"));
    assert!(report.contains("found nothing at `bias1.txt`") && !report.contains("did you mean"), "{report}");
    folder.write("bias3.txt", "0.6 4.0\n0.8 0.5\n");
    let report = folder.report(&tabulated_job("bias1.txt", "bias2.txt"));
    assert!(report.contains("= help: did you mean `bias3.txt`?"), "{report}");
}

#[test]
fn a_fault_of_a_table_is_told_once_however_many_windows_use_it() {
    let folder = Folder::new();
    folder.write("bias.txt", "0.6 4.0\n0.8 0,5\n");
    let report = folder.report(&tabulated_job("bias.txt", "bias.txt"));
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.file`: expected a number in column 2, found `0,5`
  --> bias.txt:2:5
   |
 2 | 0.8 0,5
   |     ^^^
   |
  ::: job.toml:20:8
   |
20 | file = "bias.txt"
   |        ---------- the table is asked for here
   |
   = help: write points in place of decimal commas

1 problem in bias.txt
"#]]
        .raw()
    );
}

#[test]
fn a_table_that_cannot_be_shown_is_placed_in_words() {
    let folder = Folder::new();
    // Larger than what is shown.
    folder.write("bias.txt", &format!("{}0.8 lots\n", "# much to say\n".repeat(100_000)));
    folder.write("wall.txt", "0.6 4.0\n0.8 0.5\n");
    let report = folder.report(&tabulated_job("bias.txt", "wall.txt"));
    assert!(
        report.starts_with(
            "error: `bias.file`: bias.txt:100001:5: expected a number in column 2, found `lots`\n  --> job.toml:20:8\n"
        ),
        "{report}"
    );
    assert!(report.ends_with("\n1 problem in job.toml"), "{report}");
}

#[test]
fn a_table_longer_than_the_period_is_shown_with_readable_numbers() {
    let folder = Folder::new();
    folder.write("bias.txt", "1 4.0\n2 4.0\n8 0.5\n");
    let job = tabulated_job("bias.txt", "bias.txt")
        .replace("unit = \"nm\"", "unit = \"nm\"\nperiod = 0.60000000000000001")
        .replace("file = \"bias.txt\"", "file = \"bias.txt\"\nposition_unit = \"angstrom\"");
    let report = folder.report(&job);
    assert!(
        report.contains("`bias.file`: expected a table of at most one period, 0.6, found one of 0.7\n"),
        "{report}"
    );
}
