//! Dimension scales: the attributes that tie variables to their dimensions.
//!
//! Format facts (HDF5 Dimension Scale specification): `DIMENSION_LIST` holds, per axis of a
//! variable, a list of object references to scales; `REFERENCE_LIST` of a scale holds pairs of
//! (variable, axis). `_Netcdf4Dimid` (NetCDF-4 format specification) numbers the dimensions.

use hdf5::types::VarLenArray;
use hdf5::{Dataset, ObjectReference1};

use super::super::error::{Result, hdf5_at};
use super::{Dimension, NetCdfFile, text_attribute};

/// One entry of `REFERENCE_LIST`: a variable and which of its axes the dimension is.
#[derive(hdf5::H5Type, Clone, Copy)]
#[repr(C)]
pub(crate) struct ListEntry {
    pub(crate) dataset: ObjectReference1,
    pub(crate) dimension: i32,
}

impl NetCdfFile {
    pub(super) fn make_scale(
        &mut self,
        number: usize,
        dataset: &Dataset,
        name: &str,
    ) -> Result<()> {
        if self.dimensions[number].scale.is_some() {
            return Err(self.misuse(name.trim_end_matches('\0'), "is stored already"));
        }
        let id = i32::try_from(number)
            .map_err(|_| self.misuse(name.trim_end_matches('\0'), "too many dimensions"))?;
        let write = || -> hdf5::Result<()> {
            text_attribute(dataset, "CLASS", b"DIMENSION_SCALE\0")?;
            text_attribute(dataset, "NAME", name.as_bytes())?;
            dataset
                .new_attr::<i32>()
                .create("_Netcdf4Dimid")?
                .write_scalar(&id)
        };
        write().map_err(hdf5_at(&self.path, format!("make dimension `{name}`")))?;
        self.dimensions[number].scale = Some(self.stored.len());
        Ok(())
    }

    pub(super) fn attach(
        &mut self,
        name: &str,
        dataset: &Dataset,
        numbers: &[usize],
    ) -> Result<()> {
        if numbers.is_empty() {
            return Ok(());
        }
        let write = || -> hdf5::Result<()> {
            let mut list = Vec::with_capacity(numbers.len());
            for &n in numbers {
                let reference = self.file.reference(&self.dimensions[n].name)?;
                list.push(VarLenArray::<ObjectReference1>::from_slice(&[reference]));
            }
            dataset
                .new_attr_builder()
                .with_data(&list)
                .create("DIMENSION_LIST")
                .map(drop)
        };
        write().map_err(hdf5_at(
            &self.path,
            format!("attach dimensions to `{name}`"),
        ))?;
        let variable = self.stored.len();
        for (axis, &n) in numbers.iter().enumerate() {
            self.dimensions[n].users.push((variable, axis));
        }
        Ok(())
    }

    pub(super) fn reference_list(&self, dimension: &Dimension) -> Result<()> {
        let Some(scale) = dimension.scale else {
            return Err(self.misuse(&dimension.name, "declared but never stored"));
        };
        if dimension.users.is_empty() {
            return Ok(());
        }
        let write = || -> hdf5::Result<()> {
            let mut list = Vec::with_capacity(dimension.users.len());
            for &(variable, axis) in &dimension.users {
                let dataset = self.file.reference(&self.stored[variable].name)?;
                let dimension = i32::try_from(axis).map_err(|e| e.to_string())?;
                list.push(ListEntry { dataset, dimension });
            }
            // Packed: padding would put arbitrary bytes into the file.
            let builder = self.stored[scale].dataset.new_attr_builder().packed(true);
            builder.with_data(&list).create("REFERENCE_LIST").map(drop)
        };
        write().map_err(hdf5_at(
            &self.path,
            format!("list the users of `{}`", dimension.name),
        ))
    }
}
