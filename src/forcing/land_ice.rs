//! Prescribed land ice of the northern hemisphere: its southern edge against age.
//!
//! What: all land poleward of the edge carries an ice sheet, with the albedo that the Antarctic
//! sheet has (`albedo.ice_sheet`). The elevation of the land and the level of the sea stay as they are,
//! and nothing melts: this asks what the brightness of a given ice sheet does, no more.
//! Equation: share of a band under ice = (x_n - max(x_s, sin(edge)))/(x_n - x_s), held within [0, 1],
//! x_s and x_n the sines of the band's edges: by area, so a moving edge acts without jumps.
//! Units: degrees north, kyr before 1950 CE, m2.
//! Numerics: linear between the rows of a table; nothing is extrapolated. Renewed once a year.
//! Source: own definition.

use crate::grid::latitude::LatitudeBands;
use crate::numerics::profile;
use crate::numerics::shown::Shown;
use crate::tables::declared::{AngleUnit, Series, declared_table};
use crate::tables::more;
use serde::{Deserialize, Serialize};
use std::ops::RangeInclusive;
use std::path::PathBuf;

/// Southern edges that are taken, degrees north (chosen here): in radians all are below 1.6, and no
/// northern sheet of the last millions of years came south of 35.
const EDGES_DEG: RangeInclusive<f64> = 10.0..=90.0;

declared_table! {
    /// Southern edge of the northern ice sheet against age from a text file; linear between its rows.
    LandIceTable {
        /// Unit of the column of latitudes.
        angle_unit: AngleUnit,
    }
}

/// Northern land ice in a configuration.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum LandIceSpec {
    /// None but what the surface has of its own.
    None {},
    /// The same at all times.
    Constant {
        /// Southern edge, degrees north, 10 to 90.
        edge_deg: f64,
    },
    /// From a text file of which everything is declared.
    Table(LandIceTable),
}

impl Default for LandIceSpec {
    fn default() -> Self {
        Self::None {}
    }
}

/// Why land ice cannot be used.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum LandIceError {
    /// A constant edge that is none.
    #[error(
        "land_ice.edge_deg = {}: must lie between 10 and 90 degrees north; 90 is no ice",
        Shown(*edge_deg)
    )]
    Edge {
        /// The edge.
        edge_deg: f64,
    },
    /// A value of the table that is none.
    #[error(
        "land_ice.path: {}:{line}: {} {reason}{}",
        path.display(), Shown(*value), more(*others)
    )]
    Row {
        /// The table.
        path: PathBuf,
        /// Line in it, from 1.
        line: u64,
        /// The value as it is written.
        value: f64,
        /// What speaks against it, and what to do.
        reason: &'static str,
        /// How many rows below are refused too.
        others: usize,
    },
    /// An age that was not given.
    #[error(
        "land_ice: {age_kyr} kyr lies outside the ages of its table, {youngest} to {oldest} kyr: extend it or shorten the run"
    )]
    OutOfRange {
        /// The age asked for, kyr.
        age_kyr: f64,
        /// Youngest age given, kyr.
        youngest: f64,
        /// Oldest age given, kyr.
        oldest: f64,
    },
}

/// The southern edge against age, checked.
#[derive(Clone, Debug, PartialEq)]
pub struct IceEdge {
    /// Ages, kyr before 1950, increasing; none for a constant edge.
    age_kyr: Vec<f64>,
    edge_deg: Vec<f64>,
}

impl IceEdge {
    /// The same at all ages, degrees north.
    ///
    /// # Errors
    /// When it is out of range.
    pub fn constant(edge_deg: f64) -> Result<Self, LandIceError> {
        if !EDGES_DEG.contains(&edge_deg) {
            return Err(LandIceError::Edge { edge_deg });
        }
        Ok(Self {
            age_kyr: Vec::new(),
            edge_deg: vec![edge_deg],
        })
    }

    /// Linear between the rows of a table of latitudes in this unit.
    ///
    /// # Errors
    /// The first value that is no latitude of an edge, with the number of those below.
    pub fn table(series: &Series, unit: AngleUnit) -> Result<Self, LandIceError> {
        let mut wrong = series
            .values
            .iter()
            .enumerate()
            .filter_map(|(row, value)| Some((row, against(*value, unit)?)));
        if let Some((row, reason)) = wrong.next() {
            return Err(LandIceError::Row {
                path: series.path.clone(),
                line: series.lines[row],
                value: series.values[row],
                reason,
                others: wrong.count(),
            });
        }
        Ok(Self {
            age_kyr: series.age_kyr.clone(),
            edge_deg: series.values.iter().map(|v| unit.degrees(*v)).collect(),
        })
    }

