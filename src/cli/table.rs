//! Where a table goes: to a file, as numbers or a figure, or as text to standard output.

use super::CliError;
use crate::experiment::destination::{Draw, Drawing, Reserved};
use crate::output::Overwrite;
use crate::output::table::Table;
use crate::report::axis::Direction;
use clap::{Args, ValueEnum};
use std::io::{BufWriter, Write};
use std::path::PathBuf;

/// Where the table goes.
#[derive(Debug, Args)]
pub(super) struct Destination {
    /// File to write: .csv or .nc (numbers), .svg or .png (a figure); without it, text to standard
    /// output
    #[arg(long, value_name = "FILE")]
    pub(super) out: Option<PathBuf>,
    /// Replace the file if it exists
    #[arg(long)]
    pub(super) overwrite: bool,
    /// Print nothing but errors and what was asked for
    #[arg(long)]
    pub(super) quiet: bool,
    /// Of a figure: where the past lies
    #[arg(long, value_name = "SIDE", default_value = "older-left")]
    age_axis: AgeAxis,
    /// Of a figure: width in mm [default: 85, a column of a journal]
    #[arg(
        long,
        value_name = "MM",
        default_value_t = 85.0,
        hide_default_value = true,
        allow_negative_numbers = true
    )]
    width_mm: f64,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum AgeAxis {
    OlderLeft,
    OlderRight,
}

impl Destination {
    /// What happens to a file that exists.
    pub(super) fn overwrite(&self) -> Overwrite {
        if self.overwrite {
            Overwrite::Replace
        } else {
            Overwrite::Refuse
        }
    }

    /// Takes the destination, makes the table and writes it, or the figure of it.
    pub(super) fn fill(
        &self,
        table: impl FnOnce() -> Result<Table, CliError>,
        draw: Draw,
    ) -> Result<(), CliError> {
        let Some(path) = &self.out else {
            let out = std::io::stdout().lock();
            return Ok(table()?.write_text(&mut BufWriter::new(out))?);
        };
        let drawing = Drawing {
            ages: match self.age_axis {
                AgeAxis::OlderLeft => Direction::Falling,
                AgeAxis::OlderRight => Direction::Rising,
            },
            width_mm: self.width_mm,
        };
        let reserved = Reserved::new(path, self.overwrite(), drawing)?;
        let path = reserved.write(&table()?, draw)?;
        if !self.quiet {
            writeln!(std::io::stdout(), "{}", path.display())?;
        }
        Ok(())
    }
}
