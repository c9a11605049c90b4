//! Where a table goes: to a file, or as text to standard output.

use super::CliError;
use crate::experiment::destination::reserve;
use crate::output::Overwrite;
use crate::output::table::Table;
use std::io::{BufWriter, Write};
use std::path::Path;

/// A destination as the arguments name it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Destination<'a> {
    /// File; standard output if none is named.
    pub(super) out: Option<&'a Path>,
    /// What happens to a file that exists.
    pub(super) overwrite: Overwrite,
    /// Whether the path is printed at the end.
    pub(super) say: Say,
}

/// Whether the path of a written file is printed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Say {
    Path,
    Nothing,
}

impl Destination<'_> {
    /// Takes the destination, makes the table and writes it.
    pub(super) fn fill(
        &self,
        table: impl FnOnce() -> Result<Table, CliError>,
    ) -> Result<(), CliError> {
        let Some(path) = self.out else {
            let out = std::io::stdout().lock();
            return Ok(table()?.write_text(&mut BufWriter::new(out))?);
        };
        let (file, form) = reserve(path, self.overwrite)?;
        let path = table()?.write(file, form)?;
        match self.say {
            Say::Path => Ok(writeln!(std::io::stdout(), "{}", path.display())?),
            Say::Nothing => Ok(()),
        }
    }
}
