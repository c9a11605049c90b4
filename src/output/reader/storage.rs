//! How much room the variables of a run file take, before and after compression.
//!
//! Format facts (HDF5 reference): the raw size of a variable is its number of values times the
//! size of its type; the stored size counts its chunks after shuffling and deflating. Deflate
//! shrinks at most 1032 times (RFC 1951: 258 bytes from two bits).

use super::RunFile;
use crate::output::error::{OutputError, Result, hdf5_at};
use hdf5::types::TypeDescriptor;

/// Largest ratio of raw to stored size that a whole file can have: that of deflate, with a margin
/// for its header.
const LARGEST_RATIO: u64 = 1100;

/// Shape and size of one variable.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct StoredVariable {
    /// Name.
    pub name: String,
    /// Names of its dimensions, slowest first.
    pub dimensions: Vec<String>,
    /// Their lengths.
    pub shape: Vec<usize>,
    /// Bytes of its values.
    pub raw_bytes: u64,
    /// Bytes they take in the file.
    pub stored_bytes: u64,
    /// Whether the values are numbers, not letters.
    pub numeric: bool,
}

impl RunFile {
    /// Size of the file, bytes.
    pub fn size_bytes(&self) -> u64 {
        self.file.size()
    }

    /// All variables and coordinates and the restart state, in the order of the file.
    ///
    /// # Errors
    /// If one cannot be looked at, or claims more values than a file of this size can hold.
    pub fn storage(&self) -> Result<Vec<StoredVariable>> {
        let limit = self.size_bytes().saturating_mul(LARGEST_RATIO);
        let mut list = Vec::with_capacity(self.names.len());
        for name in &self.names {
            let stored = self.stored(name)?;
            if stored.raw_bytes > limit {
                return Err(OutputError::NotARun {
                    path: self.path.clone(),
                    reason: format!(
                        "`{name}` claims {} bytes of values, more than a file of {} bytes can hold",
                        stored.raw_bytes,
                        self.size_bytes()
                    ),
                });
            }
            list.push(stored);
        }
        Ok(list)
    }

    /// Reads every number once, so that damage shows; deflate carries a check sum of its data.
    ///
    /// # Errors
    /// If a variable cannot be read.
    pub fn read_all(&self, variables: &[StoredVariable]) -> Result<()> {
        for variable in variables.iter().filter(|v| v.numeric) {
            self.array(&variable.name)?;
        }
        Ok(())
    }

    fn stored(&self, name: &str) -> Result<StoredVariable> {
        let dataset = self.dataset(name)?;
        let datatype = dataset.dtype();
        let datatype = datatype.map_err(hdf5_at(&self.path, format!("look at `{name}`")))?;
        let shape = dataset.shape();
        let values = shape
            .iter()
            .try_fold(1_u64, |all, &n| all.checked_mul(n as u64));
        let bytes = values.and_then(|n| n.checked_mul(datatype.size() as u64));
        let numeric = matches!(
            datatype.to_descriptor(),
            Ok(TypeDescriptor::Float(_) | TypeDescriptor::Integer(_) | TypeDescriptor::Unsigned(_))
        );
        Ok(StoredVariable {
            name: name.to_owned(),
            dimensions: self.dimensions(name)?,
            shape,
            raw_bytes: bytes.unwrap_or(u64::MAX),
            stored_bytes: dataset.storage_size(),
            numeric,
        })
    }
}
