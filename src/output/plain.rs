//! Files of text or bytes that are written at once.
//!
//! Format facts: the file is reserved before the computing begins, written under a temporary name,
//! synced and renamed, so that a killed command leaves the old file or the new one, never a part.
//! Source: POSIX rename.

use std::fs;
use std::path::{Path, PathBuf};

use super::claim::{Overwrite, refuse_existing};
use super::error::{Result, io_at};
use super::segments;

/// An output that is reserved and not yet written. Dropped, it leaves nothing behind.
#[derive(Debug)]
pub struct PlainFile {
    path: PathBuf,
    overwrite: Overwrite,
    /// Keeps other commands away from this output.
    _lock: segments::Lock,
}

impl PlainFile {
    /// Checks name and folder, and makes the folder if it is missing.
    ///
    /// # Errors
    /// If the output exists and may not be overwritten, or cannot be written.
    pub fn reserve(path: &Path, overwrite: Overwrite) -> Result<Self> {
        segments::prepare(path)?;
        let lock = segments::lock(path)?;
        refuse_existing(path, overwrite)?;
        Ok(Self {
            path: path.to_owned(),
            overwrite,
            _lock: lock,
        })
    }

    /// The name that the file will have.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Writes the file and gives it its name.
    ///
    /// # Errors
    /// If the system refuses, or the output has come into being in the meantime.
    pub fn write(self, bytes: &[u8]) -> Result<PathBuf> {
        self.write_with(|path| fs::write(path, bytes).map_err(io_at(path, "write")))
    }

    /// The same by a function that writes a whole file under the temporary name it is given; what a
    /// failure leaves there is deleted.
    ///
    /// # Errors
    /// Those of the function; if the system refuses, or the output has come into being.
    pub fn write_with(self, write: impl FnOnce(&Path) -> Result<()>) -> Result<PathBuf> {
        refuse_existing(&self.path, self.overwrite)?;
        let temporary = segments::merging(&self.path);
        let written = write(&temporary).and_then(|()| segments::seal(&temporary, &self.path));
        segments::clearing(&temporary, written)?;
        Ok(self.path)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_existing_file_is_replaced_only_when_that_is_asked_for() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("deep/table.csv");
        let write = |overwrite, text: &[u8]| {
            PlainFile::reserve(&path, overwrite).and_then(|file| file.write(text))
        };
        assert!(write(Overwrite::Refuse, b"one").is_ok());
        let message = write(Overwrite::Refuse, b"two").unwrap_err().to_string();
        assert!(message.contains("exists already"), "{message}");
        assert_eq!(fs::read(&path).unwrap(), b"one");
        assert!(write(Overwrite::Replace, b"three").is_ok());
        assert_eq!(fs::read(&path).unwrap(), b"three");
        let left = fs::read_dir(path.parent().unwrap()).unwrap().count();
        assert_eq!(left, 1, "the lock or a temporary file stayed");
    }
}
