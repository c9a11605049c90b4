//! Annual means, their Legendre coefficients, and invariants of insolation. See README.md.

use orbicline::orbit::elements::{Elements, PerihelionLongitude};
use orbicline::orbit::insolation::{
    InsolationTable, annual_mean_w_m2, daily_mean_w_m2, global_annual_mean_w_m2,
};
use orbicline::orbit::kepler::{sun_longitude_deg, years_since_equinox};

use crate::csv::{orbit, published_orbit};

const S0_W_M2: f64 = 1361.0;
const LATITUDES_DEG: [f64; 8] = [0.0, 15.0, 30.0, 45.0, 60.0, 65.0, 75.0, 90.0];

/// Legendre polynomials of degree 0 to 6.
fn legendre(x: f64) -> [f64; 7] {
    let mut p = [1.0, x, 0.0, 0.0, 0.0, 0.0, 0.0];
    for n in 2..7 {
        let order = n as f64;
        p[n] = ((2.0 * order - 1.0) * x * p[n - 1] - (order - 1.0) * p[n - 2]) / order;
    }
    p
}

/// Legendre coefficients 0 to 6 of a distribution over latitude, midpoint rule in latitude.
fn coefficients(value: impl Fn(f64) -> f64) -> [f64; 7] {
    let points = 4000;
    let width = std::f64::consts::PI / f64::from(points);
    let mut sums = [0.0; 7];
    for i in 0..points {
        let latitude = -std::f64::consts::FRAC_PI_2 + (f64::from(i) + 0.5) * width;
        let here = value(latitude.to_degrees()) * latitude.cos() * width;
        for (n, p) in legendre(latitude.sin()).iter().enumerate() {
            sums[n] += (n as f64 + 0.5) * p * here;
        }
    }
    sums
}

/// Composite Simpson rule with an even number of intervals.
fn simpson(from: f64, to: f64, intervals: u32, value: impl Fn(f64) -> f64) -> f64 {
    let step = (to - from) / f64::from(intervals);
    let weight = |i: u32| match (i == 0 || i == intervals, i % 2) {
        (true, _) => 1.0,
        (false, 1) => 4.0,
        _ => 2.0,
    };
    let term = |i: u32| weight(i) * value(from + f64::from(i) * step);
    (0..=intervals).map(term).sum::<f64>() * step / 3.0
}

fn with_sun(eccentricity: f64, obliquity_deg: f64, sun_deg: f64) -> Elements {
    Elements {
        perihelion: PerihelionLongitude::from_sun_longitude_deg(sun_deg),
        ..orbit(eccentricity, obliquity_deg, 0.0)
    }
}

#[test]
fn published_annual_means_and_their_change_with_obliquity() {
    // Elliptic integrals by a general library (C), orbit of 0 ka; five decimals.
    let means = [
        415.586_13, 402.694_19, 365.205_81, 306.946_13, 236.332_57, 213.702_24, 185.637_74,
        172.395_57,
    ];
    let changes = [
        -1.499_32, -1.336_53, -0.830_33, 0.107_73, 1.905_86, 3.142_11, 5.892_68, 6.911_19,
    ];
    let now = published_orbit(0.0);
    let tilted = Elements {
        obliquity_deg: now.obliquity_deg + 1.0,
        ..now
    };
    for ((latitude, mean), change) in LATITUDES_DEG.iter().zip(means).zip(changes) {
        let here = annual_mean_w_m2(&now, S0_W_M2, *latitude);
        assert!((here - mean).abs() < 1e-5, "{latitude}: {here}");
        let more = annual_mean_w_m2(&tilted, S0_W_M2, *latitude) - here;
        assert!((more - change).abs() < 1e-5, "{latitude}: {more}");
    }
}

#[test]
fn converges_mean_over_the_year_to_the_annual_mean_for_every_perihelion() {
    // Invariant i: independent of the perihelion and even in latitude.
    for sun_deg in [0.0, 75.0, 282.0] {
        let elements = with_sun(0.04, 23.5, sun_deg);
        for latitude in [-80.0, -40.0, 0.0, 40.0, 80.0] {
            let steps = 20_000;
            let at = |k: i32| {
                let longitude = sun_longitude_deg(&elements, f64::from(k) / f64::from(steps));
                daily_mean_w_m2(&elements, S0_W_M2, latitude, longitude)
            };
            let mean = (0..steps).map(at).sum::<f64>() / f64::from(steps);
            let expected = annual_mean_w_m2(&elements, S0_W_M2, latitude);
            assert!(
                (mean - expected).abs() < 1e-6,
                "{latitude} {sun_deg}: {mean} {expected}"
            );
            let other = annual_mean_w_m2(&elements, S0_W_M2, -latitude);
            assert!((other - expected).abs() < 1e-10);
        }
    }
}

