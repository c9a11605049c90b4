//! What a configuration file may say about the orbit, and its limits.
//!
//! What: one source for each element, tagged by `kind`; the check of every number; the value of
//! each source at an age.
//! Units: in the names of the keys. Ages in kyr before 1950 CE.
//! Numerics: none; see [`super::integrated`], [`super::berger1978`] and `idealised.rs`.

use serde::{Deserialize, Serialize};

use super::berger1978::LIMIT_KYR;
use super::idealised::{Sinusoid, rotating_deg};
use super::orbit_table::{OrbitRow, OrbitTable};
use super::{OrbitError, integrated};
use crate::orbit::elements::PerihelionLongitude;

const FINITE: &str = "must be a finite number; correct it";
const PERIOD: &str = "must be a finite number above 0 kyr; correct the period";

/// Where each orbital element comes from.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct OrbitSpec {
    /// Eccentricity.
    pub eccentricity: EccentricitySource,
    /// Obliquity.
    pub obliquity: ObliquitySource,
    /// Longitude of perihelion from the moving equinox.
    pub perihelion: PerihelionSource,
}

/// Where the eccentricity comes from.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum EccentricitySource {
    /// Integration of the planets' motion, from the table of the program.
    Integrated {},
    /// Series of Berger (1978).
    Berger1978 {},
    /// The same at all ages.
    Constant {
        /// Eccentricity, in [0, 1).
        eccentricity: f64,
    },
    /// Sinusoid in age.
    Sinusoid {
        /// Mean eccentricity.
        mean: f64,
        /// Half of the range.
        amplitude: f64,
        /// Period, kyr.
        period_kyr: f64,
        /// Age of a maximum, kyr before 1950.
        maximum_at_kyr: f64,
    },
}

/// Where the obliquity comes from.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum ObliquitySource {
    /// Integration of the planets' motion, from the table of the program.
    Integrated {},
    /// Series of Berger (1978).
    Berger1978 {},
    /// The same at all ages.
    Constant {
        /// Obliquity, degrees in [0, 90].
        obliquity_deg: f64,
    },
    /// Sinusoid in age.
    Sinusoid {
        /// Mean obliquity, degrees.
        mean_deg: f64,
        /// Half of the range, degrees.
        amplitude_deg: f64,
        /// Period, kyr.
        period_kyr: f64,
        /// Age of a maximum, kyr before 1950.
        maximum_at_kyr: f64,
    },
}

/// Where the longitude of perihelion comes from.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum PerihelionSource {
    /// Integration of the planets' motion, from the table of the program.
    Integrated {},
    /// Series of Berger (1978).
    Berger1978 {},
    /// The same at all ages, by the Earth's heliocentric longitude (102.9 today).
    ConstantHeliocentric {
        /// Heliocentric longitude of perihelion, degrees.
        heliocentric_deg: f64,
    },
    /// The same at all ages, by the longitude of the Sun at perihelion (282.9 today).
    ConstantSunLongitude {
        /// Longitude of the Sun at perihelion, degrees.
        sun_longitude_deg: f64,
    },
    /// Sinusoid in age of the heliocentric longitude.
    Sinusoid {
        /// Mean heliocentric longitude, degrees.
        mean_heliocentric_deg: f64,
        /// Half of the range, degrees.
        amplitude_deg: f64,
        /// Period, kyr.
        period_kyr: f64,
        /// Age of a maximum, kyr before 1950.
        maximum_at_kyr: f64,
    },
    /// Uniform advance towards the future.
    UniformRotation {
        /// Heliocentric longitude in 1950, degrees.
        heliocentric_deg_at_1950: f64,
        /// Time for a full turn, kyr.
        period_kyr: f64,
    },
}

