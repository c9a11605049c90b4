//! The three numbers that fix the insolation, and the two ways of counting the perihelion.
//!
//! What: eccentricity e, obliquity, and the longitude of perihelion from the moving vernal equinox.
//! Two conventions are in print, half a turn apart: the heliocentric longitude of the Earth at
//! perihelion (102.9 degrees today, "perihelion minus 180" in some tables) and the longitude at
//! which the Sun is seen then (282.9 degrees today). A number cannot tell which one it is, so
//! [`PerihelionLongitude`] is made and read by name only.
//! Climatic precession: e sin(heliocentric longitude), largest when perihelion falls at the
//! December solstice.
//! Units: degrees; e is a pure number. Source: definitions (Berger 1978, J. Atmos. Sci. 35:2362).

/// Longitude of perihelion from the moving vernal equinox.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PerihelionLongitude {
    heliocentric_deg: f64,
}

impl PerihelionLongitude {
    /// From the heliocentric longitude of the Earth at perihelion (102.9 degrees today), degrees.
    pub fn from_heliocentric_deg(longitude_deg: f64) -> Self {
        Self {
            heliocentric_deg: wrap_deg(longitude_deg),
        }
    }

    /// From the longitude at which the Sun is seen at perihelion (282.9 degrees today), degrees.
    pub fn from_sun_longitude_deg(longitude_deg: f64) -> Self {
        Self::from_heliocentric_deg(longitude_deg + 180.0)
    }

    /// Heliocentric longitude of the Earth at perihelion, degrees in [0, 360).
    pub fn heliocentric_deg(self) -> f64 {
        self.heliocentric_deg
    }

    /// Longitude of the Sun at perihelion, degrees in [0, 360).
    pub fn sun_longitude_deg(self) -> f64 {
        wrap_deg(self.heliocentric_deg + 180.0)
    }
}

/// Shape of the orbit and attitude of the axis at one moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Elements {
    /// Eccentricity, in [0, 1).
    pub eccentricity: f64,
    /// Obliquity of the ecliptic, degrees.
    pub obliquity_deg: f64,
    /// Where perihelion lies in the year of seasons.
    pub perihelion: PerihelionLongitude,
}

impl Elements {
    /// Climatic precession e sin(heliocentric longitude of perihelion).
    pub fn climatic_precession(&self) -> f64 {
        self.eccentricity * self.perihelion.heliocentric_deg.to_radians().sin()
    }
}

/// Brings an angle into [0, 360) degrees.
fn wrap_deg(angle_deg: f64) -> f64 {
    let wrapped = angle_deg.rem_euclid(360.0);
    // A tiny negative angle rounds up to the full turn.
    if wrapped >= 360.0 { 0.0 } else { wrapped }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn published_both_conventions_of_the_1850_perihelion_are_accepted_by_name() {
        // Intercomparison orbit of 1850: 100.33 heliocentric, once printed as 280.33 (Sun).
        let earth = PerihelionLongitude::from_heliocentric_deg(100.33);
        let sun = PerihelionLongitude::from_sun_longitude_deg(280.33);
        assert!((earth.heliocentric_deg() - sun.heliocentric_deg()).abs() < 1e-12);
        assert!((earth.sun_longitude_deg() - 280.33).abs() < 1e-12);
    }

    #[test]
    fn analytic_longitudes_stay_within_one_turn() {
        for angle in [-1e-20, -720.0, -0.5, 0.0, 359.999, 360.0, 1e6] {
            let p = PerihelionLongitude::from_heliocentric_deg(angle);
            for value in [p.heliocentric_deg(), p.sun_longitude_deg()] {
                assert!((0.0..360.0).contains(&value), "{angle} gave {value}");
            }
        }
    }

    #[test]
    fn analytic_precession_is_largest_with_perihelion_in_december() {
        let at = |sun| Elements {
            eccentricity: 0.05,
            obliquity_deg: 23.0,
            perihelion: PerihelionLongitude::from_sun_longitude_deg(sun),
        };
        assert!((at(270.0).climatic_precession() - 0.05).abs() < 1e-15);
        assert!((at(90.0).climatic_precession() + 0.05).abs() < 1e-15);
    }
}