#[test]
fn analytic_legendre_coefficients_of_the_annual_mean() {
    // s2 = -5/8 P2, s4 = -9/64 P4, s6 = -65/1024 P6 of cos(obliquity): closed form M, numbers C.
    let printed = [
        (23.45, [-0.476_535, -0.044_705, 0.008_104]),
        (22.0, [-0.493_441, -0.054_071, 0.003_055]),
        (24.5, [-0.463_778, -0.037_903, 0.011_453]),
    ];
    for (obliquity, expected) in printed {
        let elements = orbit(0.0, obliquity, 0.0);
        let got = coefficients(|latitude| annual_mean_w_m2(&elements, 4.0, latitude));
        let p = legendre(f64::to_radians(obliquity).cos());
        let closed = [-0.625 * p[2], -9.0 / 64.0 * p[4], -65.0 / 1024.0 * p[6]];
        assert!((got[0] - 1.0).abs() < 1e-6);
        for (i, n) in [2, 4, 6].iter().enumerate() {
            assert!(
                (got[*n] - closed[i]).abs() < 2e-6,
                "{obliquity} {n}: {}",
                got[*n]
            );
            assert!(
                (got[*n] - expected[i]).abs() < 2e-6,
                "{obliquity} {n}: {}",
                got[*n]
            );
        }
    }
}

#[test]
fn analytic_seasonal_modes_of_a_circular_orbit() {
    // Mode 1: 2 sin(obliquity) sin(longitude), 0.795897 at 23.45 (C); mode 2: s2 - 15/16 sin^2 cos 2L
    // (0.148465); mode 3 none; mode 4, part in cos 2L: -0.090777.
    let elements = orbit(0.0, 23.45, 0.0);
    let sine = 23.45_f64.to_radians().sin();
    let at = |longitude: f64| coefficients(|lat| daily_mean_w_m2(&elements, 4.0, lat, longitude));
    let s2 = -0.625 * legendre(23.45_f64.to_radians().cos())[2];
    let mut fourth = 0.0;
    for i in 0..24 {
        let longitude = 15.0 * f64::from(i);
        let (angle, modes) = (longitude.to_radians(), at(longitude));
        assert!((modes[1] - 2.0 * sine * angle.sin()).abs() < 2e-6);
        let second = s2 - 15.0 / 16.0 * sine * sine * (2.0 * angle).cos();
        assert!(
            (modes[2] - second).abs() < 2e-6,
            "{longitude}: {}",
            modes[2]
        );
        assert!(modes[3].abs() < 2e-6);
        fourth += modes[4] * (2.0 * angle).cos() / 12.0;
    }
    assert!((2.0 * sine - 0.795_897).abs() < 1e-6);
    assert!((15.0 / 16.0 * sine * sine - 0.148_465).abs() < 1e-6);
    assert!((fourth + 0.090_777).abs() < 2e-6, "{fourth}");
}

#[test]
fn conserves_energy_between_fixed_longitudes_for_every_perihelion() {
    // Invariant ii (C): 65N, March to September equinox, Y = 365.2422 d.
    let year_s = 365.2422 * 86_400.0;
    let half = |e: f64, sun_deg: f64| {
        let elements = with_sun(e, 23.446, sun_deg);
        let end = years_since_equinox(&elements, 180.0);
        let energy = simpson(0.0, end, 2000, |t| {
            daily_mean_w_m2(&elements, S0_W_M2, 65.0, sun_longitude_deg(&elements, t))
        });
        (energy * year_s, energy / end)
    };
    assert!((half(0.0, 0.0).0 / 5.836_358_02e9 - 1.0).abs() < 2e-9);
    let (mut lowest, mut highest) = (f64::INFINITY, 0.0_f64);
    for i in 0..72 {
        let (energy, mean) = half(0.05, 5.0 * f64::from(i));
        assert!((energy / 5.843_667_18e9 - 1.0).abs() < 2e-9, "{energy}");
        lowest = lowest.min(mean);
        highest = highest.max(mean);
    }
    // The mean over the same half-year is not: perihelion in December and in June give the ends
    // (C, from the energy and Kepler's times), today's perihelion 348.7 (C).
    assert!((lowest - 348.1994).abs() < 1e-3, "{lowest}");
    assert!((highest - 395.5267).abs() < 1e-3, "{highest}");
    assert!((half(0.05, 282.9).1 - 348.7).abs() < 0.05);
}

