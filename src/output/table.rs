//! Tables: numbers over one to three axes, as text or as NetCDF-4.
//!
//! Format facts: text is comma-separated, one row for each combination of the axes' values, the last
//! axis fastest, after lines of comment that begin with `#`; a missing value is an empty field.
//! NetCDF-4 holds the same numbers on the same axes, with the attributes of CF 1.11; ages are
//! coordinates as in run files, but points without bounds.
//! Units: in the names of the columns and in the attribute `units`.
//! Source: CF Conventions 1.11; RFC 4180 (comma-separated values).

mod netcdf;
mod text;

use std::path::{Path, PathBuf};

use super::error::{OutputError, Result};
use super::plain::PlainFile;

/// Form of a table on disk.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TableForm {
    /// Comma-separated text.
    Csv,
    /// NetCDF-4.
    NetCdf,
}

impl TableForm {
    /// The form that the ending of a name says; `None` if it says none.
    pub fn of(path: &Path) -> Option<Self> {
        match path.extension()?.to_str()? {
            "csv" => Some(Self::Csv),
            "nc" => Some(Self::NetCdf),
            _ => None,
        }
    }
}

/// What lies along an axis.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TableAxis {
    /// Ages, kyr before 1950 CE.
    Age,
    /// True longitudes of the Sun, degrees from the March equinox.
    SunLongitude,
    /// Days of the 365-day calendar since 1 January 0 h; text shows the date.
    Date,
    /// The twelve months, 1 to 12.
    Month,
    /// Latitudes, degrees north.
    Latitude,
}

/// A quantity of a table.
#[derive(Clone, Debug, PartialEq)]
pub struct TableVariable {
    /// Name in a NetCDF file.
    pub name: &'static str,
    /// Name of its column in text, with the unit.
    pub column: &'static str,
    /// What it is, in words.
    pub long_name: String,
    /// CF standard name.
    pub standard_name: Option<&'static str>,
    /// UDUNITS string.
    pub units: &'static str,
    /// Digits after the point in text.
    pub decimals: usize,
    /// Axes that it varies along, in the order of the table's.
    pub axes: Vec<TableAxis>,
    /// Values, last axis fastest; NaN where there is none.
    pub values: Vec<f64>,
}

/// Numbers over axes.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    /// Axes with their values, slowest first.
    pub axes: Vec<(TableAxis, Vec<f64>)>,
    /// Quantities, in the order of their columns.
    pub variables: Vec<TableVariable>,
    /// What the table is and where it comes from: names and texts, for comments and attributes.
    pub about: Vec<(String, String)>,
}

impl Table {
    /// Values along an axis; none if the table does not have it.
    pub fn along(&self, axis: TableAxis) -> &[f64] {
        let found = self.axes.iter().find(|(own, _)| *own == axis);
        found.map_or(&[], |(_, values)| values)
    }

    /// Rows of the text.
    pub fn rows(&self) -> usize {
        self.axes.iter().map(|(_, values)| values.len()).product()
    }

    /// The value of a variable where `place` says the number along each axis.
    pub fn value(&self, variable: &TableVariable, place: impl Fn(TableAxis) -> usize) -> f64 {
        let at = variable
            .axes
            .iter()
            .fold(0, |at, &axis| at * self.along(axis).len() + place(axis));
        variable.values[at]
    }

    /// Writes the table as text.
    ///
    /// # Errors
    /// When the writer refuses.
    pub fn write_text(&self, out: &mut dyn std::io::Write) -> std::io::Result<()> {
        text::write(self, out)
    }

    /// Writes the table into a reserved file.
    ///
    /// # Errors
    /// When a variable has not as many values as its axes say, or the file cannot be written.
    pub fn write(&self, file: PlainFile, form: TableForm) -> Result<PathBuf> {
        self.check(file.path())?;
        match form {
            TableForm::Csv => file.write_with(|path| text::write_file(self, path)),
            TableForm::NetCdf => file.write_with(|path| netcdf::write(self, path)),
        }
    }

    fn check(&self, path: &Path) -> Result<()> {
        let wrong = |v: &&TableVariable| {
            let lengths = v.axes.iter().map(|&axis| self.along(axis).len());
            v.values.len() != lengths.product::<usize>()
        };
        match self.variables.iter().find(wrong) {
            Some(variable) => Err(OutputError::Layout {
                path: path.to_owned(),
                item: variable.name.to_owned(),
                problem: format!("{} values do not fill its axes", variable.values.len()),
            }),
            None => Ok(()),
        }
    }
}

#[cfg(test)]
mod tests;
