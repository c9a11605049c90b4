//! Orbital elements at an age, each element from a source of its own.
//!
//! What: [`OrbitSpec`] says in a configuration file where eccentricity, obliquity and perihelion
//! come from; [`Orbit::build`] checks it, and [`Orbit::at`] gives the elements. So one element can
//! follow a solution while another stands still.
//! Equations: in [`integrated`], [`berger1978`] and, for made-up courses, in `idealised.rs`.
//! Units: ages in kyr before 1950 CE, positive into the past; degrees.
//! Numerics: closed forms and interpolation, no state. Nothing is extrapolated.

pub mod berger1978;
mod berger1978_terms;
mod course;
mod idealised;
pub mod integrated;
mod nodes;
pub mod orbit_table;
mod spec;
mod user_table;

use course::{Course, Element};
use orbit_table::{OrbitRow, TableFault};
pub use spec::{EccentricitySource, ObliquitySource, OrbitSpec, PerihelionSource};
use std::path::PathBuf;
use thiserror::Error;
pub use user_table::{
    EccentricityTable, ElementData, ElementSource, ObliquityTable, OrbitData, PerihelionConvention,
    PerihelionTable, WIDEST_GAP,
};

use super::elements::{Elements, PerihelionLongitude};
use crate::numerics::shown::Shown;
use crate::tables::more;

/// Why an orbit cannot be built or asked.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum OrbitError {
    /// A number of the specification has no meaning.
    #[error("orbit.{key} = {}: {limit}", Shown(*value))]
    Value {
        /// Place of the number in the specification.
        key: &'static str,
        /// The number given, or the extreme value that it leads to.
        value: f64,
        /// The limit, and what to do.
        limit: &'static str,
    },
    /// A solution says nothing about this age.
    #[error(
        "age {age_kyr} kyr: orbit.{element} of kind \"{kind}\" is valid from {oldest_kyr} to \
         {youngest_kyr} kyr before 1950 CE; choose an age between or another kind for this element"
    )]
    AgeOutOfRange {
        /// The age asked for, kyr before 1950.
        age_kyr: f64,
        /// Which element's source is limited.
        element: &'static str,
        /// The kind of that source.
        kind: &'static str,
        /// Oldest age, kyr before 1950.
        oldest_kyr: f64,
        /// Youngest age, kyr before 1950.
        youngest_kyr: f64,
    },
    /// The table that comes with the program is damaged.
    #[error("the table of the integrated orbit in this program is damaged: {0}")]
    Table(#[from] TableFault),
    /// A value of a user's table is not what it is declared to be.
    #[error(
        "orbit.{element}.path: {}:{line}: {} {reason}{}",
        path.display(), Shown(*value), more(*others)
    )]
    Row {
        /// The element.
        element: &'static str,
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
    /// A file was not read for this orbit.
    #[error("orbit.{element} comes from a file that was not read; build the orbit with its data")]
    NotRead {
        /// The element.
        element: &'static str,
    },
    /// The age is not a number.
    #[error("age {age_kyr} kyr is not a finite number; give kyr before 1950 CE")]
    AgeNotFinite {
        /// The age asked for.
        age_kyr: f64,
    },
}

/// A checked specification that gives elements at ages.
#[derive(Clone, Debug, PartialEq)]
pub struct Orbit {
    eccentricity: Course,
    obliquity: Course,
    perihelion: Course,
}

impl Orbit {
    /// Checks a specification that names no files.
    ///
    /// # Errors
    /// All numbers that are out of range, together.
    pub fn build(spec: &OrbitSpec) -> Result<Self, Vec<OrbitError>> {
        Self::with_data(spec, &OrbitData::default())
    }

    /// Checks a specification and what was read from the files it names.
    ///
    /// # Errors
    /// All numbers that are out of range, together; of a table the first row with a fault.
    pub fn with_data(spec: &OrbitSpec, data: &OrbitData) -> Result<Self, Vec<OrbitError>> {
        let [eccentricity, obliquity, perihelion] = spec.courses(data)?;
        Ok(Self {
            eccentricity,
            obliquity,
            perihelion,
        })
    }

