//! The axes of tables as axes of figures.

use super::destination::Drawing;
use crate::grid::calendar::month_and_day;
use crate::output::table::{Table, TableAxis};
use crate::report::About;
use crate::report::axis::{Axis, Direction, Names};

/// Names of the months.
const MONTHS: [&str; 12] = [
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
];

/// The axis of a figure, and the places of the table's values on it.
pub(super) fn axis(table: &Table, axis: TableAxis, drawing: Drawing) -> (Axis, Vec<f64>) {
    let values = table.along(axis);
    let ends = |pair: [Option<&f64>; 2]| pair.map(|end| end.copied().unwrap_or_default());
    let [first, last] = ends([values.first(), values.last()]);
    let (label, names) = match axis {
        TableAxis::Age => ("Age (kyr before 1950)", Names::Numbers),
        TableAxis::SunLongitude => ("Solar longitude from the March equinox", Names::Degrees),
        TableAxis::Date => ("Day of the year", Names::Numbers),
        TableAxis::Month => {
            let letters = MONTHS.iter().map(|name| name[..1].to_owned());
            ("Month", Names::Cells(letters.collect()))
        }
        TableAxis::Latitude => ("Latitude", Names::Latitudes),
    };
    let (range, places) = match axis {
        TableAxis::Month => ([0.0, 12.0], values.iter().map(|m| m - 0.5).collect()),
        _ => ([first.min(last), first.max(last)], values.to_vec()),
    };
    let direction = match axis {
        TableAxis::Age => drawing.ages,
        _ => Direction::Rising,
    };
    let axis = Axis {
        label: label.to_owned(),
        range,
        direction,
        names,
    };
    (axis, places)
}

/// A value of an axis in words.
pub(super) fn name(axis: TableAxis, value: f64) -> String {
    match axis {
        TableAxis::Age => format!("{value} kyr before 1950"),
        TableAxis::SunLongitude => {
            let named = [
                (0.0, "March equinox"),
                (90.0, "June solstice"),
                (180.0, "September equinox"),
                (270.0, "December solstice"),
            ];
            let known = named.iter().find(|(at, _)| (value - at).abs() < 1e-9);
            known.map_or_else(
                || format!("Sun at {value}°"),
                |(_, name)| (*name).to_owned(),
            )
        }
        TableAxis::Date => {
            let (month, day) = month_and_day(value);
            format!("{day} {}", MONTHS[month - 1])
        }
        TableAxis::Month => {
            let month = MONTHS
                .iter()
                .zip(1..)
                .find(|(_, n)| (f64::from(*n) - value).abs() < 0.5);
            month.map_or_else(String::new, |(name, _)| (*name).to_owned())
        }
        TableAxis::Latitude if value > 0.0 => format!("{value}°N"),
        TableAxis::Latitude if value < 0.0 => format!("{}°S", -value),
        TableAxis::Latitude => "Equator".to_owned(),
    }
}

/// What the figure says about itself: what the table does.
pub(super) fn about(table: &Table) -> About {
    let of = |wanted: &str| {
        let found = table.about.iter().find(|(name, _)| name == wanted);
        found.map_or("", |(_, text)| text.as_str())
    };
    let told = [
        "comment",
        "orbital_solution",
        "not_known",
        "source",
        "history",
    ];
    let texts: Vec<_> = told
        .into_iter()
        .map(of)
        .filter(|text| !text.is_empty())
        .collect();
    About {
        title: of("title").to_owned(),
        description: texts.join("\n"),
    }
}
