//! Reading of the small reference tables that stand beside the cases.

use orbicline::orbit::elements::{Elements, PerihelionLongitude};

/// Rows of text fields; lines that begin with `#` are comments.
pub(crate) fn fields(text: &str) -> Vec<Vec<&str>> {
    text.lines()
        .filter(|line| !line.starts_with('#') && !line.trim().is_empty())
        .map(|line| line.split(',').map(str::trim).collect())
        .collect()
}

/// Rows of numbers.
pub(crate) fn numbers(text: &str) -> Vec<Vec<f64>> {
    let number = |field: &&str| field.parse().unwrap();
    let row = |row: &Vec<&str>| row.iter().map(number).collect();
    fields(text).iter().map(row).collect()
}

/// An orbit by eccentricity, obliquity and heliocentric longitude of perihelion.
pub(crate) fn orbit(eccentricity: f64, obliquity_deg: f64, heliocentric_deg: f64) -> Elements {
    Elements {
        eccentricity,
        obliquity_deg,
        perihelion: PerihelionLongitude::from_heliocentric_deg(heliocentric_deg),
    }
}

/// The published orbit of an age, as printed.
pub(crate) fn published_orbit(age_kyr: f64) -> Elements {
    let table = fields(include_str!("orbit/published_orbits.csv"));
    let row = table
        .iter()
        .map(|row| {
            row[..4]
                .iter()
                .map(|f| f.parse().unwrap())
                .collect::<Vec<f64>>()
        })
        .find(|row| (row[0] - age_kyr).abs() < 1e-9)
        .unwrap();
    orbit(row[1], row[2], row[3])
}
