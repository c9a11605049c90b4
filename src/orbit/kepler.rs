//! Where the Earth is on its orbit at a given time of the year, and the inverse.
//!
//! What: eccentric anomaly E from mean anomaly M, true anomaly v, and the Sun's longitude as a
//! function of the time since the March equinox.
//! Equations: E - e sin E = M (Kepler); v = E + 2 atan(b sin E / (1 - b cos E)) with
//! b = e / (1 + sqrt(1 - e^2)); longitude = v + longitude of the Sun at perihelion.
//! Units: radians for anomalies, degrees for longitudes, fractions of the year for time.
//! Numerics: on [0, pi] the left side is convex, so Newton's method from a point right of the root
//! comes down monotonically; min(M + e, M / (1 - e), pi) is such a point for every e in [0, 1).
//! Quadratic convergence: three or four iterations for the Earth's eccentricities.
//! Source: standard two-body formulas (e.g. Murray & Dermott 1999, Solar System Dynamics, ch. 2;
//! memory).

use std::f64::consts::{PI, TAU};

use super::elements::Elements;

/// More than any e below 1 - 1e-12 needs; a guard against NaN, not a tuning knob.
const MAX_ITERATIONS: usize = 100;

/// Eccentric anomaly, rad, continuous over turns; residual of Kepler's equation below 1e-14 within
/// the first turn.
pub fn eccentric_anomaly_rad(mean_anomaly_rad: f64, eccentricity: f64) -> f64 {
    let turns = (mean_anomaly_rad / TAU).round();
    let reduced = mean_anomaly_rad - turns * TAU;
    let m = reduced.abs();
    let mut root = (m + eccentricity).min(m / (1.0 - eccentricity)).min(PI);
    for _ in 0..MAX_ITERATIONS {
        let (sin, cos) = root.sin_cos();
        let step = (root - eccentricity * sin - m) / (1.0 - eccentricity * cos);
        root -= step;
        // Monotone from the right: a step up can only be rounding.
        if step <= 4.0 * f64::EPSILON * root {
            break;
        }
    }
    root.copysign(reduced) + turns * TAU
}

/// True anomaly of an eccentric anomaly, rad, on the same turn.
pub fn true_anomaly_rad(eccentric_anomaly_rad: f64, eccentricity: f64) -> f64 {
    let b = half_angle_factor(eccentricity);
    let (sin, cos) = eccentric_anomaly_rad.sin_cos();
    eccentric_anomaly_rad + 2.0 * (b * sin / (1.0 - b * cos)).atan()
}

/// Mean anomaly of a true anomaly, rad, on the same turn.
pub fn mean_anomaly_rad(true_anomaly_rad: f64, eccentricity: f64) -> f64 {
    let b = half_angle_factor(eccentricity);
    let (sin, cos) = true_anomaly_rad.sin_cos();
    let eccentric = true_anomaly_rad - 2.0 * (b * sin / (1.0 + b * cos)).atan();
    eccentric - eccentricity * eccentric.sin()
}

/// The Sun's longitude, degrees, at a time counted from the March equinox in years.
///
/// Time 0 gives 0, time 1 gives 360; times outside [0, 1] continue over the turns.
pub fn sun_longitude_deg(elements: &Elements, years_since_equinox: f64) -> f64 {
    let perihelion_rad = elements.perihelion.sun_longitude_deg().to_radians();
    let e = elements.eccentricity;
    let mean = mean_anomaly_rad(-perihelion_rad, e) + TAU * years_since_equinox;
    let anomaly = true_anomaly_rad(eccentric_anomaly_rad(mean, e), e);
    (anomaly + perihelion_rad).to_degrees()
}

/// Time since the March equinox, years, at which the Sun reaches a longitude in degrees.
///
/// The inverse of [`sun_longitude_deg`].
pub fn years_since_equinox(elements: &Elements, sun_longitude_deg: f64) -> f64 {
    let perihelion_rad = elements.perihelion.sun_longitude_deg().to_radians();
    let e = elements.eccentricity;
    let at = |longitude_rad: f64| mean_anomaly_rad(longitude_rad - perihelion_rad, e);
    (at(sun_longitude_deg.to_radians()) - at(0.0)) / TAU
}

/// e / (1 + sqrt(1 - e^2)), the factor of the half-angle formulas.
fn half_angle_factor(eccentricity: f64) -> f64 {
    eccentricity / (1.0 + (1.0 - eccentricity * eccentricity).sqrt())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::orbit::elements::PerihelionLongitude;

    fn orbit(eccentricity: f64, heliocentric_deg: f64) -> Elements {
        Elements {
            eccentricity,
            obliquity_deg: 23.44,
            perihelion: PerihelionLongitude::from_heliocentric_deg(heliocentric_deg),
        }
    }

    #[test]
    fn analytic_equation_holds_for_all_eccentricities() {
        for e in [0.0, 1e-9, 0.0167, 0.06, 0.3, 0.7, 0.95, 0.999, 0.999_999_9] {
            for i in -100..=100 {
                let m = PI * f64::from(i) / 100.0 * 0.999_999;
                let root = eccentric_anomaly_rad(m, e);
                assert!((root - e * root.sin() - m).abs() < 1e-14, "e {e} M {m}");
            }
            let close = eccentric_anomaly_rad(1e-12, e);
            assert!((close - e * close.sin() - 1e-12).abs() < 1e-16, "e {e}");
        }
    }

    #[test]
    fn analytic_anomalies_invert_each_other_over_turns() {
        for e in [0.0, 0.0167, 0.2, 0.9] {
            for i in -30..30 {
                let m = 0.37 * f64::from(i);
                let v = true_anomaly_rad(eccentric_anomaly_rad(m, e), e);
                assert!((mean_anomaly_rad(v, e) - m).abs() < 2e-13, "e {e} M {m}");
            }
        }
    }

    #[test]
    fn analytic_longitude_and_time_invert_each_other() {
        let o = orbit(0.05, 250.0);
        assert!(sun_longitude_deg(&o, 0.0).abs() < 1e-12);
        assert!((sun_longitude_deg(&o, 1.0) - 360.0).abs() < 1e-12);
        for i in -20..40 {
            let t = f64::from(i) * 0.049;
            let back = years_since_equinox(&o, sun_longitude_deg(&o, t));
            assert!((back - t).abs() < 1e-14, "{t}");
        }
    }

    #[test]
    fn regress_nan_comes_back_as_nan() {
        assert!(eccentric_anomaly_rad(f64::NAN, 0.1).is_nan());
        assert!(eccentric_anomaly_rad(1.0, f64::NAN).is_nan());
    }
}
