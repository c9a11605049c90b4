//! Insolation at the top of the atmosphere: at a point of latitude and season, and its annual mean.
//!
//! What: daily mean on a horizontal surface for a latitude and a longitude of the Sun, and the mean
//! over the year for a latitude. The table for latitude bands and time steps is
//! [`InsolationTable`].
//! Equations: Q = (S0/pi) (1 + e cos v)^2 / (1 - e^2)^2 (h sin phi sin d + cos phi cos d sin h),
//! cos h = -tan phi tan d limited to [-1, 1], sin d = sin(obliquity) sin(longitude), v = longitude
//! minus the Sun's longitude at perihelion. Annual mean: S0 / (2 pi^2 sqrt(1 - e^2)) times the
//! integral over a turn of sqrt(1 - (sin phi cos eps - cos phi sin eps cos g)^2) dg.
//! Units: W m-2 (those of the solar constant S0, given at a distance of one semi-major axis),
//! degrees.
//! Numerics: closed form by the system's maths library; the integral by the double-exponential rule
//! ([`crate::numerics::quadrature`]), which keeps its accuracy at the polar circle,
//! where the integrand has a kink at the end of the interval.
//! Source: Berger 1978, J. Atmos. Sci. 35:2362 (daily mean); Ward 1974, J. Geophys. Res. 79:3375
//! (annual mean; memory).

use std::f64::consts::PI;

use super::elements::Elements;
pub use super::table::{InsolationTable, TableError};
use crate::numerics::quadrature::double_exponential;

/// Daily mean insolation, W m-2, at a latitude when the Sun stands at a true longitude.
///
/// `solar_constant_w_m2` is the flux at a distance of one semi-major axis.
pub fn daily_mean_w_m2(
    elements: &Elements,
    solar_constant_w_m2: f64,
    latitude_deg: f64,
    sun_longitude_deg: f64,
) -> f64 {
    let e = elements.eccentricity;
    let longitude = sun_longitude_deg.to_radians();
    let anomaly = longitude - elements.perihelion.sun_longitude_deg().to_radians();
    let inverse_distance = (1.0 + e * anomaly.cos()) / (1.0 - e * e);
    let sin_declination = elements.obliquity_deg.to_radians().sin() * longitude.sin();
    let flux = solar_constant_w_m2 * inverse_distance * inverse_distance;
    flux * daily_mean_cosine(latitude_deg, sin_declination)
}

/// Annual mean insolation, W m-2, at a latitude; it does not depend on the perihelion.
pub fn annual_mean_w_m2(elements: &Elements, solar_constant_w_m2: f64, latitude_deg: f64) -> f64 {
    let e = elements.eccentricity;
    let (sin_lat, cos_lat) = latitude_deg.abs().to_radians().sin_cos();
    let (sin_obl, cos_obl) = elements.obliquity_deg.to_radians().sin_cos();
    let along = sin_lat * cos_obl;
    let across = cos_lat * sin_obl;
    let integral = double_exponential(0.0, PI, |angle| {
        let sine = along - across * angle.cos();
        ((1.0 - sine) * (1.0 + sine)).max(0.0).sqrt()
    });
    solar_constant_w_m2 * integral / (PI * PI * (1.0 - e * e).sqrt())
}

/// Global annual mean insolation, W m-2: S0 / (4 sqrt(1 - e^2)).
pub fn global_annual_mean_w_m2(eccentricity: f64, solar_constant_w_m2: f64) -> f64 {
    solar_constant_w_m2 / (4.0 * (1.0 - eccentricity * eccentricity).sqrt())
}

/// Mean over the day of the cosine of the zenith angle, night counted as zero.
pub(super) fn daily_mean_cosine(latitude_deg: f64, sin_declination: f64) -> f64 {
    let (sin_lat, cos_lat) = latitude_deg.to_radians().sin_cos();
    let cos_declination = ((1.0 - sin_declination) * (1.0 + sin_declination)).sqrt();
    let p = sin_lat * sin_declination;
    let q = cos_lat * cos_declination;
    // At the poles q is zero or a rounding of it: the limit holds the ratio within [-1, 1].
    let cos_half_day = (-p).clamp(-q.abs(), q.abs()) / q.abs().max(f64::MIN_POSITIVE);
    let half_day = cos_half_day.clamp(-1.0, 1.0).acos();
    if q.abs() < f64::MIN_POSITIVE {
        return p.max(0.0);
    }
    ((half_day * p + q * half_day.sin()) / PI).max(0.0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::orbit::elements::PerihelionLongitude;

    fn present(obliquity_deg: f64) -> Elements {
        Elements {
            eccentricity: 0.016_724,
            obliquity_deg,
            perihelion: PerihelionLongitude::from_heliocentric_deg(102.04),
        }
    }

    #[test]
    fn analytic_annual_mean_at_the_poles_and_for_no_obliquity() {
        let e = 0.016_724_f64;
        let shape = (1.0 - e * e).sqrt();
        for latitude in [-90.0, 90.0] {
            let expected = 1361.0 * 23.446_f64.to_radians().sin() / (PI * shape);
            let got = annual_mean_w_m2(&present(23.446), 1361.0, latitude);
            assert!((got - expected).abs() < 1e-9);
        }
        for latitude in [0.0, 30.0, -72.0] {
            let expected = 1361.0 * f64::to_radians(latitude).cos() / (PI * shape);
            let got = annual_mean_w_m2(&present(0.0), 1361.0, latitude);
            assert!((got - expected).abs() < 1e-9);
        }
    }

    #[test]
    fn analytic_annual_mean_is_smooth_through_the_polar_circle() {
        let at = |latitude| annual_mean_w_m2(&present(23.446), 1361.0, latitude);
        let circle = 90.0 - 23.446;
        assert!((at(circle - 1e-7) - at(circle + 1e-7)).abs() < 2e-6);
    }

    #[test]
    fn analytic_pole_sees_the_sine_of_the_declination() {
        let o = Elements {
            eccentricity: 0.0,
            ..present(23.446)
        };
        let expected = 1361.0 * 23.446_f64.to_radians().sin();
        assert!((daily_mean_w_m2(&o, 1361.0, 90.0, 90.0) - expected).abs() < 1e-9);
        assert!(daily_mean_w_m2(&o, 1361.0, -90.0, 90.0).abs() < 1e-12);
    }
}
