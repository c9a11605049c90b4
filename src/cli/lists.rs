//! Lists of numbers in one argument: `65`, `65,0,-65`, `-90:90:5` (from, to, step), also mixed;
//! longitudes of the Sun also by name, and dates.

use crate::grid::calendar::noon_of_date;

/// Most numbers that one argument may stand for; tuned here.
const MOST: f64 = 100_000.0;

/// Numbers of one argument.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Numbers(pub(super) Vec<f64>);

/// Longitudes of the Sun, degrees.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Longitudes(pub(super) Vec<f64>);

/// Noons of dates, days since 1 January 0 h of the 365-day calendar.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Dates(pub(super) Vec<f64>);

/// Numbers, comma-separated, some of them as from:to:step.
pub(super) fn numbers(text: &str) -> Result<Numbers, String> {
    list(text, number).map(Numbers)
}

/// The same with the names of equinoxes and solstices.
pub(super) fn longitudes(text: &str) -> Result<Longitudes, String> {
    list(text, longitude).map(Longitudes)
}

/// One longitude of the Sun, degrees, or its name.
pub(super) fn longitude(text: &str) -> Result<f64, String> {
    match text {
        "march-equinox" => Ok(0.0),
        "june-solstice" => Ok(90.0),
        "september-equinox" => Ok(180.0),
        "december-solstice" => Ok(270.0),
        _ => number(text).map_err(|problem| {
            format!(
                "{problem}, or march-equinox, june-solstice, september-equinox or december-solstice"
            )
        }),
    }
}

/// Dates as month-day, comma-separated.
pub(super) fn dates(text: &str) -> Result<Dates, String> {
    let date = |part: &str| {
        let numbers = part.split_once('-');
        let numbers = numbers.and_then(|(m, d)| Some((m.parse().ok()?, d.parse().ok()?)));
        numbers
            .and_then(|(month, day)| noon_of_date(month, day))
            .ok_or_else(|| {
                format!("`{part}` is no date of the 365-day calendar; write month-day, as in 06-21")
            })
    };
    let days: Result<_, _> = text.split(',').map(|part| date(part.trim())).collect();
    days.map(Dates)
}

fn number(text: &str) -> Result<f64, String> {
    let value: Result<f64, _> = text.parse();
    match value {
        Ok(value) if value.is_finite() => Ok(value),
        _ => Err(format!("`{text}` is no finite number; write degrees")),
    }
}

fn list(text: &str, one: impl Fn(&str) -> Result<f64, String>) -> Result<Vec<f64>, String> {
    let mut values = Vec::new();
    for part in text.split(',') {
        let ends: Vec<_> = part.split(':').map(str::trim).collect();
        match ends[..] {
            [single] => values.push(one(single)?),
            [from, to, step] => values.extend(range(part, [one(from)?, one(to)?, number(step)?])?),
            _ => return Err(format!("`{part}` is no number and no from:to:step")),
        }
    }
    Ok(values)
}

fn range(part: &str, [from, to, step]: [f64; 3]) -> Result<Vec<f64>, String> {
    let steps = ((to - from) / step + 1e-9).floor();
    if !(0.0..MOST).contains(&steps) {
        return Err(format!(
            "`{part}` leads nowhere, or to more than {MOST} numbers; write from:to:step"
        ));
    }
    // The loop ends before MOST, where whole numbers are exact.
    let mut values = Vec::new();
    let mut n = 0.0;
    while n <= steps {
        values.push(((from + n * step) * 1e9).round() / 1e9);
        n += 1.0;
    }
    Ok(values)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lists_ranges_names_and_dates_are_understood() {
        assert_eq!(numbers("65, 0,-65.5").unwrap().0, [65.0, 0.0, -65.5]);
        assert_eq!(numbers("-10:10:10,80").unwrap().0, [-10.0, 0.0, 10.0, 80.0]);
        assert_eq!(numbers("0:0.3:0.1").unwrap().0, [0.0, 0.1, 0.2, 0.3]);
        assert_eq!(longitudes("june-solstice,10").unwrap().0, [90.0, 10.0]);
        assert_eq!(dates("03-21,6-21").unwrap().0, [79.5, 171.5]);
    }

    #[test]
    fn what_is_not_understood_is_named() {
        for (text, fragment) in [
            ("65N", "`65N` is no finite number"),
            ("0:10", "`0:10`"),
            ("0:10:0", "leads nowhere"),
            ("10:0:1", "leads nowhere"),
            ("0:1:1e-9", "more than 100000"),
            ("inf", "`inf`"),
        ] {
            let message = numbers(text).unwrap_err();
            assert!(message.contains(fragment), "{message}");
        }
        assert!(longitudes("june").unwrap_err().contains("june-solstice"));
        assert!(dates("02-30").unwrap_err().contains("`02-30`"));
        assert!(dates("jan").unwrap_err().contains("06-21"));
    }
}