/// The course of one element, whatever the names of its keys.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Course {
    /// Rows of an integration.
    Table(&'static OrbitTable),
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
struct Rules {
    constant: &'static str,
    mean: &'static str,
    amplitude: &'static str,
    period: &'static str,
    maximum: &'static str,
    lowest: &'static str,
    highest: &'static str,
    allowed: fn(f64) -> bool,
    limit: &'static str,
}

const ECCENTRICITY_RULES: Rules = Rules {
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

const OBLIQUITY_RULES: Rules = Rules {
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

const PERIHELION_RULES: Rules = Rules {
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
    pub(super) fn at(self, age_kyr: f64, element: Element) -> Option<f64> {
        Some(match self {
            Self::Table(table) => (element.of_row)(&table.at(age_kyr)?),
            Self::Berger1978 => (element.of_series)(age_kyr),
            Self::Constant(value) => value,
            Self::Sinusoid(wave) => wave.at(age_kyr),
            Self::Rotation {
                at_1950_deg,
                period_kyr,
            } => rotating_deg(at_1950_deg, period_kyr, age_kyr),
        })
    }

    /// Name of the kind and the ages, kyr before 1950, outside which it says nothing.
    pub(super) fn limits(self) -> Option<(&'static str, [f64; 2])> {
        match self {
            Self::Table(table) => Some(("integrated", table.range_kyr())),
            Self::Berger1978 => Some(("berger1978", [LIMIT_KYR, -LIMIT_KYR])),
            Self::Constant(_) | Self::Sinusoid(_) | Self::Rotation { .. } => None,
        }
    }

    /// Every number out of range.
    fn violations(self, rules: &Rules) -> Vec<OrbitError> {
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
        let checks = match self {
            Self::Table(_) | Self::Berger1978 => Vec::new(),
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

impl EccentricitySource {
    /// The course without the names.
    pub(super) fn course(&self) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Table(integrated::table()?),
            Self::Berger1978 {} => Course::Berger1978,
            Self::Constant { eccentricity } => Course::Constant(eccentricity),
            Self::Sinusoid {
                mean,
                amplitude,
                period_kyr,
                maximum_at_kyr,
            } => Course::Sinusoid(Sinusoid {
                mean,
                amplitude,
                period_kyr,
                maximum_at_kyr,
            }),
        })
    }
}

impl ObliquitySource {
    /// The course without the names, degrees.
    pub(super) fn course(&self) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Table(integrated::table()?),
            Self::Berger1978 {} => Course::Berger1978,
            Self::Constant { obliquity_deg } => Course::Constant(obliquity_deg),
            Self::Sinusoid {
                mean_deg,
                amplitude_deg,
                period_kyr,
                maximum_at_kyr,
            } => Course::Sinusoid(Sinusoid {
                mean: mean_deg,
                amplitude: amplitude_deg,
                period_kyr,
                maximum_at_kyr,
            }),
        })
    }
}

impl PerihelionSource {
    /// The course of the heliocentric longitude without the names, degrees.
    pub(super) fn course(&self) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Table(integrated::table()?),
            Self::Berger1978 {} => Course::Berger1978,
            Self::ConstantHeliocentric { heliocentric_deg } => Course::Constant(heliocentric_deg),
            Self::ConstantSunLongitude { sun_longitude_deg } => Course::Constant(
                PerihelionLongitude::from_sun_longitude_deg(sun_longitude_deg).heliocentric_deg(),
            ),
            Self::Sinusoid {
                mean_heliocentric_deg,
                amplitude_deg,
                period_kyr,
                maximum_at_kyr,
            } => Course::Sinusoid(Sinusoid {
                mean: mean_heliocentric_deg,
                amplitude: amplitude_deg,
                period_kyr,
                maximum_at_kyr,
            }),
            Self::UniformRotation {
                heliocentric_deg_at_1950,
                period_kyr,
            } => Course::Rotation {
                at_1950_deg: heliocentric_deg_at_1950,
                period_kyr,
            },
        })
    }

    /// The key under which a constant longitude was given.
    fn constant_key(&self) -> &'static str {
        match self {
            Self::ConstantSunLongitude { .. } => "perihelion.sun_longitude_deg",
            _ => PERIHELION_RULES.constant,
        }
    }
}

impl OrbitSpec {
    /// All three elements from Berger (1978).
    pub fn berger1978() -> Self {
        Self {
            eccentricity: EccentricitySource::Berger1978 {},
            obliquity: ObliquitySource::Berger1978 {},
            perihelion: PerihelionSource::Berger1978 {},
        }
    }

    /// All three elements from the integration of the planets' motion.
    pub fn integrated() -> Self {
        Self {
            eccentricity: EccentricitySource::Integrated {},
            obliquity: ObliquitySource::Integrated {},
            perihelion: PerihelionSource::Integrated {},
        }
    }

    /// The courses of eccentricity, obliquity and perihelion, or every number that is out of range.
    pub(super) fn courses(&self) -> Result<[Course; 3], Vec<OrbitError>> {
        let perihelion_rules = Rules {
            constant: self.perihelion.constant_key(),
            ..PERIHELION_RULES
        };
        let courses = [
            (self.eccentricity.course(), &ECCENTRICITY_RULES),
            (self.obliquity.course(), &OBLIQUITY_RULES),
            (self.perihelion.course(), &perihelion_rules),
        ];
        let mut errors = Vec::new();
        let courses = courses.map(|(course, rules)| match course {
            Ok(course) => {
                errors.extend(course.violations(rules));
                Some(course)
            }
            Err(error) => {
                errors.push(error);
                None
            }
        });
        match courses {
            [Some(eccentricity), Some(obliquity), Some(perihelion)] if errors.is_empty() => {
                Ok([eccentricity, obliquity, perihelion])
            }
            _ => Err(errors),
        }
    }
}
