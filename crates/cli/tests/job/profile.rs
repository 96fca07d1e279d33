//! What a job says about the profile and the folder of the results.

use crate::support::{Folder, report, with};
use snapbox::{IntoData, assert_data_eq, str};

#[test]
fn bins_must_fill_the_range() {
    let report = report(&[("bin_width = 0.05", "bin_width = 0.07")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.bin_width`: expected a whole number of bins in the range of 0.6, found 8.57143
  --> job.toml:34:13
   |
32 | from = 0.5
   |        ---
33 | to = 1.1
   |      ---
34 | bin_width = 0.07
   |             ^^^^
   |
   = help: use `bins = 9`, each of which is 0.0666667 wide

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn bins_must_fill_the_period() {
    let report = report(&[
        ("unit = \"nm\"", "unit = \"nm\"\nperiod = 2.4"),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
        ("to = 1.1\nbin_width = 0.05", "to = 0.85\nbin_width = 0.07"),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.bin_width`: expected a whole number of bins in the period of 2.4, found 34.2857
  --> job.toml:35:13
   |
33 | from = 0.5
   |        ---
34 | to = 0.85
   |      ----
35 | bin_width = 0.07
   |             ^^^^
   |
   = help: use `bins = 7` or `bin_width = 0.05`

1 problem in job.toml
"#]]
        .raw()
    );
}

/// The help on bins that do not fit, from the report on a job with this profile.
fn help(job: &str) -> String {
    let report = Folder::new().report(job);
    report.lines().filter_map(|line| line.split_once("= help: ")).map(|(_, help)| help).collect()
}

#[test]
fn a_width_that_fits_and_can_be_typed_is_offered_beside_the_number_of_bins() {
    assert_eq!(help(&with(&[("bin_width = 0.05", "bin_width = 0.059")])), "use `bins = 10` or `bin_width = 0.06`");
    assert_eq!(help(&periodic("bin_width = 0.13\n")), "use `bins = 18`, each of which is 0.133333 wide");
    assert_eq!(help(&periodic("bin_width = 0.11\n")), "use `bins = 22`, each of which is 0.109091 wide");
    // 0.3 is an eighth of the period, which takes 328.8 of these bins, and 328 is 41 times 8.
    assert_eq!(
        help(&periodic("from = 0.5\nto = 0.8\nbin_width = 0.0073\n")),
        "use `bins = 41`, each of which is 0.00731707 wide"
    );
}

#[test]
fn what_is_offered_is_taken() {
    for profile in
        ["bin_width = 0.13\n", "from = 0.5\nto = 0.85\nbin_width = 0.07\n", "from = -1.0\nto = 0.5\nbins = 7\n"]
    {
        let help = help(&periodic(profile));
        let (_, offered) = help.split_once("`bins = ").unwrap();
        let (number, _) = offered.split_once('`').unwrap();
        let ends = profile.split_once("bin").map_or("", |(ends, _)| ends);
        Folder::new().load(&periodic(&format!("{ends}bins = {number}\n"))).unwrap_or_else(|report| panic!("{report}"));
        if let Some((_, width)) = offered.split_once("`bin_width = ") {
            let width = width.trim_end_matches('`');
            Folder::new()
                .load(&periodic(&format!("{ends}bin_width = {width}\n")))
                .unwrap_or_else(|report| panic!("{report}"));
        }
    }
}

#[test]
fn a_range_that_shares_no_width_with_the_period_is_told_so() {
    assert_eq!(
        help(&periodic("from = 0.5\nto = 1.2071067811865476\nbins = 10\n")),
        "leave `from` and `to` out, or choose a range that is a simple fraction of the period"
    );
}

#[test]
fn a_range_longer_than_the_period_is_refused() {
    let report = report(&[
        ("unit = \"nm\"", "unit = \"nm\"\nperiod = 0.5"),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
    ]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.to`: expected a range of at most the period, 0.5, found 0.6
  --> job.toml:34:6
   |
33 | from = 0.5
   |        --- `from`
34 | to = 1.1
   |      ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_range_runs_upward() {
    let report = report(&[("to = 1.1", "to = 0.5")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.to`: expected a number above `from`, 0.5, found 0.5
  --> job.toml:33:6
   |
32 | from = 0.5
   |        --- `from`
33 | to = 0.5
   |      ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_range_has_two_ends() {
    let report = report(&[("to = 1.1\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.to`: expected both ends of the range or none, found only `from`
  --> job.toml:32:8
   |
32 | from = 0.5
   |        ^^^
   |
   = help: add `to`, or leave `from` out for the sampled range

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_number_of_bins_needs_a_range() {
    let report = report(&[("from = 0.5\nto = 1.1\nbin_width = 0.05", "bins = 12")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.bins`: expected `from` and `to` beside it, found neither
  --> job.toml:32:8
   |
32 | bins = 12
   |        ^^
   |
   = help: add the range that is divided into bins, or give `bin_width` instead

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_width_or_a_number_of_bins_is_needed() {
    let report = report(&[("bin_width = 0.05\n", "")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `[profile]`: expected one of the keys `bin_width`, `bins`, found none
  --> job.toml:31:1
   |
31 | [profile]
   | ^^^^^^^^^ none of them in `[profile]`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_width_and_a_number_of_bins_are_too_much() {
    let report = report(&[("bin_width = 0.05\n", "bin_width = 0.05\nbins = 12\n")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `[profile]`: expected only one of the keys `bin_width`, `bins`, found `bin_width`, `bins`
  --> job.toml:34:1
   |
34 | bin_width = 0.05
   | ^^^^^^^^^
35 | bins = 12
   | ----
   |
   = help: keep one of them, such as `bin_width`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn too_many_bins_are_refused() {
    let report = report(&[("bin_width = 0.05", "bin_width = 1e-8")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile`: expected at most 1000000 bins, found 60000000
  --> job.toml:34:13
   |
34 | bin_width = 1e-8
   |             ^^^^
   |
   = help: widen the bins or narrow the range

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn an_origin_is_a_whole_number_of_bins_from_the_range() {
    let report = report(&[("bin_width = 0.05", "bin_width = 0.05\norigin = 0.52")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.origin`: expected a whole number of bins from `from`, 0.5, found -0.4
  --> job.toml:35:10
   |
35 | origin = 0.52
   |          ^^^^
   |
   = help: leave it out; bins then begin at `from`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_zero_outside_the_range_is_refused() {
    let report = report(&[("bin_width = 0.05", "bin_width = 0.05\nzero = { position = 1.3 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.zero.position`: expected a position in the range of the profile, 0.5 to 1.1, found 1.3
  --> job.toml:35:21
   |
35 | zero = { position = 1.3 }
   |                     ^^^

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_zero_given_as_a_number_is_told_the_table() {
    let report = report(&[("bin_width = 0.05", "bin_width = 0.05\nzero = 0.7")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.zero`: expected `minimum`, or a table, found 0.7
  --> job.toml:35:8
   |
35 | zero = 0.7
   |        ^^^
   |
   = help: for a position write `zero = { position = 0.7 }`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn a_zero_range_has_two_ends() {
    let report = report(&[("bin_width = 0.05", "bin_width = 0.05\nzero = { from = 0.7 }")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `profile.zero.to`: expected a number above `from`, found no such key
  --> job.toml:35:8
   |
35 | zero = { from = 0.7 }
   |        ^^^^^^^^^^^^^^ no `to` in `profile.zero`
   |
   = help: add it, as in `to = 2.7`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn results_do_not_replace_the_folder_of_the_job() {
    let report = report(&[("[profile]", "[output]\nfolder = \".\"\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `output.folder`: expected a folder of its own, found `.`, which holds the job
  --> job.toml:32:10
   |
32 | folder = "."
   |          ^^^
   |
   = help: results replace the whole folder; name one for them alone, such as `result`

1 problem in job.toml
"#]]
        .raw()
    );
}

#[test]
fn results_do_not_replace_a_file() {
    let report = report(&[("[profile]", "[output]\nfolder = \"left.txt\"\n\n[profile]")]);
    assert_data_eq!(
        report,
        str![[r#"
error: `output.folder`: expected a folder, found the file `left.txt`
  --> job.toml:32:10
   |
32 | folder = "left.txt"
   |          ^^^^^^^^^^
   |
   = help: name another folder, or move the file away

1 problem in job.toml
"#]]
        .raw()
    );
}

/// The good job on an axis with a period of 2.4.
fn periodic(profile: &str) -> String {
    with(&[
        ("unit = \"nm\"", "unit = \"nm\"\nperiod = 2.4"),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
        ("kind = \"harmonic\"", "kind = \"periodic-harmonic\""),
        ("from = 0.5\nto = 1.1\nbin_width = 0.05\n", profile),
    ])
}

#[test]
fn a_part_of_a_period_begins_with_bin_zero() {
    let job = Folder::new().load(&periodic("from = 0.5\nto = 1.1\nbin_width = 0.05\norigin = 0.1\n")).unwrap();
    let (bins, request) = (job.profile.bins, job.profile.request);
    assert_eq!(bins.n_bins_in_period(), Some(48));
    assert_eq!((request.first_bin, request.last_bin), (Some(0), Some(11)));
    assert!((bins.lower_edge(0) - 0.5).abs() < 1e-12);
}

#[test]
fn one_end_of_a_range_is_enough_with_a_period() {
    let job = Folder::new().load(&periodic("to = 1.9\nbins = 40\n")).unwrap();
    assert!((job.profile.bins.lower_edge(0) + 0.5).abs() < 1e-12);
    assert!((job.profile.bins.width() - 0.06).abs() < 1e-12);
}

#[test]
fn a_zero_may_lie_in_another_image() {
    let job = periodic("from = 0.5\nto = 1.1\nbin_width = 0.05\nzero = { position = 3.2 }\n");
    Folder::new().load(&job).unwrap();
    assert!(Folder::new().report(&job.replace("3.2", "3.7")).contains("`profile.zero.position`"));
}

#[test]
fn an_origin_numbers_the_bins_of_the_range() {
    let job = with(&[("bin_width = 0.05", "bin_width = 0.05\norigin = 0.3")]);
    let request = Folder::new().load(&job).unwrap().profile.request;
    assert_eq!((request.first_bin, request.last_bin), (Some(4), Some(15)));
}

#[test]
fn a_stretch_on_an_axis_with_a_period_holds_its_images() {
    let job = periodic("bins = 48\n[exclude]\nstretches = [{ from = 1.0, to = 1.5 }]\n");
    let job = Folder::new().load(&job).unwrap();
    let inside = |position| job.excluded.stretches[0].contains(&job.axes[0], position);
    assert!(inside(1.3) && inside(1.3 - 2.4) && inside(1.5) && !inside(0.7) && !inside(f64::NAN));
}
