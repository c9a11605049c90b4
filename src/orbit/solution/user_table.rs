//! Orbital elements from tables of the user's own.
//!
//! What: the form of such tables in a configuration, what was read of them, and the check of every value.
//! A column of numbers does not say what it is, so what is declared is compared with what the
//! Earth can have: degrees taken for radians and the reverse, per cent, and climatic precession
//! given as an angle are refused with the reason.
//! Units: as declared; degrees and kyr before 1950 CE within.
//! Numerics: `nodes.rs`.
//! Source: own limits, wider than all that astronomy finds for the Earth (e below 0.07, tilt between
//! 21 and 25 degrees, perihelion once around in 16 to 27 kyr).

use serde::{Deserialize, Serialize};
use std::ops::RangeInclusive;
use std::sync::Arc;

use super::OrbitError;
use super::course::Course;
use super::nodes::{Nodes, PerihelionNodes};
use super::orbit_table::OrbitTable;
use crate::orbit::elements::PerihelionLongitude;
use crate::tables::declared::{AngleUnit, Declaration, Series, WidestGap, declared_table};

/// Largest gap that may be declared: precession turns by a quarter in it.
pub const WIDEST_GAP: WidestGap = WidestGap {
    kyr: 5.0,
    limit: "must be above 0 and at most 5 kyr: perihelion goes round in 21 kyr",
};

/// Eccentricities that are taken.
const ECCENTRICITIES: RangeInclusive<f64> = 0.0..=0.3;
/// Obliquities that are taken, degrees.
const OBLIQUITIES_DEG: RangeInclusive<f64> = 5.0..=60.0;
/// Half to twice the rate of perihelion, in either direction: degrees in a kyr, 360/21.
const TURNING_DEG_KYR: RangeInclusive<f64> = 8.6..=34.0;
/// Rows and time over which that rate is told: it stands still for a few kyr where e is small.
const TURNING_ROWS: usize = 32;
const TURNING_KYR: f64 = 40.0;
/// Climatic precession e sin(perihelion) stays within this.
const PRECESSIONS: RangeInclusive<f64> = -0.3..=0.3;

declared_table! {
    /// Eccentricity against age from a text file, a pure number.
    EccentricityTable {}
}

declared_table! {
    /// Obliquity against age from a text file.
    ObliquityTable {
        /// Unit of the column.
        angle_unit: AngleUnit,
    }
}

declared_table! {
    /// Longitude of perihelion from the moving equinox against age from a text file.
    PerihelionTable {
        /// Unit of the column.
        angle_unit: AngleUnit,
        /// What is counted.
        convention: PerihelionConvention,
    }
}

/// Which longitude of perihelion a table gives.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum PerihelionConvention {
    /// The Earth's, seen from the Sun (102.9 degrees today).
    Heliocentric,
    /// That at which the Sun is seen (282.9 degrees today).
    SunLongitude,
}

/// A file that an element comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ElementSource<'a> {
    /// A text table.
    Text(Declaration<'a>),
    /// A table made by `orbicline orbit --integrate`, by its path.
    Integrated(&'a str),
}

impl<'a> ElementSource<'a> {
    /// Path of the file, as it is written.
    pub fn path(&self) -> &'a str {
        match self {
            Self::Text(declaration) => declaration.path,
            Self::Integrated(path) => path,
        }
    }
}

/// What was read from such a file.
#[derive(Clone, Debug, PartialEq)]
pub enum ElementData {
    /// A text table.
    Text(Series),
    /// A table made by this program.
    Integrated(Arc<OrbitTable>),
}

/// What was read for each element; none where it needs no file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct OrbitData {
    /// Eccentricity.
    pub eccentricity: Option<ElementData>,
    /// Obliquity.
    pub obliquity: Option<ElementData>,
    /// Longitude of perihelion.
    pub perihelion: Option<ElementData>,
}

/// The course of an element from a table made by this program.
pub(super) fn integrated(
    element: &'static str,
    data: Option<&ElementData>,
) -> Result<Course, OrbitError> {
    match data {
        Some(ElementData::Integrated(table)) => Ok(Course::IntegratedTable(Arc::clone(table))),
        _ => Err(OrbitError::NotRead { element }),
    }
}

fn series<'a>(
    element: &'static str,
    data: Option<&'a ElementData>,
) -> Result<&'a Series, OrbitError> {
    match data {
        Some(ElementData::Text(series)) => Ok(series),
        _ => Err(OrbitError::NotRead { element }),
    }
}

/// A course of single values, when `reason` finds nothing against any of them.
fn values(
    element: &'static str,
    series: &Series,
    reason: &dyn Fn(f64) -> Option<&'static str>,
    value: &dyn Fn(f64) -> f64,
) -> Result<Course, OrbitError> {
    let mut rows = series.values.iter().enumerate();
    let against = |(row, value): (usize, &f64)| Some((row, reason(*value)?));
    if let Some((row, reason)) = rows.by_ref().find_map(against) {
        let others = rows.filter_map(against).count();
        return Err(refusal(element, series, row, reason, others));
    }
    let rows = series.values.iter().map(|v| [value(*v)]).collect();
    Ok(Course::Values(Arc::new(Nodes::new(&series.age_kyr, rows))))
}

fn refusal(
    element: &'static str,
    series: &Series,
    row: usize,
    reason: &'static str,
    others: usize,
) -> OrbitError {
    OrbitError::Row {
        element,
        path: series.path.clone(),
        line: series.lines[row],
        value: series.values[row],
        reason,
        others,
    }
}

