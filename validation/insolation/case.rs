//! Insolation against published and computed tables. Equations and tolerances: README.md.

use orbicline::orbit::elements::Elements;
use orbicline::orbit::insolation::{InsolationTable, daily_mean_w_m2, global_annual_mean_w_m2};
use orbicline::orbit::kepler::sun_longitude_deg;

use crate::csv::{numbers, orbit, published_orbit};

const MONTH_DAYS: [usize; 12] = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
/// Solar constant of the monthly tables, W m-2.
const S0_MONTHLY_W_M2: f64 = 1365.0;
/// Solar constant of the tables at given longitudes, W m-2.
const S0_W_M2: f64 = 1361.0;

/// Means over months of samples on day numbers 1 to 365.
fn monthly(daily: impl Fn(usize) -> f64) -> [f64; 12] {
    let mut day = 0;
    MONTH_DAYS.map(|days| {
        let sum: f64 = (1..=days).map(|n| daily(day + n)).sum();
        day += days;
        sum / days as f64
    })
}

/// Monthly means at a latitude, equinox at day 80 of 365.
fn monthly_w_m2(elements: &Elements, latitude_deg: f64) -> [f64; 12] {
    monthly(|day| {
        let longitude = sun_longitude_deg(elements, (day as f64 - 80.0) / 365.0);
        daily_mean_w_m2(elements, S0_MONTHLY_W_M2, latitude_deg, longitude)
    })
}

/// Largest difference between a monthly table and `computed(latitude)`.
fn largest_error(table: &str, computed: impl Fn(f64) -> [f64; 12]) -> f64 {
    let mut worst = 0.0_f64;
    let rows = numbers(table);
    assert_eq!(rows.len(), 19);
    for row in rows {
        for (month, value) in computed(row[0]).iter().enumerate() {
            worst = worst.max((value - row[month + 1]).abs());
        }
    }
    worst
}

#[test]
fn published_monthly_table_of_the_present() {
    // PMIP1 documentation appendix (R); tolerance 0.015 W/m2: digits printed to 0.01.
    let present = published_orbit(0.0);
    let worst = largest_error(include_str!("pmip1_present.csv"), |lat| {
        monthly_w_m2(&present, lat)
    });
    assert!(worst < 0.015, "{worst}");
}

#[test]
fn published_monthly_table_is_met_by_thin_bands_of_the_table() {
    // The same table (R) through the path that the model runs: bands of 0.02 degrees, 365 steps.
    let rows = numbers(include_str!("pmip1_present.csv"));
    let mut edges: Vec<f64> = rows
        .iter()
        .flat_map(|row| [row[0] - 0.01, row[0] + 0.01])
        .map(|lat| lat.clamp(-90.0, 90.0).to_radians().sin())
        .collect();
    edges.sort_by(f64::total_cmp);
    let mut table = InsolationTable::new(&edges, 365).unwrap();
    table.update(&published_orbit(0.0), S0_MONTHLY_W_M2, 80.0 / 365.0);
    let bands = table.bands();
    for (place, row) in rows.iter().rev().enumerate() {
        let at = |day: usize| table.daily_mean_w_m2[(day - 1) * bands + 2 * place];
        for (month, mean) in monthly(at).iter().enumerate() {
            let error = mean - row[month + 1];
            assert!(error.abs() < 0.015, "{} {month}: {error}", row[0]);
        }
    }
}

#[test]
fn published_table_tells_half_a_day_of_the_equinox() {
    // With the equinox half a day later the same table (R) is missed by 4.4 W/m2 (C).
    let present = published_orbit(0.0);
    let worst = largest_error(include_str!("pmip1_present.csv"), |lat| {
        monthly(|day| {
            let longitude = sun_longitude_deg(&present, (day as f64 - 80.5) / 365.0);
            daily_mean_w_m2(&present, S0_MONTHLY_W_M2, lat, longitude)
        })
    });
    assert!(worst > 1.0, "{worst}");
}

#[test]
fn published_change_of_the_middle_holocene_at_the_north_pole() {
    // PMIP1 documentation appendix, 6 ka minus 0 ka at 90N, March to September (R).
    let printed = [-0.92, -6.82, 4.84, 27.06, 34.52, 11.41, -16.01];
    let then = monthly_w_m2(&published_orbit(6.0), 90.0);
    let now = monthly_w_m2(&published_orbit(0.0), 90.0);
    for (i, value) in printed.iter().enumerate() {
        assert!(
            (then[i + 2] - now[i + 2] - value).abs() < 0.015,
            "month {}",
            i + 3
        );
    }
}

