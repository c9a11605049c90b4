//! Which dimensions a variable has.
//!
//! Format facts (HDF5 Dimension Scale specification): a scale lists its users and their axes in
//! `REFERENCE_LIST`, a variable its scales in `DIMENSION_LIST`. Both say the same. The first is
//! asked first: it lies in the header of the scale, which has a check sum; the second lies in the
//! global heap, which has none, and the HDF5 library (1.10.8) crashes on some damage there.

use super::{RunFile, attribute_of};
use crate::output::error::{Result, hdf5_at};
use crate::output::netcdf4::ListEntry;
use hdf5::types::VarLenArray;
use hdf5::{Dataset, File, ObjectReference1, ReferencedObject};
use std::collections::BTreeMap;

/// Scales of every variable, by axis.
pub(super) type Axes = BTreeMap<String, BTreeMap<usize, String>>;

impl RunFile {
    /// Names of a variable's dimensions, slowest first.
    ///
    /// # Errors
    /// If there is no such variable or its dimensions cannot be read.
    pub fn dimensions(&self, variable: &str) -> Result<Vec<String>> {
        let dataset = self.dataset(variable)?;
        let ndim = dataset.ndim();
        if let Some(axes) = self.axes.get(variable).filter(|axes| axes.len() == ndim) {
            return Ok(axes.values().cloned().collect());
        }
        let at = || hdf5_at(&self.path, format!("read the dimensions of `{variable}`"));
        match own_list(&self.file, &dataset).map_err(at())? {
            Some(names) => Ok(names),
            None if ndim == 1 => Ok(vec![variable.to_owned()]),
            None => Ok(Vec::new()),
        }
    }
}

/// What the scales among these datasets say.
pub(super) fn of_scales(file: &File, datasets: &[String]) -> hdf5::Result<Axes> {
    let mut axes = Axes::new();
    for name in datasets {
        let scale = file.dataset(name)?;
        let list = attribute_of(scale.attr_names(), "REFERENCE_LIST", |n| scale.attr(n))?;
        let Some(list) = list else { continue };
        // Another program may have written it in another form; the variables then tell.
        let Ok(entries) = list.read_raw::<ListEntry>() else {
            continue;
        };
        for entry in entries {
            let user = dataset_name(file, entry.dataset)?;
            let axis = usize::try_from(entry.dimension).map_err(|e| e.to_string())?;
            axes.entry(user).or_default().insert(axis, name.clone());
        }
    }
    Ok(axes)
}

/// What a variable says itself; `None` if it says nothing.
fn own_list(file: &File, dataset: &Dataset) -> hdf5::Result<Option<Vec<String>>> {
    let list = attribute_of(dataset.attr_names(), "DIMENSION_LIST", |n| dataset.attr(n))?;
    let Some(list) = list else { return Ok(None) };
    let list = list.read_raw::<VarLenArray<ObjectReference1>>()?;
    let name = |axis: &VarLenArray<ObjectReference1>| {
        let reference = *axis.first().ok_or("an axis without dimension")?;
        dataset_name(file, reference)
    };
    list.iter().map(name).collect::<hdf5::Result<_>>().map(Some)
}

fn dataset_name(file: &File, reference: ObjectReference1) -> hdf5::Result<String> {
    match file.dereference(&reference)? {
        ReferencedObject::Dataset(dataset) => Ok(dataset.name().trim_start_matches('/').to_owned()),
        _ => Err("a reference that leads to no dataset".into()),
    }
}
