//! Takes an output for one run, and finds what an unfinished run left beside it.
//!
//! Format facts: the lock is the system's (`flock` and its kin), on the empty file `<out>.lock`,
//! so it ends with the process; the file that carries it may stay behind after a kill and means
//! nothing then. Segments are numbered from 0 without gap and are deleted from the last to the
//! first, so that a kill while they are deleted leaves an unfinished run that can go on.

use std::path::{Path, PathBuf};

use super::error::{OutputError, Result};
use super::reader::RunFile;
use super::segments;

/// What to do with an output that exists already.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Overwrite {
    /// Report it as an error.
    Refuse,
    /// Replace it, and delete segments of an unfinished run.
    Replace,
}

/// An output that is held for one run until this is dropped.
#[derive(Debug)]
pub struct Claim {
    path: PathBuf,
    _lock: segments::Lock,
}

/// What lies at an output.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Found {
    /// Nothing.
    Nothing,
    /// A file.
    Output,
    /// So many segments of an unfinished run, with or without a file.
    Segments(usize),
}

/// Whether a leftover is a whole segment, not a file that was being written.
fn is_segment(leftover: &Path) -> bool {
    leftover.extension().is_some_and(|e| e == "nc")
}

/// Looks at an output without taking it.
pub fn survey(path: &Path) -> Found {
    // A folder that cannot be listed holds nothing that could go on.
    let files = segments::leftovers(path).unwrap_or_default();
    match files.iter().filter(|file| is_segment(file)).count() {
        0 if path.symlink_metadata().is_ok() => Found::Output,
        0 => Found::Nothing,
        count => Found::Segments(count),
    }
}

impl Claim {
    /// Makes the folder if it is missing, and takes the output.
    ///
    /// # Errors
    /// If the path cannot name a file, another run holds it, or files cannot be made there.
    pub fn take(path: &Path) -> Result<Self> {
        segments::prepare(path)?;
        let lock = segments::lock(path)?;
        refuse_existing(path, Overwrite::Replace)?;
        let path = path.to_owned();
        Ok(Self { path, _lock: lock })
    }

    /// The output.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Whether a file of that name exists.
    pub fn exists(&self) -> bool {
        self.path.symlink_metadata().is_ok()
    }

    /// Segments of an unfinished run, first to last; none if there is no such run.
    ///
    /// # Errors
    /// If the folder cannot be read or one of them is missing.
    pub fn segments(&self) -> Result<Vec<PathBuf>> {
        let found = segments::leftovers(&self.path)?;
        let count = found.iter().filter(|file| is_segment(file)).count();
        let files = (0..count).map(|number| segments::path(&self.path, number));
        files
            .map(|path| {
                if path.is_file() {
                    Ok(path)
                } else {
                    Err(OutputError::MissingSegment { path })
                }
            })
            .collect()
    }

    /// Whether there are segments of an unfinished run.
    ///
    /// # Errors
    /// If the folder cannot be read.
    pub fn holds_segments(&self) -> Result<bool> {
        let found = segments::leftovers(&self.path)?;
        Ok(found.iter().any(|file| is_segment(file)))
    }

    /// Opens a segment.
    ///
    /// # Errors
    /// With advice, if it is damaged.
    pub fn open_segment(&self, segment: &Path) -> Result<RunFile> {
        RunFile::open(segment).map_err(|source| OutputError::DamagedSegment {
            path: segment.to_owned(),
            source: Box::new(source),
        })
    }

    /// Deletes all that unfinished runs of this output left behind; the output stays.
    ///
    /// # Errors
    /// If a file cannot be deleted.
    pub fn discard(&self) -> Result<()> {
        let mut files = segments::leftovers(&self.path)?;
        files.reverse();
        segments::remove(&files)
    }

    /// Deletes files that were being written when a run was killed; segments stay.
    ///
    /// # Errors
    /// If a file cannot be deleted.
    pub fn discard_unsealed(&self) -> Result<()> {
        let mut files = segments::leftovers(&self.path)?;
        files.retain(|file| !is_segment(file));
        segments::remove(&files)
    }

    /// An error if the output or segments exist and may not be replaced.
    pub(super) fn refuse(&self, overwrite: Overwrite) -> Result<()> {
        self.refuse_output(overwrite)?;
        let stale = segments::leftovers(&self.path)?;
        match (stale.first(), overwrite) {
            (Some(first), Overwrite::Refuse) => Err(OutputError::StaleSegments {
                path: self.path.clone(),
                count: stale.len(),
                first: first.clone(),
            }),
            _ => Ok(()),
        }
    }

    /// An error if the output exists and may not be replaced.
    pub(super) fn refuse_output(&self, overwrite: Overwrite) -> Result<()> {
        refuse_existing(&self.path, overwrite)
    }
}

/// Refuses what is no regular file and, unless it may be replaced, what exists.
pub(super) fn refuse_existing(path: &Path, overwrite: Overwrite) -> Result<()> {
    if path.symlink_metadata().is_ok_and(|found| !found.is_file()) {
        return Err(OutputError::BadPath {
            path: path.to_owned(),
            reason: "it is not a regular file (a link or a device); name a file",
        });
    }
    if overwrite == Overwrite::Refuse && path.symlink_metadata().is_ok() {
        return Err(OutputError::Exists {
            path: path.to_owned(),
        });
    }
    Ok(())
}
