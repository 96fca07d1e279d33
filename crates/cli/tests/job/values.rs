//! What a job says about single values and keys: one report each, word for word.

use crate::support::{Folder, GOOD, report};
use snapbox::{IntoData, assert_data_eq, str};

#[test]
fn an_unknown_key_gets_the_nearest_name() {
    let report = report(&[("center = 0.7", "centre = 0.7")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.centre`: unknown key in a bias
  --> job.toml:20:1
   |
20 | centre = 0.7
   | ^^^^^^
   |
   = help: did you mean `center`?

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_unknown_section_gets_the_nearest_name() {
    let report = report(&[("[profile]", "[profiles]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profiles`: unknown key in a job
  --> job.toml:31:2
   |
31 | [profiles]
   |  ^^^^^^^^
   |
   = help: did you mean `profile`?

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_key_is_shown_at_its_section() {
    let report = report(&[("temperature = 310.0\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temperature`: expected a number above 0, in kelvin, found no such key
 --> job.toml:3:1
  |
3 | [system]
  | ^^^^^^^^ no `temperature` in `[system]`
  |
  = help: add it, as in `temperature = 310.0`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn text_is_no_number() {
    let report = report(&[("temperature = 310.0", "temperature = \"310 K\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temperature`: expected a finite number above 0, found the text `310 K`
 --> job.toml:4:15
  |
4 | temperature = "310 K"
  |               ^^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_quoted_number_is_to_be_unquoted() {
    let report = report(&[("temperature = 310.0", "temperature = \"310\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temperature`: expected a finite number above 0, found the text `310`
 --> job.toml:4:15
  |
4 | temperature = "310"
  |               ^^^^^
  |
  = help: write the number without quotes

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn nan_is_no_temperature() {
    let report = report(&[("temperature = 310.0", "temperature = nan")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temperature`: expected a finite number above 0, found nan
 --> job.toml:4:15
  |
4 | temperature = nan
  |               ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn infinity_is_no_center() {
    let report = report(&[("center = 0.7", "center = -inf")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.center`: expected a finite number, found -inf
  --> job.toml:20:10
   |
20 | center = -inf
   |          ^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_number_too_large_is_not_taken_for_one() {
    let report = report(&[("center = 0.7", "center = 1e999")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.center`: expected a finite number, found `1e999`, which is too large
  --> job.toml:20:10
   |
20 | center = 1e999
   |          ^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_temperature_below_zero_is_refused() {
    let report = report(&[("temperature = 310.0", "temperature = -12.5")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.temperature`: expected a finite number above 0, found -12.5
 --> job.toml:4:15
  |
4 | temperature = -12.5
  |               ^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_force_constant_of_zero_is_refused() {
    let report = report(&[("force_constant = 850.0", "force_constant = 0")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.force_constant`: expected a finite number above 0, found 0
  --> job.toml:21:18
   |
21 | force_constant = 0
   |                  ^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_unknown_unit_is_answered_with_all_units() {
    let report = report(&[("\"kJ/mol\"", "\"kJ\"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `system.energy_unit`: expected one of `kJ/mol`, `kcal/mol`, `kT` or `eV`, found the text `kJ`
 --> job.toml:5:15
  |
5 | energy_unit = "kJ"
  |               ^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_missing_unit_of_an_axis_is_not_guessed() {
    let report = report(&[("unit = \"nm\"\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `axis.unit`: expected `nm`, `angstrom`, `deg`, `rad` or `none`, found no such key
 --> job.toml:7:1
  |
7 | [[axis]]
  | ^^^^^^^^ no `unit` in `[[axis]]`
  |
  = help: add it, as in `unit = "nm"`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_unknown_kind_gets_the_nearest_name() {
    let report = report(&[("kind = \"harmonic\"", "kind = \"harmonci\"")]);
    assert_data_eq!(report, str![[r#"
error: `bias.kind`: expected `harmonic`, `periodic-harmonic`, `linear`, `one-sided`, `flat-bottomed`, `tabulated` or `none`, found the text `harmonci`
  --> job.toml:19:8
   |
19 | kind = "harmonci"
   |        ^^^^^^^^^^
   |
   = help: did you mean `harmonic`?

1 problem in job.toml
"#]].raw());
}

#[test]
fn a_bias_without_a_kind_is_told_the_kinds() {
    let report = report(&[("kind = \"harmonic\"\n", "")]);
    assert_data_eq!(report, str![[r#"
error: `bias.kind`: expected the shape of the bias, found no such key
  --> job.toml:18:1
   |
18 | [[window.bias]]
   | ^^^^^^^^^^^^^^^
   |
   = help: add it, as in `kind = "harmonic"`; the other kinds are `periodic-harmonic`, `linear`, `one-sided`, `flat-bottomed`, `tabulated` and `none`

1 problem in job.toml
"#]].raw());
}

#[test]
fn a_key_of_another_kind_is_named() {
    let report = report(&[("center = 0.7", "center = 0.7\nslope = 3.0")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.slope`: a bias of the kind `harmonic` has no such key
  --> job.toml:21:1
   |
21 | slope = 3.0
   | ^^^^^
   |
   = help: its keys are `kind`, `axis`, `center`, `center_unit`, `force_constant`, `force_constant_unit`, `convention`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_kind_misses_its_own_key() {
    let report = report(&[("center = 0.7\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.center`: expected a number, found no such key
  --> job.toml:18:1
   |
18 | [[window.bias]]
   | ^^^^^^^^^^^^^^^ a bias of the kind `harmonic` needs `center`
   |
   = help: add it, as in `center = 1.7`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn another_format_is_the_only_problem() {
    let report = report(&[("format = 1", "format = 3"), ("center = 0.7", "centre = 0.7")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `format`: expected the number 1, found 3
 --> job.toml:1:10
  |
1 | format = 3
  |          ^
  |
  = help: this version of the program reads jobs of format 1 only

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_job_without_a_window_is_told_how_to_add_one() {
    let start = GOOD.find("[[window]]").unwrap();
    let end = GOOD.find("[profile]").unwrap();
    let job = format!("{}{}", &GOOD[..start], &GOOD[end..]);
    assert_data_eq!(
        Folder::new().report(&job),
        str![[r#"
error: `window`: expected at least one window, found none
 --> job.toml:1:1
  |
1 | format = 1
  | ^
  |
  = help: add a `[[window]]` with `name` and `files`, or a `[window_table]`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_axis_in_single_brackets_is_told_of_double_ones() {
    let report = report(&[("[[axis]]", "[axis]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `axis`: expected a list of tables, found a table
 --> job.toml:7:1
  |
7 | [axis]
  | ^^^^^^
  |
  = help: write the header with two brackets, `[[axis]]`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_date_is_no_name() {
    let report = report(&[("name = \"left\"", "name = 1979-05-27")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.name`: expected text, found the date 1979-05-27
  --> job.toml:16:8
   |
16 | name = 1979-05-27
   |        ^^^^^^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_list_is_no_number() {
    let report = report(&[("center = 0.7", "center = [0.7]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `bias.center`: expected a single value, found a list
  --> job.toml:20:10
   |
20 | center = [0.7]
   |          ^^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_blank_name_is_refused() {
    let report = report(&[("name = \"left\"", "name = \"  \"")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `window.name`: expected text, found empty text
  --> job.toml:16:8
   |
16 | name = "  "
   |        ^^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_tolerance_out_of_range_is_told_the_range() {
    let report = report(&[("[profile]", "[solver]\ntolerance = 1e-3\ncell_error = 0.5\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `solver.tolerance`: expected a number from 1e-13 to 1e-4, found 0.001
  --> job.toml:32:13
   |
32 | tolerance = 1e-3
   |             ^^^^

error: `solver.cell_error`: expected a number from 1e-8 to 1e-2, found 0.5
  --> job.toml:33:14
   |
33 | cell_error = 0.5
   |              ^^^

2 problems in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_unknown_method_gets_the_nearest_name() {
    let report = report(&[("[profile]", "[solver]\nmethod = \"newtn\"\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `solver.method`: expected `newton`, `self-consistent`, `trust-region` or `l-bfgs`, found the text `newtn`
  --> job.toml:32:10
   |
32 | method = "newtn"
   |          ^^^^^^^
   |
   = help: did you mean `newton`?

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_seed_below_zero_is_refused() {
    let report = report(&[("[profile]", "[solver]\nseed = -4\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `solver.seed`: expected a whole number of at least 0, found -4
  --> job.toml:32:8
   |
32 | seed = -4
   |        ^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_fraction_of_one_leaves_nothing() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 2 }\ndiscard = { fraction = 1.0 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `discard.fraction`: expected a number of at least 0 and below 1, found 1
  --> job.toml:14:24
   |
14 | discard = { fraction = 1.0 }
   |                        ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn only_one_way_to_discard_is_taken() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 2 }\ndiscard = { frames = 20, fraction = 0.25 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `discard`: expected only one of the keys `time`, `frames`, `fraction`, `automatic`, found `frames`, `fraction`
  --> job.toml:14:13
   |
14 | discard = { frames = 20, fraction = 0.25 }
   |             ^^^^^^       --------
   |
   = help: keep one of them, such as `frames`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn one_way_to_discard_is_needed() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 2 }\ndiscard = {}")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `discard`: expected one of the keys `time`, `frames`, `fraction`, `automatic`, found none
  --> job.toml:14:11
   |
14 | discard = {}
   |           ^^ none of them in `discard`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_time_to_discard_needs_a_unit() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 2 }\ndiscard = { time = 20.0 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `discard.unit`: expected `fs`, `ps`, `ns` or `us`, found no such key
  --> job.toml:14:11
   |
14 | discard = { time = 20.0 }
   |           ^^^^^^^^^^^^^^^ no `unit` in `discard`
   |
   = help: add it, as in `unit = "ps"`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_time_to_discard_needs_known_times() {
    let report = report(&[
        ("time = { column = 1, unit = \"ps\" }\n", ""),
        ("name = \"left\"", "name = \"left\"\ndiscard = { time = 20.0, unit = \"ps\" }"),
    ]);
    assert_data_eq!(report, str![[r#"
error: `discard.time`: expected known times of the frames, found no `time` in `[series]`
  --> job.toml:16:11
   |
16 | discard = { time = 20.0, unit = "ps" }
   |           ^^^^^^^^^^^^^^^^^^^^^^^^^^^^
   |
   = help: add `time = { column = 1, unit = "ps" }` or `time = { interval = 0.1, unit = "ps" }` to `[series]`, or discard `frames` or a `fraction`

1 problem in job.toml
"#]].raw());
}

#[test]
fn a_time_needs_a_unit() {
    let report = report(&[(", unit = \"ps\"", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.time.unit`: expected `fs`, `ps`, `ns` or `us`, found no such key
  --> job.toml:12:8
   |
12 | time = { column = 1 }
   |        ^^^^^^^^^^^^^^ no `unit` in `series.time`
   |
   = help: add it, as in `unit = "ps"`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn column_zero_is_none() {
    let report = report(&[("columns = { z = 2 }", "columns = { z = 0 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `series.columns.z`: expected a column number from 1, or a name of the header, found 0
  --> job.toml:13:17
   |
13 | columns = { z = 0 }
   |                 ^

1 problem in job.toml
"#]]
        .raw()
    );
}
