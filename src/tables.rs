//! Reads tables of numbers that a user supplies: comma-separated columns with names.
//!
//! Lines beginning with # are comments; the first other line names the columns. Columns are found
//! by name, so their order does not matter and others may be present.

use std::path::{Path, PathBuf};

/// Why a table cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum TableError {
    /// The file cannot be read or is not such a table.
    #[error("{path}: {source}")]
    Read {
        /// The file.
        path: PathBuf,
        /// What the reader says, with the line.
        source: csv::Error,
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
    #[error("{path}, line {line}: `{text}` in column `{column}` is not a number")]
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

/// Reads the named columns; the result holds one vector per name, all of the same length.
///
/// # Errors
/// When the file cannot be read, a column is missing, or a cell is not a number.
pub fn read_columns(path: &Path, columns: &[&str]) -> Result<Vec<Vec<f64>>, TableError> {
    let failed = |source| TableError::Read {
        path: path.to_owned(),
        source,
    };
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
    for row in reader.records() {
        let row = row.map_err(failed)?;
        for ((column, at), into) in columns.iter().zip(&positions).zip(&mut values) {
            let text = row.get(*at).unwrap_or_default();
            let number = text.parse().ok().filter(|v: &f64| v.is_finite());
            into.push(number.ok_or_else(|| TableError::Number {
                path: path.to_owned(),
                line: row.position().map_or(0, csv::Position::line),
                column: (*column).to_owned(),
                text: text.to_owned(),
            })?);
        }
    }
    if values.iter().any(Vec::is_empty) {
        return Err(TableError::Empty {
            path: path.to_owned(),
        });
    }
    Ok(values)
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    fn table(text: &str) -> Result<Vec<Vec<f64>>, TableError> {
        let mut file = tempfile::NamedTempFile::new().unwrap();
        file.write_all(text.as_bytes()).unwrap();
        read_columns(file.path(), &["age_kyr", "co2_ppm"])
    }

    #[test]
    fn columns_are_found_by_name_and_comments_skipped() {
        let read = table("# made up\nco2_ppm, other, age_kyr\n280, x, 0\n200, y, 20\n").unwrap();
        assert_eq!(read, vec![vec![0.0, 20.0], vec![280.0, 200.0]]);
    }

    #[test]
    fn what_is_wrong_is_named_with_its_line() {
        let message = |text: &str| table(text).unwrap_err().to_string();
        assert!(
            message("age_kyr,co2_ppm\n0,280\n1,abc\n")
                .contains("line 3: `abc` in column `co2_ppm`")
        );
        assert!(
            message("age_kyr,ppm\n0,280\n").contains("no column `co2_ppm` among: age_kyr, ppm")
        );
        assert!(message("age_kyr,co2_ppm\n").contains("no rows"));
    }
}
