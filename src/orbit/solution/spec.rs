//! What a configuration file may say about the orbit, and its limits.
//!
//! What: one source for each element, tagged by `kind`. What each comes to is a course
//! (`course.rs`), without the names of the keys.
//! Units: in the names of the keys. Ages in kyr before 1950 CE.
//! Numerics: none.

use serde::{Deserialize, Serialize};

use super::course::{Course, ECCENTRICITY_RULES, OBLIQUITY_RULES, PERIHELION_RULES, Rules};
use super::idealised::Sinusoid;
use super::user_table::{
    self, EccentricityTable, ElementData, ElementSource, ObliquityTable, OrbitData, PerihelionTable,
};
use super::{OrbitError, integrated};
use crate::orbit::elements::PerihelionLongitude;

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
    /// A table made by `orbicline orbit --integrate`, with constants of the user's own.
    IntegratedTable {
        /// Path of the file, from the folder of the configuration.
        path: String,
    },
    /// A text table of the user's own.
    Table(EccentricityTable),
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
    /// A table made by `orbicline orbit --integrate`, with constants of the user's own.
    IntegratedTable {
        /// Path of the file, from the folder of the configuration.
        path: String,
    },
    /// A text table of the user's own.
    Table(ObliquityTable),
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
    /// A table made by `orbicline orbit --integrate`, with constants of the user's own.
    IntegratedTable {
        /// Path of the file, from the folder of the configuration.
        path: String,
    },
    /// A text table of the user's own.
    Table(PerihelionTable),
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

impl EccentricitySource {
    /// The file it comes from.
    fn file(&self) -> Option<ElementSource<'_>> {
        match self {
            Self::IntegratedTable { path } => Some(ElementSource::Integrated(path)),
            Self::Table(table) => Some(ElementSource::Text(table.declaration())),
            _ => None,
        }
    }

    /// The course without the names.
    pub(super) fn course(&self, data: Option<&ElementData>) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Integrated(integrated::table()?),
            Self::IntegratedTable { .. } => user_table::integrated("eccentricity", data)?,
            Self::Table(_) => EccentricityTable::course(data)?,
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
    /// The file it comes from.
    fn file(&self) -> Option<ElementSource<'_>> {
        match self {
            Self::IntegratedTable { path } => Some(ElementSource::Integrated(path)),
            Self::Table(table) => Some(ElementSource::Text(table.declaration())),
            _ => None,
        }
    }

    /// The course without the names, degrees.
    pub(super) fn course(&self, data: Option<&ElementData>) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Integrated(integrated::table()?),
            Self::IntegratedTable { .. } => user_table::integrated("obliquity", data)?,
            Self::Table(ref table) => table.course(data)?,
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
    /// The file it comes from.
    fn file(&self) -> Option<ElementSource<'_>> {
        match self {
            Self::IntegratedTable { path } => Some(ElementSource::Integrated(path)),
            Self::Table(table) => Some(ElementSource::Text(table.declaration())),
            _ => None,
        }
    }

    /// The course of the heliocentric longitude without the names, degrees.
    pub(super) fn course(&self, data: Option<&ElementData>) -> Result<Course, OrbitError> {
        Ok(match *self {
            Self::Integrated {} => Course::Integrated(integrated::table()?),
            Self::IntegratedTable { .. } => user_table::integrated("perihelion", data)?,
            Self::Table(ref table) => table.course(data)?,
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

    /// Names of the elements and the files they come from.
    pub fn files(&self) -> [(&'static str, Option<ElementSource<'_>>); 3] {
        [
            ("eccentricity", self.eccentricity.file()),
            ("obliquity", self.obliquity.file()),
            ("perihelion", self.perihelion.file()),
        ]
    }

    /// The courses of eccentricity, obliquity and perihelion, or every number that is out of range.
    pub(super) fn courses(&self, data: &OrbitData) -> Result<[Course; 3], Vec<OrbitError>> {
        let perihelion_rules = Rules {
            constant: self.perihelion.constant_key(),
            ..PERIHELION_RULES
        };
        let courses = [
            (
                self.eccentricity.course(data.eccentricity.as_ref()),
                &ECCENTRICITY_RULES,
            ),
            (
                self.obliquity.course(data.obliquity.as_ref()),
                &OBLIQUITY_RULES,
            ),
            (
                self.perihelion.course(data.perihelion.as_ref()),
                &perihelion_rules,
            ),
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
