//! Which lines, columns and numbers are read.

use crate::common::{Files, columns, gzip, name, number, read, timed};
use spandrel_ingest::{Layout, Selection, Separator, TimeSource};

fn values(content: impl AsRef<[u8]>, layout: &Layout) -> Vec<Vec<f64>> {
    let files = Files::new();
    let path = files.add("run.txt", content);
    read(&[path], layout, &Selection::default()).unwrap().1.values
}

fn separated(separator: Separator, layout: Layout) -> Layout {
    Layout { separator, ..layout }
}

#[test]
fn line_ends_separators_and_compression_do_not_change_the_values() {
    let rows = [[0.5, -1.25e-7, 40.0], [1.5, 3.0625, -0.0], [2.5, 1e22, 7.5]];
    for (separator, joint) in [(Separator::Whitespace, "  "), (Separator::Comma, " ,"), (Separator::Tab, "\t")] {
        for line_end in ["\n", "\r\n"] {
            for mark in ["", "\u{feff}"] {
                let body =
                    rows.map(|row| format!(" {} {line_end}{line_end}", row.map(|value| value.to_string()).join(joint)));
                let content = format!("{mark}# a, b, c{line_end}{}", body.concat());
                let layout = separated(separator, columns(&[number(3), number(1), number(2)]));
                let expected = rows.map(|[a, b, c]| vec![c, a, b]);
                assert_eq!(values(&content, &layout), expected, "{content:?}");
                assert_eq!(values(gzip(content.as_bytes()), &layout), expected, "{content:?}");
            }
        }
    }
}

#[test]
fn concatenated_gzip_members_are_one_file() {
    let mut bytes = gzip(b"0 1.5\n1 2.");
    bytes.extend(gzip(b"5\n2 3.5\n"));
    assert_eq!(values(bytes, &timed()), [[1.5], [2.5], [3.5]]);
}

#[test]
fn fortran_exponents_are_read() {
    assert_eq!(
        values("1.0D+03 -2.5d-2 +4.0\n1.5+103 2.5-104 1.5E2\n", &columns(&[number(1), number(2), number(3)])),
        [[1000.0, -0.025, 4.0], [1.5e103, 2.5e-104, 150.0]]
    );
}

#[test]
fn columns_that_are_not_wanted_may_hold_text_or_nothing() {
    assert_eq!(values("1.5 A nan\n2.5 B ****\n", &columns(&[number(1)])), [[1.5], [2.5]]);
    let layout = separated(Separator::Comma, columns(&[number(2)]));
    assert_eq!(values("\"x, y\",1.5,\n,2.5,\n", &layout), [[1.5], [2.5]]);
}

#[test]
fn comments_are_passed_over_anywhere_and_for_every_prefix() {
    let layout = Layout { comments: vec!["#".into(), "@".into(), "//".into()], ..columns(&[number(1)]) };
    assert_eq!(values("@ a\n1.5\n  # b\n// c\n2.5\n#d", &layout), [[1.5], [2.5]]);
}

#[test]
fn a_comment_in_another_encoding_does_no_harm() {
    assert_eq!(values(b"# d (\xc5)\n1.5\n# \xff\n2.5\n", &columns(&[number(1)])), [[1.5], [2.5]]);
}

#[test]
fn names_come_from_the_last_fitting_comment_before_the_data() {
    let content = "# z t old\n# t z\n# written by hand in summer\n1 2\n# z t\n3 4\n";
    assert_eq!(values(content, &columns(&[name("z"), name("t")])), [[2.0, 1.0], [4.0, 3.0]]);
}

#[test]
fn words_before_the_names_can_be_part_of_a_prefix() {
    let layout = Layout {
        comments: vec!["#".into(), "#! NAMES".into()],
        columns: vec![name("z")],
        time: TimeSource::Column(name("t")),
        ..Layout::default()
    };
    assert_eq!(values("#! NAMES t z\n#! SET lower -3\n1 2.5\n", &layout), [[2.5]]);
}

#[test]
fn a_line_of_names_is_the_header_below_a_comment_of_another_width() {
    let content = "# by hand in summer\nt z\n# z t\n1 2\n";
    assert_eq!(values(content, &columns(&[name("z")])), [[2.0]]);
}

#[test]
fn names_may_stand_in_quotes_and_hold_blanks_and_commas() {
    let layout = separated(Separator::Comma, columns(&[name("z (nm)"), name("a, b"), name("t")]));
    assert_eq!(values("t , \"a, b\", z (nm)\n1,2,3\n", &layout), [[3.0, 2.0, 1.0]]);
    let layout = separated(Separator::Tab, columns(&[name("z (nm)")]));
    assert_eq!(values("t\tz (nm)\n1\t2\n", &layout), [[2.0]]);
}

#[test]
fn a_header_line_is_passed_over_when_columns_are_numbers() {
    for header in ["Time Depth", "\"Time\" 'Depth'", "_t φ_1", "time[ps] z(nm)"] {
        assert_eq!(values(format!("{header}\n1 2\n"), &columns(&[number(2)])), [[2.0]], "{header}");
    }
}

#[test]
fn every_segment_is_read_by_its_own_header() {
    let files = Files::new();
    let paths = [files.add("a.txt", "t z\n1 20\n"), files.add("b.txt", "z t x\n30 2 7\n")];
    let layout = Layout { columns: vec![name("z")], time: TimeSource::Column(name("t")), ..Layout::default() };
    let (report, rows) = read(&paths, &layout, &Selection::default()).unwrap();
    assert_eq!(rows.values, [[20.0], [30.0]]);
    assert_eq!(rows.times, [1.0, 2.0]);
    assert_eq!(report.segments.iter().map(|s| s.columns).collect::<Vec<_>>(), [2, 3]);
}
