//! Joining segments, leaving out repeated frames, selecting, and reporting.

use std::fmt::Write;
use std::num::NonZeroU64;

use crate::common::{Files, columns, gzip, number, read, timed};
use spandrel_ingest::{Discard, Layout, Notice, ReadError, Selection, TimeSource, read_series};

fn selection(discard: Discard, stride: u64) -> Selection {
    Selection { discard, stride: NonZeroU64::new(stride).unwrap() }
}

/// Rows of frames `from..to`: the time is half the frame's number, the value thrice that number plus `offset`.
fn frames(from: u32, to: u32, offset: f64) -> String {
    let mut rows = String::new();
    for frame in (from..to).map(f64::from) {
        writeln!(rows, "{} {}", 0.5 * frame, 3.0 * frame + offset).unwrap();
    }
    rows
}

#[test]
fn segments_are_joined_in_the_order_given() {
    let files = Files::new();
    let paths = [files.add("b.txt", frames(0, 4, 0.0)), files.add("a.txt", gzip(frames(4, 9, 0.0).as_bytes()))];
    let (report, rows) = read(&paths, &timed(), &Selection::default()).unwrap();
    let expected: Vec<Vec<f64>> = (0..9).map(|frame| vec![3.0 * f64::from(frame)]).collect();
    assert_eq!(rows.values, expected);
    assert_eq!(rows.times, (0..9).map(|frame| 0.5 * f64::from(frame)).collect::<Vec<_>>());
    assert_eq!(rows.places[3..5], [(0, 4), (1, 1)]);
    assert_eq!(rows.chunk_lengths, [4, 5]);
    assert_eq!((report.frames, report.discarded, report.kept), (9, 0, 9));
    assert_eq!(report.interval, Some(0.5));
    assert!(report.notices.is_empty());
}

#[test]
fn of_frames_written_twice_the_first_copy_is_kept() {
    let files = Files::new();
    let paths = [
        // Stopped after frame 6, begun again from frame 4; the copies have other values.
        files.add("a.txt", format!("# run\n{}{}", frames(0, 7, 0.0), frames(4, 10, 0.25))),
        // Begins with the frame at which the first file ends.
        files.add("b.txt", frames(9, 14, 0.5)),
    ];
    let (report, rows) = read(&paths, &timed(), &Selection::default()).unwrap();
    let expected: Vec<Vec<f64>> = (0..14_u32)
        .map(|frame| {
            let offset = match frame {
                0..7 => 0.0,
                7..10 => 0.25,
                _ => 0.5,
            };
            vec![3.0 * f64::from(frame) + offset]
        })
        .collect();
    assert_eq!(rows.values, expected);
    assert_eq!(
        report.notices,
        [
            Notice::RepeatedFrames { path: paths[0].clone(), first_line: 9, count: 3, first_time: 2.0, last_time: 3.0 },
            Notice::RepeatedFrames { path: paths[1].clone(), first_line: 1, count: 1, first_time: 4.5, last_time: 4.5 },
        ]
    );
    assert_eq!(
        files.relative(&report.notices[0].to_string()),
        "a.txt:9: 3 rows from time 2 to 3 repeat earlier frames and were left out"
    );
    let counts: Vec<_> =
        report.segments.iter().map(|segment| (segment.rows_read, segment.rows_repeated, segment.rows_kept)).collect();
    assert_eq!(counts, [(13, 3, 10), (5, 1, 4)]);
    assert_eq!(report.frames, 14);
}

#[test]
fn notices_of_many_restarts_are_gathered_in_one() {
    // 130 restarts, each two frames back: frames k*4 .. k*4+6.
    let files = Files::new();
    let content: String = (0..131).map(|start| frames(4 * start, 4 * start + 6, 0.0)).collect();
    let path = files.add("run.txt", content);
    let (report, rows) = read(&[path], &timed(), &Selection::default()).unwrap();
    assert_eq!(rows.values.len(), 4 * 131 + 2);
    assert_eq!(report.notices.len(), 101);
    assert_eq!(report.notices[100], Notice::MoreRepeatedFrames { stretches: 30, count: 60 });
}

