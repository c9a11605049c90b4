//! Orbital elements against age as a table.
//!
//! What: eccentricity, obliquity, heliocentric longitude of perihelion from the moving equinox, and
//! climatic precession e sin(perihelion) at equally spaced ages.
//! Units: degrees, kyr before 1950 CE.
//! Source: [`crate::orbit::solution`].

use super::ages::{AgeError, AgeRange};
use super::axes_of_figures;
use super::destination::{DestinationError, Drawing};
use super::orbit_source::{OrbitChoice, OrbitSourceError};
use crate::orbit::solution::OrbitError;
use crate::output::table::{Table, TableAxis, TableVariable};
use crate::report::axis::Axis;
use crate::report::lines::{Line, LineFigure, Panel};

/// What the numbers mean.
const CONVENTIONS: &str = "Ages are kyr before 1950 CE, negative after it. Perihelion is the \
    heliocentric longitude of the Earth at perihelion from the moving March equinox (102.9 degrees \
    today; the Sun is then seen at 282.9). Climatic precession is e sin(perihelion), largest with \
    perihelion at the December solstice. Obliquity is that of date.";

/// A table of the orbit that cannot be made.
#[derive(Debug, thiserror::Error)]
pub enum OrbitTableError {
    /// The ages.
    #[error(transparent)]
    Ages(#[from] AgeError),
    /// The orbit.
    #[error(transparent)]
    Source(#[from] OrbitSourceError),
    /// The orbit at an age.
    #[error(transparent)]
    Orbit(#[from] OrbitError),
}

/// Tabulates an orbit. `command` is the command line, program first, for the history.
///
/// # Errors
/// When ages or orbit have faults, or the orbit does not reach an age.
pub fn tabulate(
    choice: &OrbitChoice,
    ages: AgeRange,
    command: &[String],
) -> Result<Table, OrbitTableError> {
    let ages_kyr = ages.ages_kyr(4)?;
    let source = choice.find()?;
    if let (Some(&oldest), Some(&youngest)) = (ages_kyr.first(), ages_kyr.last()) {
        source.orbit.check_range(oldest, youngest)?;
    }
    let mut variables = variables();
    for &age_kyr in &ages_kyr {
        let elements = source.orbit.at(age_kyr)?;
        let row = [
            elements.eccentricity,
            elements.obliquity_deg,
            elements.perihelion.heliocentric_deg(),
            elements.climatic_precession(),
        ];
        for (variable, value) in variables.iter_mut().zip(row) {
            variable.values.push(value);
        }
    }
    Ok(Table {
        about: source.about("Orbit of the Earth", CONVENTIONS, command),
        axes: vec![(TableAxis::Age, ages_kyr)],
        variables: variables.into(),
    })
}

/// Draws eccentricity, obliquity and climatic precession against age, as SVG.
///
/// # Errors
/// When there is one age only.
pub fn draw(table: &Table, drawing: Drawing) -> Result<String, DestinationError> {
    let (x, places) = axes_of_figures::axis(table, TableAxis::Age, drawing);
    if places.len() < 2 {
        return Err(DestinationError::Figure {
            problem: "one age is no course; give a range of ages".to_owned(),
        });
    }
    let drawn = [
        ("eccentricity", "Eccentricity"),
        ("obliquity", "Obliquity (°)"),
        ("climatic_precession", "Precession e sin \u{03d6}"),
    ];
    let panel = |(name, label): (&str, &str)| {
        let variable = table.variables.iter().find(|v| v.name == name)?;
        Some(Panel {
            name: String::new(),
            y: Axis::numbers(label, Axis::around(variable.values.iter().copied())),
            lines: vec![Line {
                name: String::new(),
                values: variable.values.clone(),
            }],
        })
    };
    Ok(LineFigure {
        about: axes_of_figures::about(table),
        width_mm: drawing.width_mm,
        x,
        places,
        panels: drawn.into_iter().filter_map(panel).collect(),
    }
    .svg())
}

/// The columns, still empty.
fn variables() -> [TableVariable; 4] {
    let of = |name, column, long_name: &str, units, decimals| TableVariable {
        name,
        column,
        long_name: long_name.to_owned(),
        standard_name: None,
        units,
        decimals,
        axes: vec![TableAxis::Age],
        values: Vec::new(),
    };
    [
        of(
            "eccentricity",
            "eccentricity",
            "eccentricity of the orbit",
            "1",
            9,
        ),
        of(
            "obliquity",
            "obliquity_deg",
            "obliquity of the ecliptic",
            "degree",
            7,
        ),
        of(
            "perihelion_longitude",
            "perihelion_heliocentric_deg",
            "heliocentric longitude of perihelion from the moving equinox (102.9 today)",
            "degree",
            7,
        ),
        of(
            "climatic_precession",
            "climatic_precession",
            "climatic precession e sin(perihelion)",
            "1",
            9,
        ),
    ]
}
