//! The columns of a table of insolation, and their values at one age.
//!
//! What: for each quantity, which columns there are, how they are computed, and what they mean.
//! Units: W m-2; MJ m-2; days of 86 400 s of a year of 365.2422; degrees.
//! Numerics: see [`crate::orbit::season`].

use super::{Moments, MonthKind, Quantity, Sunlight};
use crate::forcing::months::MonthBounds;
use crate::grid::calendar::CALENDAR_DAYS;
use crate::orbit::elements::Elements;
use crate::orbit::insolation::{annual_mean_w_m2, daily_mean_w_m2};
use crate::orbit::kepler::sun_longitude_deg;
use crate::orbit::season::{caloric_halves, part_between};
use crate::output::table::{TableAxis, TableVariable};
use crate::units::YEAR_DAYS;

/// CF standard name of insolation.
const INSOLATION: &str = "toa_incoming_shortwave_flux";
/// MJ m-2 of a W m-2 that lasts a year.
const MJ_PER_W_YEAR: f64 = YEAR_DAYS * 86_400.0 / 1e6;

/// Whether the value of another age is subtracted where one is given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Against {
    Subtracted,
    Kept,
}

/// A column: its variable, still empty, and what another age does to it.
type Column = (TableVariable, Against);

/// Columns that are being filled, age after age.
pub(super) struct Columns {
    columns: Vec<Column>,
}

impl Columns {
    /// The empty columns of a quantity.
    pub(super) fn new(quantity: &Quantity, against_kyr: Option<f64>) -> Self {
        let mut columns = columns(quantity);
        if let Some(age_kyr) = against_kyr {
            for (variable, against) in &mut columns {
                if *against == Against::Subtracted {
                    anomaly(variable, age_kyr);
                }
            }
        }
        Self { columns }
    }

    /// Adds the values of an age, less those of another.
    pub(super) fn push(&mut self, row: Vec<Vec<f64>>, against: Option<&[Vec<f64>]>) {
        for (i, ((variable, kind), values)) in self.columns.iter_mut().zip(row).enumerate() {
            match (against, *kind) {
                (Some(other), Against::Subtracted) => {
                    let differences = values.iter().zip(&other[i]).map(|(a, b)| a - b);
                    variable.values.extend(differences);
                }
                _ => variable.values.extend(values),
            }
        }
    }

    /// The filled variables.
    pub(super) fn variables(self) -> Vec<TableVariable> {
        self.columns
            .into_iter()
            .map(|(variable, _)| variable)
            .collect()
    }
}

/// Makes a variable that of a difference from another age.
fn anomaly(variable: &mut TableVariable, age_kyr: f64) {
    (variable.name, variable.column) = match variable.name {
        "insolation" => ("insolation_anomaly", "insolation_anomaly_w_m2"),
        "summer_half_insolation" => ("summer_half_insolation_anomaly", "summer_half_anomaly_w_m2"),
        "winter_half_insolation" => ("winter_half_insolation_anomaly", "winter_half_anomaly_w_m2"),
        _ => ("energy_anomaly", "energy_anomaly_mj_m2"),
    };
    variable.long_name = format!(
        "{}, difference from {age_kyr} kyr before 1950 CE",
        variable.long_name
    );
    variable.standard_name = None;
}

/// Axes of the season and the latitude; age comes first.
fn axes(quantity: &Quantity) -> Vec<TableAxis> {
    let season = match quantity {
        Quantity::Daily(Moments::SunLongitudes(_)) => Some(TableAxis::SunLongitude),
        Quantity::Daily(Moments::Dates(_)) => Some(TableAxis::Date),
        Quantity::Monthly => Some(TableAxis::Month),
        Quantity::Caloric | Quantity::Season(_) | Quantity::Annual => None,
    };
    let age = std::iter::once(TableAxis::Age);
    age.chain(season).chain([TableAxis::Latitude]).collect()
}

