//! A run file's layout: the table of [`super::schema`] turned into NetCDF-4 variables.
//!
//! Segments and the merged file are made by the same code, so they differ only in the number of
//! records. Format facts: CF 1.11 as listed in [`super::schema`]; records lie in chunks of
//! [`CHUNK`] along `age`, written whole; the restart state is one list of numbers with a dimension
//! of its own, bit for bit.

use sha2::{Digest, Sha256};
use std::path::Path;

use super::error::Result;
use super::netcdf4::{Definition, Kind, Length, Missing, NetCdfFile, Values, VariableId, narrow};
use super::schema::{
    self, AGE, AGE_BOUNDS, BOUNDS, CONVENTIONS, Content, Coordinate, RESTART, RESTART_HASH,
    RESTART_PARTS, Schema,
};
use crate::series::Record;

/// Records per chunk and per segment. Longer chunks compress better and are written once.
pub(crate) const CHUNK: usize = 64;

/// Restart states by component.
pub(crate) type Restart = Vec<(String, Vec<f64>)>;

/// Consecutive records, turned round: one list per variable.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Block {
    /// Ages, kyr.
    pub(crate) age: Vec<f64>,
    /// Older and younger ends, one after another.
    pub(crate) bounds: Vec<f64>,
    /// Values of each variable, record after record.
    pub(crate) columns: Vec<Vec<f64>>,
}

impl Block {
    /// Gathers records that fit the table.
    pub(crate) fn gather(schema: &Schema, records: &[Record]) -> Self {
        let mut columns = Vec::with_capacity(schema.variables.len());
        let mut start = 0;
        for variable in &schema.variables {
            let end = start + schema.size(variable);
            let parts = records.iter().flat_map(|r| &r.values[start..end]);
            columns.push(parts.copied().collect());
            start = end;
        }
        Self {
            age: records.iter().map(|r| r.age_kyr).collect(),
            bounds: records.iter().flat_map(|r| r.age_bounds_kyr).collect(),
            columns,
        }
    }

    /// The records again, in order. Values come back as they were stored.
    pub(crate) fn records(&self, schema: &Schema) -> Vec<Record> {
        let sizes: Vec<usize> = schema.variables.iter().map(|v| schema.size(v)).collect();
        let record = |(n, &age_kyr): (usize, &f64)| {
            let own = self.columns.iter().zip(&sizes);
            Record {
                age_kyr,
                age_bounds_kyr: [self.bounds[2 * n], self.bounds[2 * n + 1]],
                values: own
                    .flat_map(|(column, size)| &column[n * size..(n + 1) * size])
                    .copied()
                    .collect(),
            }
        };
        self.age.iter().enumerate().map(record).collect()
    }
}

/// A run file being written.
pub(crate) struct Layout {
    file: NetCdfFile,
    age: VariableId,
    bounds: VariableId,
    variables: Vec<(VariableId, Kind)>,
}

impl Layout {
    /// Creates the file with everything that does not depend on the records.
    pub(crate) fn create(path: &Path, schema: &Schema) -> Result<Self> {
        Self::define(NetCdfFile::create(path)?, schema)
    }

    /// The same in memory only, to see how large it becomes.
    pub(crate) fn in_memory(schema: &Schema) -> Result<Self> {
        Self::define(NetCdfFile::in_memory()?, schema)
    }

    /// Size so far, bytes.
    pub(crate) fn size_bytes(&self) -> Result<u64> {
        self.file.size_bytes()
    }

    fn define(mut file: NetCdfFile, schema: &Schema) -> Result<Self> {
        file.text(None, "Conventions", CONVENTIONS)?;
        for (name, value) in &schema.global {
            file.text(None, name, value)?;
        }
        let (age, bounds) = define_ages(&mut file, schema)?;
        for coordinate in schema.coordinates() {
            define_coordinate(&mut file, &coordinate)?;
        }
        let mut variables = Vec::with_capacity(schema.variables.len());
        for variable in &schema.variables {
            let kind = if variable.axes.is_empty() {
                Kind::F64
            } else {
                Kind::F32
            };
            let axes = variable.axes.iter().map(|&axis| schema::dimension(axis));
            let dimensions: Vec<&str> = std::iter::once(AGE).chain(axes).collect();
            let definition = Definition {
                name: variable.name,
                kind,
                dimensions: &dimensions,
                records_per_chunk: Some(CHUNK),
                missing: Missing::Nan,
            };
            let id = file.define(&definition)?;
            for (name, value) in schema::attributes(schema, variable) {
                file.text(Some(id), name, &value)?;
            }
            variables.push((id, kind));
        }
        Ok(Self {
            file,
            age,
            bounds,
            variables,
        })
    }

