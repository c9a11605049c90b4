//! Insolation against age, latitude and season as a table.
//!
//! What: one of the quantities of [`Quantity`] at ages and latitudes, on the orbit of a solution or a
//! configuration, or its difference from another age.
//! Units: W m-2, MJ m-2, days of 86 400 s (the year has 365.2422), degrees, kyr before 1950 CE.
//! Numerics: closed forms and quadrature to rounding; see [`crate::orbit::insolation`] and
//! [`crate::orbit::season`].
//! Source: there.

mod columns;
mod error;
mod figure;

pub use error::InsolationError;
pub use figure::draw;

use super::ages::AgeRange;
use super::orbit_source::{OrbitChoice, OrbitSource};
pub use crate::forcing::months::MonthKind;
use crate::forcing::months::{CalendarSpec, Months};
use crate::grid::calendar::CALENDAR_DAYS;
use crate::orbit::elements::Elements;
use crate::output::table::{Table, TableAxis};
use columns::Columns;

/// Solar constant where none is asked for, W m-2, at one semi-major axis from the Sun: total solar
/// irradiance at solar minimum (Kopp & Lean 2011, Geophys. Res. Lett. 38:L01706).
pub const SOLAR_CONSTANT_W_M2: f64 = 1361.0;

/// When in the year.
#[derive(Clone, Debug, PartialEq)]
pub enum Moments {
    /// True longitudes of the Sun, degrees from the March equinox.
    SunLongitudes(Vec<f64>),
    /// Noons of dates, days since 1 January 0 h in the 365-day calendar.
    Dates(Vec<f64>),
}

/// What is tabulated.
#[derive(Clone, Debug, PartialEq)]
pub enum Quantity {
    /// Daily means.
    Daily(Moments),
    /// Means and lengths of the twelve months.
    Monthly,
    /// Means of the caloric half-years.
    Caloric,
    /// Mean, energy and length of the part of the year between two longitudes of the Sun, degrees.
    Season([f64; 2]),
    /// Annual mean.
    Annual,
}

/// What was asked for.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// The orbit.
    pub orbit: OrbitChoice,
    /// The ages.
    pub ages: AgeRange,
    /// Age whose insolation is subtracted, kyr before 1950.
    pub against_kyr: Option<f64>,
    /// Latitudes, degrees north.
    pub latitudes_deg: Vec<f64>,
    /// The quantity.
    pub quantity: Quantity,
    /// Solar constant, W m-2; that of the configuration, or [`SOLAR_CONSTANT_W_M2`], if not given.
    pub solar_constant_w_m2: Option<f64>,
    /// What a month is; as in the configuration, or of fixed length, if not given.
    pub months: Option<MonthKind>,
    /// March equinox, days since 1 January 0 h in the 365-day calendar; that of the configuration,
    /// or 21 March noon, if not given.
    pub equinox_day: Option<f64>,
}

/// What the insolation of one age and latitude is computed from.
struct Sunlight {
    solar_constant_w_m2: f64,
    month_kind: MonthKind,
    months: Months,
}

/// Computes the table. `command` is the command line, program first, for the history.
///
/// # Errors
/// When a number has no meaning, or the orbit has faults or does not reach an age.
pub fn tabulate(request: &Request, command: &[String]) -> Result<Table, InsolationError> {
    let latitudes_deg = sorted("latitude", &request.latitudes_deg, [-90.0, 90.0])?;
    let moments = moments(&request.quantity)?;
    let width = moments.as_ref().map_or(1, |(_, values)| values.len());
    let ages_kyr = request.ages.ages_kyr(width * latitudes_deg.len())?;
    let source = request.orbit.find()?;
    let sunlight = sunlight(request, &source)?;
    let seen = ages_kyr.first().into_iter().chain(ages_kyr.last());
    for age in seen.chain(&request.against_kyr) {
        source.orbit.check_range(*age, *age)?;
    }
    let mut columns = Columns::new(&request.quantity, request.against_kyr);
    let row = |elements: &Elements| {
        columns::compute(
            &request.quantity,
            &sunlight,
            elements,
            &latitudes_deg,
            moments.as_ref().map_or(&[][..], |(_, values)| values),
        )
    };
    let against = match request.against_kyr {
        Some(age_kyr) => Some(row(&source.orbit.at(age_kyr)?)),
        None => None,
    };
    for &age_kyr in &ages_kyr {
        columns.push(row(&source.orbit.at(age_kyr)?), against.as_deref());
    }
    let mut axes = vec![(TableAxis::Age, ages_kyr)];
    axes.extend(moments);
    axes.push((TableAxis::Latitude, latitudes_deg));
    Ok(Table {
        variables: columns.variables(),
        about: about(request, &source, &sunlight, command),
        axes,
    })
}

