//! The constants of the integration, as they stand in `configs/orbit_constants.toml`.
//!
//! What: the types read from that file, and what follows from them (limits in `limits.rs`).
//! Equations and units: beside each function. Sources of the numbers: in the file.
//! Numerics: plain arithmetic; sine and cosine from `libm`, whose digits are the same everywhere.

use std::f64::consts::PI;

use serde::{Deserialize, Serialize};

use super::eight::PLANETS;

/// Days in a year of time.
const YEAR_D: f64 = 365.25;
/// Days in a century.
pub(super) const CENTURY_D: f64 = 100.0 * YEAR_D;
/// Seconds in a day.
const DAY_S: f64 = 86_400.0;
/// Hours in a day.
const DAY_H: f64 = 24.0;
/// Years in a Gyr.
const GYR_YR: f64 = 1e9;
/// Arc seconds in a radian.
const ARCSEC_PER_RAD: f64 = 648_000.0 / PI;
/// All constants of the integration.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Constants {
    /// Step of the map.
    pub map: Map,
    /// Units of the numbers below.
    pub units: Units,
    /// The Sun.
    pub sun: Sun,
    /// The Moon, as far as it acts on the orbit.
    pub moon: Moon,
    /// The Earth's axis today.
    pub axis: Axis,
    /// How tides change the torques on the axis.
    pub tide: Tide,
    /// The planets, from the Sun outwards.
    pub planet: [Planet; PLANETS],
}

/// Step of the map.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Map {
    /// Steps in 36525 d.
    pub steps_per_century: u32,
    /// Steps between two looks at the Earth's orbit; even, and a divisor of the steps of a century.
    pub steps_per_sample: u32,
}

/// Units of the other numbers.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Units {
    /// Astronomical unit, km.
    pub astronomical_unit_km: f64,
    /// Speed of light, km/s.
    pub light_speed_km_s: f64,
}

/// The Sun.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Sun {
    /// G times mass, AU^3 d^-2.
    pub gm_au3_d2: f64,
    /// Radius, km.
    pub radius_km: f64,
    /// Flattening J2 of the gravity field.
    pub j2: f64,
}

/// The Moon, as far as it acts on the orbit.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Moon {
    /// Mass of the Earth over that of the Moon.
    pub earth_moon_mass_ratio: f64,
    /// Semi-major axis, km.
    pub distance_km: f64,
    /// Mean quadrupole against a circular orbit in the ecliptic.
    pub quadrupole_factor: f64,
}

/// The Earth's axis today.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Axis {
    /// Obliquity at J2000.0, arc seconds.
    pub obliquity_arcsec: f64,
    /// Luni-solar precession at J2000.0, arc seconds a year.
    pub precession_rate_arcsec_yr: f64,
    /// Geodesic precession, arc seconds a year.
    pub geodesic_rate_arcsec_yr: f64,
    /// (C - A)/C.
    pub dynamical_ellipticity: f64,
    /// Mean eccentricity at J2000.0.
    pub eccentricity: f64,
    /// Sidereal year, d.
    pub sidereal_year_d: f64,
}

/// How tides change the torques on the axis.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Tide {
    /// Multiplies all effects of the tide.
    pub scale: f64,
    /// Sidereal day today, h.
    pub sidereal_day_h: f64,
    /// Its change, h/Gyr.
    pub sidereal_day_rate_h_gyr: f64,
    /// Distance of the Moon today, Earth radii.
    pub moon_distance_earth_radii: f64,
    /// Its change, Earth radii/Gyr.
    pub moon_distance_rate_earth_radii_gyr: f64,
    /// Sidereal month, d.
    pub moon_sidereal_month_d: f64,
}

/// One planet at J2000.0.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Planet {
    /// Its name, for messages.
    pub name: String,
    /// G times mass, AU^3 d^-2.
    pub gm_au3_d2: f64,
    /// From the Sun, AU: x, y, z.
    pub position_au: [f64; 3],
    /// From the Sun, AU/d: x, y, z.
    pub velocity_au_d: [f64; 3],
}

impl Constants {
    /// One step of the map, d.
    pub(super) fn step_d(&self) -> f64 {
        CENTURY_D / f64::from(self.map.steps_per_century)
    }