    /// Writes records from number `first` on.
    pub(crate) fn write(&self, first: usize, block: &Block) -> Result<()> {
        self.file
            .write_records(self.age, first, Values::F64(&block.age))?;
        self.file
            .write_records(self.bounds, first, Values::F64(&block.bounds))?;
        for (&(id, kind), column) in self.variables.iter().zip(&block.columns) {
            // One bit pattern for "no value": the sign of a NaN depends on the machine.
            let one_nan = |&v: &f64| if v.is_nan() { f64::NAN } else { v };
            if kind == Kind::F64 {
                let values: Vec<f64> = column.iter().map(one_nan).collect();
                self.file.write_records(id, first, Values::F64(&values))?;
            } else {
                let values: Vec<f32> = column.iter().map(|v| narrow(one_nan(v))).collect();
                self.file.write_records(id, first, Values::F32(&values))?;
            }
        }
        Ok(())
    }

    /// Adds the restart state, all parts in one variable, and finishes the file.
    pub(crate) fn finish(mut self, restart: &[(String, Vec<f64>)]) -> Result<()> {
        if !restart.is_empty() {
            let all: Vec<f64> = restart
                .iter()
                .flat_map(|(_, state)| state.iter().copied())
                .collect();
            let index = format!("{RESTART}_index");
            self.file.dimension(&index, Length::Fixed(all.len()))?;
            self.file.without_coordinate(&index)?;
            let id = self.file.define(&Definition {
                name: RESTART,
                kind: Kind::F64,
                dimensions: &[&index],
                records_per_chunk: None,
                missing: Missing::Never,
            })?;
            let parts: Vec<String> = restart
                .iter()
                .map(|(name, state)| format!("{name}:{}", state.len()))
                .collect();
            let long_name = "state of the model after the last record, to restart from";
            self.file.text(Some(id), "long_name", long_name)?;
            self.file.text(Some(id), "units", "1")?;
            self.file.text(Some(id), RESTART_PARTS, &parts.join(" "))?;
            self.file.text(Some(id), RESTART_HASH, &state_hash(&all))?;
            self.file.write(id, Values::F64(&all))?;
        }
        self.file.close()
    }
}

/// SHA-256 of the numbers of a state, in hexadecimal: unlike the records, it is not stored with a
/// checksum of its own, and a run goes on from it.
pub(crate) fn state_hash(numbers: &[f64]) -> String {
    let mut hash = Sha256::new();
    for number in numbers {
        hash.update(number.to_le_bytes());
    }
    let bytes = hash.finalize();
    bytes
        .iter()
        .map(|b| format!("{b:02x}"))
        .collect::<Vec<_>>()
        .concat()
}

fn define_ages(file: &mut NetCdfFile, schema: &Schema) -> Result<(VariableId, VariableId)> {
    file.dimension(AGE, Length::Unlimited)?;
    let dimensions = schema.dimensions();
    for &(name, length, _) in &dimensions {
        file.dimension(name, Length::Fixed(length))?;
    }
    let records_per_chunk = Some(CHUNK);
    let (kind, missing) = (Kind::F64, Missing::Never);
    let age = Definition {
        name: AGE,
        kind,
        dimensions: &[AGE],
        records_per_chunk,
        missing,
    };
    let age = file.define(&age)?;
    for (name, value) in schema::age_attributes() {
        file.text(Some(age), name, &value)?;
    }
    for &(name, ..) in dimensions.iter().filter(|d| !d.2) {
        file.without_coordinate(name)?;
    }
    let dimensions: &[&str] = &[AGE, BOUNDS];
    let bounds = Definition {
        name: AGE_BOUNDS,
        kind,
        dimensions,
        records_per_chunk,
        missing,
    };
    Ok((age, file.define(&bounds)?))
}

fn define_coordinate(file: &mut NetCdfFile, coordinate: &Coordinate) -> Result<()> {
    let (kind, values) = match &coordinate.content {
        Content::Numbers(v) => (Kind::F64, Values::F64(v)),
        Content::Integers(v) => (Kind::I32, Values::I32(v)),
        Content::Letters(v) => (Kind::Char, Values::Char(v)),
    };
    let id = file.define(&Definition {
        name: coordinate.name,
        kind,
        dimensions: coordinate.dimensions,
        records_per_chunk: None,
        missing: Missing::Never,
    })?;
    for (name, value) in &coordinate.attributes {
        file.text(Some(id), name, value)?;
    }
    file.write(id, values)
}
