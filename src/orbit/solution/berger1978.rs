//! The orbital solution of Berger (1978).
//!
//! What: eccentricity, obliquity and longitude of perihelion from the moving equinox.
//! Equations, t in years from 1950 CE (negative in the past):
//! obliquity = 23.320556 deg + sum A cos(f t + d); e cos(p) and e sin(p) = sum M cos and
//! sin(g t + b); psi = 50.439273"/yr t + 3.392506 deg + sum F sin(f' t + d'); heliocentric
//! longitude of perihelion = p + psi.
//! Units: degrees; ages in kyr before 1950 CE.
//! Numerics: plain sums of 47, 19 and 78 terms; rounding far below the last printed digit.
//! Validity: within 1 Myr of 1950. Against a modern numerical solution (Laskar et al. 2004,
//! A&A 428:261) the eccentricity is off by at most 0.0051 and the obliquity by 0.12 degrees in the
//! last 300 kyr, by 0.0097 and 0.29 degrees before that; further back the series is useless.
//! Source: Berger 1978, J. Atmos. Sci. 35:2362; terms in `berger1978_terms.rs`.

use super::berger1978_terms::{ECCENTRICITY_PERIHELION, GENERAL_PRECESSION, OBLIQUITY, Term};

/// Largest distance in time from 1950 CE for which the series is offered, kyr.
pub const LIMIT_KYR: f64 = 1000.0;

/// Mean obliquity, degrees.
const MEAN_OBLIQUITY_DEG: f64 = 23.320_556;
/// Mean rate of general precession, arc seconds per year.
const PRECESSION_ARCSEC_PER_YR: f64 = 50.439_273;
/// General precession at 1950, degrees.
const PRECESSION_AT_1950_DEG: f64 = 3.392_506;
/// Arc seconds in a degree.
const ARCSEC_PER_DEG: f64 = 3600.0;

/// Obliquity, degrees.
pub(super) fn obliquity_deg(age_kyr: f64) -> f64 {
    let [cosines, _] = sums(&OBLIQUITY, years_from_1950(age_kyr));
    MEAN_OBLIQUITY_DEG + cosines / ARCSEC_PER_DEG
}

/// Eccentricity.
pub(super) fn eccentricity(age_kyr: f64) -> f64 {
    let [cosines, sines] = sums(&ECCENTRICITY_PERIHELION, years_from_1950(age_kyr));
    cosines.hypot(sines)
}

/// Heliocentric longitude of perihelion from the moving equinox, degrees (not wrapped).
pub(super) fn perihelion_deg(age_kyr: f64) -> f64 {
    let t = years_from_1950(age_kyr);
    let [cosines, sines] = sums(&ECCENTRICITY_PERIHELION, t);
    let [_, precession] = sums(&GENERAL_PRECESSION, t);
    sines.atan2(cosines).to_degrees()
        + PRECESSION_AT_1950_DEG
        + (PRECESSION_ARCSEC_PER_YR * t + precession) / ARCSEC_PER_DEG
}

/// Years from 1950 CE, negative in the past.
fn years_from_1950(age_kyr: f64) -> f64 {
    -1000.0 * age_kyr
}

/// Sums of amplitude times cosine and sine over the terms.
fn sums(terms: &[Term], years: f64) -> [f64; 2] {
    let mut total = [0.0; 2];
    for [amplitude, rate, phase_deg] in terms {
        let angle_deg = rate * years / ARCSEC_PER_DEG + phase_deg;
        let (sin, cos) = angle_deg.to_radians().sin_cos();
        total[0] += amplitude * cos;
        total[1] += amplitude * sin;
    }
    total
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn published_orbit_of_1950() {
        // 0.016724, 23.446, 102.04: orbit of the palaeoclimate intercomparison (memory).
        assert!((eccentricity(0.0) - 0.016_724).abs() < 5e-7);
        assert!((obliquity_deg(0.0) - 23.446).abs() < 5e-4);
        assert!((perihelion_deg(0.0).rem_euclid(360.0) - 102.04).abs() < 5e-3);
    }
}
