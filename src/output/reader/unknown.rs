//! Opens a file that may be anything, and says in one sentence why it is no run file.
//!
//! Format facts: HDF5 files begin with the bytes `\x89HDF\r\n\x1a\n` (HDF5 file format, section
//! II.A); the superblock holds the length of the file, so the library notices a truncated one;
//! files of the classic NetCDF format begin with `CDF`.

use super::super::schema::AGE;
use super::super::segments;
use super::RunFile;
use crate::output::claim::{Found, survey};
use crate::output::error::{OutputError, Result, io_at};
use std::fs::{self, File};
use std::io::Read;
use std::path::Path;

/// First bytes of an HDF5 file.
const HDF5: &[u8; 8] = b"\x89HDF\r\n\x1a\n";
/// Attributes that every run file has.
const MARKS: [&str; 2] = ["orbicline_version", "configuration"];

impl RunFile {
    /// Opens a file of unknown origin.
    ///
    /// # Errors
    /// If it is missing, no regular file, of another format, damaged, or made by another program.
    pub fn open_unknown(path: &Path) -> Result<Self> {
        let not_a_run = |reason: String| OutputError::NotARun {
            path: path.to_owned(),
            reason,
        };
        let found = fs::metadata(path);
        if let (Err(_), Found::Segments(count)) = (&found, survey(path)) {
            let last = segments::path(path, count - 1);
            return Err(not_a_run(format!(
                "it is not there yet; {count} segment(s) of an unfinished run lie beside it, \
                 the last is {}",
                last.display()
            )));
        }
        let found = found.map_err(io_at(path, "read"))?;
        if found.is_dir() {
            return Err(not_a_run("it is a folder; name a file in it".to_owned()));
        }
        if !found.is_file() {
            return Err(not_a_run("it is not a regular file".to_owned()));
        }
        if let Some(reason) = other_format(path)? {
            return Err(not_a_run(reason.to_owned()));
        }
        let damaged =
            |source: hdf5::Error| not_a_run(format!("damaged or cut short; HDF5 says: {source}"));
        // Files of other programs need not have what listing their variables needs.
        let names = hdf5::File::open(path).and_then(|file| file.attr_names());
        let names = names.map_err(damaged)?;
        if let Some(mark) = MARKS.iter().find(|mark| !names.iter().any(|n| n == *mark)) {
            return Err(not_a_run(format!(
                "another program made it (the attribute `{mark}` is missing)"
            )));
        }
        let file = Self::open(path).map_err(|error| match error {
            OutputError::Hdf5 { source, .. } => damaged(source),
            other => other,
        })?;
        if !file.variables().contains(&AGE) {
            return Err(not_a_run(format!("the variable `{AGE}` is missing")));
        }
        Ok(file)
    }
}

/// What a file is by its first bytes, when it is not HDF5.
fn other_format(path: &Path) -> Result<Option<&'static str>> {
    let mut start = Vec::new();
    let file = File::open(path).map_err(io_at(path, "read"))?;
    let read = file.take(HDF5.len() as u64).read_to_end(&mut start);
    read.map_err(io_at(path, "read"))?;
    Ok(match start.as_slice() {
        [] => Some("it is empty"),
        start if start == HDF5 => None,
        [b'C', b'D', b'F', ..] => Some("it is of the classic NetCDF format, not NetCDF-4"),
        _ => Some("it is no NetCDF-4 file (it does not begin as HDF5)"),
    })
}
