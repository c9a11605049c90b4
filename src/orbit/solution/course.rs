//! The course of one element over age, whatever the names of its keys, and its limits.
//!
//! What: the value of each source at an age, the ages at which it says something, and the check of
//! every number of a made-up course.
//! Units: those of the element (degrees for angles). Ages in kyr before 1950 CE.
//! Numerics: none; see [`super::integrated`], [`super::berger1978`] and `idealised.rs`.

use super::OrbitError;
use super::berger1978::LIMIT_KYR;
use super::idealised::{Sinusoid, rotating_deg};
use super::nodes::{Nodes, PerihelionNodes};
use super::orbit_table::{OrbitRow, OrbitTable};
use std::sync::Arc;

const FINITE: &str = "must be a finite number; correct it";
const PERIOD: &str = "must be a finite number above 0 kyr; correct the period";

/// The course of one element, whatever the names of its keys.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Course {
    /// Rows of the integration that comes with the program.
    Integrated(&'static OrbitTable),
    /// Rows of an integration that the user made.
    IntegratedTable(Arc<OrbitTable>),
    /// Values of a user's table.
    Values(Arc<Nodes<1>>),
    /// Longitudes of perihelion of a user's table.
    Longitudes(Arc<PerihelionNodes>),
    /// Series of Berger (1978).
    Berger1978,
    /// The same at all ages.
    Constant(f64),
    /// Sinusoid in age.
    Sinusoid(Sinusoid),
    /// Uniform advance of an angle.
    Rotation { at_1950_deg: f64, period_kyr: f64 },
}

/// How an element is taken from a solution that holds all three.
#[derive(Clone, Copy, Debug)]
pub(super) struct Element {
    /// From a row of a table.
    pub(super) of_row: fn(&OrbitRow) -> f64,
    /// From the series of Berger (1978), at an age in kyr before 1950.
    pub(super) of_series: fn(f64) -> f64,
}

/// Names of the keys and limits of an element, for messages.
pub(super) struct Rules {
    pub(super) constant: &'static str,
    pub(super) mean: &'static str,
    pub(super) amplitude: &'static str,
    pub(super) period: &'static str,
    pub(super) maximum: &'static str,
    pub(super) lowest: &'static str,
    pub(super) highest: &'static str,
    pub(super) allowed: fn(f64) -> bool,
    pub(super) limit: &'static str,
}

pub(super) const ECCENTRICITY_RULES: Rules = Rules {
    constant: "eccentricity.eccentricity",
    mean: "eccentricity.mean",
    amplitude: "eccentricity.amplitude",
    period: "eccentricity.period_kyr",
    maximum: "eccentricity.maximum_at_kyr",
    lowest: "eccentricity.mean - |amplitude|",
    highest: "eccentricity.mean + |amplitude|",
    allowed: |value| (0.0..1.0).contains(&value),
    limit: "eccentricity must stay in [0, 1); change it, or mean or amplitude",
};

pub(super) const OBLIQUITY_RULES: Rules = Rules {
    constant: "obliquity.obliquity_deg",
    mean: "obliquity.mean_deg",
    amplitude: "obliquity.amplitude_deg",
    period: "obliquity.period_kyr",
    maximum: "obliquity.maximum_at_kyr",
    lowest: "obliquity.mean_deg - |amplitude_deg|",
    highest: "obliquity.mean_deg + |amplitude_deg|",
    allowed: |value| (0.0..=90.0).contains(&value),
    limit: "obliquity must stay in [0, 90] degrees; change it, or mean or amplitude",
};

pub(super) const PERIHELION_RULES: Rules = Rules {
    constant: "perihelion.heliocentric_deg",
    mean: "perihelion.mean_heliocentric_deg",
    amplitude: "perihelion.amplitude_deg",
    period: "perihelion.period_kyr",
    maximum: "perihelion.maximum_at_kyr",
    lowest: "perihelion.mean_heliocentric_deg - |amplitude_deg|",
    highest: "perihelion.mean_heliocentric_deg + |amplitude_deg|",
    allowed: f64::is_finite,
    limit: FINITE,
};