    /// The elements at an age, kyr before 1950.
    ///
    /// # Errors
    /// When a source is not valid at this age, or the age is not finite.
    pub fn at(&self, age_kyr: f64) -> Result<Elements, OrbitError> {
        let value = |name, course: &Course, element: Element| {
            check_age(name, course, age_kyr)?;
            let value = course.at(age_kyr, element);
            value.ok_or(OrbitError::AgeNotFinite { age_kyr })
        };
        let [eccentricity, obliquity, perihelion] = self.named();
        Ok(Elements {
            eccentricity: value(eccentricity.0, eccentricity.1, ECCENTRICITY)?,
            obliquity_deg: value(obliquity.0, obliquity.1, OBLIQUITY)?,
            perihelion: PerihelionLongitude::from_heliocentric_deg(value(
                perihelion.0,
                perihelion.1,
                PERIHELION,
            )?),
        })
    }

    /// Checks that every age between two ages can be asked for.
    ///
    /// # Errors
    /// When one of the ends is out of range of a source, or not finite.
    pub fn check_range(&self, start_kyr: f64, end_kyr: f64) -> Result<(), OrbitError> {
        for age_kyr in [start_kyr, end_kyr] {
            for (name, course) in self.named() {
                check_age(name, course, age_kyr)?;
            }
        }
        Ok(())
    }