#[test]
fn analytic_equinox_insolation_does_not_depend_on_obliquity() {
    // Invariant iii (R, abstract of Berger, Loutre & Tricot 1993, J. Geophys. Res. 98:10341).
    for obliquity in [0.0, 22.0, 24.5, 60.0] {
        for longitude in [0.0, 180.0] {
            let got = daily_mean_w_m2(&orbit(0.0, obliquity, 0.0), S0_W_M2, 0.0, longitude);
            assert!((got - 433.219_76).abs() < 1e-5);
            let got = daily_mean_w_m2(&orbit(0.0, obliquity, 0.0), S0_W_M2, 50.0, longitude);
            let expected = S0_W_M2 / std::f64::consts::PI * 50.0_f64.to_radians().cos();
            assert!((got - expected).abs() < 1e-10);
        }
    }
}

#[test]
fn analytic_hemispheres_swap_with_half_a_turn() {
    // Invariant iv: Q(lat, L, perihelion) = Q(-lat, L + 180, perihelion + 180).
    for latitude in [-75.0, -20.0, 0.0, 33.0, 66.6, 90.0] {
        for longitude in [0.0, 40.0, 111.0, 200.0, 350.0] {
            let here = daily_mean_w_m2(&with_sun(0.05, 23.4, 77.0), S0_W_M2, latitude, longitude);
            let there = with_sun(0.05, 23.4, 257.0);
            let there = daily_mean_w_m2(&there, S0_W_M2, -latitude, longitude + 180.0);
            assert!((here - there).abs() < 1e-9);
        }
    }
}

#[test]
fn analytic_eccentricity_changes_the_global_mean_at_second_order() {
    // Invariant v: 1 + e^2/2.
    for e in [1e-3, 1e-2, 0.06] {
        let ratio = global_annual_mean_w_m2(e, S0_W_M2) / (S0_W_M2 / 4.0);
        assert!((ratio - 1.0 - 0.5 * e * e).abs() < e * e * e * e);
    }
}

#[test]
fn published_caloric_half_years_at_65n() {
    // Mean over the brighter half of the year (C, 0.1-day sampling; tolerance 0.1 %).
    for (age, expected) in [(0.0, 366.051), (127.0, 384.396)] {
        let elements = published_orbit(age);
        let at = |k: i32| {
            let longitude = sun_longitude_deg(&elements, f64::from(k) / 3650.0);
            daily_mean_w_m2(&elements, S0_W_M2, 65.0, longitude)
        };
        let mut days: Vec<f64> = (0..3650).map(at).collect();
        days.sort_by(f64::total_cmp);
        let mean = days[1825..].iter().sum::<f64>() / 1825.0;
        assert!((mean / expected - 1.0).abs() < 1e-4, "{age} ka: {mean}");
    }
}

#[test]
fn conserves_the_global_annual_mean_in_the_table() {
    // S0 / (4 sqrt(1 - e^2)) over 36 bands and 72 steps.
    let edges: Vec<f64> = (0..=36)
        .map(|i| (-90.0 + 5.0 * f64::from(i)).to_radians().sin())
        .collect();
    let mut table = InsolationTable::new(&edges, 72).unwrap();
    for age in [0.0, 21.0, 115.0, 127.0] {
        let elements = published_orbit(age);
        table.update(&elements, S0_W_M2, 79.5 / 365.0);
        let annual = table.annual_mean_w_m2();
        let areas = edges.windows(2).map(|e| 0.5 * (e[1] - e[0]));
        let mean: f64 = annual.iter().zip(areas).map(|(q, area)| q * area).sum();
        let expected = global_annual_mean_w_m2(elements.eccentricity, S0_W_M2);
        assert!(
            (mean / expected - 1.0).abs() < 1e-12,
            "{age} ka: {mean} {expected}"
        );
    }
}
