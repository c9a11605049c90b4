//! The one table from which a run file takes dimensions, coordinates and CF metadata.
//!
//! Format facts (CF 1.11): coordinate variables are strictly monotonic and have no missing
//! values (1.3, 2.5.1); bounds carry the units of their coordinate (7.1); temperatures say
//! whether they are on the scale or a difference (3.1.2, `units_metadata`). Age is counted in
//! kyr before 1950 CE on a dimension `age` without standard name and without axis: calendars of
//! readers end some 292 kyr from the epoch, and units with the word "since" would send them
//! there. Some readers turn units such as "days" into time differences, so the
//! singular is asked for.
//!
//! Sources: CF Conventions 1.11; UDUNITS-2 data base ("a", "ka", "Ma" are areas there).

use crate::series::{Axis, Scale, Statistic, Variable};

use super::error::{OutputError, Result};

pub(crate) mod check;
mod coordinates;
#[cfg(test)]
mod tests;

pub(crate) use coordinates::{Content, Coordinate, age_attributes};

/// The conventions every file declares.
pub const CONVENTIONS: &str = "CF-1.11";
/// Global attributes every run has to give.
pub const REQUIRED_GLOBAL: [&str; 6] = [
    "title",
    "institution",
    "source",
    "history",
    "references",
    "comment",
];
/// Variable that holds the state to restart from.
pub const RESTART: &str = "restart_state";
/// Its attribute that names the parts in order, as `name:length` separated by blanks.
pub const RESTART_PARTS: &str = "parts";
/// Its attribute with the SHA-256 of its numbers.
pub const RESTART_HASH: &str = "sha256";
/// Dimension and coordinate variable of the records.
pub const AGE: &str = "age";
/// Ends of the records' intervals.
pub const AGE_BOUNDS: &str = "age_bnds";
/// Dimension of the two ends of a cell.
pub(crate) const BOUNDS: &str = "bnds";
/// Dimension of the letters of a name.
pub(crate) const LETTERS: &str = "name_length";

/// A variable of latitude that does not change with age.
#[derive(Clone, Debug, PartialEq)]
pub struct FixedField {
    /// Name in the file.
    pub name: &'static str,
    /// UDUNITS string.
    pub units: &'static str,
    /// What it is, in words.
    pub long_name: &'static str,
    /// CF standard name, where the table has one.
    pub standard_name: Option<&'static str>,
    /// One value for each band.
    pub values: Vec<f64>,
}

/// Values of the axes a variable can have besides age. An axis that no variable uses may be left
/// empty and is then left out of the file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct AxisValues {
    /// Plain variables of latitude that do not change with age, such as the area of the bands.
    pub by_latitude: Vec<FixedField>,
    /// Edges of the latitude bands, degrees north, from south to north.
    pub latitude_edges_deg: Vec<f64>,
    /// Edges of the levels, m below the surface, from top to bottom.
    pub depth_edges_m: Vec<f64>,
    /// Where the months lie in the year.
    pub months: MonthCells,
    /// Coastal latitudes, degrees north, increasing.
    pub coastal_latitudes_deg: Vec<f64>,
}

/// Where the months lie in the year.
#[derive(Clone, Debug, Default, PartialEq)]
pub enum MonthCells {
    /// There are none.
    #[default]
    None,
    /// The same in all records.
    Fixed {
        /// The thirteen edges of the twelve months, fractions of the year.
        edges_year: Vec<f64>,
        /// Lengths of the twelve months, days.
        lengths_day: Vec<f64>,
    },
    /// Told by the variables of each record, since they depend on the orbit.
    OfRecord,
}

/// Everything the file says about its numbers.
///
/// Variables with axes are stored as 32-bit numbers, numbers per record (scalars, ledgers) as
/// 64-bit ones.
#[derive(Clone, Debug, PartialEq)]
pub struct Schema {
    /// Values of the axes.
    pub axes: AxisValues,
    /// The variables, in the order in which records hold their values.
    pub variables: Vec<Variable>,
    /// Global attributes: those of [`REQUIRED_GLOBAL`] and any others. `Conventions` is added.
    pub global: Vec<(String, String)>,
}

impl Schema {
    /// Number of values along an axis; 0 if the axis was left empty.
    pub fn length(&self, axis: Axis) -> usize {
        let axes = &self.axes;
        match axis {
            Axis::Latitude => axes.latitude_edges_deg.len().saturating_sub(1),
            Axis::LatitudeEdge => axes.latitude_edges_deg.len(),
            Axis::Month => match axes.months {
                MonthCells::None => 0,
                MonthCells::Fixed { .. } | MonthCells::OfRecord => 12,
            },
            Axis::Depth => axes.depth_edges_m.len().saturating_sub(1),
            Axis::Hemisphere => 2,
            Axis::CoastalLatitude => axes.coastal_latitudes_deg.len(),
        }
    }

    /// Number of values of a variable in one record.
    pub fn size(&self, variable: &Variable) -> usize {
        variable
            .axes
            .iter()
            .map(|&axis| self.length(axis))
            .product()
    }

    /// Number of values in one record.
    pub fn record_size(&self) -> usize {
        self.variables.iter().map(|v| self.size(v)).sum()
    }

    /// Checks the table against itself and the conventions.
    ///
    /// # Errors
    /// The first contradiction found, with the entry, the value and what to do.
    pub fn check(&self) -> Result<()> {
        check::axes(&self.axes)?;
        check::variables(self)?;
        check::global(&self.global)
    }
}

/// Name of the dimension of an axis.
pub(crate) fn dimension(axis: Axis) -> &'static str {
    match axis {
        Axis::Latitude => "lat",
        Axis::LatitudeEdge => "lat_edge",
        Axis::Month => "month",
        Axis::Depth => "depth",
        Axis::Hemisphere => "hemisphere",
        Axis::CoastalLatitude => "coastal_lat",
    }
}

/// CF attributes of a variable of records.
pub(crate) fn attributes(schema: &Schema, variable: &Variable) -> Vec<(&'static str, String)> {
    let mut list = vec![("long_name", variable.long_name.to_owned())];
    list.extend(
        variable
            .standard_name
            .map(|name| ("standard_name", name.to_owned())),
    );
    list.push(("units", variable.units.to_owned()));
    match variable.scale {
        Scale::Temperature => list.push(("units_metadata", "temperature: on_scale".to_owned())),
        Scale::TemperatureDifference => {
            list.push(("units_metadata", "temperature: difference".to_owned()));
        }
        Scale::Plain => {}
    }
    let method = match variable.statistic {
        Statistic::Mean => "age: mean",
        Statistic::Point => "age: point",
    };
    list.push(("cell_methods", method.to_owned()));
    let auxiliary = |axis: &Axis| match axis {
        Axis::Month if schema.axes.months != MonthCells::OfRecord => Some("month_middle"),
        Axis::Hemisphere => Some("hemisphere_name"),
        _ => None,
    };
    let auxiliary: Vec<&str> = variable.axes.iter().filter_map(auxiliary).collect();
    if !auxiliary.is_empty() {
        list.push(("coordinates", auxiliary.join(" ")));
    }
    list
}

/// An error about one entry of the table.
pub(crate) fn wrong(item: impl Into<String>, problem: impl Into<String>) -> OutputError {
    OutputError::Schema {
        item: item.into(),
        problem: problem.into(),
    }
}
