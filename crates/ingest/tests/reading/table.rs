//! Tables of two columns.

use std::num::NonZeroUsize;

use spandrel_ingest::{Column, IngestError, Separator, Table, TableLayout, read_table};
use tempfile::TempDir;

fn read(content: &str, separator: Separator) -> Result<Table, (String, IngestError)> {
    let folder = TempDir::new().unwrap();
    let path = folder.path().join("table.txt");
    std::fs::write(&path, content).unwrap();
    let layout = TableLayout {
        separator,
        comments: vec!["#".into()],
        columns: [Column::Number(NonZeroUsize::new(3).unwrap()), Column::Number(NonZeroUsize::new(1).unwrap())],
    };
    read_table(&path, &layout).map_err(|error| {
        let folder = format!("{}/", folder.path().display());
        (error.to_string().replace(&folder, ""), error)
    })
}

#[test]
fn the_wanted_columns_come_whole_and_with_their_lines() {
    let table = read("# table\n7.5 x 0.5\n\n-2.5 y 1.5\n", Separator::Whitespace).unwrap();
    assert_eq!(table.first, [0.5, 1.5]);
    assert_eq!(table.second, [7.5, -2.5]);
    assert_eq!(table.lines, [2, 4]);
    assert_eq!(table.bytes, 30);
    assert_eq!(table.sha256.len(), 64);
}

#[test]
fn a_last_row_without_a_line_end_is_refused() {
    let (message, error) = read("7.5,x,0.5\n-2.5,y,1.5", Separator::Comma).unwrap_err();
    assert_eq!(message, "table.txt:2: expected a line end after the last row, found `-2.5,y,1.5` without one");
    assert_eq!(error.advice(), "check that the row is complete, and end it with a line break");
}

#[test]
fn a_fault_in_a_row_is_placed() {
    let (message, _) = read("7.5\tx\t0.5\n-2.5\ty\tnone\n", Separator::Tab).unwrap_err();
    assert_eq!(message, "table.txt:2:8: expected a number in column 3, found `none`");
}

#[test]
fn a_table_of_more_than_a_million_rows_is_refused() {
    let content = "7.5 x 0.5\n".repeat(1_000_001);
    let (message, _) = read(&content, Separator::Whitespace).unwrap_err();
    assert_eq!(message, "table.txt:1000001: expected a table of at most 1000000 rows, found more");
}
