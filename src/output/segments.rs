//! Segment files: what a killed run leaves behind, whole and readable.
//!
//! Format facts: `<out>.segNNNN.tmp` is written, closed, synced and renamed to
//! `<out>.segNNNN.nc`; then the folder is synced. Renaming within a folder is atomic (POSIX), so
//! a file with the final name is complete: a killed run loses at most the records since its last
//! segment. Each segment is a NetCDF-4 file of its own, with the restart state.

use std::fs::{self, File, OpenOptions, TryLockError};
use std::io::ErrorKind;
use std::os::unix::fs::MetadataExt;
use std::path::{Path, PathBuf};

use super::error::{OutputError, Result, io_at};

/// Name of segment `number` of an output.
pub(crate) fn path(output: &Path, number: usize) -> PathBuf {
    suffixed(output, &format!(".seg{number:04}.nc"))
}

/// Name of segment `number` while it is written.
pub(crate) fn temporary(output: &Path, number: usize) -> PathBuf {
    suffixed(output, &format!(".seg{number:04}.tmp"))
}

/// Name of the merged output while it is written.
pub(crate) fn merging(output: &Path) -> PathBuf {
    suffixed(output, ".merging.tmp")
}

/// Folder of an output.
pub(crate) fn folder(output: &Path) -> &Path {
    match output.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent,
        _ => Path::new("."),
    }
}

/// Whatever unfinished runs of this output left in its folder, sorted by name.
pub(crate) fn leftovers(output: &Path) -> Result<Vec<PathBuf>> {
    let folder = folder(output);
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).map_err(io_at(folder, "list"))? {
        let path = entry.map_err(io_at(folder, "list"))?.path();
        if is_leftover(output, &path) {
            found.push(path);
        }
    }
    // By number: segment 10000 follows segment 9999.
    found.sort_by_key(|path| (path.as_os_str().len(), path.clone()));
    Ok(found)
}

fn is_leftover(output: &Path, path: &Path) -> bool {
    let (Some(output), Some(name)) = (output.file_name(), path.file_name()) else {
        return false;
    };
    let Some(rest) = name
        .as_encoded_bytes()
        .strip_prefix(output.as_encoded_bytes())
    else {
        return false;
    };
    let number = rest.strip_prefix(b".seg").and_then(|rest| {
        rest.strip_suffix(b".nc")
            .or_else(|| rest.strip_suffix(b".tmp"))
    });
    rest == b".merging.tmp"
        || number.is_some_and(|n| n.len() >= 4 && n.iter().all(u8::is_ascii_digit))
}

/// Deletes files.
pub(crate) fn remove(files: &[PathBuf]) -> Result<()> {
    for file in files {
        fs::remove_file(file).map_err(io_at(file, "delete"))?;
    }
    Ok(())
}

/// Deletes a file that could not be completed: it is of no use, and on a full disk in the way.
pub(crate) fn clearing<T>(temporary: &Path, outcome: Result<T>) -> Result<T> {
    if outcome.is_err() {
        // What stopped the writing is told; that clearing failed too would hide it.
        let _ = fs::remove_file(temporary);
    }
    outcome
}

/// Gives a finished, closed file its final name, so that a crash leaves the old or the new state.
pub(crate) fn seal(temporary: &Path, path: &Path) -> Result<()> {
    let file = OpenOptions::new().write(true).open(temporary);
    let file = file.map_err(io_at(temporary, "reopen"))?;
    file.sync_all().map_err(io_at(temporary, "sync"))?;
    drop(file);
    fs::rename(temporary, path).map_err(io_at(temporary, "rename"))?;
    let folder = folder(path);
    let handle = File::open(folder).map_err(io_at(folder, "open"))?;
    handle.sync_all().map_err(io_at(folder, "sync"))
}

