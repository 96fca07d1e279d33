//! The committed demo data are what the generator makes, and show what they are meant to show.
#![expect(clippy::unwrap_used, reason = "a missing or broken demo file fails the test")]

#[path = "../examples/make_demo/scenario.rs"]
mod scenario;

use std::path::Path;

fn text_of<'a>(files: &'a [(String, String)], name: &str) -> &'a str {
    &files.iter().find(|(candidate, _)| candidate == name).unwrap().1
}

fn times(text: &str) -> Vec<f64> {
    let rows = text.lines().filter(|line| !line.starts_with('#'));
    rows.map(|row| row.split_whitespace().next().unwrap().parse().unwrap()).collect()
}

#[test]
fn committed_files_are_those_of_the_generator() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../demo/data");
    let files = scenario::files().unwrap();
    for (name, text) in &files {
        let committed = std::fs::read_to_string(folder.join(name)).unwrap();
        assert!(committed == *text, "{name} differs; run the make_demo example again");
    }
    assert_eq!(std::fs::read_dir(folder).unwrap().count(), files.len());
    let size: usize = files.iter().map(|(_, text)| text.len()).sum();
    assert!(size < 3_500_000, "{size} bytes");
}

#[test]
fn the_continuation_repeats_frames_word_for_word() {
    let files = scenario::files().unwrap();
    let (first, second) = (text_of(&files, "z11.txt"), text_of(&files, "z11_continued.txt"));
    let (before, after) = (times(first), times(second));
    assert!((before[before.len() - 1] - 3200.0).abs() < 0.5 && (after[0] - 3150.0).abs() < 0.5);
    let repeated = second.lines().filter(|row| !row.starts_with('#') && first.contains(row)).count();
    assert_eq!(repeated, 26);
}

#[test]
fn two_starts_of_a_window_share_no_frame() {
    let files = scenario::files().unwrap();
    let (first, second) = (text_of(&files, "z17_start1.txt"), text_of(&files, "z17_start2.txt"));
    assert_eq!(times(first), times(second));
    assert!(!first.lines().zip(second.lines()).skip(2).any(|(one, other)| one == other));
}