/// An empty variable along the age, the season and the latitude of a quantity.
fn variable(
    quantity: &Quantity,
    [name, column, units]: [&'static str; 3],
    decimals: usize,
    long_name: &str,
) -> TableVariable {
    TableVariable {
        name,
        column,
        long_name: long_name.to_owned(),
        standard_name: None,
        units,
        decimals,
        axes: axes(quantity),
        values: Vec::new(),
    }
}

/// A column of insolation.
fn sunlight(quantity: &Quantity, [name, column]: [&'static str; 2], long_name: &str) -> Column {
    let mut variable = variable(quantity, [name, column, "W m-2"], 4, long_name);
    variable.standard_name = Some(INSOLATION);
    (variable, Against::Subtracted)
}

/// A column that has the same value at all latitudes, and the same against any other age.
fn kept(quantity: &Quantity, names: [&'static str; 3], long_name: &str) -> Column {
    let mut variable = variable(quantity, names, 4, long_name);
    variable.axes.pop();
    (variable, Against::Kept)
}

fn columns(quantity: &Quantity) -> Vec<Column> {
    let insolation = |long_name| sunlight(quantity, ["insolation", "insolation_w_m2"], long_name);
    let length = |long_name| kept(quantity, ["length", "length_day", "day"], long_name);
    match quantity {
        Quantity::Daily(Moments::SunLongitudes(_)) => vec![insolation("daily mean insolation")],
        Quantity::Daily(Moments::Dates(_)) => vec![
            insolation("daily mean insolation"),
            kept(
                quantity,
                ["sun_longitude", "sun_longitude_deg", "degree"],
                "true longitude of the Sun at noon",
            ),
        ],
        Quantity::Monthly => vec![
            insolation("monthly mean insolation"),
            length("length of the month"),
        ],
        Quantity::Season(_) => {
            let names = ["energy", "energy_mj_m2", "MJ m-2"];
            let name = "energy of sunlight between two longitudes of the Sun";
            vec![
                insolation("mean insolation between two longitudes of the Sun"),
                (variable(quantity, names, 4, name), Against::Subtracted),
                length("time between the two longitudes of the Sun"),
            ]
        }
        Quantity::Annual => vec![insolation("annual mean insolation")],
        Quantity::Caloric => caloric_columns(quantity),
    }
}

fn caloric_columns(quantity: &Quantity) -> Vec<Column> {
    let bound = |name, column, long_name| {
        let names = [name, column, "degree"];
        (variable(quantity, names, 3, long_name), Against::Kept)
    };
    vec![
        sunlight(
            quantity,
            ["summer_half_insolation", "summer_half_w_m2"],
            "mean insolation of the summer caloric half-year",
        ),
        sunlight(
            quantity,
            ["winter_half_insolation", "winter_half_w_m2"],
            "mean insolation of the winter caloric half-year",
        ),
        bound(
            "summer_half_begin",
            "summer_half_begin_deg",
            "longitude of the Sun at the beginning of the summer caloric half-year",
        ),
        bound(
            "summer_half_end",
            "summer_half_end_deg",
            "longitude of the Sun at the end of the summer caloric half-year",
        ),
    ]
}

/// The values of all columns at one age: first along `moments`, then along latitude.
pub(super) fn compute(
    quantity: &Quantity,
    sunlight: &Sunlight,
    elements: &Elements,
    latitudes_deg: &[f64],
    moments: &[f64],
) -> Vec<Vec<f64>> {
    let s0 = sunlight.solar_constant_w_m2;
    let at_latitudes = |f: &dyn Fn(f64) -> f64| latitudes_deg.iter().map(|l| f(*l)).collect();
    let daily = |longitudes: &[f64]| {
        let all = longitudes.iter().flat_map(|longitude| {
            let at = |latitude: &f64| daily_mean_w_m2(elements, s0, *latitude, *longitude);
            latitudes_deg.iter().map(at)
        });
        all.collect()
    };
    match quantity {
        Quantity::Daily(Moments::SunLongitudes(_)) => vec![daily(moments)],
        Quantity::Daily(Moments::Dates(_)) => {
            let equinox = sunlight.months.equinox_fraction();
            let longitude = |day: &f64| {
                let time = day / CALENDAR_DAYS - equinox;
                sun_longitude_deg(elements, time).rem_euclid(360.0)
            };
            let longitudes: Vec<_> = moments.iter().map(longitude).collect();
            vec![daily(&longitudes), longitudes]
        }
        Quantity::Monthly => monthly(sunlight, elements, latitudes_deg),
        Quantity::Season([from, to]) => {
            let part = |latitude| part_between(elements, s0, latitude, *from, *to);
            let days = part(0.0).length_days();
            vec![
                at_latitudes(&|l| part(l).mean_w_m2()),
                at_latitudes(&|l| part(l).energy_per_year_w_m2 * MJ_PER_W_YEAR),
                vec![days],
            ]
        }
        Quantity::Annual => vec![at_latitudes(&|l| annual_mean_w_m2(elements, s0, l))],
        Quantity::Caloric => caloric(sunlight, elements, latitudes_deg),
    }
}

/// Means of both half-years, and the bounds of the first.
fn caloric(sunlight: &Sunlight, elements: &Elements, latitudes_deg: &[f64]) -> Vec<Vec<f64>> {
    let mut columns = vec![Vec::new(); 4];
    for &latitude in latitudes_deg {
        let halves = caloric_halves(elements, sunlight.solar_constant_w_m2, latitude);
        let [begin, end] = halves.summer_deg.unwrap_or([f64::NAN; 2]);
        let values = [halves.summer_w_m2, halves.winter_w_m2, begin, end];
        for (column, value) in columns.iter_mut().zip(values) {
            column.push(value);
        }
    }
    columns
}

/// Means over the months, exact in time, and their lengths.
fn monthly(sunlight: &Sunlight, elements: &Elements, latitudes_deg: &[f64]) -> Vec<Vec<f64>> {
    let bounds: MonthBounds = sunlight.months.bounds(elements);
    let equinox = sunlight.months.equinox_fraction();
    let longitudes = bounds.map(|time| sun_longitude_deg(elements, time - equinox));
    let months = longitudes.windows(2).zip(bounds.windows(2));
    let (mut means, mut lengths) = (Vec::new(), Vec::new());
    for (ends, times) in months {
        let share = times[1] - times[0];
        for &latitude in latitudes_deg {
            let s0 = sunlight.solar_constant_w_m2;
            let part = part_between(elements, s0, latitude, ends[0], ends[1]);
            means.push(part.energy_per_year_w_m2 / share);
        }
        lengths.push(share * YEAR_DAYS);
    }
    vec![means, lengths]
}

/// What the quantity is, in a few words.
pub(super) fn title(quantity: &Quantity, months: MonthKind) -> &'static str {
    match (quantity, months) {
        (Quantity::Daily(_), _) => "daily means",
        (Quantity::Monthly, MonthKind::FixedLength) => "means of months of fixed length",
        (Quantity::Monthly, MonthKind::FixedAngle) => "means of months of fixed angle",
        (Quantity::Caloric, _) => "caloric half-years",
        (Quantity::Season(_), _) => "means between two longitudes of the Sun",
        (Quantity::Annual, _) => "annual means",
    }
}

/// What the numbers mean, in a sentence or two.
pub(super) fn meaning(quantity: &Quantity, months: MonthKind) -> String {
    let half = YEAR_DAYS / 2.0;
    match (quantity, months) {
        (Quantity::Daily(Moments::SunLongitudes(_)), _) => {
            "Daily means with the Sun held at its longitude for the day.".to_owned()
        }
        (Quantity::Daily(Moments::Dates(_)), _) => {
            "Daily means with the Sun held where it is at noon of the date.".to_owned()
        }
        (Quantity::Monthly, MonthKind::FixedLength) => format!(
            "Months have the lengths of the 365-day calendar, stretched to a year of {YEAR_DAYS} days; \
             means are exact in time."
        ),
        (Quantity::Monthly, MonthKind::FixedAngle) => {
            "A month is the time in which the Sun moves between the longitudes that bound that month \
             on the orbit of 1950, so that it is the same season on every orbit; means are exact in \
             time."
                .to_owned()
        }
        (Quantity::Caloric, _) => format!(
            "The summer caloric half-year holds the half of the year (that is {half:.4} days) in which \
             every day gets more sunlight than any day of the other half; it begins and ends at the \
             longitudes given, which are missing where it falls into several parts or where night fills \
             more than half of the year."
        ),
        (Quantity::Season([from, to]), _) => format!(
            "Means over the time in which the Sun moves from longitude {from} to {to} degrees (the \
             whole year if they are the same), and the energy in that time; the energy does not depend \
             on the perihelion, mean and length do."
        ),
        (Quantity::Annual, _) => "Means over the whole year; they do not depend on the perihelion.".to_owned(),
    }
}
