//! A table as comma-separated text.
//!
//! Format facts: comment lines begin with `#`, then one line of column names; numbers have the
//! decimals that their quantity asks for, those of axes as many as they need; a missing value is an
//! empty field; dates are written month-day, as in 06-21.
//! Source: RFC 4180, but with the line end of POSIX.

use std::fs::File;
use std::io::{self, BufWriter, Write};
use std::path::Path;

use super::super::error::{Result, io_at};
use super::{Table, TableAxis};
use crate::grid::calendar::month_and_day;

/// What NetCDF files must say by convention, and tells a reader of text nothing.
const ONLY_IN_FILES: [&str; 3] = ["institution", "references", "orbicline_version"];

/// Writes the table as a file.
pub(super) fn write_file(table: &Table, path: &Path) -> Result<()> {
    let file = File::create(path).map_err(io_at(path, "create"))?;
    let mut out = BufWriter::new(file);
    write(table, &mut out).map_err(io_at(path, "write"))
}

/// Writes the table.
pub(super) fn write(table: &Table, out: &mut dyn Write) -> io::Result<()> {
    let told = |(name, _): &&(String, String)| !ONLY_IN_FILES.contains(&name.as_str());
    for (name, value) in table.about.iter().filter(told) {
        for (number, line) in value.lines().enumerate() {
            match number {
                0 => writeln!(out, "# {name}: {line}")?,
                _ => writeln!(out, "#   {line}")?,
            }
        }
    }
    let axes = table.axes.iter().map(|(axis, _)| column(*axis));
    let names: Vec<_> = axes
        .chain(table.variables.iter().map(|v| v.column))
        .collect();
    writeln!(out, "{}", names.join(","))?;
    let mut at = vec![0; table.axes.len()];
    for _ in 0..table.rows() {
        for (i, (axis, values)) in table.axes.iter().enumerate() {
            let comma = if i == 0 { "" } else { "," };
            write!(out, "{comma}{}", shown(*axis, values[at[i]]))?;
        }
        let number = |axis: TableAxis| {
            let own = table.axes.iter().position(|(other, _)| *other == axis);
            own.map_or(0, |i| at[i])
        };
        for variable in &table.variables {
            match table.value(variable, number) {
                value if value.is_nan() => write!(out, ",")?,
                value => write!(out, ",{value:.*}", variable.decimals)?,
            }
        }
        writeln!(out)?;
        advance(&mut at, table);
    }
    out.flush()
}

/// The next combination of the axes' values, the last axis fastest.
fn advance(at: &mut [usize], table: &Table) {
    for (index, (_, values)) in at.iter_mut().zip(&table.axes).rev() {
        *index += 1;
        if *index < values.len() {
            return;
        }
        *index = 0;
    }
}

fn column(axis: TableAxis) -> &'static str {
    match axis {
        TableAxis::Age => "age_kyr",
        TableAxis::SunLongitude => "sun_longitude_deg",
        TableAxis::Date => "date",
        TableAxis::Month => "month",
        TableAxis::Latitude => "latitude_deg",
    }
}

fn shown(axis: TableAxis, value: f64) -> String {
    match axis {
        TableAxis::Date => {
            let (month, day) = month_and_day(value);
            format!("{month:02}-{day:02}")
        }
        _ => value.to_string(),
    }
}
