//! Reads text attributes, whoever wrote them.
//!
//! Format facts (NetCDF-4 format specification): NetCDF's char attributes are fixed-length
//! strings, empty text has no data space, and tools in other languages write variable-length
//! strings. The HDF5 library converts between fixed lengths, not between fixed and variable.

use hdf5::types::{FixedAscii, FixedUnicode, TypeDescriptor, VarLenAscii, VarLenUnicode};
use hdf5::{Attribute, H5Type};

/// The text of an attribute; `None` if it holds something else.
pub(crate) fn read_text(attribute: &Attribute) -> hdf5::Result<Option<String>> {
    let descriptor = attribute.dtype()?.to_descriptor()?;
    if matches!(
        descriptor,
        TypeDescriptor::FixedAscii(_) | TypeDescriptor::FixedUnicode(_)
    ) && attribute.size() == 0
    {
        return Ok(Some(String::new()));
    }
    match descriptor {
        TypeDescriptor::FixedAscii(0..=64) => first::<FixedAscii<64>>(attribute),
        TypeDescriptor::FixedAscii(65..=4096) => first::<FixedAscii<4096>>(attribute),
        TypeDescriptor::FixedAscii(4097..=0x10_0000) => first::<FixedAscii<0x10_0000>>(attribute),
        TypeDescriptor::FixedUnicode(0..=64) => first::<FixedUnicode<64>>(attribute),
        TypeDescriptor::FixedUnicode(65..=4096) => first::<FixedUnicode<4096>>(attribute),
        TypeDescriptor::FixedUnicode(4097..=0x10_0000) => {
            first::<FixedUnicode<0x10_0000>>(attribute)
        }
        TypeDescriptor::VarLenAscii => first::<VarLenAscii>(attribute),
        TypeDescriptor::VarLenUnicode => first::<VarLenUnicode>(attribute),
        _ => Ok(None),
    }
}

fn first<T: H5Type + AsRef<str>>(attribute: &Attribute) -> hdf5::Result<Option<String>> {
    // Read as a list: a value of the longest type would not fit on the stack.
    let list = attribute.read_raw::<T>()?;
    // Files of others need not hold the encoding they promise.
    let text = |text: &T| String::from_utf8_lossy(text.as_ref().as_bytes()).into_owned();
    Ok(list.first().map(text))
}
