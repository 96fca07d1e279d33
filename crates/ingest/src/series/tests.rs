#![expect(clippy::unwrap_used, reason = "a test may panic")]

use std::convert::Infallible;
use std::fmt::Write as _;
use std::io::Write as _;
use std::num::{NonZeroU64, NonZeroUsize};
use std::path::PathBuf;

use flate2::{Compression, write::GzEncoder};
use proptest::prelude::*;
use tempfile::TempDir;

use super::{part_of, read_in_pieces};
use crate::error::{IngestError, ReadError};
use crate::layout::{Column, Layout, Separator, TimeSource};
use crate::lines::CHUNK;
use crate::notice::Notice;
use crate::report::SeriesReport;
use crate::selection::{Discard, Selection};

#[test]
fn a_part_that_is_whole_up_to_rounding_is_whole() {
    // 0.29 * 100 is 28.999999999999996 in binary.
    assert_eq!(part_of(0.29, 100), 29);
    assert_eq!(part_of(0.289, 100), 28);
    assert_eq!(part_of(0.999, 7), 6);
}

/// One handed-over row: segment, line, bits of the time and of the values.
type Row = (usize, u64, Option<u64>, Vec<u64>);

/// Everything that reading gave, in a form that can be compared bit by bit: rows, the ends of chunks, and the result.
type Outcome = (Vec<Row>, Vec<usize>, Result<SeriesReport, IngestError>);

fn outcome(paths: &[PathBuf], layout: &Layout, selection: &Selection, chunk: usize) -> Outcome {
    let mut rows = Vec::new();
    let mut chunk_ends = Vec::new();
    let result = read_in_pieces::<Infallible>(paths, layout, selection, chunk, &mut |chunk| {
        for (index, values) in chunk.rows().enumerate() {
            rows.push((
                chunk.segment(),
                chunk.lines()[index],
                chunk.times().map(|times| times[index].to_bits()),
                values.iter().map(|value| value.to_bits()).collect(),
            ));
        }
        chunk_ends.push(rows.len());
        Ok(())
    });
    let result = result.map_err(|error| match error {
        ReadError::Ingest(error) => error,
        ReadError::Sink(never) => match never {},
    });
    (rows, chunk_ends, result)
}

fn column(number: usize) -> Column {
    Column::Number(NonZeroUsize::new(number).unwrap())
}

fn layout(separator: Separator, columns: &[usize], time: TimeSource) -> Layout {
    Layout { separator, columns: columns.iter().copied().map(column).collect(), time, ..Layout::default() }
}

fn gzip(content: &[u8]) -> Vec<u8> {
    let mut encoder = GzEncoder::new(Vec::new(), Compression::fast());
    encoder.write_all(content).unwrap();
    encoder.finish().unwrap()
}

/// Pieces from single bytes to the usual size.
fn piece_sizes() -> impl Iterator<Item = usize> {
    (1..=64).chain([1000, CHUNK])
}

/// A number as some program might write it.
fn written_number() -> impl Strategy<Value = String> {
    prop_oneof![
        (-1e3..1e3_f64, 0..9_usize).prop_map(|(value, digits)| format!("{value:.digits$}")),
        (-1e3..1e3_f64, 0..17_usize).prop_map(|(value, digits)| format!("{value:+.digits$e}")),
        any::<i32>().prop_map(|value| value.to_string()),
    ]
}

fn separator() -> impl Strategy<Value = (Separator, &'static str)> {
    prop_oneof![
        Just((Separator::Whitespace, " ")),
        Just((Separator::Whitespace, " \t ")),
        Just((Separator::Comma, ",")),
        Just((Separator::Comma, " , ")),
        Just((Separator::Tab, "\t")),
    ]
}

