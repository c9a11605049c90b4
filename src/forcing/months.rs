//! Where the months lie in the year of an orbit.
//!
//! What: the thirteen bounds of the months for two calendars. With months of *fixed length* the
//! bounds are those of the 365-day calendar, the same for every orbit. With months of *fixed
//! angle* a month is the time in which the Sun moves between the two longitudes that bound that
//! month on the orbit of 1950, so that a month means the same season on every orbit; its length
//! then changes with eccentricity and perihelion, and January may begin in the old year.
//! Equation: bound = equinox + t(longitude), t from Kepler's equation ([`crate::orbit::kepler`]).
//! Units: fractions of the year since 1 January 0 h; longitudes in degrees from the March equinox.
//! Numerics: closed form.
//! Source: Joussaume & Braconnot 1997, J. Geophys. Res. 102:1943 (both calendars and why the
//! choice matters; memory); orbit of 1950: Berger 1978, J. Atmos. Sci. 35:2362.

use serde::{Deserialize, Serialize};

use crate::grid::calendar::{CALENDAR_DAYS, Calendar, MONTHS};
use crate::numerics::shown::Shown;
use crate::orbit::elements::{Elements, PerihelionLongitude};
use crate::orbit::kepler;

/// Bounds of the months, fractions of the year; the last is one year after the first.
pub type MonthBounds = [f64; MONTHS + 1];

/// What a month is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum MonthKind {
    /// That of the 365-day calendar, stretched to the year.
    FixedLength,
    /// The time between two longitudes of the Sun, those of 1950.
    FixedAngle,
}

/// Which calendar, and when the March equinox is.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CalendarSpec {
    /// What a month is.
    pub months: MonthKind,
    /// March equinox, days since 1 January 0 h in the 365-day calendar (79.5: 21 March noon).
    pub equinox_day: f64,
}

/// An equinox that is no day of the year.
#[derive(Clone, Copy, Debug, PartialEq, thiserror::Error)]
#[error(
    "calendar.equinox_day = {}: must lie between 0 and 365 days since 1 January 0 h; 21 March noon \
     is 79.5",
    Shown(*equinox_day)
)]
pub struct CalendarError {
    /// The value.
    pub equinox_day: f64,
}

/// A checked calendar.
#[derive(Clone, Debug, PartialEq)]
pub struct Months {
    equinox_fraction: f64,
    bounds: Bounds,
}

#[derive(Clone, Debug, PartialEq)]
enum Bounds {
    /// The same for every orbit.
    Fixed(MonthBounds),
    /// The Sun's longitudes at the bounds, degrees, rising over one turn.
    Longitudes([f64; MONTHS + 1]),
}

/// Orbit whose months give the angles: that of 1950.
fn orbit_of_1950() -> Elements {
    Elements {
        eccentricity: 0.016_724,
        obliquity_deg: 23.446,
        perihelion: PerihelionLongitude::from_heliocentric_deg(102.04),
    }
}

impl Months {
    /// Checks a calendar.
    ///
    /// # Errors
    /// When the equinox is not a day of the year.
    pub fn new(spec: CalendarSpec) -> Result<Self, CalendarError> {
        let equinox_day = spec.equinox_day;
        if !(0.0..CALENDAR_DAYS).contains(&equinox_day) {
            return Err(CalendarError { equinox_day });
        }
        let equinox_fraction = equinox_day / CALENDAR_DAYS;
        let fixed = Calendar.month_bounds_fraction();
        let bounds = match spec.months {
            MonthKind::FixedLength => Bounds::Fixed(fixed),
            MonthKind::FixedAngle => {
                let orbit = orbit_of_1950();
                Bounds::Longitudes(
                    fixed.map(|time| kepler::sun_longitude_deg(&orbit, time - equinox_fraction)),
                )
            }
        };
        Ok(Self {
            equinox_fraction,
            bounds,
        })
    }

    /// Time of the March equinox, fraction of the year.
    pub fn equinox_fraction(&self) -> f64 {
        self.equinox_fraction
    }

    /// Bounds of the months on an orbit; they may lie before 0 or after 1, in the years beside.
    pub fn bounds(&self, orbit: &Elements) -> MonthBounds {
        match &self.bounds {
            Bounds::Fixed(bounds) => *bounds,
            Bounds::Longitudes(longitudes) => longitudes.map(|longitude_deg| {
                self.equinox_fraction + kepler::years_since_equinox(orbit, longitude_deg)
            }),
        }
    }

    /// Whether the bounds depend on the orbit.
    pub fn move_with_the_orbit(&self) -> bool {
        matches!(self.bounds, Bounds::Longitudes(_))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_months_of_1950_have_their_lengths_in_both_calendars() {
        let of = |months| {
            let equinox_day = 79.5;
            let spec = CalendarSpec {
                months,
                equinox_day,
            };
            Months::new(spec).unwrap().bounds(&orbit_of_1950())
        };
        let fixed = of(MonthKind::FixedLength);
        let angle = of(MonthKind::FixedAngle);
        for (a, b) in fixed.iter().zip(angle) {
            assert!((a - b).abs() < 1e-14, "{a} {b}");
        }
    }

    #[test]
    fn an_equinox_outside_the_year_is_refused() {
        for equinox_day in [-1.0, 365.0, f64::NAN] {
            let months = MonthKind::FixedLength;
            let refused = Months::new(CalendarSpec {
                months,
                equinox_day,
            });
            assert!(refused.is_err(), "{equinox_day}");
        }
    }
}