#[test]
fn a_last_line_without_an_end_is_left_out_even_if_it_could_be_read() {
    let files = Files::new();
    let path = files.add("run.txt", "0 1.5\n1 2.5\n2 3.5");
    let (report, rows) = read(std::slice::from_ref(&path), &timed(), &Selection::default()).unwrap();
    assert_eq!(rows.values, [[1.5], [2.5]]);
    assert_eq!(report.notices, [Notice::UnfinishedLastLine { path, line: 3, text: "2 3.5".into() }]);
    assert_eq!(
        files.relative(&report.notices[0].to_string()),
        "run.txt:3: the last line has no line end and was left out: `2 3.5`"
    );
}

#[test]
fn an_unfinished_line_between_segments_costs_one_frame_only() {
    let files = Files::new();
    let paths = [files.add("a.txt", "0 1.5\n1 2.5\n2 3."), files.add("b.txt", "2 3.75\n3 4.5\n")];
    let (report, rows) = read(&paths, &timed(), &Selection::default()).unwrap();
    assert_eq!(rows.values, [[1.5], [2.5], [3.75], [4.5]]);
    assert_eq!(report.notices.len(), 1);
}

#[test]
fn an_unfinished_comment_or_blank_line_is_not_worth_a_notice() {
    let files = Files::new();
    for end in ["# stopp", "   ", "\t\r"] {
        let path = files.add("run.txt", format!("0 1.5\n{end}"));
        let (report, _) = read(&[path], &timed(), &Selection::default()).unwrap();
        assert_eq!(report.notices, [], "{end:?}");
    }
}

#[test]
fn stride_is_counted_over_all_segments_after_the_discard() {
    let files = Files::new();
    let paths = [files.add("a.txt", frames(0, 6, 0.0)), files.add("b.txt", frames(5, 12, 0.0))];
    let kept = |discard, stride| {
        let (report, rows) = read(&paths, &timed(), &selection(discard, stride)).unwrap();
        assert_eq!(report.frames, 12);
        assert_eq!(usize::try_from(report.kept), Ok(rows.values.len()));
        let frames: Vec<f64> = rows.times.iter().map(|time| 2.0 * time).collect();
        (report.discarded, frames)
    };
    assert_eq!(kept(Discard::Nothing, 5), (0, vec![0.0, 5.0, 10.0]));
    assert_eq!(kept(Discard::Frames(2), 4), (2, vec![2.0, 6.0, 10.0]));
    assert_eq!(kept(Discard::Time(1.5), 4), (3, vec![3.0, 7.0, 11.0]));
    assert_eq!(kept(Discard::Time(1.25), 4), (3, vec![3.0, 7.0, 11.0]));
    assert_eq!(kept(Discard::Fraction(0.6), 2), (7, vec![7.0, 9.0, 11.0]));
    assert_eq!(kept(Discard::Fraction(0.0), 7), (0, vec![0.0, 7.0]));
    assert_eq!(kept(Discard::Nothing, u64::MAX), (0, vec![0.0]));
}

#[test]
fn a_discarded_time_is_counted_from_the_first_frame() {
    let files = Files::new();
    let path = files.add("run.txt", frames(100, 110, 0.0));
    let (report, rows) = read(&[path], &timed(), &selection(Discard::Time(2.0), 1)).unwrap();
    assert_eq!(report.discarded, 4);
    assert_eq!(rows.times, [52.0, 52.5, 53.0, 53.5, 54.0, 54.5]);
}

#[test]
fn a_stated_interval_gives_the_times_over_all_segments() {
    let files = Files::new();
    let paths = [files.add("a.txt", frames(0, 3, 0.0)), files.add("b.txt", frames(0, 4, 0.0))];
    let layout = Layout { time: TimeSource::Interval(0.25), ..columns(&[number(2)]) };
    let (report, rows) = read(&paths, &layout, &selection(Discard::Time(0.5), 2)).unwrap();
    assert_eq!(rows.times, [0.5, 1.0, 1.5]);
    assert_eq!(report.interval, Some(0.25));
    let spans: Vec<_> = report.segments.iter().map(|segment| (segment.first_time, segment.last_time)).collect();
    assert_eq!(spans, [(Some(0.0), Some(0.5)), (Some(0.75), Some(1.5))]);
}

