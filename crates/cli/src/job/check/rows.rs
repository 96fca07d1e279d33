//! The table of windows as text: comma-separated cells with their places.

use crate::job::mark::{Mark, SourceId, Typed};
use crate::job::nearest::{list, nearest};
use crate::job::problem::{Problem, Problems};

/// A table with a header.
#[derive(Debug)]
pub(super) struct Rows {
    /// The header line.
    pub header_mark: Mark,
    header: Vec<Typed<String>>,
    /// The rows below it, each with as many cells as the header.
    pub below: Vec<Vec<Typed<String>>>,
    /// Whether rows were left out because they are at fault.
    pub faulty: bool,
}

impl Rows {
    /// Reads a table: blank lines and lines that begin with `#` are passed by, the first other line is the header. Blanks around a
    /// cell mean nothing; a cell may stand in double quotes, doubled for a quote inside. Rows at fault are reported and left out.
    pub fn read(source: SourceId, text: &str, problems: &mut Problems) -> Option<Self> {
        let mut header: Option<(Mark, Vec<Typed<String>>)> = None;
        let mut rows = Vec::new();
        let mut faulty = false;
        for (mark, content) in lines(source, text) {
            let cells = match split(mark, content) {
                Ok(cells) => cells,
                Err(problem) => {
                    problems.push(problem);
                    faulty = true;
                    continue;
                }
            };
            match &header {
                None => header = Some((mark, cells)),
                Some((header_mark, names)) if names.len() != cells.len() => {
                    faulty = true;
                    problems.push(
                        Problem::at(
                            mark,
                            format!("expected {} cells in a row, as in the header, found {}", names.len(), cells.len()),
                        )
                        .label(*header_mark, "the header")
                        .help("put cells that hold a comma into double quotes"),
                    );
                }
                Some(_) => rows.push(cells),
            }
        }
        let (header_mark, header) = header?;
        Some(Self { header_mark, header, below: rows, faulty })
    }

    /// The number of the column of this name.
    pub fn column(&self, path: &str, name: &Typed<String>, problems: &mut Problems) -> Option<usize> {
        let mut found = self.header.iter().enumerate().filter(|(_, cell)| cell.value == name.value);
        match (found.next(), found.next()) {
            (Some((index, _)), None) => Some(index),
            (Some((_, first)), Some((_, second))) => {
                problems.push(
                    Problem::at(name.mark, format!("`{path}`: expected one column `{}`, found several", name.value))
                        .label(first.mark, "one")
                        .label(second.mark, "another")
                        .help("give the columns different names"),
                );
                None
            }
            _ => {
                let names = || self.header.iter().map(|cell| cell.value.as_str());
                problems.push(
                    Problem::at(
                        name.mark,
                        format!("`{path}`: expected a column of the table, {}, found `{}`", list(names()), name.value),
                    )
                    .label(self.header_mark, "the header")
                    .suggest(nearest(&name.value, names())),
                );
                None
            }
        }
    }
}

/// A complaint about a header without commas that has other separators, where more is asked for than the one column that it then has.
pub(super) fn other_separator(source: SourceId, text: &str, asked: &[&str]) -> Option<Problem> {
    let (mark, header) = lines(source, text).next()?;
    if header.contains(',') || asked.contains(&header.trim()) {
        return None;
    }
    let (what, sign) = [("semicolons", ';'), ("tabs", '\t'), ("blanks", ' ')]
        .into_iter()
        .find(|(_, sign)| header.trim().contains(*sign))?;
    let mut advice = format!("write commas in place of the {what}, and points in place of any decimal commas");
    if sign == ';' {
        advice += "; several files of one row stay separated by `;`";
    }
    Some(
        Problem::at(mark, format!("`window_table.file`: expected commas between the columns, found {what}"))
            .help(advice),
    )
}

/// The lines that are neither blank nor comments, with their places and without their ends.
fn lines(source: SourceId, text: &str) -> impl Iterator<Item = (Mark, &str)> {
    let mut next = 0;
    text.split_inclusive('\n').filter_map(move |whole| {
        let line = whole.trim_start_matches('\u{feff}');
        let start = next + (whole.len() - line.len());
        next += whole.len();
        let content = line.trim_end_matches(['\r', '\n']);
        let passed_by = content.trim().is_empty() || content.trim_start().starts_with('#');
        (!passed_by).then(|| (Mark::new(source, start..start + content.len()), content))
    })
}

