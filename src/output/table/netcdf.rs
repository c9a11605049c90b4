//! A table as NetCDF-4.
//!
//! Format facts (CF 1.11): coordinates carry units and, where one exists, a standard name; age is
//! counted in kyr before 1950 CE without standard name, as in run files (see
//! [`super::super::schema`]); global attributes are those of run files.

use std::path::Path;

use super::super::error::Result;
use super::super::netcdf4::{Definition, Kind, Length, Missing, NetCdfFile, Values};
use super::super::schema::{AGE, CONVENTIONS, age_attributes};
use super::{Table, TableAxis, TableVariable};

/// Writes the table as a file.
pub(super) fn write(table: &Table, path: &Path) -> Result<()> {
    let mut file = NetCdfFile::create(path)?;
    file.text(None, "Conventions", CONVENTIONS)?;
    for (name, value) in &table.about {
        file.text(None, name, value)?;
    }
    for (axis, values) in &table.axes {
        file.dimension(name(*axis), Length::Fixed(values.len()))?;
    }
    for (axis, values) in &table.axes {
        coordinate(&mut file, *axis, values)?;
    }
    for variable in &table.variables {
        define(&mut file, variable)?;
    }
    file.close()
}

fn coordinate(file: &mut NetCdfFile, axis: TableAxis, values: &[f64]) -> Result<()> {
    let whole: Vec<i32> = match axis {
        TableAxis::Month => (1..).take(values.len()).collect(),
        _ => Vec::new(),
    };
    let (kind, values) = match axis {
        TableAxis::Month => (Kind::I32, Values::I32(&whole)),
        _ => (Kind::F64, Values::F64(values)),
    };
    let id = file.define(&Definition {
        name: name(axis),
        kind,
        dimensions: &[name(axis)],
        records_per_chunk: None,
        missing: Missing::Never,
    })?;
    for (name, value) in attributes(axis) {
        file.text(Some(id), name, &value)?;
    }
    file.write(id, values)
}

fn define(file: &mut NetCdfFile, variable: &TableVariable) -> Result<()> {
    let dimensions: Vec<_> = variable.axes.iter().map(|&axis| name(axis)).collect();
    let id = file.define(&Definition {
        name: variable.name,
        kind: Kind::F64,
        dimensions: &dimensions,
        records_per_chunk: None,
        missing: Missing::Nan,
    })?;
    file.text(Some(id), "long_name", &variable.long_name)?;
    if let Some(name) = variable.standard_name {
        file.text(Some(id), "standard_name", name)?;
    }
    file.text(Some(id), "units", variable.units)?;
    // One bit pattern for "no value": the sign of a NaN depends on the machine.
    let one_nan = |&v: &f64| if v.is_nan() { f64::NAN } else { v };
    let values: Vec<f64> = variable.values.iter().map(one_nan).collect();
    file.write(id, Values::F64(&values))
}

/// Name of the dimension and its coordinate.
fn name(axis: TableAxis) -> &'static str {
    match axis {
        TableAxis::Age => AGE,
        TableAxis::SunLongitude => "sun_longitude",
        TableAxis::Date => "day_of_year",
        TableAxis::Month => "month",
        TableAxis::Latitude => "lat",
    }
}

fn attributes(axis: TableAxis) -> Vec<(&'static str, String)> {
    let texts: &[_] = match axis {
        TableAxis::Age => {
            let mut list = age_attributes();
            list.retain(|(name, _)| *name != "bounds");
            return list;
        }
        TableAxis::SunLongitude => &[
            (
                "long_name",
                "true longitude of the Sun from the March equinox",
            ),
            ("units", "degree"),
        ],
        TableAxis::Date => &[
            (
                "long_name",
                "days since 1 January 0 h in the calendar of 365 days",
            ),
            ("units", "day"),
        ],
        TableAxis::Month => &[("long_name", "month of the year"), ("units", "1")],
        TableAxis::Latitude => &[
            ("long_name", "latitude"),
            ("standard_name", "latitude"),
            ("units", "degrees_north"),
            ("axis", "Y"),
        ],
    };
    texts
        .iter()
        .map(|&(name, text)| (name, text.to_owned()))
        .collect()
}
