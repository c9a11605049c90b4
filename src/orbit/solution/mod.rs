//! Orbital elements at an age, each element from a source of its own.
//!
//! What: [`OrbitSpec`] says in a configuration file where eccentricity, obliquity and perihelion
//! come from; [`Orbit::build`] checks it, and [`Orbit::at`] gives the elements. So one element can
//! follow a solution while another stands still.
//! Equations: in [`berger1978`] and, for made-up courses, in `idealised.rs`.
//! Units: ages in kyr before 1950 CE, positive into the past; degrees.
//! Numerics: closed forms, no state.

pub mod berger1978;
mod berger1978_terms;
mod idealised;
pub mod orbit_table;
mod spec;

use spec::Course;
pub use spec::{EccentricitySource, ObliquitySource, OrbitSpec, PerihelionSource};
use thiserror::Error;

use super::elements::{Elements, PerihelionLongitude};

/// Why an orbit cannot be built or asked.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum OrbitError {
    /// A number of the specification has no meaning.
    #[error("orbit.{key} = {value}: {limit}")]
    Value {
        /// Place of the number in the specification.
        key: &'static str,
        /// The number given, or the extreme value that it leads to.
        value: f64,
        /// The limit, and what to do.
        limit: &'static str,
    },
    /// The series of Berger (1978) says nothing about this age.
    #[error(
        "age {age_kyr} kyr: orbit.{element} of kind \"berger1978\" is valid within {limit_kyr} kyr \
         of 1950 CE; choose a younger age or another kind for this element"
    )]
    AgeOutOfRange {
        /// The age asked for, kyr before 1950.
        age_kyr: f64,
        /// Which element's source is limited.
        element: &'static str,
        /// The limit, kyr.
        limit_kyr: f64,
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
    /// Checks a specification.
    ///
    /// # Errors
    /// All numbers that are out of range, together.
    pub fn build(spec: &OrbitSpec) -> Result<Self, Vec<OrbitError>> {
        let errors = spec.violations();
        if !errors.is_empty() {
            return Err(errors);
        }
        Ok(Self {
            eccentricity: spec.eccentricity.course(),
            obliquity: spec.obliquity.course(),
            perihelion: spec.perihelion.course(),
        })
    }

    /// The elements at an age, kyr before 1950.
    ///
    /// # Errors
    /// When a source is not valid at this age, or the age is not finite.
    pub fn at(&self, age_kyr: f64) -> Result<Elements, OrbitError> {
        self.check_age(age_kyr)?;
        let perihelion_deg = self.perihelion.at(age_kyr, berger1978::perihelion_deg);
        Ok(Elements {
            eccentricity: self.eccentricity.at(age_kyr, berger1978::eccentricity),
            obliquity_deg: self.obliquity.at(age_kyr, berger1978::obliquity_deg),
            perihelion: PerihelionLongitude::from_heliocentric_deg(perihelion_deg),
        })
    }

    /// Checks that every age between two ages can be asked for.
    ///
    /// # Errors
    /// When one of the ends is out of range of a source, or not finite.
    pub fn check_range(&self, start_kyr: f64, end_kyr: f64) -> Result<(), OrbitError> {
        self.check_age(start_kyr)?;
        self.check_age(end_kyr)
    }

    fn check_age(&self, age_kyr: f64) -> Result<(), OrbitError> {
        if !age_kyr.is_finite() {
            return Err(OrbitError::AgeNotFinite { age_kyr });
        }
        let limit_kyr = berger1978::LIMIT_KYR;
        match self.element_from_series() {
            Some(element) if age_kyr.abs() > limit_kyr => Err(OrbitError::AgeOutOfRange {
                age_kyr,
                element,
                limit_kyr,
            }),
            _ => Ok(()),
        }
    }

    /// The first element, if any, that follows the series and its limit in age.
    fn element_from_series(&self) -> Option<&'static str> {
        [
            ("eccentricity", self.eccentricity),
            ("obliquity", self.obliquity),
            ("perihelion", self.perihelion),
        ]
        .into_iter()
        .find(|(_, course)| *course == Course::Berger1978)
        .map(|(name, _)| name)
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
        assert!(message.contains("1000.5") && message.contains("within 1000 kyr"));
        assert!(orbit.check_range(0.0, f64::NAN).is_err());
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