#[test]
fn published_monthly_changes_at_6_and_21_ka() {
    // monthly_*_minus_0ka.csv (C, four decimals).
    for (age, table) in [
        (6.0, include_str!("monthly_6ka_minus_0ka.csv")),
        (21.0, include_str!("monthly_21ka_minus_0ka.csv")),
    ] {
        let (then, now) = (published_orbit(age), published_orbit(0.0));
        let worst = largest_error(table, |lat| {
            let (then, now) = (monthly_w_m2(&then, lat), monthly_w_m2(&now, lat));
            std::array::from_fn(|month| then[month] - now[month])
        });
        assert!(worst < 1e-4, "{age} ka: {worst}");
    }
}

#[test]
fn published_points_of_eight_orbits() {
    // points.csv (C, six decimals).
    let rows = numbers(include_str!("points.csv"));
    assert_eq!(rows.len(), 336);
    for row in rows {
        let got = daily_mean_w_m2(&orbit(row[0], row[1], row[2]), S0_W_M2, row[3], row[4]);
        assert!((got - row[5]).abs() < 2e-6, "{row:?}: {got}");
    }
}

#[test]
fn published_solstices_and_equinoxes_of_eight_orbits() {
    // solstices.csv (C, three decimals).
    let places = [
        (65.0, 0.0),
        (65.0, 90.0),
        (65.0, 180.0),
        (65.0, 270.0),
        (0.0, 90.0),
        (30.0, 90.0),
        (60.0, 90.0),
        (-65.0, 90.0),
    ];
    for row in numbers(include_str!("solstices.csv")) {
        let elements = published_orbit(row[0]);
        for ((latitude, longitude), expected) in places.iter().zip(&row[1..]) {
            let got = daily_mean_w_m2(&elements, S0_W_M2, *latitude, *longitude);
            assert!(
                (got - expected).abs() < 1e-3,
                "{} ka {latitude} {longitude}",
                row[0]
            );
        }
        let global = global_annual_mean_w_m2(elements.eccentricity, S0_W_M2);
        assert!((global - row[9]).abs() < 1e-4);
    }
}

#[test]
fn published_end_members_of_the_elements() {
    // Closed form by a general library (C): June solstice at 65N, 30N and the equator.
    let cases = [
        (orbit(0.0, 24.5, 0.0), [512.055, 494.385, 394.213]),
        (orbit(0.0, 22.0, 0.0), [469.937, 484.828, 401.674]),
        // Perihelion at the June (Sun at 90) and at the December solstice.
        (orbit(0.05, 23.446, 270.0), [547.063, 543.413, 440.389]),
        (orbit(0.05, 23.446, 90.0), [447.823, 444.835, 360.500]),
    ];
    for (elements, expected) in cases {
        for (latitude, value) in [65.0, 30.0, 0.0].iter().zip(expected) {
            let got = daily_mean_w_m2(&elements, S0_W_M2, *latitude, 90.0);
            assert!((got - value).abs() < 1e-3, "{elements:?} {latitude}: {got}");
        }
    }
}

#[test]
fn published_july_at_65n_of_a_later_series() {
    // Berger & Loutre 1991, Quat. Sci. Rev. 10:297: 426.76 W/m2 at 0 ka, longitude 120, S0 1360
    // (M, with the elements below also M; tolerance 0.05).
    let elements = orbit(0.017_236, 23.446, 101.37);
    assert!((daily_mean_w_m2(&elements, 1360.0, 65.0, 120.0) - 426.76).abs() < 0.05);
}

#[test]
fn published_half_day_arc_at_65n_in_june() {
    // 2.76536117 rad (C): recovered from the daily mean of a circular orbit.
    let (sin_lat, cos_lat) = 65.0_f64.to_radians().sin_cos();
    let (sin_dec, cos_dec) = 23.446_f64.to_radians().sin_cos();
    let arc = 2.765_361_17_f64;
    let expected = (arc * sin_lat * sin_dec + cos_lat * cos_dec * arc.sin()) / std::f64::consts::PI;
    let got = daily_mean_w_m2(&orbit(0.0, 23.446, 0.0), 1.0, 65.0, 90.0);
    assert!((got - expected).abs() < 1e-8);
}
