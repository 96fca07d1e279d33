//! What a job says about axes and the columns that hold them.

use crate::support::{Folder, report, with};
use snapbox::{IntoData, assert_data_eq, str};

#[test]
fn an_axis_without_a_column_is_named() {
    let report = report(&[("columns = { z = 2 }", "columns = { height = 2 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.columns`: expected an entry for every axis, `z`, found none for `z`
  --> job.toml:13:11
   |
 7 | [[axis]]
   | -------- this axis
...
13 | columns = { height = 2 }
   |           ^^^^^^^^^^^^^^
   |
   = help: add its column, as in `z = { column = 2 }`

error: `series.columns`: expected the name of an axis, `z`, found `height`
  --> job.toml:13:13
   |
13 | columns = { height = 2 }
   |             ^^^^^^

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_misspelt_axis_gets_the_nearest_name() {
    let report = report(&[("name = \"z\"", "name = \"depth\""), ("columns = { z = 2 }", "columns = { dpeth = 2 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.columns`: expected the name of an axis, `depth`, found `dpeth`
  --> job.toml:13:13
   |
13 | columns = { dpeth = 2 }
   |             ^^^^^
   |
   = help: did you mean `depth`?

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn two_values_cannot_share_a_column() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 1 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.columns.z`: expected a column of its own, found `1` again
  --> job.toml:13:17
   |
12 | time = { column = 1, unit = "ps" }
   |                   - already used for the time
13 | columns = { z = 1 }
   |                 ^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_column_in_an_angle_does_not_serve_an_axis_in_a_length() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = { column = 2, unit = \"deg\" } }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.columns.unit`: expected a unit of a length, found `deg`
  --> job.toml:13:38
   |
 9 | unit = "nm"
   |        ---- axis `z` is in nm
...
13 | columns = { z = { column = 2, unit = "deg" } }
   |                                      ^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn several_axes_make_every_axis_key_required() {
    let report = report(&[
        ("[series]", "[[axis]]\nname = \"tilt\"\nunit = \"deg\"\n\n[series]"),
        ("columns = { z = 2 }", "columns = { z = 2, tilt = 3 }"),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.axis`: expected the name of an axis, found no such key
  --> job.toml:22:1
   |
22 | [[window.bias]]
   | ^^^^^^^^^^^^^^^
   |
   = help: with several axes, add one of `z`, `tilt`

error: `bias.axis`: expected the name of an axis, found no such key
  --> job.toml:30:1
   |
30 | [[window.bias]]
   | ^^^^^^^^^^^^^^^
   |
   = help: with several axes, add one of `z`, `tilt`

error: `profile.axis`: expected the name of an axis, found no such key
  --> job.toml:35:1
   |
35 | [profile]
   | ^^^^^^^^^
   |
   = help: with several axes, add one of `z`, `tilt`

3 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn two_axes_of_one_name_are_both_shown() {
    let report = report(&[("[series]", "[[axis]]\nname = \"z\"\nunit = \"deg\"\n\n[series]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `axis.name`: expected a name for one axis only, found `z` again
  --> job.toml:12:8
   |
 8 | name = "z"
   |        --- first here
...
12 | name = "z"
   |        ^^^
   |
   = help: give each axis a name of its own

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn faulty_axes_cause_no_further_complaints() {
    let report = report(&[("unit = \"nm\"", "unit = \"inch\"\nperiod = -2.4"), ("to = 1.1\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `axis.unit`: expected one of `nm`, `angstrom`, `deg`, `rad` or `none`, found the text `inch`
 --> job.toml:9:8
  |
9 | unit = "inch"
  |        ^^^^^^

error: `axis.period`: expected a finite number above 0, found -2.4
  --> job.toml:10:10
   |
10 | period = -2.4
   |          ^^^^

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn columns_stand_in_the_order_of_the_axes() {
    let job = with(&[
        ("[series]", "[[axis]]\nname = \"tilt\"\nunit = \"deg\"\n\n[series]"),
        ("columns = { z = 2 }", "columns = { tilt = { column = \"angle\", unit = \"rad\" }, z = 2 }"),
        ("kind = \"harmonic\"", "kind = \"harmonic\"\naxis = \"z\""),
        ("kind = \"harmonic\"\ncenter = 0.9", "kind = \"harmonic\"\naxis = \"z\"\ncenter = 0.9"),
        ("[profile]", "[profile]\naxis = \"z\""),
    ]);
    let job = Folder::new().load(&job).unwrap();
    let columns: Vec<String> = job.layout.columns.iter().map(ToString::to_string).collect();
    assert_eq!(columns, ["2", "angle"]);
    assert!((job.columns[1].factor - 180.0 / std::f64::consts::PI).abs() < 1e-12);
    assert_eq!(job.profile.bins.axis(), 0);
}
