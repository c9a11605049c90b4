//! Reads tables of numbers that a user supplies: columns with names.
//!
//! Lines beginning with # are comments; the first other line names the columns. Columns are found
//! by name, so their order does not matter and others may be present. What must be declared of a
//! table of values against age: [`declared`].

pub mod declared;

use serde::{Deserialize, Serialize};
use std::borrow::Cow;
use std::fmt;
use std::path::{Path, PathBuf};

/// What stands between the cells of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Layout {
    /// Commas.
    Comma,
    /// One tab.
    Tab,
    /// Semicolons.
    Semicolon,
    /// Any number of spaces and tabs.
    Whitespace,
}

impl fmt::Display for Layout {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Comma => "commas",
            Self::Tab => "tabs",
            Self::Semicolon => "semicolons",
            Self::Whitespace => "white space",
        })
    }
}

/// Why a table cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum TableError {
    /// The file cannot be read.
    #[error("{path}: cannot be read: {source}; the path is relative to the file that names it")]
    Read {
        /// The file.
        path: PathBuf,
        /// What the system says.
        source: std::io::Error,
    },
    /// A line has more or fewer cells than the names above.
    #[error("{path}:{line}: {found} cells where the first line names {needed} columns")]
    Ragged {
        /// The file.
        path: PathBuf,
        /// Line, from 1.
        line: u64,
        /// Cells in it.
        found: u64,
        /// Columns.
        needed: u64,
    },
    /// The file is no text.
    #[error("{path}:{line}: not UTF-8; save the table as UTF-8 text")]
    NotText {
        /// The file.
        path: PathBuf,
        /// Line, from 1.
        line: u64,
    },
    /// A column is missing.
    #[error("{path}: no column `{column}` among: {present} (columns are separated by {layout})")]
    Column {
        /// The file.
        path: PathBuf,
        /// What stands between cells.
        layout: Layout,
        /// Column looked for.
        column: String,
        /// Columns there.
        present: String,
    },
    /// A column is there twice.
    #[error("{path}: column `{column}` is there twice")]
    Twice {
        /// The file.
        path: PathBuf,
        /// The column.
        column: String,
    },
    /// A cell is not a number.
    #[error(
        "{path}:{line}: `{text}` in column `{column}` is not a number{}",
        hint(text)
    )]
    Number {
        /// The file.
        path: PathBuf,
        /// Line, from 1.
        line: u64,
        /// Column.
        column: String,
        /// What stands there.
        text: String,
    },
    /// Nothing below the names.
    #[error("{path}: no rows below the column names")]
    Empty {
        /// The file.
        path: PathBuf,
    },
    /// A single row.
    #[error("{path}: one row; values between ages need at least two")]
    OneRow {
        /// The file.
        path: PathBuf,
    },
    /// An age stands in two rows one below the other.
    #[error("{path}:{line}: the age {age} is there twice{}", more(*others))]
    SameAge {
        /// The file.
        path: PathBuf,
        /// Line of the second, from 1.
        line: u64,
        /// The age as it is written.
        age: f64,
        /// How many rows below repeat an age too.
        others: usize,
    },
    /// Ages do not run as declared.
    #[error(
        "{path}:{line}: the age {second} follows {first}, which is {found}, but {declared} is declared{}; \
         sort the rows, or correct age_order or age_direction",
        more(*others)
    )]
    Order {
        /// The file.
        path: PathBuf,
        /// Line of the second, from 1.
        line: u64,
        /// One age as it is written.
        first: f64,
        /// The next.
        second: f64,
        /// Which way it goes, "older" or "younger".
        found: &'static str,
        /// What was declared.
        declared: &'static str,
        /// How many rows below go that way too.
        others: usize,
    },
    /// Two rows are too far apart.
    #[error(
        "{path}:{line}: a gap of {gap_kyr} kyr before the age {age}, largest_gap_kyr allows {largest_kyr}{}; \
         fill it, or correct age_unit or largest_gap_kyr",
        more(*others)
    )]
    Gap {
        /// The file.
        path: PathBuf,
        /// Line of the second row, from 1.
        line: u64,
        /// Its age as it is written.
        age: f64,
        /// Distance of the two, kyr.
        gap_kyr: f64,
        /// What is allowed, kyr.
        largest_kyr: f64,
        /// How many rows below come after a gap too.
        others: usize,
    },
}

/// In words that more rows have the same fault.
pub fn more(others: usize) -> String {
    match others {
        0 => String::new(),
        1 => " (and one row below)".to_owned(),
        _ => format!(" (and {others} rows below)"),
    }
}

/// What may be meant by a text that is no number.
fn hint(text: &str) -> &'static str {
    if text.contains(',') {
        "; decimals are written with a point"
    } else {
        ""
    }
}

/// Columns of a table, all of the same length.
#[derive(Clone, Debug, PartialEq)]
pub struct Columns {
    /// One vector for each name asked for, in that order.
    pub values: Vec<Vec<f64>>,
    /// Line of each row in the file, from 1.
    pub lines: Vec<u64>,
}

