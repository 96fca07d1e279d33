//! Reader for the comma-separated reference tables.

use std::fmt;
use std::str::FromStr;

/// A table of numbers with a header line. Lines that start with `#` and empty lines are skipped.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    names: Vec<String>,
    rows: Vec<Vec<f64>>,
}

/// What is wrong with a table.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum TableError {
    /// There is no header line.
    NoHeader,
    /// A row has another number of fields than the header.
    Fields {
        /// Line, from 1.
        line: usize,
        /// Fields of the header.
        expected: usize,
        /// Fields of the row.
        found: usize,
    },
    /// A field is not a number.
    Number {
        /// Line, from 1.
        line: usize,
        /// The field.
        found: String,
    },
    /// No column has this name.
    NoColumn {
        /// The name asked for.
        name: String,
        /// The names there are.
        present: Vec<String>,
    },
    /// The numbers of a table cannot be what the reader needs.
    Content {
        /// What was expected and found.
        reason: String,
    },
}

impl fmt::Display for TableError {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoHeader => write!(out, "expected a header line, found none"),
            Self::Fields { line, expected, found } => {
                write!(out, "line {line}: expected {expected} fields, found {found}")
            }
            Self::Number { line, found } => {
                write!(out, "line {line}: expected a number, found `{found}`")
            }
            Self::NoColumn { name, present } => {
                write!(out, "expected a column `{name}`, found {}", present.join(", "))
            }
            Self::Content { reason } => out.write_str(reason),
        }
    }
}

impl std::error::Error for TableError {}

impl FromStr for Table {
    type Err = TableError;

    fn from_str(text: &str) -> Result<Self, TableError> {
        let mut lines = text
            .lines()
            .enumerate()
            .map(|(index, line)| (index + 1, line.trim()))
            .filter(|(_, line)| !line.is_empty() && !line.starts_with('#'));
        let (_, header) = lines.next().ok_or(TableError::NoHeader)?;
        let names: Vec<String> = header.split(',').map(|name| name.trim().to_owned()).collect();
        let rows = lines.map(|(number, line)| parse_row(number, line, names.len())).collect::<Result<_, _>>()?;
        Ok(Self { names, rows })
    }
}

fn parse_row(number: usize, line: &str, expected: usize) -> Result<Vec<f64>, TableError> {
    let row: Vec<f64> = line
        .split(',')
        .map(str::trim)
        .map(|field| field.parse().map_err(|_| TableError::Number { line: number, found: field.to_owned() }))
        .collect::<Result<_, _>>()?;
    if row.len() == expected { Ok(row) } else { Err(TableError::Fields { line: number, expected, found: row.len() }) }
}

impl Table {
    /// Names of the columns.
    #[must_use]
    pub fn names(&self) -> &[String] {
        &self.names
    }

    /// The rows, each with one number a column.
    #[must_use]
    pub fn rows(&self) -> &[Vec<f64>] {
        &self.rows
    }

    /// One column by name.
    ///
    /// # Errors
    /// If no column has the name.
    pub fn column(&self, name: &str) -> Result<Vec<f64>, TableError> {
        let index = self
            .names
            .iter()
            .position(|candidate| candidate == name)
            .ok_or_else(|| TableError::NoColumn { name: name.to_owned(), present: self.names.clone() })?;
        Ok(self.rows.iter().map(|row| row[index]).collect())
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a failed parse fails the test")]

    use super::*;

    #[test]
    fn comments_blanks_and_spaces_are_passed_over() {
        let table: Table = "# made up\n\n x , y\n1.5,-2\n# between\n 3e2 , 0.25 \n".parse().unwrap();
        assert_eq!(table.names(), ["x", "y"]);
        assert_eq!(table.rows(), [vec![1.5, -2.0], vec![300.0, 0.25]]);
        assert_eq!(table.column("y").unwrap(), [-2.0, 0.25]);
    }

    #[test]
    fn faults_are_named_with_their_line() {
        let message = |text: &str| text.parse::<Table>().unwrap_err().to_string();
        assert_eq!(message("# only a comment\n"), "expected a header line, found none");
        assert_eq!(message("x,y\n1,2\n3\n"), "line 3: expected 2 fields, found 1");
        assert_eq!(message("x,y\n1,two\n"), "line 2: expected a number, found `two`");
        let table: Table = "x,y\n1,2\n".parse().unwrap();
        assert_eq!(table.column("z").unwrap_err().to_string(), "expected a column `z`, found x, y");
    }
}
