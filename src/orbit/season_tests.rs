use super::*;
use crate::orbit::elements::PerihelionLongitude;

fn orbit(eccentricity: f64, obliquity_deg: f64, heliocentric_deg: f64) -> Elements {
    Elements {
        eccentricity,
        obliquity_deg,
        perihelion: PerihelionLongitude::from_heliocentric_deg(heliocentric_deg),
    }
}

#[test]
fn published_energy_of_the_summer_half_at_65_north() {
    // Sampled sums with a general library: 5.84366718e9 J/m2 at e = 0.05 for every perihelion,
    // 5.83635802e9 at e = 0 (obliquity 23.446, S0 = 1361, 365.2422 d); their mean over the time ran
    // from 348.7 to 395.5 W/m2 for the perihelia that were sampled; here for every 10 degrees.
    let joule = |o: &Elements| {
        let part = part_between(o, 1361.0, 65.0, 0.0, 180.0);
        part.energy_per_year_w_m2 * YEAR_DAYS * 86_400.0
    };
    let (mut low, mut high) = (f64::INFINITY, 0.0_f64);
    for perihelion in (0..36).map(|k| 10.0 * f64::from(k)) {
        let o = orbit(0.05, 23.446, perihelion);
        assert!(
            (joule(&o) / 5.843_667_18e9 - 1.0).abs() < 1e-8,
            "{}",
            joule(&o)
        );
        let mean = part_between(&o, 1361.0, 65.0, 0.0, 180.0).mean_w_m2();
        (low, high) = (low.min(mean), high.max(mean));
    }
    let circle = joule(&orbit(0.0, 23.446, 0.0));
    assert!((circle / 5.836_358_02e9 - 1.0).abs() < 1e-8, "{circle}");
    let ratio = joule(&orbit(0.05, 23.446, 77.0)) / circle;
    assert!((ratio - 1.0 / (1.0 - 0.05_f64 * 0.05).sqrt()).abs() < 1e-12);
    assert!(
        (348.0..348.75).contains(&low) && (395.45..396.0).contains(&high),
        "{low} {high}"
    );
}

#[test]
fn analytic_parts_add_up_to_the_annual_mean() {
    let o = orbit(0.04, 23.9, 200.0);
    for latitude in [-90.0, -66.2, -30.0, 0.0, 45.0, 66.1, 75.0, 90.0] {
        let annual = annual_mean_w_m2(&o, 1361.0, latitude);
        let bounds = [0.0, 37.0, 111.0, 275.0, 360.0];
        let parts: Vec<_> = bounds
            .windows(2)
            .map(|b| part_between(&o, 1361.0, latitude, b[0], b[1]))
            .collect();
        let energy: f64 = parts.iter().map(|p| p.energy_per_year_w_m2).sum();
        let share: f64 = parts.iter().map(|p| p.share).sum();
        assert!(
            (energy - annual).abs() < 1e-10,
            "{latitude}: {energy} {annual}"
        );
        assert!((share - 1.0).abs() < 1e-14);
        let whole = part_between(&o, 1361.0, latitude, 123.0, 123.0);
        assert!((whole.mean_w_m2() - annual).abs() < 1e-10, "{latitude}");
        // Over the turn of the year as over its middle.
        let turn = part_between(&o, 1361.0, latitude, 275.0, 37.0);
        let two = parts[3].energy_per_year_w_m2 + parts[0].energy_per_year_w_m2;
        assert!(
            (turn.energy_per_year_w_m2 - two).abs() < 1e-10,
            "{latitude}"
        );
    }
}

/// Half-years by sorting equally long days, as they are defined.
fn sorted_halves(o: &Elements, latitude: f64, days: usize) -> [f64; 2] {
    let day = |k: usize| {
        let longitude = crate::orbit::kepler::sun_longitude_deg(o, (k as f64 + 0.5) / days as f64);
        daily_mean_w_m2(o, 1361.0, latitude, longitude)
    };
    let mut values: Vec<_> = (0..days).map(day).collect();
    values.sort_by(|a, b| b.total_cmp(a));
    let mean = |part: &[f64]| part.iter().sum::<f64>() / part.len() as f64;
    [mean(&values[..days / 2]), mean(&values[days / 2..])]
}

#[test]
fn published_caloric_half_years_at_65_north() {
    // 366.051 and 384.396 W/m2 by sampling every tenth of a day, tolerance 0.1 %.
    for (o, expected) in [
        (orbit(0.016_724, 23.446, 102.04), 366.051),
        (orbit(0.039_378, 24.040, 275.41), 384.396),
    ] {
        let halves = caloric_halves(&o, 1361.0, 65.0);
        assert!((halves.summer_w_m2 / expected - 1.0).abs() < 1e-3);
        assert!((halves.summer_w_m2 - expected).abs() < 0.01, "{halves:?}");
    }
}

#[test]
fn analytic_caloric_half_years_are_those_of_sorted_days() {
    for o in [
        orbit(0.05, 22.1, 10.0),
        orbit(0.016_724, 23.446, 102.04),
        orbit(0.0, 24.5, 0.0),
    ] {
        for latitude in [-90.0, -80.0, -40.0, -3.0, 0.0, 2.0, 20.0, 65.0, 88.0, 90.0] {
            let halves = caloric_halves(&o, 1361.0, latitude);
            let [summer, winter] = sorted_halves(&o, latitude, 40_000);
            assert!(
                (halves.summer_w_m2 - summer).abs() < 2e-4,
                "{o:?} {latitude}: {halves:?}, {summer}"
            );
            assert!(
                (halves.winter_w_m2 - winter).abs() < 2e-4,
                "{o:?} {latitude}"
            );
        }
    }
}

#[test]
fn analytic_bounds_of_the_summer_half() {
    let o = orbit(0.0, 23.446, 0.0);
    let [begin, end] = caloric_halves(&o, 1361.0, 50.0).summer_deg.unwrap();
    assert!(
        begin.abs() < 1e-4 || (begin - 360.0).abs() < 1e-4,
        "{begin}"
    );
    assert!((end - 180.0).abs() < 1e-4, "{end}");
    let [begin, end] = caloric_halves(&o, 1361.0, -50.0).summer_deg.unwrap();
    let to_equinox = end.min(360.0 - end);
    assert!(
        (begin - 180.0).abs() < 1e-4 && to_equinox < 1e-4,
        "{begin} {end}"
    );
    assert!(caloric_halves(&o, 1361.0, 0.0).summer_deg.is_none());
    // Perihelion in June: the sun shines on the North Pole for less than half of the year.
    let short = caloric_halves(&orbit(0.05, 23.4, 270.0), 1361.0, 90.0);
    assert!(
        short.summer_deg.is_none() && short.winter_w_m2 < 1e-9,
        "{short:?}"
    );
}

#[test]
fn analytic_a_planet_without_seasons_has_equal_halves() {
    let o = orbit(0.0, 0.0, 0.0);
    let halves = caloric_halves(&o, 1361.0, 30.0);
    assert!(
        (halves.summer_w_m2 - halves.winter_w_m2).abs() < 1e-9,
        "{halves:?}"
    );
}