/// Reads the named columns.
///
/// # Errors
/// When the file cannot be read, a column is missing, or a cell is not a finite number.
pub fn read_columns(path: &Path, layout: Layout, columns: &[&str]) -> Result<Columns, TableError> {
    let failed = |error| failure(path, error);
    let bytes = std::fs::read(path).map_err(|source| TableError::Read {
        path: path.to_owned(),
        source,
    })?;
    let text = text(path, &bytes)?;
    let (delimiter, text) = match layout {
        Layout::Comma => (b',', Cow::Borrowed(text)),
        Layout::Tab => (b'\t', Cow::Borrowed(text)),
        Layout::Semicolon => (b';', Cow::Borrowed(text)),
        Layout::Whitespace => (b'\t', Cow::Owned(with_single_tabs(text))),
    };
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .delimiter(delimiter)
        .trim(csv::Trim::All)
        .from_reader(text.as_bytes());
    let header = reader.headers().map_err(failed)?.clone();
    for column in columns {
        if header.iter().filter(|name| name == column).count() > 1 {
            return Err(TableError::Twice {
                path: path.to_owned(),
                column: (*column).to_owned(),
            });
        }
    }
    let position = |column: &&str| {
        header
            .iter()
            .position(|name| name == *column)
            .ok_or_else(|| TableError::Column {
                path: path.to_owned(),
                layout,
                column: (*column).to_owned(),
                present: header.iter().collect::<Vec<_>>().join(", "),
            })
    };
    let positions = columns
        .iter()
        .map(position)
        .collect::<Result<Vec<_>, _>>()?;
    let mut values = vec![Vec::new(); columns.len()];
    let mut lines = Vec::new();
    for row in reader.records() {
        let row = row.map_err(failed)?;
        let line = row.position().map_or(0, csv::Position::line);
        lines.push(line);
        for ((column, at), into) in columns.iter().zip(&positions).zip(&mut values) {
            let text = row.get(*at).unwrap_or_default();
            let number = text.parse().ok().filter(|v: &f64| v.is_finite());
            into.push(number.ok_or_else(|| TableError::Number {
                path: path.to_owned(),
                line,
                column: (*column).to_owned(),
                text: text.to_owned(),
            })?);
        }
    }
    if lines.is_empty() {
        return Err(TableError::Empty {
            path: path.to_owned(),
        });
    }
    Ok(Columns { values, lines })
}

/// The bytes as text.
fn text<'a>(path: &Path, bytes: &'a [u8]) -> Result<&'a str, TableError> {
    std::str::from_utf8(bytes).map_err(|error| {
        // The first part ends with the last line that can be read, be it a beginning.
        let lines = bytes[..error.valid_up_to()].split(|byte| *byte == b'\n');
        TableError::NotText {
            path: path.to_owned(),
            line: lines.count() as u64,
        }
    })
}

/// The same lines with one tab wherever white space stands between cells.
fn with_single_tabs(text: &str) -> String {
    let mut tabbed = String::with_capacity(text.len());
    for line in text.lines() {
        for (number, cell) in line.split_whitespace().enumerate() {
            if number > 0 {
                tabbed.push('\t');
            }
            tabbed.push_str(cell);
        }
        tabbed.push('\n');
    }
    tabbed
}

/// The reader's error in words of the user.
fn failure(path: &Path, error: csv::Error) -> TableError {
    let path = path.to_owned();
    let line = error.position().map_or(1, csv::Position::line);
    match error.into_kind() {
        csv::ErrorKind::UnequalLengths {
            expected_len, len, ..
        } => TableError::Ragged {
            path,
            line,
            found: len,
            needed: expected_len,
        },
        csv::ErrorKind::Utf8 { .. } => TableError::NotText { path, line },
        csv::ErrorKind::Io(source) => TableError::Read { path, source },
        other => TableError::Read {
            path,
            source: std::io::Error::other(format!("{other:?}")),
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    fn laid_out(layout: Layout, text: &str) -> Result<Columns, TableError> {
        let mut file = tempfile::NamedTempFile::new().unwrap();
        file.write_all(text.as_bytes()).unwrap();
        read_columns(file.path(), layout, &["age_kyr", "co2_ppm"])
    }

    fn table(text: &str) -> Result<Columns, TableError> {
        laid_out(Layout::Comma, text)
    }

    #[test]
    fn every_layout_is_read_as_it_is_declared() {
        let comma = "# made up\nage_kyr,co2_ppm\n0,280\n\n20,200\n";
        let expected = table(comma).unwrap();
        for (layout, between) in [
            (Layout::Tab, "\t"),
            (Layout::Semicolon, " ; "),
            (Layout::Whitespace, " \t  "),
        ] {
            let text = comma.replace(',', between);
            assert_eq!(laid_out(layout, &text).unwrap(), expected, "{layout}");
            let wrong = table(&text).unwrap_err().to_string();
            assert!(wrong.contains("separated by commas"), "{wrong}");
        }
        let text = "  # first\n  age_kyr   co2_ppm\n  0  280\n  20 200";
        let read = laid_out(Layout::Whitespace, text).unwrap();
        assert_eq!(
            (&read.values, &read.lines[..]),
            (&expected.values, &[3, 4][..])
        );
        let wrong = laid_out(Layout::Semicolon, "age_kyr;co2_ppm\n0;280,5\n").unwrap_err();
        assert!(
            wrong
                .to_string()
                .ends_with("; decimals are written with a point")
        );
    }

    #[test]
    fn columns_are_found_by_name_and_comments_skipped() {
        let read = table("# made up\nco2_ppm, other, age_kyr\n280, x, 0\n200, y, 20\n").unwrap();
        assert_eq!(read.values, vec![vec![0.0, 20.0], vec![280.0, 200.0]]);
        assert_eq!(read.lines, [3, 4]);
    }

    #[test]
    fn what_is_wrong_is_named_with_its_line() {
        let message = |text: &str| table(text).unwrap_err().to_string();
        assert!(
            message("age_kyr,co2_ppm\n0,280\n1,abc\n").contains(":3: `abc` in column `co2_ppm`")
        );
        assert!(
            message("age_kyr,ppm\n0,280\n").contains("no column `co2_ppm` among: age_kyr, ppm")
        );
        assert!(message("age_kyr,co2_ppm\n").contains("no rows"));
    }
}