    /// 6 G M_sun / c^2, AU.
    pub(super) fn relativity_au(&self) -> f64 {
        let light_au_d = self.units.light_speed_km_s * DAY_S / self.units.astronomical_unit_km;
        6.0 * self.sun.gm_au3_d2 / (light_au_d * light_au_d)
    }

    /// (3/2) J2 R_sun^2, AU^2.
    pub(super) fn sun_flattening_au2(&self) -> f64 {
        let radius_au = self.sun.radius_km / self.units.astronomical_unit_km;
        1.5 * self.sun.j2 * radius_au * radius_au
    }

    /// (3/4) f q/(1+q)^2 R^2, AU^2.
    pub(super) fn moon_quadrupole_au2(&self) -> f64 {
        let q = self.moon.earth_moon_mass_ratio;
        let distance_au = self.moon.distance_km / self.units.astronomical_unit_km;
        let share = q / ((1.0 + q) * (1.0 + q));
        0.75 * self.moon.quadrupole_factor * share * distance_au * distance_au
    }

    /// Obliquity at J2000.0, rad.
    pub(super) fn obliquity_rad(&self) -> f64 {
        self.axis.obliquity_arcsec / ARCSEC_PER_RAD
    }

    /// Geodesic precession, rad/yr.
    pub(super) fn geodesic_rad_yr(&self) -> f64 {
        self.axis.geodesic_rate_arcsec_yr / ARCSEC_PER_RAD
    }

    /// Sidereal day over sidereal year.
    fn day_of_year(&self) -> f64 {
        self.tide.sidereal_day_h / DAY_H / self.axis.sidereal_year_d
    }

    /// The Sun's part of the precession constant for a circular orbit, (3/2) (C-A)/C n^2/omega,
    /// rad/yr.
    pub(super) fn solar_precession_rad_yr(&self) -> f64 {
        let mean_motion_rad_yr = 2.0 * PI * YEAR_D / self.axis.sidereal_year_d;
        1.5 * self.axis.dynamical_ellipticity * mean_motion_rad_yr * self.day_of_year()
    }

    /// The Moon's part of the precession constant, rad/yr: what the measured precession leaves.
    pub(super) fn lunar_precession_rad_yr(&self) -> f64 {
        let total = self.axis.precession_rate_arcsec_yr + self.axis.geodesic_rate_arcsec_yr;
        let e = self.axis.eccentricity;
        let circle = 1.0 - e * e;
        total / ARCSEC_PER_RAD / libm::cos(self.obliquity_rad())
            - self.solar_precession_rad_yr() / (circle * circle.sqrt())
    }

    /// Relative change per year of the Earth's rotation (negative: it slows).
    pub(super) fn rotation_rate_1_yr(&self) -> f64 {
        let tide = &self.tide;
        -tide.scale * tide.sidereal_day_rate_h_gyr / tide.sidereal_day_h / GYR_YR
    }

    /// Relative change per year of the Moon's torque, as omega/a^3.
    pub(super) fn lunar_torque_rate_1_yr(&self) -> f64 {
        let tide = &self.tide;
        let recession =
            tide.moon_distance_rate_earth_radii_gyr / tide.moon_distance_earth_radii / GYR_YR;
        self.rotation_rate_1_yr() - 3.0 * tide.scale * recession
    }

    /// Rate at which the tide raises the obliquity, rad/yr, for a constant lag in time:
    /// -(d omega/dt)/omega times
    /// sin eps (cos eps/2 - n/omega) / ((1 + cos^2 eps)/2 - cos eps n/omega), n of the Moon.
    pub(super) fn obliquity_drift_rad_yr(&self) -> f64 {
        let (sine, cosine) = libm::sincos(self.obliquity_rad());
        let day_of_month = self.tide.sidereal_day_h / DAY_H / self.tide.moon_sidereal_month_d;
        let torque = sine * (0.5 * cosine - day_of_month);
        let slowing = 0.5 * (1.0 + cosine * cosine) - cosine * day_of_month;
        -self.rotation_rate_1_yr() * torque / slowing
    }
}
