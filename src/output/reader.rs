//! Reads run files, and their segments, back.
//!
//! Format facts: variables are HDF5 datasets in creation order; a dataset whose NAME attribute
//! begins with "This is a netCDF dimension but not a netCDF variable" is a dimension only; missing
//! values are NaN.
//!
//! Sources: HDF5 Dimension Scale specification; NetCDF-4 format specification.

use std::path::{Path, PathBuf};

use hdf5::{Attribute, Dataset, File, IndexType, IterationOrder};
use ndarray::ArrayD;

use super::error::{OutputError, Result, hdf5_at};
use super::layout::{Block, Restart, state_hash};
use super::netcdf4::read_text;
use super::schema::{AGE, AGE_BOUNDS, RESTART, RESTART_HASH, RESTART_PARTS, Schema};
use crate::series::TimeSeries;

mod dimensions;
mod storage;
mod unknown;

pub use storage::StoredVariable;

/// A run file opened for reading.
#[derive(Debug)]
pub struct RunFile {
    path: PathBuf,
    file: File,
    /// Variables, restart states included, in the order of the file.
    names: Vec<String>,
    axes: dimensions::Axes,
}

impl RunFile {
    /// Opens a file.
    ///
    /// # Errors
    /// If it cannot be opened or is no run file.
    pub fn open(path: &Path) -> Result<Self> {
        let file = File::open(path).map_err(hdf5_at(path, "open the file"))?;
        let mut names = file
            .member_names_by(IndexType::CreationOrder, IterationOrder::Increasing)
            .map_err(hdf5_at(path, "list the variables"))?;
        let axes = dimensions::of_scales(&file, &names);
        let axes = axes.map_err(hdf5_at(path, "list the dimensions"))?;
        let mut failed = None;
        names.retain(|name| match is_variable(&file, name) {
            Ok(answer) => answer,
            Err(error) => {
                failed = Some((name.clone(), error));
                false
            }
        });
        match failed {
            Some((name, error)) => Err(hdf5_at(path, format!("look at `{name}`"))(error)),
            None => Ok(Self {
                path: path.to_owned(),
                file,
                names,
                axes,
            }),
        }
    }

    /// The file's path.
    pub fn path(&self) -> &Path {
        &self.path
    }

    /// Names of all variables and coordinates, in the order of the file, without restart states.
    pub fn variables(&self) -> Vec<&str> {
        let names = self.names.iter().map(String::as_str);
        names.filter(|name| *name != RESTART).collect()
    }

    /// One number per record, with its age.
    ///
    /// # Errors
    /// If there is no such variable, or it is not one number per record.
    pub fn series(&self, variable: &str) -> Result<TimeSeries> {
        let values = self.array(variable)?;
        let age_kyr = self.array(AGE)?.into_raw_vec_and_offset().0;
        let of_age = self.dimensions(variable)? == [AGE];
        if !of_age || values.len() != age_kyr.len() {
            return Err(OutputError::Shape {
                path: self.path.clone(),
                variable: variable.to_owned(),
                shape: values.shape().to_vec(),
                needed: "one number for each age",
            });
        }
        Ok(TimeSeries {
            age_kyr,
            values: values.into_raw_vec_and_offset().0,
        })
    }

    /// All values of a variable.
    ///
    /// # Errors
    /// If there is no such variable, or it holds no numbers.
    pub fn array(&self, variable: &str) -> Result<ArrayD<f64>> {
        let dataset = self.dataset(variable)?;
        dataset
            .read_dyn()
            .map_err(hdf5_at(&self.path, format!("read `{variable}`")))
    }

    /// A text attribute of the file.
    ///
    /// # Errors
    /// If there is none of that name.
    pub fn global(&self, name: &str) -> Result<String> {
        let attribute = attribute_of(self.file.attr_names(), name, |n| self.file.attr(n));
        self.text(attribute, "the file", name)
    }

    /// A text attribute of a variable.
    ///
    /// # Errors
    /// If there is no such variable, or none of that name.
    pub fn attribute(&self, variable: &str, name: &str) -> Result<String> {
        let dataset = self.dataset(variable)?;
        let attribute = attribute_of(dataset.attr_names(), name, |n| dataset.attr(n));
        self.text(attribute, &format!("variable `{variable}`"), name)
    }

