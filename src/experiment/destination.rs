//! Where a table goes: the ending of a file's name says in which form it is written.

use crate::output::plain::PlainFile;
use crate::output::table::TableForm;
use crate::output::{OutputError, Overwrite};
use std::path::{Path, PathBuf};

/// A destination that cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum DestinationError {
    /// The name of the output says no form.
    #[error("{path}: the ending says in which form to write: .csv or .nc; add one of them")]
    Ending {
        /// The output.
        path: PathBuf,
    },
    /// The output exists or cannot be written.
    #[error(transparent)]
    Output(#[from] OutputError),
}

/// Reserves the output before anything is computed.
///
/// # Errors
/// When the ending is unknown, or the file exists or cannot be written.
pub fn reserve(
    path: &Path,
    overwrite: Overwrite,
) -> Result<(PlainFile, TableForm), DestinationError> {
    let form = TableForm::of(path).ok_or_else(|| DestinationError::Ending {
        path: path.to_owned(),
    })?;
    Ok((PlainFile::reserve(path, overwrite)?, form))
}
