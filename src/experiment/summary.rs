//! Key figures of a finished run, read back from its file.
//!
//! The response of a quantity to tilt and to precession is the least-squares slope on obliquity,
//! climatic precession and eccentricity together, over the whole run. It describes this run; it is
//! not a test. It is told only where it can mean something: carbon dioxide constant, at least two
//! cycles of obliquity, and the element in question truly varying.

use crate::analysis::regression;
use crate::output::OutputError;
use crate::output::reader::RunFile;
use std::path::Path;

/// Least range of obliquity (degrees) for which a response to it is told: a quarter of what a
/// cycle brings.
const LEAST_OBLIQUITY_DEG: f64 = 0.5;
/// The same for climatic precession, which must also pass through zero: with perihelion held it
/// only follows the eccentricity.
const LEAST_PRECESSION: f64 = 0.02;
/// Shortest run for which responses are told, kyr: two cycles of obliquity.
const LEAST_SPAN_KYR: f64 = 82.0;

/// Precession in the responses: from perihelion in June to perihelion in December at e = 0.05.
const PRECESSION_SWING: f64 = 0.1;

/// One quantity of a run.
#[derive(Clone, Debug, PartialEq)]
pub struct KeyFigure {
    /// What it is.
    pub name: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// Mean over the run.
    pub mean: f64,
    /// Smallest and largest record.
    pub range: [f64; 2],
    /// Change per degree of obliquity, when the obliquity varies and the fit exists.
    pub per_degree_tilt: Option<f64>,
    /// Change from December to June perihelion at eccentricity 0.05.
    pub december_to_june: Option<f64>,
}

/// Summary of a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Summary {
    /// Number of records.
    pub records: usize,
    /// Oldest and youngest age, kyr before 1950.
    pub ages_kyr: [f64; 2],
    /// Smallest and largest carbon dioxide, ppm.
    pub co2_ppm: [f64; 2],
    /// Years of orbit and column in one seasonal year.
    pub slow_years: String,
    /// Largest residual of the heat ledger over its throughput.
    pub heat_residual: f64,
    /// Key figures.
    pub figures: Vec<KeyFigure>,
}

/// Quantities that are summarised when the file has them: variable, words, unit, factor.
const FIGURES: [(&str, &str, &str, f64); 8] = [
    (
        "global_air_temperature_2m",
        "global air temperature at 2 m",
        "degC",
        1.0,
    ),
    (
        "isotherm_20c_depth",
        "depth of the 20 degC isotherm",
        "m",
        1.0,
    ),
    (
        "relative_isotherm_depth",
        "depth of surface minus 5 K",
        "m",
        1.0,
    ),
    ("pycnocline_depth", "pycnocline depth", "m", 1.0),
    ("deep_sinking", "deep sinking", "1e6 m3/s", 1e-6),
    (
        "tropical_ocean_gain",
        "heat gain of the tropical ocean",
        "PW",
        1.0,
    ),
    (
        "east_pacific_temperature",
        "eastern equatorial Pacific",
        "degC",
        1.0,
    ),
    ("west_east_contrast", "west minus east", "K", 1.0),
];

/// Reads a file and sums it up.
///
/// # Errors
/// When the file is not one of a run.
pub fn summarise(path: &Path) -> Result<Summary, OutputError> {
    let file = RunFile::open(path)?;
    let obliquity = file.series("obliquity")?;
    let precession = file.series("climatic_precession")?.values;
    let eccentricity = file.series("eccentricity")?.values;
    let residual = file.series("heat_residual_over_throughput")?.values;
    let co2 = extremes(&file.series("co2")?.values);
    let ages = ends(&obliquity.age_kyr);
    let orbit = Orbit {
        told: Told {
            co2: co2[1] - co2[0] < 1e-6 * co2[1],
            span: ages[0] - ages[1] >= LEAST_SPAN_KYR,
        },
        obliquity: obliquity.values,
        precession,
        eccentricity,
    };
    let present = file.variables();
    let mut figures = Vec::new();
    for (variable, name, unit, factor) in FIGURES {
        if present.contains(&variable) {
            let values: Vec<f64> = file
                .series(variable)?
                .values
                .iter()
                .map(|v| v * factor)
                .collect();
            figures.push(figure((name, unit), &values, &orbit));
        }
    }
    Ok(Summary {
        records: obliquity.age_kyr.len(),
        ages_kyr: ages,
        co2_ppm: co2,
        slow_years: file.global("slow_years_per_seasonal_year")?,
        heat_residual: residual.iter().fold(0.0, |a: f64, b| a.max(b.abs())),
        figures,
    })
}

