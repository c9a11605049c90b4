//! Reads tables of numbers that a user supplies: comma-separated columns with names.
//!
//! Lines beginning with # are comments; the first other line names the columns. Columns are found
//! by name, so their order does not matter and others may be present.

use std::path::{Path, PathBuf};

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
    #[error("{path}: no column `{column}` among: {present} (columns are separated by commas)")]
    Column {
        /// The file.
        path: PathBuf,
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
    #[error("{path}:{line}: `{text}` in column `{column}` is not a number")]
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
/// When the file cannot be read, a column is missing, or a cell is not a number.
pub fn read_columns(path: &Path, columns: &[&str]) -> Result<Columns, TableError> {
    let failed = |error| failure(path, error);
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .trim(csv::Trim::All)
        .from_path(path)
        .map_err(failed)?;
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

    fn table(text: &str) -> Result<Columns, TableError> {
        let mut file = tempfile::NamedTempFile::new().unwrap();
        file.write_all(text.as_bytes()).unwrap();
        read_columns(file.path(), &["age_kyr", "co2_ppm"])
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
