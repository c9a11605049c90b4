//! Writes HDF5 that the NetCDF-4 readers take for their own.
//!
//! Format facts (HDF5 Dimension Scale specification; NetCDF-4 format specification):
//! * a dimension is a dataset with the attributes `CLASS = "DIMENSION_SCALE"` (fixed length 16,
//!   NUL included, NULLTERM) and NAME (NUL included). A dimension without coordinate variable is
//!   an empty-valued dataset whose NAME says so, with its length right-aligned in ten columns;
//! * a variable points at its dimensions by `DIMENSION_LIST` (one list of object references per
//!   axis); the dimension points back by `REFERENCE_LIST`;
//! * `_Netcdf4Dimid` numbers the dimensions, `_NCProperties` names the writer;
//! * links and attributes must be tracked and indexed in creation order, or the library of
//!   NetCDF cannot open the file for appending;
//! * text attributes have exactly their length and are NULLTERM; numeric ones are lists of one;
//! * `_FillValue`, where present, equals the fill value of the HDF5 dataset.
//!
//! No time stamps are stored, so equal content gives equal bytes.

use std::path::{Path, PathBuf};

use hdf5::file::{AttrCreationOrder, LibraryVersion, LinkCreationOrder};
use hdf5::types::TypeDescriptor;
use hdf5::{Dataset, Datatype, Extents, File, Location, SimpleExtents};

use super::error::{OutputError, Result, hdf5_at};
use storage::{characters, slab};

pub(crate) use scales::ListEntry;
pub(crate) use text::read_text;

pub use definition::{Definition, Kind, Length, Missing, Values, VariableId};
use definition::{MEMORY_STEP, Place};

mod definition;
mod scales;
mod storage;
#[cfg(test)]
mod tests;
mod text;

/// Longest text attribute, bytes: what [`super::reader`] reads back.
pub const MAX_TEXT: usize = 1 << 20;
struct Dimension {
    name: String,
    length: Length,
    scale: Option<usize>,
    users: Vec<(usize, usize)>,
}

struct Stored {
    name: String,
    dataset: Dataset,
    kind: Kind,
}

/// A NetCDF-4 file being written.
pub struct NetCdfFile {
    path: PathBuf,
    file: File,
    dimensions: Vec<Dimension>,
    stored: Vec<Stored>,
}

impl NetCdfFile {
    /// Creates the file; an existing one is replaced.
    ///
    /// # Errors
    /// If HDF5 cannot create it.
    pub fn create(path: &Path) -> Result<Self> {
        Self::make(path, Place::Disk)
    }

    /// Creates a file in memory that is gone when this is dropped.
    ///
    /// # Errors
    /// If HDF5 cannot create it.
    pub fn in_memory() -> Result<Self> {
        Self::make(Path::new("(memory).nc"), Place::Memory)
    }

    /// Size so far, with all that was written, bytes.
    ///
    /// # Errors
    /// If HDF5 cannot write.
    pub fn size_bytes(&self) -> Result<u64> {
        let flushed = self.file.flush();
        flushed.map_err(hdf5_at(&self.path, "flush"))?;
        Ok(self.file.size())
    }

    fn make(path: &Path, place: Place) -> Result<Self> {
        let file = File::with_options()
            .with_fapl(|p| {
                // Chunks are written whole and once: a cache of them would only hold memory.
                let p = p
                    .libver_bounds(LibraryVersion::V18, LibraryVersion::V18)
                    .chunk_cache(1, 0, 1.0);
                match place {
                    Place::Disk => p,
                    Place::Memory => p.core_options(MEMORY_STEP, false),
                }
            })
            .with_fcpl(|p| {
                p.obj_track_times(false)
                    .attr_creation_order(AttrCreationOrder::Indexed)
                    .link_creation_order(LinkCreationOrder::Indexed)
            })
            .create(path)
            .map_err(hdf5_at(path, "create the file"))?;
        let (major, minor, patch) = hdf5::library_version();
        let properties = format!(
            "version=2,{}={},hdf5={major}.{minor}.{patch}",
            env!("CARGO_PKG_NAME"),
            env!("CARGO_PKG_VERSION")
        );
        text_attribute(&file, "_NCProperties", properties.as_bytes())
            .map_err(hdf5_at(path, "write attribute `_NCProperties`"))?;
        Ok(Self {
            path: path.to_owned(),
            file,
            dimensions: Vec::new(),
            stored: Vec::new(),
        })
    }

    /// Declares a dimension. Follow with [`Self::define`] of the same name for its coordinate
    /// variable, or with [`Self::without_coordinate`].
    ///
    /// # Errors
    /// If the name is taken, or the length is zero (NetCDF readers take that for unlimited).
    pub fn dimension(&mut self, name: &str, length: Length) -> Result<()> {
        if self.dimensions.iter().any(|d| d.name == name) {
            return Err(self.misuse(name, "the dimension exists already"));
        }
        if length == Length::Fixed(0) {
            return Err(self.misuse(name, "a dimension needs a length of at least 1"));
        }
        self.dimensions.push(Dimension {
            name: name.to_owned(),
            length,
            scale: None,
            users: Vec::new(),
        });
        Ok(())
    }

