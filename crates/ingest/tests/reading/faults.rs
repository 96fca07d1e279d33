//! Every fault by its message and its advice.

use std::fmt::Write;

use crate::common::{Files, columns, gzip, name, number, read, timed};
use spandrel_ingest::{Discard, IngestError, Layout, NumberProblem, Selection, Separator, TextProblem, TimeSource};

/// Reads one file and gives the fault's message, without the folder, and the fault.
fn fault(content: impl AsRef<[u8]>, layout: &Layout) -> (String, IngestError) {
    let files = Files::new();
    let path = files.add("run.txt", content);
    let error = read(&[path], layout, &Selection::default()).unwrap_err();
    (files.relative(&error.to_string()), error)
}

fn message(content: impl AsRef<[u8]>, layout: &Layout) -> String {
    fault(content, layout).0
}

fn comma(layout: Layout) -> Layout {
    Layout { separator: Separator::Comma, ..layout }
}

#[test]
fn a_missing_file_is_named() {
    let files = Files::new();
    let path = files.folder.path().join("gone.txt");
    let error = read(std::slice::from_ref(&path), &timed(), &Selection::default()).unwrap_err();
    assert_eq!(files.relative(&error.to_string()), "gone.txt: expected a file, found nothing by this name");
    assert_eq!(error.path(), Some(path.as_path()));
    assert_eq!(error.place(), None);
}

#[test]
fn a_directory_is_told_from_a_file() {
    let files = Files::new();
    let path = files.folder.path().join("runs");
    std::fs::create_dir(&path).unwrap();
    let error = read(&[path], &timed(), &Selection::default()).unwrap_err();
    assert_eq!(files.relative(&error.to_string()), "runs: expected a file, found a directory");
}

#[cfg(unix)]
#[test]
fn a_path_that_leads_through_a_file_gives_the_reason_of_the_system() {
    let files = Files::new();
    let path = files.add("run.txt", "0 1\n").join("deeper.txt");
    let error = read(&[path], &timed(), &Selection::default()).unwrap_err();
    assert!(matches!(error, IngestError::Unreadable { .. }), "{error:?}");
    let message = files.relative(&error.to_string());
    assert!(message.starts_with("run.txt/deeper.txt: expected a readable file, found: "), "{message}");
}

#[test]
fn an_empty_file_is_refused() {
    assert_eq!(message("", &timed()), "run.txt: expected rows of numbers, found no complete row: the file is empty");
}

#[test]
fn a_file_of_comments_and_blank_lines_is_refused() {
    assert_eq!(
        message("# time z\n\n \t\n", &timed()),
        "run.txt: expected rows of numbers, found no complete row in 3 lines"
    );
    assert_eq!(message("time z\n", &timed()), "run.txt: expected rows of numbers, found no complete row in 1 line");
}

#[test]
fn a_file_whose_only_row_has_no_line_end_is_refused() {
    let (message, error) = fault("# time z\n0.5 1.5", &timed());
    assert_eq!(message, "run.txt: expected rows of numbers, found no complete row: line 2 has no line end");
    assert_eq!(
        error.advice(),
        "let the run write at least one whole row; if the line is complete, end it with a line break"
    );
}

#[test]
fn text_in_place_of_a_number_is_shown_with_its_place() {
    let (message, error) = fault("0 1.5\n1  abc\n", &timed());
    assert_eq!(message, "run.txt:2:4: expected a number in column 2, found `abc`");
    let place = error.place().unwrap();
    assert_eq!((place.line, place.column, place.character), (2, Some(2), Some(4)));
    assert_eq!(error.path(), Some(place.path.as_path()));
}

#[test]
fn characters_are_counted_not_bytes() {
    assert_eq!(
        message("å 1.5\nåäö 2.5x\n", &columns(&[number(2)])),
        "run.txt:2:5: expected a number in column 2, found `2.5x`"
    );
}

#[test]
fn a_first_row_with_some_text_and_some_numbers_is_not_a_header() {
    assert_eq!(
        message("z 1.5\n1 2.5\n", &columns(&[number(1)])),
        "run.txt:1:1: expected a number in column 1, found `z`"
    );
}

