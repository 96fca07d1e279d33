//! What a job says about biases.

use crate::support::report;
use snapbox::{IntoData, assert_data_eq, str};

#[test]
fn a_force_constant_per_length_does_not_serve_an_axis_of_angles() {
    let report = report(&[
        ("unit = \"nm\"", "unit = \"deg\""),
        ("force_constant = 850.0\n", "force_constant = 850.0\nforce_constant_unit = \"kJ/mol/nm^2\"\n"),
        (
            "force_constant = 850.0\n\n[profile]",
            "force_constant = 850.0\nforce_constant_unit = \"kJ/mol/rad^2\"\n\n[profile]",
        ),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.force_constant_unit`: expected an energy over a squared angle, found `kJ/mol/nm^2`
  --> job.toml:22:23
   |
 9 | unit = "deg"
   |        ----- axis `z` is in deg
...
22 | force_constant_unit = "kJ/mol/nm^2"
   |                       ^^^^^^^^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_force_constant_on_an_axis_of_angles_needs_its_unit() {
    let report = report(&[("unit = \"nm\"", "unit = \"deg\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.force_constant_unit`: expected a unit on an axis of angles, found no such key
  --> job.toml:18:1
   |
18 | [[window.bias]]
   | ^^^^^^^^^^^^^^^ whether this is per degree or per radian cannot be told
   |
   = help: add `force_constant_unit = "kJ/mol/rad^2"` or `force_constant_unit = "kJ/mol/deg^2"`

error: `bias.force_constant_unit`: expected a unit on an axis of angles, found no such key
  --> job.toml:26:1
   |
26 | [[window.bias]]
   | ^^^^^^^^^^^^^^^ whether this is per degree or per radian cannot be told
   |
   = help: add `force_constant_unit = "kJ/mol/rad^2"` or `force_constant_unit = "kJ/mol/deg^2"`

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_harmonic_is_refused_on_an_axis_with_a_period() {
    let report = report(&[("unit = \"nm\"", "unit = \"nm\"\nperiod = 2.4")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.kind`: expected a kind that is defined on an axis with a period, found `harmonic`
  --> job.toml:20:8
   |
 7 | [[axis]]
   | -------- axis `z` is one with a period
...
20 | kind = "harmonic"
   |        ^^^^^^^^^^
   |
   = help: use `periodic-harmonic`, which acts on the nearest image

error: `bias.kind`: expected a kind that is defined on an axis with a period, found `harmonic`
  --> job.toml:28:8
   |
 7 | [[axis]]
   | -------- axis `z` is one with a period
...
28 | kind = "harmonic"
   |        ^^^^^^^^^^
   |
   = help: use `periodic-harmonic`, which acts on the nearest image

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_periodic_harmonic_needs_a_period() {
    let report = report(&[("kind = \"harmonic\"", "kind = \"periodic-harmonic\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.kind`: expected a kind that is defined on an axis without a period, found `periodic-harmonic`
  --> job.toml:19:8
   |
 7 | [[axis]]
   | -------- axis `z` is one without a period
...
19 | kind = "periodic-harmonic"
   |        ^^^^^^^^^^^^^^^^^^^
   |
   = help: use `harmonic`, or give the axis its `period`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_flat_bottom_wider_than_half_the_period_is_refused() {
    let report = report(&[
        ("unit = \"nm\"", "unit = \"nm\"\nperiod = 2.4"),
        ("kind = \"harmonic\"", "kind = \"flat-bottomed\"\nhalf_width = 1.3"),
        ("kind = \"harmonic\"", "kind = \"flat-bottomed\"\nhalf_width = 0.1"),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.half_width`: expected less than half the period of 2.4, found 1.3
  --> job.toml:21:14
   |
21 | half_width = 1.3
   |              ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_half_width_beside_a_center_in_another_unit_needs_its_own() {
    let report =
        report(&[("kind = \"harmonic\"", "kind = \"flat-bottomed\"\ncenter_unit = \"angstrom\"\nhalf_width = 0.1")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.half_width_unit`: expected a unit of the axis' kind, found no such key
  --> job.toml:18:1
   |
18 | [[window.bias]]
   | ^^^^^^^^^^^^^^^ a bias of the kind `flat-bottomed` needs `half_width_unit`
19 | kind = "flat-bottomed"
20 | center_unit = "angstrom"
   |               ---------- here the unit is not that of the axis, nm
   |
   = help: add it, as in `half_width_unit = "nm"`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_side_is_above_or_below() {
    let report =
        report(&[("kind = \"harmonic\"\ncenter = 0.7", "kind = \"one-sided\"\nbound = 0.7\nside = \"abvoe\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.side`: expected `above` or `below`, found the text `abvoe`
  --> job.toml:21:8
   |
21 | side = "abvoe"
   |        ^^^^^^^
   |
   = help: did you mean `above`?

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn none_stands_alone() {
    let report =
        report(&[("[[window]]\nname = \"right\"", "[[window.bias]]\nkind = \"none\"\n\n[[window]]\nname = \"right\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.kind`: expected `none` as the only bias of its window, found others beside it
  --> job.toml:24:8
   |
24 | kind = "none"
   |        ^^^^^^
   |
   = help: remove it, or the other terms

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_column_outside_the_table_of_windows_is_refused() {
    let report = report(&[("center = 0.7", "center = { column = \"center\" }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.center`: expected a number, found a table
  --> job.toml:20:10
   |
20 | center = { column = "center" }
   |          ^^^^^^^^^^^^^^^^^^^^^
   |
   = help: only the values of `[[window_table.bias]]` can be taken from a column

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_column_of_a_table_value_must_be_text() {
    let report = report(&[(
        "[profile]",
        "[window_table]\nfile = \"w.csv\"\nfiles_column = 3\n[[window_table.bias]]\nkind = \"harmonic\"\ncenter = { colum = \"c\" }\nforce_constant = { column = 2 }\n\n[profile]",
    )]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window_table.file`: expected a file, found nothing at `w.csv`
  --> job.toml:32:8
   |
32 | file = "w.csv"
   |        ^^^^^^^
   |
   = help: paths are relative to the folder of the job

error: `window_table.files_column`: expected text, found 3
  --> job.toml:33:16
   |
33 | files_column = 3
   |                ^

error: `window_table.bias.colum`: unknown key in `window_table.bias`
  --> job.toml:36:12
   |
36 | center = { colum = "c" }
   |            ^^^^^
   |
   = help: did you mean `column`?

error: `window_table.bias.column`: expected text, found 2
  --> job.toml:37:29
   |
37 | force_constant = { column = 2 }
   |                             ^

4 problems in job.toml
"#]]
        .raw()
    );
}