/// The orbit of a run, and whether responses to it are told.
struct Orbit {
    told: Told,
    obliquity: Vec<f64>,
    precession: Vec<f64>,
    eccentricity: Vec<f64>,
}

/// What a response needs.
#[derive(Clone, Copy)]
struct Told {
    /// Carbon dioxide is constant.
    co2: bool,
    /// The run is long enough.
    span: bool,
}

impl Orbit {
    fn obliquity_told(&self) -> bool {
        let [low, high] = extremes(&self.obliquity);
        self.told.co2 && self.told.span && high - low >= LEAST_OBLIQUITY_DEG
    }

    fn precession_told(&self) -> bool {
        let [low, high] = extremes(&self.precession);
        let turns = low < 0.0 && high > 0.0;
        self.told.co2 && self.told.span && turns && high - low >= LEAST_PRECESSION
    }
}

fn figure((name, unit): (&'static str, &'static str), values: &[f64], orbit: &Orbit) -> KeyFigure {
    let finite: Vec<f64> = values.iter().copied().filter(|v| v.is_finite()).collect();
    let elements: [&[f64]; 3] = [&orbit.obliquity, &orbit.precession, &orbit.eccentricity];
    // Too few records for a fit is not a fault of the run: there is then no response to tell.
    let fit = regression::fit(values, &elements).ok();
    let slope = |k: usize, swing: f64| {
        fit.as_ref()
            .map(|fit| fit.slopes[k] * swing)
            .filter(|v| v.is_finite())
    };
    KeyFigure {
        name,
        unit,
        mean: finite.iter().sum::<f64>() / finite.len() as f64,
        range: extremes(&finite),
        per_degree_tilt: slope(0, 1.0).filter(|_| orbit.obliquity_told()),
        // Climatic precession is +e when perihelion falls in December and -e in June.
        december_to_june: slope(1, -PRECESSION_SWING).filter(|_| orbit.precession_told()),
    }
}

/// First and last of some ages.
fn ends(ages: &[f64]) -> [f64; 2] {
    [ages.first(), ages.last()].map(|age| age.copied().unwrap_or(f64::NAN))
}

fn extremes(values: &[f64]) -> [f64; 2] {
    let wider = |[low, high]: [f64; 2], v: &f64| [low.min(*v), high.max(*v)];
    values
        .iter()
        .fold([f64::INFINITY, f64::NEG_INFINITY], wider)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A circular course of obliquity and precession (invented data).
    fn orbit(tilt: f64, e: f64, perihelion_turns: bool) -> Orbit {
        let angle = |i: i32| f64::from(i) * 0.3;
        let turning = |i: i32| {
            if perihelion_turns {
                angle(i).sin()
            } else {
                1.0
            }
        };
        Orbit {
            told: Told {
                co2: true,
                span: true,
            },
            obliquity: (0..100).map(|i| 23.25 + tilt * angle(i).cos()).collect(),
            precession: (0..100)
                .map(|i| e * (1.0 + 0.3 * (0.37 * angle(i)).cos()) * turning(i))
                .collect(),
            eccentricity: (0..100)
                .map(|i| e * (1.0 + 0.3 * (0.37 * angle(i)).cos()))
                .collect(),
        }
    }

    #[test]
    fn responses_are_told_only_where_they_mean_something() {
        let full = orbit(1.2, 0.04, true);
        assert!(full.obliquity_told() && full.precession_told());
        let held = orbit(0.0, 0.04, false);
        assert!(!held.obliquity_told() && !held.precession_told());
        let short = Orbit {
            told: Told {
                co2: true,
                span: false,
            },
            ..orbit(1.2, 0.04, true)
        };
        assert!(!short.obliquity_told() && !short.precession_told());
        let warming = Orbit {
            told: Told {
                co2: false,
                span: true,
            },
            ..orbit(1.2, 0.04, true)
        };
        assert!(!warming.obliquity_told() && !warming.precession_told());
    }

    #[test]
    fn analytic_a_linear_answer_is_told_in_the_stated_units() {
        let orbit = orbit(1.2, 0.04, true);
        let pairs = orbit.obliquity.iter().zip(&orbit.precession);
        let values: Vec<f64> = pairs
            .map(|(tilt, precession)| 3.0 * tilt + 50.0 * precession)
            .collect();
        let figure = figure(("x", "m"), &values, &orbit);
        let [tilt, june] = [figure.per_degree_tilt, figure.december_to_june].map(Option::unwrap);
        // 50 per unit of e sin(perihelion), from +0.05 (December) to -0.05 (June).
        assert!(
            (tilt - 3.0).abs() < 1e-9 && (june + 5.0).abs() < 1e-9,
            "{tilt} {june}"
        );
    }
}