/// Makes the folder, if the one above is there, and makes sure that files can be created in it, before hours of computing.
pub(crate) fn prepare(output: &Path) -> Result<()> {
    let reason = if output.file_name().is_none() {
        Some("it ends without a file name; add one")
    } else if output.is_dir() || output.as_os_str().as_encoded_bytes().ends_with(b"/") {
        Some("it is a folder; add a file name")
    } else if output.to_str().is_none() {
        Some("it is not UTF-8, which HDF5 needs; rename it")
    } else {
        None
    };
    if let Some(reason) = reason {
        return Err(OutputError::BadPath {
            path: output.to_owned(),
            reason,
        });
    }
    let folder = folder(output);
    // One folder, such as `out`; a longer path that is not there is a mistyped one.
    match fs::create_dir(folder) {
        Err(error) if !folder.is_dir() => return Err(io_at(folder, "create the folder")(error)),
        _ => {}
    }
    // Names of segments are longer than the output's: too long is told now and not in an hour.
    let longest = merging(output);
    match fs::symlink_metadata(&longest) {
        Err(error) if error.kind() != ErrorKind::NotFound => Err(io_at(&longest, "look at")(error)),
        _ => Ok(()),
    }
}

/// Holds an output for one run; see [`super::claim`].
#[derive(Debug)]
pub(crate) struct Lock {
    file: File,
    path: PathBuf,
}

/// Takes the output, which also shows before hours of computing that files can be created there.
pub(crate) fn lock(output: &Path) -> Result<Lock> {
    let path = suffixed(output, ".lock");
    // A file of that name that is not an empty one is somebody's: it is neither locked nor deleted.
    if fs::symlink_metadata(&path).is_ok_and(|m| !m.is_file() || m.len() > 0) {
        return Err(OutputError::BadPath {
            path,
            reason: "its name is needed for the lock of the output, but it is somebody's; choose \
                     another output",
        });
    }
    let file = OpenOptions::new()
        .write(true)
        .create(true)
        .truncate(false)
        .open(&path);
    let file = file.map_err(io_at(&path, "create a file in the output folder:"))?;
    match file.try_lock() {
        // A run that ended meanwhile deletes its file: a lock on a deleted file keeps nobody away.
        Ok(()) if !is_same(&file, &path) => lock(output),
        Ok(()) => Ok(Lock { file, path }),
        Err(TryLockError::WouldBlock) => Err(OutputError::BadPath {
            path: output.to_owned(),
            reason: "another run is writing it; wait for it or choose another output",
        }),
        Err(TryLockError::Error(error)) => Err(io_at(&path, "lock")(error)),
    }
}

/// Whether `path` names the file that is open.
fn is_same(file: &File, path: &Path) -> bool {
    let identity = |m: &fs::Metadata| (m.dev(), m.ino());
    match (file.metadata(), fs::metadata(path)) {
        (Ok(open), Ok(named)) => identity(&open) == identity(&named),
        _ => false,
    }
}

impl Drop for Lock {
    fn drop(&mut self) {
        // An empty file that nobody locks means nothing, so failing to delete it does no harm.
        let _ = fs::remove_file(&self.path);
        let _ = self.file.unlock();
    }
}

fn suffixed(output: &Path, suffix: &str) -> PathBuf {
    let mut name = output.as_os_str().to_owned();
    name.push(suffix);
    PathBuf::from(name)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_files_of_this_output_are_leftovers() {
        let output = Path::new("a/run.nc");
        for name in [
            "run.nc.seg0000.nc",
            "run.nc.seg12345.tmp",
            "run.nc.merging.tmp",
        ] {
            assert!(is_leftover(output, &Path::new("a").join(name)), "{name}");
        }
        for name in [
            "run.nc",
            "run.nc.tmp",
            "run.nc.segment.nc",
            "run.nc.seg1.nc",
            "xrun.nc.seg0000.nc",
        ] {
            assert!(!is_leftover(output, &Path::new("a").join(name)), "{name}");
        }
        assert_eq!(path(output, 7), Path::new("a/run.nc.seg0007.nc"));
        assert_eq!(
            temporary(output, 12_345),
            Path::new("a/run.nc.seg12345.tmp")
        );
        assert_eq!(folder(Path::new("run.nc")), Path::new("."));
    }
}
