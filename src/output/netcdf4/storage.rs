//! How the numbers of a variable lie in the file: shape, chunks, filters, fill value, slabs.
//!
//! Format facts (NetCDF-4 format specification, HDF5 reference): unlimited dimensions need
//! chunks; only shuffle and deflate are filters that every NetCDF reader has; without
//! `_FillValue` the HDF5 fill value is NetCDF's default.

use hdf5::file::AttrCreationOrder;
use hdf5::types::{FixedAscii, TypeDescriptor};
use hdf5::{Dataset, Extent, Extents, H5Type, Hyperslab, SimpleExtents, SliceOrIndex};
use ndarray::{ArrayView, IxDyn};

use super::super::error::{Result, hdf5_at};
use super::{Kind, Length, Missing, NetCdfFile, narrow};

/// Level of deflate, after byte shuffling. Higher levels cost time and save almost nothing.
const DEFLATE: u8 = 2;
/// NetCDF's own fill value for floating-point variables without `_FillValue`.
const NC_FILL: f64 = 9.969_209_968_386_869e36;
/// NetCDF's own fill value for 32-bit integers.
const NC_FILL_INT: i32 = -2_147_483_647;

impl NetCdfFile {
    pub(super) fn extents(&self, numbers: &[usize]) -> Extents {
        if numbers.is_empty() {
            return Extents::Scalar;
        }
        let extent = |&n: &usize| match self.dimensions[n].length {
            Length::Fixed(length) => Extent::fixed(length),
            Length::Unlimited => Extent::resizable(0),
        };
        Extents::Simple(SimpleExtents::from_vec(
            numbers.iter().map(extent).collect(),
        ))
    }

    pub(super) fn chunk(
        &self,
        name: &str,
        numbers: &[usize],
        records: Option<usize>,
    ) -> Result<Option<Vec<usize>>> {
        let length = |n: &usize| match self.dimensions[*n].length {
            Length::Fixed(length) => Some(length),
            Length::Unlimited => None,
        };
        let rest: Option<Vec<usize>> = numbers.iter().skip(1).map(length).collect();
        let Some(rest) = rest else {
            return Err(self.misuse(name, "only the first dimension can be unlimited"));
        };
        match (records, numbers.first().map(length)) {
            (None, None | Some(Some(_))) => Ok(None),
            (Some(records), Some(_)) if records > 0 => {
                Ok(Some(std::iter::once(records).chain(rest).collect()))
            }
            _ => Err(self.misuse(name, "needs at least one record per chunk")),
        }
    }

    pub(super) fn dataset(
        &self,
        name: &str,
        kind: Kind,
        shape: Extents,
        chunk: Option<Vec<usize>>,
        missing: Missing,
    ) -> Result<Dataset> {
        let descriptor = match kind {
            Kind::F64 => <f64 as hdf5::H5Type>::type_descriptor(),
            Kind::F32 => <f32 as hdf5::H5Type>::type_descriptor(),
            Kind::I32 => <i32 as hdf5::H5Type>::type_descriptor(),
            Kind::Char => TypeDescriptor::FixedAscii(1),
        };
        let fill = if missing == Missing::Nan {
            f64::NAN
        } else {
            NC_FILL
        };
        let mut builder = self.file.new_dataset_builder().with_dcpl(|p| {
            p.obj_track_times(false)
                .attr_creation_order(AttrCreationOrder::Indexed);
            match kind {
                Kind::F64 => p.fill_value(fill),
                Kind::F32 => p.fill_value(narrow(fill)),
                Kind::I32 => p.fill_value(NC_FILL_INT),
                Kind::Char => p,
            }
        });
        if let Some(chunk) = chunk {
            builder = builder.chunk(chunk).shuffle().deflate(DEFLATE).fletcher32();
        }
        builder
            .empty_as(descriptor)
            .shape(shape)
            .create(name)
            .map_err(hdf5_at(&self.path, format!("create variable `{name}`")))
    }
}

/// Writes one block of records (or a whole variable) in the order of the file.
pub(super) fn slab<T: H5Type>(
    dataset: &Dataset,
    shape: &[usize],
    first: usize,
    values: &[T],
) -> hdf5::Result<()> {
    let view = ArrayView::from_shape(IxDyn(shape), values).map_err(|e| e.to_string())?;
    if shape.is_empty() {
        return dataset.write(view);
    }
    let mut ranges: Vec<SliceOrIndex> = shape.iter().map(|&n| (0..n).into()).collect();
    ranges[0] = (first..first + shape[0]).into();
    dataset.write_slice(view, Hyperslab::from(ranges))
}

/// Characters as HDF5 strings of length 1.
pub(super) fn characters(bytes: &[u8]) -> hdf5::Result<Vec<FixedAscii<1>>> {
    let one = |b: &u8| FixedAscii::from_ascii(&[*b]).map_err(|e| e.to_string().into());
    bytes.iter().map(one).collect()
}
