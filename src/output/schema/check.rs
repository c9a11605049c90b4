//! Checks of the table before anything is computed or written.
//!
//! Format facts (CF 1.11): names are letters, digits and underscores and begin with a letter
//! (2.3); coordinates are strictly monotonic (1.3); units are UDUNITS strings (3.1).

use std::collections::BTreeSet;

use super::super::error::Result;
use super::super::netcdf4::MAX_TEXT;
use super::{
    AGE, AGE_BOUNDS, AxisValues, MonthCells, REQUIRED_GLOBAL, RESTART, Schema, dimension, wrong,
};
use crate::series::{Scale, Variable};

/// Units that some readers silently turn into time differences.
const TIME_DIFFERENCES: [&str; 7] = [
    "days",
    "hours",
    "minutes",
    "seconds",
    "milliseconds",
    "microseconds",
    "nanoseconds",
];
/// Year-like units that UDUNITS reads as areas.
const AREAS: [&str; 4] = ["a", "ka", "Ma", "Ga"];
/// Units of a temperature.
const TEMPERATURES: [&str; 6] = ["K", "kelvin", "degC", "degree_C", "degrees_C", "celsius"];

/// Checks the values of the axes.
pub(super) fn axes(axes: &AxisValues) -> Result<()> {
    increasing("latitude edges", &axes.latitude_edges_deg, -90.0, 90.0)?;
    increasing("depth edges", &axes.depth_edges_m, 0.0, f64::MAX)?;
    if let MonthCells::Fixed { edges_year, .. } = &axes.months {
        increasing("month edges", edges_year, -1.0, 2.0)?;
    }
    increasing(
        "coastal latitudes",
        &axes.coastal_latitudes_deg,
        -90.0,
        90.0,
    )?;
    for (item, edges) in [
        ("latitude edges", &axes.latitude_edges_deg),
        ("depth edges", &axes.depth_edges_m),
    ] {
        if edges.len() == 1 {
            return Err(wrong(
                item,
                "one edge bounds no cell; give at least 2, or none",
            ));
        }
    }
    months(axes)
}

fn months(axes: &AxisValues) -> Result<()> {
    let MonthCells::Fixed {
        edges_year: edges,
        lengths_day: lengths,
    } = &axes.months
    else {
        return Ok(());
    };
    match (edges.len(), lengths.len()) {
        (13, 12) => {}
        (e, l) => {
            let problem = format!("{e} edges and {l} lengths given; give 13 and 12");
            return Err(wrong("months", problem));
        }
    }
    let span = edges[12] - edges[0];
    if (span - 1.0).abs() > 1e-9 {
        return Err(wrong(
            "month edges",
            format!("span {span} years; they must span 1"),
        ));
    }
    match lengths.iter().find(|&&l| !(l.is_finite() && l > 0.0)) {
        Some(l) => Err(wrong(
            "month lengths",
            format!("{l} days; lengths are positive"),
        )),
        None => Ok(()),
    }
}

fn increasing(item: &str, values: &[f64], low: f64, high: f64) -> Result<()> {
    if let Some(v) = values.iter().find(|v| !(low..=high).contains(*v)) {
        return Err(wrong(item, format!("{v} is outside {low} to {high}")));
    }
    match values.windows(2).find(|pair| pair[0] >= pair[1]) {
        Some(pair) => {
            let problem = format!("{} is followed by {}; they must increase", pair[0], pair[1]);
            Err(wrong(item, problem))
        }
        None => Ok(()),
    }
}

/// Checks the variables of the records.
pub(super) fn variables(schema: &Schema) -> Result<()> {
    if schema.variables.is_empty() {
        return Err(wrong(
            "variables",
            "there are none; a record needs at least one",
        ));
    }
    let mut taken: BTreeSet<&str> = [AGE, AGE_BOUNDS].into();
    taken.extend(schema.dimensions().iter().map(|d| d.0));
    taken.extend(schema.coordinates().iter().map(|c| c.name));
    for variable in &schema.variables {
        let item = format!("variable `{}`", variable.name);
        name(&item, variable.name)?;
        if !taken.insert(variable.name) || variable.name.starts_with(RESTART) {
            return Err(wrong(
                item,
                "the name is taken or reserved; rename the variable",
            ));
        }
        if variable.long_name.trim().is_empty() {
            return Err(wrong(
                item,
                "the long name is empty; say what the quantity is",
            ));
        }
        units(&item, variable)?;
        for (i, &axis) in variable.axes.iter().enumerate() {
            let problem = if schema.length(axis) == 0 {
                "has no values; give them in the axis values"
            } else if variable.axes[..i].contains(&axis) {
                "occurs twice; use another axis"
            } else {
                continue;
            };
            return Err(wrong(item, format!("axis `{}` {problem}", dimension(axis))));
        }
    }
    Ok(())
}

/// Checks that a name can stand in the file.
pub(crate) fn name(item: &str, name: &str) -> Result<()> {
    let mut letters = name.chars();
    let first = letters.next().is_some_and(|c| c.is_ascii_alphabetic());
    if first && letters.all(|c| c.is_ascii_alphanumeric() || c == '_') {
        return Ok(());
    }
    Err(wrong(
        item,
        "a name begins with a letter and goes on with letters, digits, underscores",
    ))
}

fn units(item: &str, variable: &Variable) -> Result<()> {
    let units = variable.units;
    let problem = if units.trim().is_empty() {
        "give a UDUNITS string, \"1\" for a plain number"
    } else if units.to_ascii_lowercase().contains("since") {
        "readers take the word \"since\" for a calendar and fail; use plain units"
    } else if TIME_DIFFERENCES.contains(&units) {
        "some readers turn these into time differences; use the singular or the symbol"
    } else if units.split_whitespace().any(|part| AREAS.contains(&part)) {
        "UDUNITS reads this as an area; write \"year\" or \"kyr\""
    } else {
        match (
            TEMPERATURES.contains(&units),
            variable.scale == Scale::Plain,
        ) {
            (true, true) => "a temperature must be on its scale or a difference; set `scale`",
            (false, false) => "a temperature needs units of temperature, such as \"K\"",
            _ => return Ok(()),
        }
    };
    Err(wrong(item, format!("units \"{units}\": {problem}")))
}

/// Checks the global attributes.
pub(super) fn global(global: &[(String, String)]) -> Result<()> {
    let mut seen = BTreeSet::from(["Conventions"]);
    for (key, value) in global {
        let item = format!("global attribute `{key}`");
        name(&item, key)?;
        if !seen.insert(key) {
            return Err(wrong(
                item,
                "is given twice, or is written by the file itself",
            ));
        }
        if value.len() > MAX_TEXT {
            let problem = format!("{} bytes of text, at most {MAX_TEXT} fit", value.len());
            return Err(wrong(item, problem));
        }
        if value.trim().is_empty() {
            return Err(wrong(item, "is empty; fill it in or leave it out"));
        }
    }
    match REQUIRED_GLOBAL.iter().find(|&&key| !seen.contains(key)) {
        Some(key) => Err(wrong(
            format!("global attribute `{key}`"),
            "is missing; add it",
        )),
        None => Ok(()),
    }
}