impl Course {
    /// Value at an age, kyr before 1950, of the element; `None` outside the ages of a table.
    pub(super) fn at(&self, age_kyr: f64, element: Element) -> Option<f64> {
        Some(match self {
            Self::Integrated(table) => (element.of_row)(&table.at(age_kyr)?),
            Self::IntegratedTable(table) => (element.of_row)(&table.at(age_kyr)?),
            Self::Values(nodes) => nodes.at(age_kyr)?[0],
            Self::Longitudes(nodes) => nodes.heliocentric_deg(age_kyr)?,
            Self::Berger1978 => (element.of_series)(age_kyr),
            Self::Constant(value) => *value,
            Self::Sinusoid(wave) => wave.at(age_kyr),
            Self::Rotation {
                at_1950_deg,
                period_kyr,
            } => rotating_deg(*at_1950_deg, *period_kyr, age_kyr),
        })
    }

    /// Name of the kind and the ages, kyr before 1950, outside which it says nothing.
    pub(super) fn limits(&self) -> Option<(&'static str, [f64; 2])> {
        match self {
            Self::Integrated(table) => Some(("integrated", table.range_kyr())),
            Self::IntegratedTable(table) => Some(("integrated_table", table.range_kyr())),
            Self::Values(nodes) => Some(("table", nodes.range_kyr())),
            Self::Longitudes(nodes) => Some(("table", nodes.range_kyr())),
            Self::Berger1978 => Some(("berger1978", [LIMIT_KYR, -LIMIT_KYR])),
            Self::Constant(_) | Self::Sinusoid(_) | Self::Rotation { .. } => None,
        }
    }

    /// Whether an age lies at an end of a user's table but for the rounding of its digits.
    pub(super) fn meets_the_end(&self, age_kyr: f64) -> bool {
        match self {
            Self::Values(nodes) => nodes.at(age_kyr).is_some(),
            Self::Longitudes(nodes) => nodes.heliocentric_deg(age_kyr).is_some(),
            _ => false,
        }
    }

    /// Every number out of range.
    pub(super) fn violations(&self, rules: &Rules) -> Vec<OrbitError> {
        let allowed = rules.allowed;
        let finite = |key, value: f64| (key, value, value.is_finite(), FINITE);
        let period = |value: f64| {
            (
                rules.period,
                value,
                value > 0.0 && value.is_finite(),
                PERIOD,
            )
        };
        let checks = match *self {
            // Tables were checked when they were read.
            Self::Integrated(_)
            | Self::IntegratedTable(_)
            | Self::Values(_)
            | Self::Longitudes(_)
            | Self::Berger1978 => Vec::new(),
            Self::Constant(value) => vec![(rules.constant, value, allowed(value), rules.limit)],
            Self::Sinusoid(wave) => {
                let mut checks = vec![
                    finite(rules.mean, wave.mean),
                    finite(rules.amplitude, wave.amplitude),
                    period(wave.period_kyr),
                    finite(rules.maximum, wave.maximum_at_kyr),
                ];
                let [lowest, highest] = wave.extremes();
                if lowest.is_finite() && highest.is_finite() {
                    checks.push((rules.lowest, lowest, allowed(lowest), rules.limit));
                    checks.push((rules.highest, highest, allowed(highest), rules.limit));
                }
                checks
            }
            Self::Rotation {
                at_1950_deg,
                period_kyr,
            } => vec![
                finite("perihelion.heliocentric_deg_at_1950", at_1950_deg),
                period(period_kyr),
            ],
        };
        checks
            .into_iter()
            .filter(|(_, _, fine, _)| !fine)
            .map(|(key, value, _, limit)| OrbitError::Value { key, value, limit })
            .collect()
    }
}