/// The cells of one line.
fn split(line: Mark, content: &str) -> Result<Vec<Typed<String>>, Problem> {
    let mut cells = Vec::new();
    let mut rest = 0;
    loop {
        let blanks = content[rest..].len() - content[rest..].trim_start_matches([' ', '\t']).len();
        let begin = rest + blanks;
        let at =
            |range: std::ops::Range<usize>| Mark::new(line.source, line.start + range.start..line.start + range.end);
        let after = if content[begin..].starts_with('"') {
            let (value, length) = quoted(&content[begin..]).ok_or_else(|| {
                Problem::at(at(begin..content.len()), "expected a closing double quote, found the end of the line")
            })?;
            let end = begin + length;
            cells.push(Typed { value, mark: at(begin..end) });
            let gap = content[end..].find(',').unwrap_or(content.len() - end);
            if !content[end..end + gap].trim().is_empty() {
                return Err(Problem::at(
                    at(end..end + gap),
                    "expected a comma after the closing double quote, found text",
                )
                .help("write a double quote inside a quoted cell twice"));
            }
            end + gap
        } else {
            let end = begin + content[begin..].find(',').unwrap_or(content.len() - begin);
            let value = content[begin..end].trim_end();
            cells.push(Typed { value: value.to_owned(), mark: at(begin..begin + value.len()) });
            end
        };
        if after >= content.len() {
            return Ok(cells);
        }
        rest = after + 1;
    }
}

/// The text of a cell in double quotes, and its length with them; `None` where it is not closed.
fn quoted(text: &str) -> Option<(String, usize)> {
    let mut value = String::new();
    let mut characters = text.char_indices().skip(1).peekable();
    while let Some((index, character)) = characters.next() {
        if character != '"' {
            value.push(character);
        } else if characters.next_if(|(_, next)| *next == '"').is_some() {
            value.push('"');
        } else {
            return Some((value, index + 1));
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str) -> (Vec<Vec<String>>, usize) {
        let mut problems = Problems::default();
        let source = problems.add_source(crate::job::mark::Source { name: "t.csv".to_owned(), text: text.into() });
        let rows = Rows::read(source, text, &mut problems);
        let values = rows.map(|rows| {
            let mut all = vec![rows.header];
            all.extend(rows.below);
            all.into_iter().map(|row| row.into_iter().map(|cell| cell.value).collect()).collect()
        });
        (values.unwrap_or_default(), problems.into_report("t.csv".to_owned()).count())
    }

    #[test]
    fn comments_blank_lines_and_blanks_mean_nothing() {
        let (rows, problems) = read("\u{feff}# made up\r\n\r\nname , k\r\n  z1,\t 250 \r\n# z2,0\r\nz3,400");
        assert_eq!(rows, [["name", "k"], ["z1", "250"], ["z3", "400"]]);
        assert_eq!(problems, 0);
    }

    #[test]
    fn quotes_keep_commas_and_doubled_quotes() {
        let (rows, problems) = read("name,note\n\"a,b\" ,\"say \"\"so\"\"\"\n");
        assert_eq!(rows[1], ["a,b", "say \"so\""]);
        assert_eq!(problems, 0);
    }

    #[test]
    fn an_empty_last_cell_counts() {
        let (rows, problems) = read("a,b\n3,\n");
        assert_eq!(rows[1], ["3", ""]);
        assert_eq!(problems, 0);
    }

    #[test]
    fn rows_at_fault_are_reported_one_by_one() {
        let (rows, problems) = read("a,b\n1\n1,2,3\n\"x,2\n\"x\"y,2\n5,6\n");
        assert_eq!(rows, [["a", "b"], ["5", "6"]]);
        assert_eq!(problems, 4);
    }

    #[test]
    fn the_mark_of_a_cell_covers_its_text() {
        let text = "a,b\n 7 , \"8\"\n";
        let mut problems = Problems::default();
        let source = problems.add_source(crate::job::mark::Source { name: String::new(), text: text.into() });
        let rows = Rows::read(source, text, &mut problems).map(|rows| rows.below).unwrap_or_default();
        let marked: Vec<&str> = rows[0].iter().map(|cell| &text[cell.mark.range()]).collect();
        assert_eq!(marked, ["7", "\"8\""]);
    }
}