/// Text that looks enough like a file of numbers to get past the first checks.
fn nearly_a_file() -> impl Strategy<Value = Vec<u8>> {
    let piece = prop_oneof![
        6 => "[0-9]{1,3}".prop_map(String::into_bytes),
        4 => Just(b" ".to_vec()),
        4 => Just(b"\n".to_vec()),
        2 => "[-+.eEdD,\t\"#*a-z]{1,3}".prop_map(String::into_bytes),
        1 => Just(b"\r\n".to_vec()),
        1 => Just("nan é\u{feff}".as_bytes().to_vec()),
        1 => prop::collection::vec(any::<u8>(), 1..4),
    ];
    prop::collection::vec(piece, 0..60).prop_map(|pieces| pieces.concat())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(150))]

    #[test]
    fn values_have_the_bits_of_the_standard_library_in_any_layout(
        rows in prop::collection::vec(prop::array::uniform4(written_number()), 1..30),
        (separator, joint) in separator(),
        ending in prop_oneof![Just("\n"), Just("\r\n")],
        packed in any::<bool>(),
        chunk in prop_oneof![1..65_usize, Just(CHUNK)],
    ) {
        let lines: Vec<String> = rows.iter().map(|row| row.join(joint) + ending).collect();
        let content = lines.concat();
        let folder = TempDir::new().unwrap();
        let path = folder.path().join("run.txt");
        let bytes = if packed { gzip(content.as_bytes()) } else { content.into_bytes() };
        std::fs::write(&path, &bytes).unwrap();
        let wanted = [4, 1, 3];
        let layout = layout(separator, &wanted, TimeSource::Unknown);
        let (found, _, result) = outcome(&[path], &layout, &Selection::default(), chunk);
        let report = result.unwrap();
        prop_assert_eq!(report.segments[0].bytes, bytes.len() as u64);
        prop_assert_eq!(report.segments[0].columns, 4);
        let expected: Vec<Row> = rows
            .iter()
            .zip(1..)
            .map(|(row, line)| {
                let bits = wanted.iter().map(|column| row[column - 1].parse::<f64>().unwrap().to_bits()).collect();
                (0, line, None, bits)
            })
            .collect();
        prop_assert_eq!(found, expected);
    }

    #[test]
    fn any_bytes_are_read_or_refused_alike_for_any_piece_size(
        content in prop_oneof![prop::collection::vec(any::<u8>(), 0..200), nearly_a_file()],
        (separator, _) in separator(),
        timed in any::<bool>(),
        named in any::<bool>(),
        packed in any::<bool>(),
        discard in prop_oneof![
            Just(Discard::Nothing),
            (0..4_u64).prop_map(Discard::Frames),
            (0.0..1.0).prop_map(Discard::Fraction),
        ],
        stride in 1..4_u64,
        chunk in 1..40_usize,
    ) {
        let folder = TempDir::new().unwrap();
        let path = folder.path().join("run.txt");
        std::fs::write(&path, if packed { gzip(&content) } else { content }).unwrap();
        let time = if timed { TimeSource::Column(column(1)) } else { TimeSource::Interval(0.75) };
        let mut layout = layout(separator, &[1], time);
        if named {
            layout.columns.push(Column::Name("a".to_owned()));
        }
        let selection = Selection { discard, stride: NonZeroU64::new(stride).unwrap() };
        let paths = [path];
        let large = outcome(&paths, &layout, &selection, CHUNK);
        let small = outcome(&paths, &layout, &selection, chunk);
        prop_assert_eq!(&large, &small);
        if let Err(error) = large.2 {
            prop_assert!(!error.to_string().is_empty());
            prop_assert!(!error.advice().is_empty());
        }
    }

    #[test]
    fn damaged_gzip_data_never_panic(
        position in any::<prop::sample::Index>(),
        mask in 1..=255_u8,
        chunk in 1..200_usize,
    ) {
        let mut bytes = gzip(segment(0, 50).as_bytes());
        let position = position.index(bytes.len());
        bytes[position] ^= mask;
        let folder = TempDir::new().unwrap();
        let path = folder.path().join("run.txt");
        std::fs::write(&path, bytes).unwrap();
        let layout = layout(Separator::Whitespace, &[2], TimeSource::Column(column(1)));
        let (rows, _, result) = outcome(&[path], &layout, &Selection::default(), chunk);
        // Damage to the header's time stamp and the like leaves the text whole; all else is noticed.
        if result.is_ok() {
            prop_assert_eq!(rows.len(), 50);
        }
    }
}