#[test]
fn a_second_header_is_a_fault() {
    assert_eq!(message("time z\ntime z\n0 1\n", &timed()), "run.txt:2:1: expected a number in column 1, found `time`");
}

#[test]
fn decimal_commas_are_named() {
    // In the first row, which is no header, and farther down.
    for (content, place) in [("0,5 1,5\n0,6 1,6\n", "run.txt:1:1"), ("0.5 1.5\n0,6 1.6\n", "run.txt:2:1")] {
        let (message, error) = fault(content, &timed());
        assert!(message.starts_with(&format!("{place}: expected a number in column 1, found `0,")), "{message}");
        assert_eq!(error.advice(), "write points in place of decimal commas");
    }
}

#[test]
fn a_single_comma_may_be_of_either_kind() {
    let (message, error) = fault("3,7\n4,9\n", &columns(&[number(1)]));
    assert_eq!(message, "run.txt:1:1: expected a number in column 1, found `3,7`");
    assert_eq!(
        error.advice(),
        "if commas separate the columns, set the separator to comma; if they are decimal commas, write points"
    );
}

#[test]
fn a_separator_that_would_give_numbers_is_named() {
    let whitespace = timed();
    let tab = Layout { separator: Separator::Tab, ..timed() };
    for (content, layout, advice) in [
        ("0.5,1.5\n", &whitespace, "commas stand between the columns: set the separator to comma"),
        ("0.5, 1.5\n", &whitespace, "commas stand between the columns: set the separator to comma"),
        ("time, z\n0.5, 1.5\n", &whitespace, "commas stand between the columns: set the separator to comma"),
        (
            "Time (ps), Depth (nm)\n0.5, 1.5\n",
            &whitespace,
            "commas stand between the columns: set the separator to comma",
        ),
        ("Time (ps)\tDepth (nm)\n0.5\t1.5\n", &whitespace, "tabs stand between the columns: set the separator to tab"),
        ("the time\tthe depth\n0.5\t1.5\n", &whitespace, "tabs stand between the columns: set the separator to tab"),
        ("0.5\t1.5\n", &comma(timed()), "tabs stand between the columns: set the separator to tab"),
        ("0.5 1.5\n", &comma(timed()), "blanks stand between the columns: set the separator to whitespace"),
        ("0.5 1.5\n", &tab, "blanks stand between the columns: set the separator to whitespace"),
        ("0.5,1.5\n", &tab, "commas stand between the columns: set the separator to comma"),
    ] {
        let (message, error) = fault(content, layout);
        assert_eq!(error.advice(), advice, "{content:?}: {message}");
    }
    for content in ["0,5;1,5\n", "0.5;1.5;\n", "time;z\n0.5;1.5\n", "time; the depth\n0.5; 1.5\n"] {
        for layout in [&whitespace, &tab, &comma(timed())] {
            // Decimal commas do separate fields where commas do.
            if layout.separator == Separator::Comma && content.contains(',') {
                continue;
            }
            let (message, error) = fault(content, layout);
            assert!(error.advice().starts_with("semicolons stand between the columns: "), "{content:?}: {message}");
        }
    }
}

#[test]
fn names_that_another_separator_would_part_lead_to_advice_about_it() {
    let (message, error) = fault("time,z\n0.5,1.5\n", &columns(&[name("z")]));
    assert_eq!(message, "run.txt:1: expected a column named `z`, found `time,z`");
    assert_eq!(
        error.advice(),
        "the header seems to hold several names: set the separator to the one that stands between them"
    );
}

#[test]
fn text_in_the_first_row_below_a_header_is_not_a_second_header() {
    let three = Layout { columns: vec![number(3), number(2)], ..timed() };
    for (first_row, place, advice) in [
        ("0,1 -120,3 3,0", "run.txt:2:1: expected a number in column 1, found `0,1`", "write points"),
        ("abc", "run.txt:2:1: expected a number in column 1, found `abc`", "if the line holds"),
        ("a b c", "run.txt:2:1: expected a number in column 1, found `a`", "a comment before the line names"),
        ("--- --- ---", "run.txt:2:1: expected a number in column 1, found `---`", "repair the field"),
    ] {
        let (message, error) = fault(format!("# time phi e\n{first_row}\n1 2 3\n"), &three);
        assert_eq!(message, place);
        assert!(error.advice().starts_with(advice), "{first_row}: {}", error.advice());
    }
}