    /// Stores a declared dimension that has no coordinate variable.
    ///
    /// # Errors
    /// If the dimension is unknown, unlimited or stored already, or HDF5 refuses.
    pub fn without_coordinate(&mut self, name: &str) -> Result<()> {
        let number = self.number(name)?;
        let Length::Fixed(length) = self.dimensions[number].length else {
            return Err(self.misuse(name, "an unlimited dimension needs a coordinate variable"));
        };
        let shape = Extents::Simple(SimpleExtents::fixed([length]));
        let note = format!("This is a netCDF dimension but not a netCDF variable.{length:>10}\0");
        let dataset = self.dataset(name, Kind::F32, shape, None, Missing::Never)?;
        self.make_scale(number, &dataset, &note)?;
        self.stored.push(Stored {
            name: name.to_owned(),
            dataset,
            kind: Kind::F32,
        });
        Ok(())
    }

    /// Defines a variable.
    ///
    /// # Errors
    /// If a dimension is unknown or not stored yet, the name is taken, or HDF5 refuses.
    pub fn define(&mut self, definition: &Definition<'_>) -> Result<VariableId> {
        let Definition {
            name,
            kind,
            dimensions,
            records_per_chunk,
            missing,
        } = *definition;
        let numbers: Vec<usize> = dimensions
            .iter()
            .map(|d| self.number(d))
            .collect::<Result<_>>()?;
        let coordinate = numbers.len() == 1 && dimensions[0] == name;
        if let Some(&n) = numbers
            .iter()
            .find(|&&n| self.dimensions[n].scale.is_none() && !coordinate)
        {
            let d = &self.dimensions[n].name;
            return Err(self.misuse(name, &format!("its dimension `{d}` is not stored yet")));
        }
        if missing == Missing::Nan && !matches!(kind, Kind::F64 | Kind::F32) {
            return Err(self.misuse(name, "only floating-point variables can be NaN"));
        }
        let shape = self.extents(&numbers);
        let chunk = self.chunk(name, &numbers, records_per_chunk)?;
        let dataset = self.dataset(name, kind, shape, chunk, missing)?;
        if coordinate {
            self.make_scale(numbers[0], &dataset, &format!("{name}\0"))?;
        } else {
            self.attach(name, &dataset, &numbers)?;
        }
        let id = VariableId(self.stored.len());
        let stored = Stored {
            name: name.to_owned(),
            dataset,
            kind,
        };
        self.stored.push(stored);
        match (missing, kind) {
            (Missing::Nan, Kind::F64) => self.number_attribute(id, "_FillValue", f64::NAN)?,
            (Missing::Nan, Kind::F32) => self.number_attribute(id, "_FillValue", f32::NAN)?,
            _ => {}
        }
        Ok(id)
    }

    /// Writes a text attribute of a variable, or of the file if `variable` is `None`.
    ///
    /// # Errors
    /// If the text is longer than [`MAX_TEXT`] bytes, or HDF5 refuses.
    pub fn text(&self, variable: Option<VariableId>, name: &str, value: &str) -> Result<()> {
        if value.len() > MAX_TEXT {
            let problem = format!("{} bytes of text, at most {MAX_TEXT} fit", value.len());
            return Err(self.misuse(name, &problem));
        }
        let target: &Location = match variable {
            Some(id) => &self.stored[id.0].dataset,
            None => &self.file,
        };
        text_attribute(target, name, value.as_bytes())
            .map_err(hdf5_at(&self.path, format!("write attribute `{name}`")))
    }

    /// Writes a numeric attribute of a variable, a list of one number.
    ///
    /// # Errors
    /// If HDF5 refuses.
    pub fn number_attribute<T: hdf5::H5Type>(
        &self,
        variable: VariableId,
        name: &str,
        value: T,
    ) -> Result<()> {
        let dataset = &self.stored[variable.0].dataset;
        let data = [value];
        dataset
            .new_attr_builder()
            .with_data(&data)
            .create(name)
            .map(drop)
            .map_err(hdf5_at(&self.path, format!("write attribute `{name}`")))
    }

    /// Writes a whole variable of fixed size.
    ///
    /// # Errors
    /// If type or count differ from the definition, or HDF5 refuses.
    pub fn write(&self, variable: VariableId, values: Values<'_>) -> Result<()> {
        let stored = &self.stored[variable.0];
        self.put(stored, &stored.dataset.shape(), 0, values)
    }

