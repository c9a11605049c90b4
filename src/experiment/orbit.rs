//! The integrated orbit as a file: from constants and ages to a table.

use crate::config::InputFile;
use crate::config::orbit_constants::{self, OrbitConstants, OrbitConstantsError};
use crate::orbit::integration::{self, NOT_KNOWN, Progress, Span, SpanError};
use crate::orbit::solution::orbit_table::OrbitTable;
use crate::output::OutputError;
use crate::output::Overwrite;
use crate::output::plain::PlainFile;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

/// An orbit that could not be integrated or written.
#[derive(Debug, thiserror::Error)]
pub enum OrbitCommandError {
    /// The constants.
    #[error(transparent)]
    Constants(#[from] OrbitConstantsError),
    /// The ages.
    #[error(transparent)]
    Span(#[from] SpanError),
    /// The constants were refused by the integration itself.
    #[error("{0}")]
    Integration(String),
    /// The name of the output says no form.
    #[error(
        "{path}: the ending says in which form to write: .table (exact, every kyr, as in the \
         program) or .csv; add one of them"
    )]
    Ending {
        /// The output.
        path: PathBuf,
    },
    /// The file could not be written.
    #[error(transparent)]
    Output(#[from] OutputError),
}

/// What to integrate.
#[derive(Clone, Debug)]
pub struct Integration {
    /// File with constants that differ from the program's own.
    pub constants: Option<PathBuf>,
    /// Edits of single constants, `key.path=value`.
    pub edits: Vec<String>,
    /// Older end, kyr before 1950.
    pub from_kyr: f64,
    /// Younger end, kyr before 1950.
    pub to_kyr: f64,
}

/// What came of it.
#[derive(Clone, Debug)]
pub struct IntegrationSummary {
    /// The file written.
    pub path: PathBuf,
    /// Oldest and youngest age that can be read from it, kyr before 1950.
    pub range_kyr: [f64; 2],
    /// Largest relative change of the energy.
    pub energy_error: f64,
    /// What the solution cannot tell.
    pub not_known: &'static str,
}

/// Form of the output.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Form {
    Table,
    Csv,
}

impl Form {
    fn of(path: &Path) -> Result<Self, OrbitCommandError> {
        match path.extension().and_then(|ending| ending.to_str()) {
            Some("table") => Ok(Self::Table),
            Some("csv") => Ok(Self::Csv),
            _ => Err(OrbitCommandError::Ending {
                path: path.to_owned(),
            }),
        }
    }
}

/// Integrates the orbit and writes its table.
///
/// # Errors
/// When constants or ages have no meaning, or the file cannot be written.
pub fn integrate(
    wanted: &Integration,
    out: &Path,
    overwrite: Overwrite,
    progress: &mut dyn Progress,
) -> Result<IntegrationSummary, OrbitCommandError> {
    let form = Form::of(out)?;
    let span = Span::new(wanted.from_kyr, wanted.to_kyr)?;
    let constants = orbit_constants::load(wanted.constants.as_deref(), &wanted.edits)?;
    let file = PlainFile::reserve(out, overwrite)?;
    let integrated =
        integration::integrate(&constants.constants, span, progress).map_err(|errors| {
            let lines: Vec<_> = errors.iter().map(ToString::to_string).collect();
            OrbitCommandError::Integration(lines.join("\n"))
        })?;
    let table = &integrated.table;
    let notes = notes(&constants);
    let bytes = match form {
        Form::Table => table.to_bytes(&notes),
        Form::Csv => csv(table, &notes).into_bytes(),
    };
    Ok(IntegrationSummary {
        path: file.write(&bytes)?,
        range_kyr: table.range_kyr(),
        energy_error: integrated.energy_error,
        not_known: NOT_KNOWN,
    })
}

/// How the table was made: nothing that depends on clock, machine or version.
fn notes(constants: &OrbitConstants) -> [(&'static str, String); 3] {
    let hash = InputFile::new(Path::new(""), constants.resolved_toml.as_bytes()).sha256;
    [
        (
            "solution",
            "Sun and eight planets integrated from J2000.0".to_owned(),
        ),
        ("tide_scale", constants.constants.tide.scale.to_string()),
        ("sha256_of_constants", hash),
    ]
}

/// Elements at whole kyr, oldest first; ages in kyr before 1950.
fn csv(table: &OrbitTable, notes: &[(&str, String)]) -> String {
    let mut text = String::new();
    // Writing to a string cannot fail.
    for (name, value) in notes {
        let _ = writeln!(text, "# {name} = {value}");
    }
    let _ = writeln!(text, "# {NOT_KNOWN}");
    text.push_str(
        "age_kyr,eccentricity,obliquity_deg,perihelion_heliocentric_deg,climatic_precession\n",
    );
    for (age_kyr, row) in table.rows() {
        let _ = writeln!(
            text,
            "{age_kyr},{:.9},{:.7},{:.7},{:.9}",
            row.eccentricity(),
            row.obliquity_deg(),
            row.perihelion_deg().rem_euclid(360.0),
            row.climatic_precession(),
        );
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_ending_says_the_form() {
        assert_eq!(Form::of(Path::new("a/b.table")).ok(), Some(Form::Table));
        assert_eq!(Form::of(Path::new("b.csv")).ok(), Some(Form::Csv));
        let message = Form::of(Path::new("b.nc")).unwrap_err().to_string();
        assert!(message.contains("b.nc") && message.contains(".table"));
    }
}