#[test]
fn without_times_nothing_is_taken_for_a_repetition() {
    let files = Files::new();
    let path = files.add("run.txt", "7 1\n7 2\n7 3\n");
    let (report, rows) = read(&[path], &columns(&[number(1)]), &Selection::default()).unwrap();
    assert_eq!(rows.values, [[7.0], [7.0], [7.0]]);
    assert!(rows.times.is_empty());
    assert_eq!(report.interval, None);
    assert_eq!(report.segments[0].first_time, None);
}

#[test]
fn digest_and_size_are_those_of_the_bytes_on_disk() {
    // The digests come from an independent implementation: the sha256sum of GNU coreutils.
    let files = Files::new();
    let plain = files.add("run.txt", "0.5 abc 7\n");
    let (report, _) = read(&[plain], &columns(&[number(1)]), &Selection::default()).unwrap();
    assert_eq!(report.segments[0].bytes, 10);
    assert_eq!(report.segments[0].sha256, "0bc4943d2e402c53207cf16832a4dc62b8bacac5e364a0651901f86440fcbea6");
    // The same row as GNU gzip packs it.
    let packed: &[u8] = &[
        31, 139, 8, 0, 0, 0, 0, 0, 0, 3, 51, 208, 51, 85, 72, 76, 74, 86, 48, 231, 2, 0, 15, 120, 140, 130, 10, 0, 0, 0,
    ];
    let path = files.add("run.gz", packed);
    let (report, _) = read(&[path], &columns(&[number(1)]), &Selection::default()).unwrap();
    assert_eq!(report.segments[0].bytes, packed.len() as u64);
    assert_eq!(report.segments[0].sha256, "666d6c28a260d399f5d4ec1c8445533f4837ba00ca339e18677be33ff2705cd5");
}

#[test]
fn the_caller_can_stop_with_an_error_of_its_own() {
    let files = Files::new();
    let path = files.add("run.txt", format!("{}nonsense\n", frames(0, 5000, 0.0)));
    let mut calls = 0;
    let result = read_series(&[path], &timed(), &Selection::default(), &mut |chunk| {
        calls += 1;
        assert_eq!(chunk.len(), 4096);
        Err("enough")
    });
    assert_eq!(result, Err(ReadError::Sink("enough")));
    assert_eq!(calls, 1);
}

#[test]
fn the_caller_is_asked_now_and_then_while_nothing_is_kept() {
    let files = Files::new();
    let path = files.add("run.txt", "2.5\n".repeat(200_000));
    for discard in [Discard::Frames(199_999), Discard::Fraction(0.999)] {
        let result =
            read_series(std::slice::from_ref(&path), &columns(&[number(1)]), &selection(discard, 1), &mut |chunk| {
                assert!(chunk.is_empty());
                assert!(chunk.bytes_read() > 0);
                Err("enough")
            });
        assert_eq!(result, Err(ReadError::Sink("enough")));
    }
}

#[test]
fn the_same_column_can_be_value_and_time() {
    let files = Files::new();
    let path = files.add("run.txt", "0.5 1\n1.5 2\n");
    let layout = Layout { columns: vec![number(1), number(2), number(1)], ..timed() };
    let (_, rows) = read(&[path], &layout, &Selection::default()).unwrap();
    assert_eq!(rows.values, [[0.5, 1.0, 0.5], [1.5, 2.0, 1.5]]);
    assert_eq!(rows.times, [0.5, 1.5]);
}

#[test]
fn a_report_can_be_written_as_plain_data() {
    let files = Files::new();
    let path = files.add("run.txt", "0.5 1\n1.5 2\n1.5 3\n2.5");
    let (report, _) = read(&[path], &timed(), &Selection::default()).unwrap();
    let text = files.relative(&serde_json::to_string(&report).unwrap());
    let data: serde_json::Value = serde_json::from_str(&text).unwrap();
    assert_eq!(data["segments"][0]["path"], "run.txt");
    assert_eq!(data["segments"][0]["rows_repeated"], 1);
    assert_eq!(data["interval"], 1.0);
    assert_eq!(
        data["notices"],
        serde_json::json!([
            {"kind": "repeated_frames", "path": "run.txt", "first_line": 3, "count": 1, "first_time": 1.5, "last_time": 1.5},
            {"kind": "unfinished_last_line", "path": "run.txt", "line": 4, "text": "2.5"},
        ])
    );
}