#[test]
fn a_line_of_names_of_another_width_is_refused_at_its_first_wanted_column() {
    let (message, error) = fault("Time (ps) Depth (nm)\n1 2\n", &columns(&[number(2)]));
    assert_eq!(message, "run.txt:1:6: expected a number in column 2, found `(ps)`");
    assert_eq!(
        error.advice(),
        "if the line holds the names of the columns, write one name for each, beginning with a letter, or make the line a comment"
    );
    assert_eq!(message_of_names("the time in picoseconds"), "run.txt:1:5: expected a number in column 2, found `time`");
    // It does not reach as far as the wanted column.
    assert_eq!(message_of_names("time"), "run.txt:1:1: expected a number, found `time`");
}

/// The message on a line of text before rows of three fields, of which the second is wanted.
fn message_of_names(line: &str) -> String {
    message(format!("{line}\n1 2 3\n"), &columns(&[number(2)]))
}

#[test]
fn a_line_of_names_of_another_width_is_named_where_a_name_is_wanted() {
    let (message, error) = fault("time depth\n1 2 3\n", &columns(&[name("depth")]));
    assert_eq!(
        message,
        "run.txt:2: expected a header of 3 names with `depth` before this row, found 2 names in line 1"
    );
    assert!(error.advice().starts_with("write one name for each column"), "{}", error.advice());
}

#[test]
fn carriage_returns_alone_are_named_as_line_ends() {
    let expected = "expected lines that end in a line feed, found a carriage return alone";
    for (content, place) in [
        ("# time z\r0 1\r1 2\r", "run.txt:1:9"),
        ("# time z\r0 1\r1 2\n", "run.txt:1:9"),
        ("0 1\r1 2\r2 3", "run.txt:1:4"),
        ("time z\r0 1\r1 2\n", "run.txt:1:7"),
        ("# time z\r\n0 1\r1 2\r", "run.txt:2:4"),
        ("0 1\n1 2\r2 3\n", "run.txt:2:4"),
        ("0 1\n1 2\r2 3\r", "run.txt:2:4"),
    ] {
        let (message, error) = fault(content, &timed());
        assert_eq!(message, format!("{place}: {expected}"), "{content:?}");
        assert!(error.advice().starts_with("convert the line ends to line feeds"), "{}", error.advice());
    }
    let long = format!("# time z\r{}", "0.25 1.5\r".repeat(200_000));
    assert_eq!(message(long, &timed()), format!("run.txt:1:9: {expected}"));
}

#[test]
fn numbers_in_messages_have_no_noise() {
    let time = 0.1 + 0.2;
    let content = format!("1e300 1\n{time} 2\n-0.000000000045 3\n");
    assert_eq!(
        message(content, &timed()),
        "run.txt:3: expected times that increase in column 1, found -4.5e-11 after 0.3: 2 of 3 rows do not come after the row before"
    );
}

#[test]
fn values_that_are_not_finite_are_refused_in_every_spelling() {
    for text in ["nan", "-NaN", "inf", "Infinity", "-1.#IND"] {
        let (message, error) = fault(format!("0 1.5\n1 {text}\n"), &timed());
        assert_eq!(message, format!("run.txt:2:3: expected a number in column 2, found `{text}`, which is not finite"));
        assert!(matches!(error, IngestError::BadNumber { problem: NumberProblem::NotFinite, .. }));
    }
}

#[test]
fn a_first_row_of_values_that_are_not_finite_is_not_taken_for_a_header() {
    assert_eq!(
        message("nan nan\n1 2\n", &timed()),
        "run.txt:1:1: expected a number in column 1, found `nan`, which is not finite"
    );
}