    fn named(&self) -> [(&'static str, &Course); 3] {
        [
            ("eccentricity", &self.eccentricity),
            ("obliquity", &self.obliquity),
            ("perihelion", &self.perihelion),
        ]
    }
}

const ECCENTRICITY: Element = Element {
    of_row: OrbitRow::eccentricity,
    of_series: berger1978::eccentricity,
};
const OBLIQUITY: Element = Element {
    of_row: OrbitRow::obliquity_deg,
    of_series: berger1978::obliquity_deg,
};
const PERIHELION: Element = Element {
    of_row: OrbitRow::perihelion_deg,
    of_series: berger1978::perihelion_deg,
};

/// Whether the course of an element says something about an age.
fn check_age(element: &'static str, course: &Course, age_kyr: f64) -> Result<(), OrbitError> {
    if !age_kyr.is_finite() {
        return Err(OrbitError::AgeNotFinite { age_kyr });
    }
    match course.limits() {
        Some((kind, [oldest_kyr, youngest_kyr]))
            if !(youngest_kyr..=oldest_kyr).contains(&age_kyr)
                && !course.meets_the_end(age_kyr) =>
        {
            Err(OrbitError::AgeOutOfRange {
                age_kyr,
                element,
                kind,
                oldest_kyr,
                youngest_kyr,
            })
        }
        _ => Ok(()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn parse(text: &str) -> OrbitSpec {
        toml::from_str(text).unwrap()
    }

    #[test]
    fn analytic_each_element_follows_its_own_source() {
        let orbit = Orbit::build(&parse(
            "eccentricity = { kind = 'constant', eccentricity = 0 }
             obliquity = { kind = 'sinusoid', mean_deg = 23.25, amplitude_deg = 1.25, \
                           period_kyr = 41, maximum_at_kyr = 10 }
             perihelion = { kind = 'uniform_rotation', heliocentric_deg_at_1950 = 102, \
                            period_kyr = 21 }",
        ))
        .unwrap();
        let elements = orbit.at(10.0).unwrap();
        assert!(elements.eccentricity.abs() < f64::MIN_POSITIVE);
        assert!((elements.obliquity_deg - 24.5).abs() < 1e-12);
        let expected = 102.0 - 360.0 * 10.0 / 21.0 + 360.0;
        assert!((elements.perihelion.heliocentric_deg() - expected).abs() < 1e-9);
        assert!(orbit.check_range(1e6, -1e6).is_ok());
    }

    #[test]
    fn analytic_perihelion_by_either_name_is_the_same_orbit() {
        let with = |perihelion: &str| {
            let text = format!(
                "eccentricity = {{ kind = 'berger1978' }}
                 obliquity = {{ kind = 'berger1978' }}
                 perihelion = {perihelion}"
            );
            Orbit::build(&parse(&text)).unwrap().at(0.1).unwrap()
        };
        let earth = with("{ kind = 'constant_heliocentric', heliocentric_deg = 100.33 }");
        let sun = with("{ kind = 'constant_sun_longitude', sun_longitude_deg = 280.33 }");
        let difference = earth.climatic_precession() - sun.climatic_precession();
        assert!(difference.abs() < 1e-15);
    }

    #[test]
    fn regress_all_violations_come_together() {
        let errors = Orbit::build(&parse(
            "eccentricity = { kind = 'sinusoid', mean = 0.03, amplitude = 0.04, \
                              period_kyr = -95, maximum_at_kyr = nan }
             obliquity = { kind = 'constant', obliquity_deg = 123 }
             perihelion = { kind = 'constant_heliocentric', heliocentric_deg = inf }",
        ))
        .unwrap_err();
        let keys: Vec<&str> = errors
            .iter()
            .filter_map(|error| match error {
                OrbitError::Value { key, .. } => Some(*key),
                _ => None,
            })
            .collect();
        let expected = [
            "eccentricity.period_kyr",
            "eccentricity.maximum_at_kyr",
            "eccentricity.mean - |amplitude|",
            "obliquity.obliquity_deg",
            "perihelion.heliocentric_deg",
        ];
        assert_eq!(keys, expected);
    }

    #[test]
    fn regress_old_ages_name_the_limit() {
        let orbit = Orbit::build(&OrbitSpec::berger1978()).unwrap();
        assert!(orbit.check_range(1000.0, -1000.0).is_ok());
        let message = orbit.at(1000.5).unwrap_err().to_string();
        assert!(message.contains("1000.5") && message.contains("from 1000 to -1000 kyr"));
        assert!(orbit.check_range(0.0, f64::NAN).is_err());
    }

    #[test]
    fn analytic_one_element_of_the_integration_and_the_others_still() {
        let orbit = Orbit::build(&parse(
            "eccentricity = { kind = 'integrated' }
             obliquity = { kind = 'constant', obliquity_deg = 23 }
             perihelion = { kind = 'constant_heliocentric', heliocentric_deg = 90 }",
        ))
        .unwrap();
        let all = Orbit::build(&OrbitSpec::integrated()).unwrap();
        let (one, all) = (orbit.at(2345.6).unwrap(), all.at(2345.6).unwrap());
        assert!((one.eccentricity - all.eccentricity).abs() < f64::MIN_POSITIVE);
        assert!((one.obliquity_deg - 23.0).abs() < f64::MIN_POSITIVE);
        assert!((one.perihelion.heliocentric_deg() - 90.0).abs() < 1e-12);
        assert!((all.obliquity_deg - 23.0).abs() > 1e-3);
    }

    #[test]
    fn regress_ages_outside_the_table_are_refused() {
        let orbit = Orbit::build(&OrbitSpec::integrated()).unwrap();
        assert!(orbit.check_range(5500.0, -100.0).is_ok());
        assert!(orbit.at(5500.0).is_ok() && orbit.at(-100.0).is_ok());
        for age in [5500.1, -100.1, f64::NAN] {
            assert!(orbit.at(age).is_err(), "{age}");
        }
        let message = orbit.at(5500.5).unwrap_err().to_string();
        assert!(message.contains("5500.5") && message.contains("from 5500 to -100 kyr"));
        assert!(message.contains("orbit.eccentricity") && message.contains("\"integrated\""));
    }

    #[test]
    fn regress_unknown_keys_and_kinds_are_refused() {
        for source in [
            "{ kind = 'berger1978', eccentricity = 0.01 }",
            "{ kind = 'constant', eccentricity = 0.01, colour = 1 }",
            "{ kind = 'berger1987' }",
        ] {
            assert!(toml::from_str::<Wrapper>(&format!("source = {source}")).is_err());
        }
    }

    #[derive(serde::Deserialize)]
    struct Wrapper {
        #[expect(dead_code, reason = "only parsing is tested")]
        source: EccentricitySource,
    }
}