/// The axis of the season, if the quantity has one.
fn moments(quantity: &Quantity) -> Result<Option<(TableAxis, Vec<f64>)>, InsolationError> {
    let longitude = |values: &[f64]| sorted("solar longitude", values, [0.0, 360.0]);
    Ok(match quantity {
        Quantity::Daily(Moments::SunLongitudes(values)) => {
            Some((TableAxis::SunLongitude, longitude(values)?))
        }
        Quantity::Daily(Moments::Dates(days)) => {
            let days = sorted("day of the year", days, [0.0, CALENDAR_DAYS])?;
            Some((TableAxis::Date, days))
        }
        Quantity::Monthly => Some((TableAxis::Month, (1..=12).map(f64::from).collect())),
        Quantity::Season(ends) => {
            for end in ends {
                longitude(&[*end])?;
            }
            None
        }
        Quantity::Caloric | Quantity::Annual => None,
    })
}

/// Values in rising order, each once, within limits.
fn sorted(
    name: &'static str,
    values: &[f64],
    limits: [f64; 2],
) -> Result<Vec<f64>, InsolationError> {
    let [low, high] = limits;
    if values.is_empty() {
        return Err(InsolationError::None { name });
    }
    if let Some(&value) = values.iter().find(|v| !(low..=high).contains(*v)) {
        return Err(InsolationError::OutOfRange {
            name,
            value,
            low,
            high,
        });
    }
    // A minus before a zero would be seen in the table.
    let mut values: Vec<_> = values.iter().map(|v| v + 0.0).collect();
    values.sort_by(f64::total_cmp);
    match values.windows(2).find(|pair| pair[0] >= pair[1]) {
        Some(pair) => Err(InsolationError::Twice {
            name,
            value: pair[0],
        }),
        None => Ok(values),
    }
}

fn sunlight(request: &Request, source: &OrbitSource) -> Result<Sunlight, InsolationError> {
    let run = source.experiment.as_ref().map(|experiment| &experiment.run);
    if run.is_some_and(|run| run.orbit_mask.is_some()) {
        return Err(InsolationError::Mask);
    }
    let own = request.solar_constant_w_m2;
    let solar_constant_w_m2 = own
        .or(run.map(|run| run.insolation.solar_constant_w_m2))
        .unwrap_or(SOLAR_CONSTANT_W_M2);
    if !(solar_constant_w_m2 > 0.0 && solar_constant_w_m2 <= MOST_SUNLIGHT_W_M2) {
        return Err(InsolationError::OutOfRange {
            name: "solar constant",
            value: solar_constant_w_m2,
            low: f64::MIN_POSITIVE,
            high: MOST_SUNLIGHT_W_M2,
        });
    }
    let equinox_day = request
        .equinox_day
        .or(run.map(|run| run.calendar.equinox_day))
        .unwrap_or(EQUINOX_DAY);
    let month_kind = request
        .months
        .or(run.map(|run| run.calendar.months))
        .unwrap_or(MonthKind::FixedLength);
    let months = Months::new(CalendarSpec {
        months: month_kind,
        equinox_day,
    })?;
    Ok(Sunlight {
        solar_constant_w_m2,
        month_kind,
        months,
    })
}

/// 21 March noon, days since 1 January 0 h, as in `configs/reference.toml`.
const EQUINOX_DAY: f64 = 79.5;
/// Largest solar constant that is accepted, W m-2: more is a slip of the pen.
const MOST_SUNLIGHT_W_M2: f64 = 10_000.0;

/// What the table says about itself.
fn about(
    request: &Request,
    source: &OrbitSource,
    sunlight: &Sunlight,
    command: &[String],
) -> Vec<(String, String)> {
    let mut sentences = vec![
        format!(
            "Insolation on a horizontal surface at the top of the atmosphere, means over the whole day, \
             for a solar constant of {} W m-2 at one semi-major axis. Ages are kyr before 1950 CE, \
             negative after it. Longitudes of the Sun are true ones from the March equinox: 90 is the \
             June solstice, 270 the December solstice.",
            sunlight.solar_constant_w_m2
        ),
        columns::meaning(&request.quantity, sunlight.month_kind),
    ];
    if matches!(
        request.quantity,
        Quantity::Monthly | Quantity::Daily(Moments::Dates(_))
    ) {
        sentences.push(format!(
            "The March equinox is held {:.3} days after 1 January 0 h of the 365-day calendar (79.5: 21 \
             March noon).",
            sunlight.months.equinox_fraction() * CALENDAR_DAYS
        ));
    }
    if let Some(age_kyr) = request.against_kyr {
        sentences.push(format!(
            "Insolation and energy are differences from those of {age_kyr} kyr before 1950."
        ));
    }
    let comment = sentences.join(" ");
    let title = format!(
        "Insolation: {}",
        columns::title(&request.quantity, sunlight.month_kind)
    );
    source.about(&title, &comment, command)
}

#[cfg(test)]
mod tests;