#[test]
fn asterisks_are_explained() {
    assert_eq!(
        message("0 1.5\n1 ********\n", &timed()),
        "run.txt:2:3: expected a number in column 2, found `********`, written where a number did not fit its width"
    );
}

#[test]
fn a_number_too_large_for_a_float_is_refused() {
    assert_eq!(
        message("0 1.5\n1 -1e999\n", &timed()),
        "run.txt:2:3: expected a number in column 2, found `-1e999`, which is too large"
    );
}

#[test]
fn an_empty_field_is_refused_where_it_is_wanted() {
    let layout = comma(timed());
    assert_eq!(message("0,1.5\n1, \n", &layout), "run.txt:2:4: expected a number in column 2, found an empty field");
}

#[test]
fn a_quote_that_is_not_closed_is_refused() {
    assert_eq!(
        message("0,1.5\n1,\"2.5\n", &comma(timed())),
        "run.txt:2:3: expected a number in column 2, found `\"2.5`, a quoted field that is not closed"
    );
}

#[test]
fn a_row_with_fewer_or_more_fields_than_the_first_is_refused() {
    assert_eq!(message("#\n0 1.5 7\n1 2.5\n", &timed()), "run.txt:3: expected 3 fields as in line 2, found 2");
    assert_eq!(message("0 1.5\n1 2.5 8 9\n", &timed()), "run.txt:2: expected 2 fields as in line 1, found 4");
}

#[test]
fn a_column_beyond_the_row_is_refused() {
    assert_eq!(message("0 1.5\n", &columns(&[number(4)])), "run.txt:1: expected a column 4, found 2 columns");
    let with_time = Layout { time: TimeSource::Column(number(3)), ..columns(&[number(1)]) };
    assert_eq!(message("1.5\n", &with_time), "run.txt:1: expected a column 3, found 1 column");
}

#[test]
fn an_unknown_name_is_answered_with_the_nearest_and_all_names() {
    assert_eq!(
        message("# time depth Width energy\n0 1 2 3\n", &columns(&[name("dept")])),
        "run.txt:1: expected a column named `dept`, found `time`, `depth`, `Width`, `energy`; did you mean `depth`?"
    );
    assert_eq!(
        message("# time depth Width energy\n0 1 2 3\n", &columns(&[name("width")])),
        "run.txt:1: expected a column named `width`, found `time`, `depth`, `Width`, `energy`; did you mean `Width`?"
    );
    assert_eq!(
        message("a,b\n0,1\n", &comma(columns(&[name("pressure")]))),
        "run.txt:1: expected a column named `pressure`, found `a`, `b`"
    );
}

#[test]
fn a_long_list_of_names_is_cut() {
    let names: Vec<String> = (0..25).map(|index| format!("c{index}")).collect();
    let numbers = vec!["3"; 25].join(" ");
    let message = message(format!("{}\n{numbers}\n", names.join(" ")), &columns(&[name("pressure")]));
    assert!(message.ends_with("`c18`, `c19` and 5 more"), "{message}");
}

#[test]
fn a_name_that_stands_twice_is_refused_only_when_it_is_wanted() {
    let content = "z t z\n1 2 3\n";
    assert_eq!(
        message(content, &columns(&[name("z")])),
        "run.txt:1: expected one column named `z`, found columns 1, 3"
    );
    let files = Files::new();
    let path = files.add("run.txt", content);
    let (_, rows) = read(&[path], &columns(&[name("t")]), &Selection::default()).unwrap();
    assert_eq!(rows.values, [[2.0]]);
}

#[test]
fn a_name_without_a_header_is_refused() {
    let (message, error) = fault("0 1.5\n", &columns(&[name("z")]));
    assert_eq!(message, "run.txt:1: expected a header of 2 names with `z` before this row, found none");
    assert_eq!(error.advice(), "give the column by its number, or add a header line with one name for each column");
}

#[test]
fn a_header_of_another_width_is_shown() {
    let (message, error) = fault("#! NAMES time z\n0 1.5\n", &columns(&[name("z")]));
    assert_eq!(message, "run.txt:2: expected a header of 2 names with `z` before this row, found 4 names in line 1");
    assert_eq!(
        error.advice(),
        "write one name for each column, or give the column by its number; if words stand before the names in a comment, add them to the comment prefix"
    );
}