impl EccentricityTable {
    /// The course of what was read.
    pub(super) fn course(data: Option<&ElementData>) -> Result<Course, OrbitError> {
        let reason = |e: f64| match e {
            e if ECCENTRICITIES.contains(&e) => None,
            e if e < 0.0 => Some(
                "is negative, which no eccentricity is: is the column climatic precession, \
                 e sin(perihelion)?",
            ),
            _ => Some(
                "is no eccentricity of the Earth (below 0.07; at most 0.3 is taken): is the column \
                 in per cent, or another element?",
            ),
        };
        let element = "eccentricity";
        values(element, series(element, data)?, &reason, &|e| e)
    }
}

impl ObliquityTable {
    /// The course of what was read.
    pub(super) fn course(&self, data: Option<&ElementData>) -> Result<Course, OrbitError> {
        let (unit, element) = (self.angle_unit, "obliquity");
        let fits = |unit: AngleUnit, angle| OBLIQUITIES_DEG.contains(&unit.degrees(angle));
        let reason = |angle: f64| match unit {
            _ if fits(unit, angle) => None,
            AngleUnit::Degree if fits(AngleUnit::Radian, angle) => Some(
                "is declared in degrees and looks like radians (the Earth's obliquity is 22 to 25 degrees, \
                 0.38 to 0.43 rad): correct angle_unit, or the row",
            ),
            AngleUnit::Radian if fits(AngleUnit::Degree, angle) => Some(
                "is declared in radians and looks like degrees (the Earth's obliquity is 22 to 25 degrees, \
                 0.38 to 0.43 rad): correct angle_unit, or the row",
            ),
            _ => Some("is no obliquity: 5 to 60 degrees are taken"),
        };
        values(element, series(element, data)?, &reason, &|angle| {
            unit.degrees(angle)
        })
    }
}

impl PerihelionTable {
    /// The course of what was read.
    pub(super) fn course(&self, data: Option<&ElementData>) -> Result<Course, OrbitError> {
        let element = "perihelion";
        let series = series(element, data)?;
        let blocks = blocks(&series.age_kyr);
        let against = |&[first, last]: &[usize; 2]| {
            let reason =
                self.reason(&series.age_kyr[first..=last], &series.values[first..=last])?;
            // Of a stretch that is wrong as a whole the row that stands first in the file is told.
            let rows = first..=last;
            Some((rows.min_by_key(|row| series.lines[*row])?, reason))
        };
        if let Some((row, reason)) = blocks.iter().find_map(against) {
            return Err(refusal(element, series, row, reason, 0));
        }
        let heliocentric = |angle: &f64| {
            let degrees = self.angle_unit.degrees(*angle);
            match self.convention {
                PerihelionConvention::Heliocentric => {
                    PerihelionLongitude::from_heliocentric_deg(degrees)
                }
                PerihelionConvention::SunLongitude => {
                    PerihelionLongitude::from_sun_longitude_deg(degrees)
                }
            }
            .heliocentric_deg()
        };
        let longitudes: Vec<f64> = series.values.iter().map(heliocentric).collect();
        let nodes = PerihelionNodes::new(&series.age_kyr, &longitudes);
        Ok(Course::Longitudes(Arc::new(nodes)))
    }

    /// What speaks against a stretch of rows.
    fn reason(&self, age_kyr: &[f64], angles: &[f64]) -> Option<&'static str> {
        let moves = angles
            .iter()
            .any(|angle| angle.total_cmp(&angles[0]).is_ne());
        if moves && angles.iter().all(|angle| PRECESSIONS.contains(angle)) {
            return Some(
                "and the rows after it stay within 0.3: is the column climatic precession, \
                 e sin(perihelion), instead of an angle?",
            );
        }
        // Most steps do not pass from the full turn to zero: the middle one tells the rate.
        let steps = angles.windows(2).zip(age_kyr.windows(2));
        let mut rates: Vec<f64> = steps
            .map(|(angle, age)| ((angle[1] - angle[0]) / (age[1] - age[0])).abs())
            .collect();
        rates.sort_by(f64::total_cmp);
        let rate = rates[rates.len() / 2];
        match self.angle_unit {
            AngleUnit::Degree if TURNING_DEG_KYR.contains(&rate.to_degrees()) => Some(
                "and the rows after it are declared in degrees and look like radians (perihelion turns by 17 degrees, \
                 0.3 rad, in 1 kyr): correct angle_unit, or the rows",
            ),
            AngleUnit::Radian if TURNING_DEG_KYR.contains(&rate) => Some(
                "and the rows after it are declared in radians and look like degrees (perihelion turns by 17 degrees, \
                 0.3 rad, in 1 kyr): correct angle_unit, or the rows",
            ),
            _ => None,
        }
    }
}

/// First and last rows of the stretches over which the turning of perihelion is told; the last row
/// of each is the first of the next.
fn blocks(age_kyr: &[f64]) -> Vec<[usize; 2]> {
    let end = age_kyr.len() - 1;
    let is_long = |first: usize, last: usize| {
        last - first >= TURNING_ROWS && age_kyr[last] - age_kyr[first] >= TURNING_KYR
    };
    let (mut blocks, mut first) = (Vec::new(), 0);
    for last in 1..=end {
        if last == end || (is_long(first, last) && is_long(last, end)) {
            blocks.push([first, last]);
            first = last;
        }
    }
    blocks
}