    /// Writes records `first..` of a variable whose first dimension is unlimited, and lengthens
    /// it where needed.
    ///
    /// # Errors
    /// If the type differs, the values are not a whole number of records, or HDF5 refuses.
    pub fn write_records(
        &self,
        variable: VariableId,
        first: usize,
        values: Values<'_>,
    ) -> Result<()> {
        let stored = &self.stored[variable.0];
        let mut shape = stored.dataset.shape();
        let per_record: usize = shape.iter().skip(1).product();
        let count = values.len() / per_record.max(1);
        if shape.is_empty() || count * per_record != values.len() {
            let problem = format!("{} values are no whole records", values.len());
            return Err(self.misuse(&stored.name, &problem));
        }
        if shape[0] < first + count {
            shape[0] = first + count;
            stored
                .dataset
                .resize(shape.clone())
                .map_err(hdf5_at(&self.path, format!("lengthen `{}`", stored.name)))?;
        }
        shape[0] = count;
        self.put(stored, &shape, first, values)
    }

    /// Finishes the file: back references, then everything to disk.
    ///
    /// # Errors
    /// If anything could not be written; the file is then not to be used.
    pub fn close(self) -> Result<()> {
        for dimension in &self.dimensions {
            self.reference_list(dimension)?;
        }
        let Self {
            path, file, stored, ..
        } = self;
        // Closing a dataset cannot report an error, so all data go to disk first.
        file.flush()
            .map_err(hdf5_at(&path, "write the data to disk"))?;
        drop(stored);
        file.close().map_err(hdf5_at(&path, "close the file"))
    }

    fn misuse(&self, item: &str, problem: &str) -> OutputError {
        OutputError::Layout {
            path: self.path.clone(),
            item: item.to_owned(),
            problem: problem.to_owned(),
        }
    }

    fn number(&self, name: &str) -> Result<usize> {
        let found = self.dimensions.iter().position(|d| d.name == name);
        found.ok_or_else(|| self.misuse(name, "no such dimension"))
    }

    fn put(
        &self,
        stored: &Stored,
        shape: &[usize],
        first: usize,
        values: Values<'_>,
    ) -> Result<()> {
        let expected: usize = shape.iter().product();
        if values.kind() != stored.kind || values.len() != expected {
            let problem = format!(
                "{} values of type {:?} given, {expected} of type {:?} needed",
                values.len(),
                values.kind(),
                stored.kind
            );
            return Err(self.misuse(&stored.name, &problem));
        }
        let written = match values {
            Values::F64(v) => slab(&stored.dataset, shape, first, v),
            Values::F32(v) => slab(&stored.dataset, shape, first, v),
            Values::I32(v) => slab(&stored.dataset, shape, first, v),
            Values::Char(v) => characters(v).and_then(|c| slab(&stored.dataset, shape, first, &c)),
        };
        written.map_err(hdf5_at(&self.path, format!("write `{}`", stored.name)))
    }
}

/// Rounds to 32 bits.
#[expect(
    clippy::cast_possible_truncation,
    reason = "rounding is what is asked for"
)]
pub(crate) fn narrow(value: f64) -> f32 {
    value as f32
}

/// Writes a text attribute the way NetCDF does: exactly as long as the text, NULLTERM.
///
/// The safe string types of the HDF5 crate are padded with NUL (NULLPAD), and readers then do
/// not recognise a dimension scale. Text that is not ASCII is marked as UTF-8. Empty text has
/// no data at all.
#[expect(
    unsafe_code,
    reason = "the safe interface has no NULLTERM strings of run-time length"
)]
fn text_attribute(target: &Location, name: &str, text: &[u8]) -> hdf5::Result<()> {
    let size = text.len().max(1);
    let descriptor = if text.is_ascii() {
        TypeDescriptor::FixedAscii(size)
    } else {
        TypeDescriptor::FixedUnicode(size)
    };
    let datatype = Datatype::from_descriptor(&descriptor)?;
    // SAFETY: the identifier is that of a live, modifiable string type owned by `datatype`.
    hdf5::sync::sync(|| {
        hdf5::h5check(unsafe {
            hdf5_sys::h5t::H5Tset_strpad(datatype.id(), hdf5_sys::h5t::H5T_STR_NULLTERM)
        })
    })?;
    let extents = if text.is_empty() {
        Extents::Null
    } else {
        Extents::Scalar
    };
    let builder = target.new_attr_builder().empty_as(&datatype);
    let attribute = builder.shape(extents).create(name)?;
    if text.is_empty() {
        return Ok(());
    }
    // SAFETY: both identifiers are live; HDF5 reads `size` bytes, the length of `text`.
    hdf5::sync::sync(|| {
        hdf5::h5check(unsafe {
            hdf5_sys::h5a::H5Awrite(attribute.id(), datatype.id(), text.as_ptr().cast())
        })
    })?;
    Ok(())
}
