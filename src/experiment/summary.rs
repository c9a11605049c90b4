//! Key figures of a finished run, read back from its file.
//!
//! The response of a quantity to tilt and to precession is the least-squares slope on obliquity,
//! climatic precession and eccentricity together. It describes this run; it is not a test.

use crate::analysis::regression;
use crate::output::OutputError;
use crate::output::reader::RunFile;
use std::path::Path;

/// Least range of obliquity (degrees) and of climatic precession for which a response is told:
/// a quarter of what a whole cycle brings. Below it a slope would extrapolate.
const LEAST_RANGE: [f64; 2] = [0.5, 0.01];

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
            figures.push(figure(
                (name, unit),
                &values,
                [&obliquity.values, &precession, &eccentricity],
            ));
        }
    }
    let ends = |ages: &[f64]| [ages.first(), ages.last()].map(|a| a.copied().unwrap_or(f64::NAN));
    Ok(Summary {
        records: obliquity.age_kyr.len(),
        ages_kyr: ends(&obliquity.age_kyr),
        slow_years: file.global("slow_years_per_seasonal_year")?,
        heat_residual: residual.iter().fold(0.0, |a: f64, b| a.max(b.abs())),
        figures,
    })
}

fn figure(
    (name, unit): (&'static str, &'static str),
    values: &[f64],
    orbit: [&[f64]; 3],
) -> KeyFigure {
    let finite: Vec<f64> = values.iter().copied().filter(|v| v.is_finite()).collect();
    let range = extremes(&finite);
    // Too few records for a fit is not a fault of the run: there is then no response to tell.
    let fit = regression::fit(values, &orbit).ok();
    let slope = |k: usize, swing: f64| {
        let [low, high] = extremes(orbit[k]);
        let fit = fit.as_ref().filter(|_| high - low >= LEAST_RANGE[k])?;
        Some(fit.slopes[k] * swing).filter(|v| v.is_finite())
    };
    KeyFigure {
        name,
        unit,
        mean: finite.iter().sum::<f64>() / finite.len() as f64,
        range,
        per_degree_tilt: slope(0, 1.0),
        // Climatic precession is +e when perihelion falls in December and -e in June.
        december_to_june: slope(1, -PRECESSION_SWING),
    }
}

fn extremes(values: &[f64]) -> [f64; 2] {
    let wider = |[low, high]: [f64; 2], v: &f64| [low.min(*v), high.max(*v)];
    values
        .iter()
        .fold([f64::INFINITY, f64::NEG_INFINITY], wider)
}