/// Rows of a comment, a time and a value, with a stretch written twice and blank lines among them.
fn segment(from: u32, to: u32) -> String {
    let mut rows = String::new();
    for frame in from..to {
        let time = 0.25 * f64::from(frame);
        writeln!(rows, "{time} {:.5}", (time * 1.7).sin()).unwrap();
    }
    rows
}

#[test]
fn a_long_series_is_the_same_for_any_piece_size() {
    let folder = TempDir::new().unwrap();
    let first = format!("\u{feff}# t å z\r\n{}\n# restarted\n{}12 3", segment(0, 700), segment(650, 5000));
    let paths = [folder.path().join("a.txt"), folder.path().join("b.txt.gz")];
    std::fs::write(&paths[0], first).unwrap();
    std::fs::write(&paths[1], gzip(segment(4990, 6000).as_bytes())).unwrap();
    let layout = layout(Separator::Whitespace, &[2, 1], TimeSource::Column(column(1)));
    let selection = Selection { discard: Discard::Fraction(0.05), stride: NonZeroU64::new(3).unwrap() };
    let usual = outcome(&paths, &layout, &selection, CHUNK);
    let report = usual.2.as_ref().unwrap();
    assert_eq!((report.frames, report.discarded, report.kept), (6000, 300, 1900));
    assert_eq!(report.notices.len(), 3);
    for chunk in piece_sizes() {
        assert_eq!(outcome(&paths, &layout, &selection, chunk), usual, "{chunk}");
    }
}

#[test]
fn a_file_cut_at_any_byte_gives_its_whole_rows_and_nothing_else() {
    let whole = "\u{feff}# t z\r\n0.5 1.25 a\r\n\n1.5 -2.5e1 bé\n# note\n2.5 3.0D2 c\n";
    let rows = [(0.5_f64, 1.25_f64), (1.5, -25.0), (2.5, 300.0)];
    let row_ends: Vec<usize> =
        ["a\r\n", "bé\n", "c\n"].iter().map(|end| whole.find(end).unwrap() + end.len()).collect();
    let layout = layout(Separator::Whitespace, &[2], TimeSource::Column(column(1)));
    let folder = TempDir::new().unwrap();
    let path = folder.path().join("run.txt");
    for length in 0..=whole.len() {
        std::fs::write(&path, &whole.as_bytes()[..length]).unwrap();
        let (found, _, result) = outcome(std::slice::from_ref(&path), &layout, &Selection::default(), CHUNK);
        let complete = row_ends.iter().filter(|end| **end <= length).count();
        let expected: Vec<_> =
            rows[..complete].iter().map(|(time, value)| (Some(time.to_bits()), vec![value.to_bits()])).collect();
        let found: Vec<_> = found.into_iter().map(|(_, _, time, values)| (time, values)).collect();
        assert_eq!(found, expected, "{length}");
        match result {
            Ok(report) => {
                assert!(complete > 0, "{length}");
                let last_line = whole.as_bytes()[..length].rsplit(|byte| *byte == b'\n').next().unwrap();
                let is_row = last_line.first().is_some_and(u8::is_ascii_digit);
                assert_eq!(
                    report.notices.iter().filter(|notice| matches!(notice, Notice::UnfinishedLastLine { .. })).count(),
                    usize::from(is_row),
                    "{length}"
                );
            }
            Err(error) => {
                assert_eq!(complete, 0, "{length}: {error}");
                assert!(matches!(error, IngestError::NoRows { .. }), "{length}: {error}");
            }
        }
    }
}
