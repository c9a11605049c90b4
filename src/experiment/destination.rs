//! Where a table goes: the ending of a file's name says in which form it is written, as numbers or as
//! a figure.

use crate::output::plain::PlainFile;
use crate::output::table::{Table, TableForm};
use crate::output::{OutputError, Overwrite};
use crate::report::FigureForm;
use crate::report::axis::Direction;
use crate::report::map::MapError;
use crate::report::raster::{self, RasterError};
use std::path::{Path, PathBuf};

/// Smallest and largest width of a figure, mm; narrower ones have no room for axes.
pub const WIDTHS_MM: [f64; 2] = [60.0, 400.0];

/// Form of an output.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Numbers.
    Table(TableForm),
    /// A picture of them.
    Figure(FigureForm),
}

/// How a figure is drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Drawing {
    /// Falling ages have the past on the left.
    pub ages: Direction,
    /// Width, mm.
    pub width_mm: f64,
}

/// An output that cannot be made.
#[derive(Debug, thiserror::Error)]
pub enum DestinationError {
    /// The name of the output says no form.
    #[error(
        "{path}: the ending says in which form to write: .csv or .nc for numbers, .svg or .png for a \
         figure; add one of them"
    )]
    Ending {
        /// The output.
        path: PathBuf,
    },
    /// A figure too narrow or too wide.
    #[error("a figure {width_mm} mm wide: give {} to {} mm; a column of a journal has 85", WIDTHS_MM[0], WIDTHS_MM[1])]
    Width {
        /// The width.
        width_mm: f64,
    },
    /// Numbers that make no readable figure.
    #[error("no figure of these numbers: {problem}")]
    Figure {
        /// Why, and what to do.
        problem: String,
    },
    /// The map inside a figure.
    #[error(transparent)]
    Map(#[from] MapError),
    /// The figure as pixels.
    #[error(transparent)]
    Raster(#[from] RasterError),
    /// The output exists or cannot be written.
    #[error(transparent)]
    Output(#[from] OutputError),
}

/// A reserved output.
#[derive(Debug)]
pub struct Reserved {
    file: PlainFile,
    form: Form,
    drawing: Drawing,
}

/// Draws a table as SVG.
pub type Draw = fn(&Table, Drawing) -> Result<String, DestinationError>;

impl Form {
    /// The form that the ending of a name says; `None` if it says none.
    pub fn of(path: &Path) -> Option<Self> {
        let table = TableForm::of(path).map(Self::Table);
        table.or_else(|| FigureForm::of(path).map(Self::Figure))
    }
}

impl Reserved {
    /// Checks the output and keeps it from other commands, before anything is computed.
    ///
    /// # Errors
    /// When the ending is unknown, the file exists or cannot be written, or the width is out of range.
    pub fn new(
        path: &Path,
        overwrite: Overwrite,
        drawing: Drawing,
    ) -> Result<Self, DestinationError> {
        let width_mm = drawing.width_mm;
        let form = Form::of(path).ok_or_else(|| DestinationError::Ending {
            path: path.to_owned(),
        })?;
        if !(WIDTHS_MM[0]..=WIDTHS_MM[1]).contains(&width_mm) {
            return Err(DestinationError::Width { width_mm });
        }
        Ok(Self {
            file: PlainFile::reserve(path, overwrite)?,
            form,
            drawing,
        })
    }

    /// Writes the table, or the figure that `draw` makes of it.
    ///
    /// # Errors
    /// When there is no figure of these numbers, or the file cannot be written.
    pub fn write(self, table: &Table, draw: Draw) -> Result<PathBuf, DestinationError> {
        let bytes = match self.form {
            Form::Table(form) => return Ok(table.write(self.file, form)?),
            Form::Figure(FigureForm::Svg) => draw(table, self.drawing)?.into_bytes(),
            Form::Figure(FigureForm::Png) => raster::png(&draw(table, self.drawing)?)?,
        };
        Ok(self.file.write(&bytes)?)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_ending_says_the_form() {
        for (name, form) in [
            ("a.csv", Some(Form::Table(TableForm::Csv))),
            ("a.nc", Some(Form::Table(TableForm::NetCdf))),
            ("a.svg", Some(Form::Figure(FigureForm::Svg))),
            ("a.png", Some(Form::Figure(FigureForm::Png))),
            ("a.pdf", None),
            ("svg", None),
        ] {
            assert_eq!(Form::of(Path::new(name)), form, "{name}");
        }
    }
}
