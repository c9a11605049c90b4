//! Which constants have a meaning.
//!
//! What: the check of every number of [`Constants`] before an integration begins.
//! Equations: a planet is bound when 2 G M/r > v^2; its semi-major axis is then G M over that
//! difference. Units: in the names of the keys.

use thiserror::Error;

use super::constants::{CENTURY_D, Constants, Map};

/// Obliquity at which the axis lies in the orbit, arc seconds.
const RIGHT_ANGLE_ARCSEC: f64 = 90.0 * 3600.0;
/// Longest step that the series of the Kepler drift allow, d (see `drift.rs`), with room to spare.
const LONGEST_STEP_D: f64 = 34.0;
/// Shortest step, d; tuned here: the error of the step is far below that of the model by then.
const SHORTEST_STEP_D: f64 = 0.5;

/// Why constants cannot be used.
#[derive(Clone, Debug, Error, PartialEq)]
#[error("{key} = {value}: {limit}")]
pub struct ConstantsError {
    /// Place of the number in the file.
    pub key: String,
    /// The number given.
    pub value: f64,
    /// The limit, and what to do.
    pub limit: &'static str,
}

impl Constants {
    /// Checks every number.
    ///
    /// # Errors
    /// All numbers that have no meaning, together.
    pub fn check(&self) -> Result<(), Vec<ConstantsError>> {
        let errors: Vec<_> = [
            self.wrong_numbers(),
            self.wrong_steps(),
            self.wrong_orbits(),
        ]
        .into_iter()
        .flatten()
        .collect();
        if errors.is_empty() {
            Ok(())
        } else {
            Err(errors)
        }
    }

    fn wrong_numbers(&self) -> Vec<ConstantsError> {
        const POSITIVE: &str = "must be a finite number above 0; correct it";
        const NOT_NEGATIVE: &str = "must be a finite number, not below 0; correct it";
        let wrong = |limit| {
            move |(key, value): (&'static str, f64)| ConstantsError {
                key: key.to_owned(),
                value,
                limit,
            }
        };
        let positive = self.positive().into_iter();
        let not_negative = self.not_negative().into_iter();
        let mut errors: Vec<_> = positive
            .filter(|(_, v)| !(v.is_finite() && *v > 0.0))
            .map(wrong(POSITIVE))
            .collect();
        let negative = not_negative.filter(|(_, v)| !(v.is_finite() && *v >= 0.0));
        errors.extend(negative.map(wrong(NOT_NEGATIVE)));
        let axis = &self.axis;
        if axis.obliquity_arcsec >= RIGHT_ANGLE_ARCSEC {
            let limit = wrong("must be below 324000 arc seconds (90 degrees); correct it");
            errors.push(limit(("axis.obliquity_arcsec", axis.obliquity_arcsec)));
        }
        if axis.eccentricity >= 1.0 {
            let limit = wrong("must be below 1; correct it");
            errors.push(limit(("axis.eccentricity", axis.eccentricity)));
        }
        errors
    }

    fn positive(&self) -> [(&'static str, f64); 11] {
        let (units, axis, tide) = (&self.units, &self.axis, &self.tide);
        [
            ("units.astronomical_unit_km", units.astronomical_unit_km),
            ("units.light_speed_km_s", units.light_speed_km_s),
            ("sun.gm_au3_d2", self.sun.gm_au3_d2),
            (
                "moon.earth_moon_mass_ratio",
                self.moon.earth_moon_mass_ratio,
            ),
            ("axis.obliquity_arcsec", axis.obliquity_arcsec),
            (
                "axis.precession_rate_arcsec_yr",
                axis.precession_rate_arcsec_yr,
            ),
            ("axis.dynamical_ellipticity", axis.dynamical_ellipticity),
            ("axis.sidereal_year_d", axis.sidereal_year_d),
            ("tide.sidereal_day_h", tide.sidereal_day_h),
            (
                "tide.moon_distance_earth_radii",
                tide.moon_distance_earth_radii,
            ),
            ("tide.moon_sidereal_month_d", tide.moon_sidereal_month_d),
        ]
    }

    fn not_negative(&self) -> [(&'static str, f64); 9] {
        let (moon, axis, tide) = (&self.moon, &self.axis, &self.tide);
        [
            ("sun.radius_km", self.sun.radius_km),
            ("sun.j2", self.sun.j2),
            ("moon.distance_km", moon.distance_km),
            ("moon.quadrupole_factor", moon.quadrupole_factor),
            ("axis.geodesic_rate_arcsec_yr", axis.geodesic_rate_arcsec_yr),
            ("axis.eccentricity", axis.eccentricity),
            ("tide.scale", tide.scale),
            ("tide.sidereal_day_rate_h_gyr", tide.sidereal_day_rate_h_gyr),
            (
                "tide.moon_distance_rate_earth_radii_gyr",
                tide.moon_distance_rate_earth_radii_gyr,
            ),
        ]
    }

    fn wrong_steps(&self) -> Vec<ConstantsError> {
        let Map {
            steps_per_century: steps,
            steps_per_sample: sample,
        } = self.map;
        let mut errors = Vec::new();
        let mut say = |key: &str, value: u32, limit| {
            errors.push(ConstantsError {
                key: key.to_owned(),
                value: f64::from(value),
                limit,
            });
        };
        let step_d = CENTURY_D / f64::from(steps);
        if !(SHORTEST_STEP_D..=LONGEST_STEP_D).contains(&step_d) {
            let limit = "must lie between 1075 and 73050 steps (34 d to 0.5 d); change it";
            say("map.steps_per_century", steps, limit);
        }
        if sample == 0 || sample % 2 == 1 || steps % sample != 0 {
            let limit = "must be even and divide map.steps_per_century; change one of them";
            say("map.steps_per_sample", sample, limit);
        }
        errors
    }

    fn wrong_orbits(&self) -> Vec<ConstantsError> {
        let mut errors = Vec::new();
        let mut farthest = 0.0;
        for (number, planet) in self.planet.iter().enumerate() {
            let mut say = |key: &str, value, limit| {
                errors.push(ConstantsError {
                    key: format!("planet[{number}].{key}"),
                    value,
                    limit,
                });
            };
            let square = |v: &[f64; 3]| v.iter().map(|x| x * x).sum::<f64>();
            let r = square(&planet.position_au).sqrt();
            let binding = 2.0 * self.sun.gm_au3_d2 / r - square(&planet.velocity_au_d);
            if !(planet.gm_au3_d2.is_finite() && planet.gm_au3_d2 >= 0.0) {
                let limit = "must be a finite number, not below 0; correct it";
                say("gm_au3_d2", planet.gm_au3_d2, limit);
            }
            if !(binding.is_finite() && binding > 0.0) {
                let limit = "as 2 GM/r - v^2 it must be above 0 (a bound orbit); check position \
                             and velocity and their units, AU and AU/d";
                say("velocity_au_d", binding, limit);
                continue;
            }
            let a = self.sun.gm_au3_d2 / binding;
            if a <= farthest {
                let limit = "as semi-major axis, AU, it must exceed that of the planet before; \
                             put the planets in the order of their distance from the Sun";
                say("position_au", a, limit);
            }
            farthest = a;
        }
        errors
    }
}
