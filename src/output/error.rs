//! What can go wrong between a run and its file.
//!
//! Every message names the file, the value, the limit and what to do. The format rules behind
//! the limits: NetCDF-4 format specification (names, dimension scales), CF 1.11 (monotonic
//! coordinates, units), HDF5 file format (attribute sizes).

use std::path::{Path, PathBuf};

/// Errors of writing and reading run files.
#[derive(Debug, thiserror::Error)]
pub enum OutputError {
    /// The output exists and overwriting was not asked for.
    #[error("{path} exists already: choose another output or allow overwriting (--overwrite)")]
    Exists {
        /// The output.
        path: PathBuf,
    },
    /// Segments of an earlier run lie beside the output.
    #[error(
        "{count} segment file(s) of an unfinished run lie beside {path} (first: {first}): \
         go on with that run (--resume), choose another output, or delete them (--overwrite)"
    )]
    StaleSegments {
        /// The output.
        path: PathBuf,
        /// How many there are.
        count: usize,
        /// The first of them.
        first: PathBuf,
    },
    /// A segment of an unfinished run is gone.
    #[error(
        "{path} is missing, and the run cannot go on without it: bring it back; or delete those after \
         it and say --resume again; or begin anew (--overwrite)"
    )]
    MissingSegment {
        /// The segment.
        path: PathBuf,
    },
    /// A segment of an unfinished run cannot be read.
    #[error(
        "{path} is damaged ({source}): delete it and those after it and say --resume again; the run \
         then goes on from the segment before"
    )]
    DamagedSegment {
        /// The segment.
        path: PathBuf,
        /// What is wrong.
        source: Box<OutputError>,
    },
    /// The output path cannot name a file.
    #[error("{path} cannot be an output file: {reason}")]
    BadPath {
        /// The path.
        path: PathBuf,
        /// Why, and what to do.
        reason: &'static str,
    },
    /// The operating system refused.
    #[error("cannot {action} {path}: {source}{}", advice(source))]
    Io {
        /// What was tried.
        action: &'static str,
        /// On which file or folder.
        path: PathBuf,
        /// What the system said.
        source: std::io::Error,
    },
    /// The HDF5 library refused.
    #[error("{path}: cannot {action}: {}", plain(source))]
    Hdf5 {
        /// What was tried, with the variable or attribute.
        action: String,
        /// In which file.
        path: PathBuf,
        /// What the library said.
        source: hdf5::Error,
    },
    /// The table of variables, axes and attributes contradicts itself or the conventions.
    #[error("output table, {item}: {problem}")]
    Schema {
        /// The offending entry.
        item: String,
        /// What is wrong with it, with value and limit, and what to do.
        problem: String,
    },
    /// A record does not fit the table.
    #[error("{path}: record {record}: {problem}")]
    Record {
        /// The output.
        path: PathBuf,
        /// Number of the record in the run, from 0.
        record: usize,
        /// What is wrong with it, with value and limit.
        problem: String,
    },
    /// A restart state cannot be stored.
    #[error("{path}: restart state `{component}`: {problem}")]
    Restart {
        /// The output.
        path: PathBuf,
        /// The component.
        component: String,
        /// What is wrong with it.
        problem: &'static str,
    },
    /// A run ended before its first record.
    #[error("{path}: nothing to write: the run made no record; lengthen it or record more often")]
    Empty {
        /// The output.
        path: PathBuf,
    },
    /// A call against the rules of the NetCDF-4 layer.
    #[error("{path}: `{item}`: {problem}")]
    Layout {
        /// The file.
        path: PathBuf,
        /// Dimension, variable or attribute.
        item: String,
        /// What is wrong.
        problem: String,
    },
    /// The file has no such variable.
    #[error("{path} has no variable `{variable}`; it has {known}")]
    NoVariable {
        /// The file.
        path: PathBuf,
        /// What was asked for.
        variable: String,
        /// What there is.
        known: String,
    },
    /// The file, or a variable of it, has no such attribute.
    #[error("{path}: {owner} has no text attribute `{attribute}`")]
    NoAttribute {
        /// The file.
        path: PathBuf,
        /// Variable, or "the file".
        owner: String,
        /// What was asked for.
        attribute: String,
    },
    /// The file is none that this program writes, or it is damaged.
    #[error("{path} is no readable run file: {reason}")]
    NotARun {
        /// The file.
        path: PathBuf,
        /// Why, and what to do if anything.
        reason: String,
    },
    /// A variable has another shape than the caller needs.
    #[error("{path}: `{variable}` has shape {shape:?}, {needed} is needed")]
    Shape {
        /// The file.
        path: PathBuf,
        /// The variable.
        variable: String,
        /// Its shape.
        shape: Vec<usize>,
        /// What is needed.
        needed: &'static str,
    },
}

/// What the library said, on one line. When the operating system refused, its word alone counts: the
/// library adds addresses and the time of day.
fn plain(source: &hdf5::Error) -> String {
    let text = source.to_string();
    let system = |mark: &str, end: char| {
        let (_, rest) = text.split_once(mark)?;
        rest.split(end).next()
    };
    let number = system("errno = ", ',').and_then(|n| n.trim().parse().ok());
    match (number, system("error message = '", '\'')) {
        (Some(number), Some(message)) => {
            let system = std::io::Error::from_raw_os_error(number);
            format!("{message} (os error {number}){}", advice(&system))
        }
        _ => text.split_whitespace().collect::<Vec<_>>().join(" "),
    }
}

/// The way out of what the operating system refused.
fn advice(error: &std::io::Error) -> &'static str {
    use std::io::ErrorKind::{
        AlreadyExists, FileTooLarge, NotADirectory, PermissionDenied, QuotaExceeded,
        ReadOnlyFilesystem, StorageFull,
    };
    match error.kind() {
        StorageFull | QuotaExceeded => {
            "; free space or choose an output elsewhere: complete files stay as they are"
        }
        FileTooLarge => "; raise the limit of file sizes (ulimit -f) or record less often",
        AlreadyExists | NotADirectory => "; a file stands where the folder should be",
        PermissionDenied | ReadOnlyFilesystem => "; choose an output elsewhere",
        _ => "",
    }
}

/// Result of this module's functions.
pub type Result<T> = std::result::Result<T, OutputError>;

/// Turns an HDF5 error into one that names file and action.
pub(crate) fn hdf5_at(
    path: &Path,
    action: impl Into<String>,
) -> impl FnOnce(hdf5::Error) -> OutputError + '_ {
    let action = action.into();
    move |source| OutputError::Hdf5 {
        action,
        path: path.to_owned(),
        source,
    }
}

/// Turns an error of the operating system into one that names file and action.
pub(crate) fn io_at<'a>(
    path: &'a Path,
    action: &'static str,
) -> impl FnOnce(std::io::Error) -> OutputError + 'a {
    move |source| OutputError::Io {
        action,
        path: path.to_owned(),
        source,
    }
}