#[test]
fn a_zero_byte_anywhere_is_not_text() {
    assert_eq!(message(b"0 1.5\n1 2\0.5\n", &timed()), "run.txt:2:4: expected UTF-8 text, found a zero byte");
    assert_eq!(message(b"#\0\n1 2\n", &timed()), "run.txt:1:2: expected UTF-8 text, found a zero byte");
    assert_eq!(
        message([0x7f, b'E', b'L', b'F', 2, 0, 0], &timed()),
        "run.txt:1:6: expected UTF-8 text, found a zero byte"
    );
}

#[test]
fn a_byte_that_is_not_utf_8_is_refused_in_a_row() {
    let (message, error) = fault(b"0 1.5 b\n1 2.5 \xe5\n", &timed());
    assert_eq!(message, "run.txt:2:7: expected UTF-8 text, found the byte 0xe5");
    assert!(matches!(error, IngestError::NotText { problem: TextProblem::InvalidByte(0xe5), .. }));
}

#[test]
fn utf_16_is_named() {
    for mark in [b"\xff\xfe", b"\xfe\xff"] {
        let mut content = mark.to_vec();
        content.extend_from_slice(b"0\0 \x001\0\n\0");
        assert_eq!(message(content, &timed()), "run.txt:1:1: expected UTF-8 text, found UTF-16 or UTF-32 text");
    }
}

#[test]
fn a_line_that_never_ends_is_refused() {
    let content = format!("0 1\n{}", "1234567 ".repeat(200_000));
    assert_eq!(message(content, &timed()), "run.txt:2: expected lines of at most 1048576 bytes, found a longer one");
}

#[test]
fn gzip_data_cut_anywhere_are_refused() {
    let rows: Vec<String> = (0..300).map(|row| format!("{row} {}\n", row * row)).collect();
    let whole = gzip(rows.concat().as_bytes());
    for length in 2..whole.len() {
        let (message, error) = fault(&whole[..length], &timed());
        assert!(
            message.starts_with("run.txt: expected complete gzip data, found that they break off after line "),
            "{length}: {message}"
        );
        assert!(matches!(error, IngestError::GzipCutShort { .. }));
    }
}

#[test]
fn gzip_data_with_a_wrong_checksum_are_refused() {
    let mut bytes = gzip(b"0 1.5\n1 2.5\n");
    let checksum = bytes.len() - 8;
    bytes[checksum] ^= 0x10;
    let (message, error) = fault(&bytes, &timed());
    assert!(message.starts_with("run.txt: expected valid gzip data, found a fault after line 2: "), "{message}");
    assert!(matches!(error, IngestError::GzipCorrupt { lines: 2, .. }));
}

#[test]
fn other_bytes_behind_gzip_data_are_refused() {
    let mut bytes = gzip(b"0 1.5\n1 2.5\n");
    bytes.extend_from_slice(b"2 3.5\n and some more");
    let (_, error) = fault(&bytes, &timed());
    assert!(matches!(error, IngestError::GzipCorrupt { .. }), "{error}");
}

#[test]
fn a_time_column_that_wanders_is_refused() {
    // A pseudo-random walk (multiplicative congruential, Park & Miller 1988) falls at about every second row.
    let mut state = 20_391_u64;
    let mut time = 3.5;
    let mut content = String::new();
    for row in 0..40 {
        state = state * 16_807 % 2_147_483_647;
        time += if state & 64 == 0 { 0.25 } else { -0.25 };
        writeln!(content, "{time} {row}").unwrap();
    }
    let (message, error) = fault(content, &timed());
    assert!(message.contains(": expected times that increase in column 1, found "), "{message}");
    assert!(matches!(error, IngestError::TimeNotIncreasing { .. }));
}