    /// States of the components after the last record, in the order they were given.
    ///
    /// # Errors
    /// If a state cannot be read.
    pub fn restart(&self) -> Result<Vec<(String, Vec<f64>)>> {
        let mut states = Restart::new();
        if !self.names.iter().any(|name| name == RESTART) {
            return Ok(states);
        }
        let all = self.array(RESTART)?.into_raw_vec_and_offset().0;
        let parts = self.attribute(RESTART, RESTART_PARTS)?;
        if self.attribute(RESTART, RESTART_HASH)? != state_hash(&all) {
            return Err(OutputError::Layout {
                path: self.path.clone(),
                item: RESTART.to_owned(),
                problem: "its numbers are not those that were written (SHA-256)".to_owned(),
            });
        }
        let mut rest = all.as_slice();
        for part in parts.split_whitespace() {
            let split = part.split_once(':').and_then(|(name, length)| {
                let (state, others) = rest.split_at_checked(length.parse().ok()?)?;
                Some((name, state, others))
            });
            let (name, state, others) = split.ok_or_else(|| self.broken_restart(all.len()))?;
            states.push((name.to_owned(), state.to_vec()));
            rest = others;
        }
        if rest.is_empty() {
            Ok(states)
        } else {
            Err(self.broken_restart(all.len()))
        }
    }

    fn broken_restart(&self, length: usize) -> OutputError {
        OutputError::Shape {
            path: self.path.clone(),
            variable: RESTART.to_owned(),
            shape: vec![length],
            needed: "the sum of the lengths in its attribute `parts`",
        }
    }

    /// All records, checked against the table.
    pub(crate) fn block(&self, schema: &Schema) -> Result<Block> {
        let age = self.sized(AGE, None)?;
        let records = age.len();
        let bounds = self.sized(AGE_BOUNDS, Some(2 * records))?;
        let column =
            |v: &crate::series::Variable| self.sized(v.name, Some(schema.size(v) * records));
        let columns = schema.variables.iter().map(column).collect::<Result<_>>()?;
        Ok(Block {
            age,
            bounds,
            columns,
        })
    }

    fn sized(&self, variable: &str, size: Option<usize>) -> Result<Vec<f64>> {
        let array = self.array(variable)?;
        if size.is_some_and(|size| size != array.len()) {
            return Err(OutputError::Shape {
                path: self.path.clone(),
                variable: variable.to_owned(),
                shape: array.shape().to_vec(),
                needed: "the shape of the table",
            });
        }
        Ok(array.into_raw_vec_and_offset().0)
    }

    fn dataset(&self, variable: &str) -> Result<Dataset> {
        if !self.names.iter().any(|name| name == variable) {
            return Err(OutputError::NoVariable {
                path: self.path.clone(),
                variable: variable.to_owned(),
                known: self.variables().join(", "),
            });
        }
        self.file
            .dataset(variable)
            .map_err(hdf5_at(&self.path, format!("open `{variable}`")))
    }

    fn text(
        &self,
        attribute: hdf5::Result<Option<Attribute>>,
        owner: &str,
        name: &str,
    ) -> Result<String> {
        let text = attribute.and_then(|found| found.map_or(Ok(None), |a| read_text(&a)));
        let text = text.map_err(hdf5_at(
            &self.path,
            format!("read attribute `{name}` of {owner}"),
        ))?;
        text.ok_or_else(|| OutputError::NoAttribute {
            path: self.path.clone(),
            owner: owner.to_owned(),
            attribute: name.to_owned(),
        })
    }
}

/// The attribute of that name, or `None`; an unreadable list of attributes is an error.
fn attribute_of(
    names: hdf5::Result<Vec<String>>,
    name: &str,
    open: impl FnOnce(&str) -> hdf5::Result<Attribute>,
) -> hdf5::Result<Option<Attribute>> {
    if names?.iter().any(|n| n == name) {
        open(name).map(Some)
    } else {
        Ok(None)
    }
}

fn is_variable(file: &File, name: &str) -> hdf5::Result<bool> {
    let dataset = file.dataset(name)?;
    let label = attribute_of(dataset.attr_names(), "NAME", |n| dataset.attr(n))?;
    let label = label.map_or(Ok(None), |a| read_text(&a))?;
    Ok(!label.is_some_and(|l| l.starts_with("This is a netCDF dimension but not")))
}