    /// The edge at an age, degrees north.
    ///
    /// # Errors
    /// When the age was not given.
    pub fn at(&self, age_kyr: f64) -> Result<f64, LandIceError> {
        let (Some(&youngest), Some(&oldest)) = (self.age_kyr.first(), self.age_kyr.last()) else {
            return Ok(self.edge_deg[0]);
        };
        // A millionth of a year of slack for rounding at the ends.
        if !(youngest - 1e-9..=oldest + 1e-9).contains(&age_kyr) {
            return Err(LandIceError::OutOfRange {
                age_kyr,
                youngest,
                oldest,
            });
        }
        Ok(profile::value(&self.age_kyr, &self.edge_deg, age_kyr))
    }
}

/// What speaks against a value as the latitude of an edge.
fn against(value: f64, unit: AngleUnit) -> Option<&'static str> {
    let fits = |unit: AngleUnit| EDGES_DEG.contains(&unit.degrees(value));
    match unit {
        _ if fits(unit) => None,
        AngleUnit::Degree if fits(AngleUnit::Radian) => {
            Some("is declared in degrees and looks like radians: correct angle_unit, or the row")
        }
        AngleUnit::Radian if fits(AngleUnit::Degree) => {
            Some("is declared in radians and looks like degrees: correct angle_unit, or the row")
        }
        _ => Some("is no southern edge: 10 to 90 degrees north are taken; 90 is no ice"),
    }
}

/// Northern land ice on the bands of a run.
#[derive(Clone, Debug, PartialEq)]
pub struct LandIce {
    edge: IceEdge,
    bands: LatitudeBands,
    land_area_m2: Vec<f64>,
}

impl LandIce {
    /// On bands with these land fractions, south to north.
    pub fn new(edge: IceEdge, bands: &LatitudeBands, land_fraction: &[f64]) -> Self {
        let areas = bands.area_m2().iter().zip(land_fraction);
        Self {
            edge,
            bands: bands.clone(),
            land_area_m2: areas.map(|(area, land)| area * land).collect(),
        }
    }

    /// Its southern edge at an age, degrees north.
    ///
    /// # Errors
    /// When the age was not given.
    pub fn edge_deg_at(&self, age_kyr: f64) -> Result<f64, LandIceError> {
        self.edge.at(age_kyr)
    }

    /// Area of land poleward of an edge, m2.
    pub fn area_m2(&self, edge_deg: f64) -> f64 {
        let shares = self.bands.share_between(edge_deg, 90.0);
        let areas = shares.iter().zip(&self.land_area_m2);
        areas.map(|(share, area)| share * area).sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::grid::latitude::Spacing;
    use crate::units::EARTH_RADIUS_M;

    fn series(values: &[f64]) -> Series {
        Series {
            path: "ice.csv".into(),
            age_kyr: (0_u8..).map(f64::from).take(values.len()).collect(),
            values: values.to_vec(),
            lines: (2..).take(values.len()).collect(),
        }
    }

    #[test]
    fn analytic_the_edge_moves_linearly_and_its_land_is_the_cap_north_of_it() {
        let edge = IceEdge::table(&series(&[60.0, 50.0]), AngleUnit::Degree).unwrap();
        assert!((edge.at(0.25).unwrap() - 57.5).abs() < 1e-12);
        assert!(edge.at(1.5).is_err() && edge.at(-0.5).is_err());
        let radians = [60.0_f64, 50.0].map(f64::to_radians);
        let same = IceEdge::table(&series(&radians), AngleUnit::Radian).unwrap();
        assert!((same.at(0.25).unwrap() - 57.5).abs() < 1e-12);
        let bands = LatitudeBands::new(36, Spacing::EqualLatitude).unwrap();
        let ice = LandIce::new(edge, &bands, &[0.5; 36]);
        let sphere = 2.0 * std::f64::consts::PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
        for edge_deg in [90.0, 57.5, 10.0] {
            let cap = 0.5 * sphere * (1.0 - f64::sin(f64::to_radians(edge_deg)));
            assert!(
                (ice.area_m2(edge_deg) - cap).abs() < 1e-12 * sphere,
                "{edge_deg}"
            );
        }
    }

    #[test]
    fn edges_that_are_none_are_refused_with_the_reason() {
        for edge in [9.9, 90.1, f64::NAN] {
            assert!(IceEdge::constant(edge).is_err(), "{edge}");
        }
        let told = |values: &[f64], unit| {
            let refused = IceEdge::table(&series(values), unit).unwrap_err();
            refused.to_string()
        };
        let message = told(&[60.0, 1.0, 0.9], AngleUnit::Degree);
        assert!(message.contains("ice.csv:3: 1 is declared in degrees and looks like radians"));
        assert!(message.ends_with("(and one row below)"), "{message}");
        assert!(told(&[60.0], AngleUnit::Radian).contains("looks like degrees"));
        assert!(told(&[-60.0], AngleUnit::Degree).contains("is no southern edge"));
    }
}