#[test]
fn a_constant_or_falling_time_column_is_refused_in_a_short_file() {
    assert_eq!(
        message("7 1\n7 2\n7 3\n", &timed()),
        "run.txt:3: expected times that increase in column 1, found 7 after 7: 2 of 3 rows do not come after the row before"
    );
    assert_eq!(
        message("9 1\n8.5 2\n8 3\n", &timed()),
        "run.txt:3: expected times that increase in column 1, found 8 after 8.5: 2 of 3 rows do not come after the row before"
    );
}

#[test]
fn a_long_file_with_a_constant_time_is_refused_before_its_end() {
    let content = format!("{}7 nonsense\n", "7 1\n".repeat(100));
    assert_eq!(
        message(content, &timed()),
        "run.txt:17: expected times that increase in column 1, found 7 after 7: 16 of 17 rows do not come after the row before"
    );
}

#[test]
fn a_segment_that_adds_nothing_is_refused_as_a_likely_replica() {
    let files = Files::new();
    let first = files.add("a.txt", "0 1\n2.5 2\n5 3\n");
    let second = files.add("b.txt", "0 4\n2.5 5\n5 6\n");
    let error = read(&[first, second], &timed(), &Selection::default()).unwrap_err();
    assert_eq!(
        files.relative(&error.to_string()),
        "b.txt: expected frames after time 5, where the segments before end, found times 0 to 5"
    );
    assert!(error.advice().starts_with("list the file as a replica"));
}

#[test]
fn a_discard_that_takes_everything_is_refused() {
    let files = Files::new();
    let path = files.add("run.txt", "0 1\n2.5 2\n5 3\n");
    for discard in [Discard::Frames(3), Discard::Time(5.5)] {
        let selection = Selection { discard, ..Selection::default() };
        let error = read(std::slice::from_ref(&path), &timed(), &selection).unwrap_err();
        assert_eq!(
            files.relative(&error.to_string()),
            "run.txt: expected frames after the `discard`, found that it takes all 3 of the series"
        );
    }
}

#[test]
fn a_discard_by_time_needs_times() {
    let files = Files::new();
    let path = files.add("run.txt", "0 1\n");
    let selection = Selection { discard: Discard::Time(2.5), ..Selection::default() };
    let error = read(&[path], &columns(&[number(1)]), &selection).unwrap_err();
    assert_eq!(
        error.to_string(),
        "expected known times for a `discard` of time 2.5, found neither a time column nor an interval"
    );
}

#[test]
fn settings_outside_their_range_are_refused() {
    let files = Files::new();
    let path = files.add("run.txt", "0 1\n");
    let refused = |layout: &Layout, discard: Discard| {
        let selection = Selection { discard, ..Selection::default() };
        read(std::slice::from_ref(&path), layout, &selection).unwrap_err().to_string()
    };
    for fraction in [-0.25, 1.0, 1.5, f64::NAN, f64::INFINITY] {
        assert_eq!(
            refused(&timed(), Discard::Fraction(fraction)),
            format!("`discard`: expected a fraction of at least 0 and below 1, found {fraction}")
        );
    }
    for time in [-0.25, f64::NAN, f64::INFINITY] {
        assert_eq!(
            refused(&timed(), Discard::Time(time)),
            format!("`discard`: expected a finite time of at least 0, found {time}")
        );
    }
    for interval in [0.0, -2.5, f64::NAN, f64::INFINITY] {
        let layout = Layout { time: TimeSource::Interval(interval), ..timed() };
        assert_eq!(
            refused(&layout, Discard::Nothing),
            format!("`interval`: expected a finite number above 0, found {interval}")
        );
    }
    let without_prefix = Layout { comments: vec!["#".into(), String::new()], ..timed() };
    assert_eq!(
        refused(&without_prefix, Discard::Nothing),
        "`comments`: expected prefixes of at least one character, found an empty prefix"
    );
    assert_eq!(
        refused(&columns(&[name(" ")]), Discard::Nothing),
        "`column`: expected a number from 1 or a name, found an empty name"
    );
}

#[test]
fn a_series_without_files_is_refused() {
    let error = read(&[], &timed(), &Selection::default()).unwrap_err();
    assert_eq!(error.to_string(), "`segments`: expected at least one file, found none");
}
