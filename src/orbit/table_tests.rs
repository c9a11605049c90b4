//! Tests of the insolation table against quadrature, identities and its own base-target build.

use super::*;
use crate::orbit::elements::PerihelionLongitude;

/// Time of the March equinox, fraction of the year.
const EQUINOX: f64 = 79.5 / 365.0;

fn orbit(eccentricity: f64, obliquity_deg: f64, sun_longitude_deg: f64) -> Elements {
    Elements {
        eccentricity,
        obliquity_deg,
        perihelion: PerihelionLongitude::from_sun_longitude_deg(sun_longitude_deg),
    }
}

/// Bands of equal width in latitude.
fn edges(bands: usize) -> Vec<f64> {
    let latitude = |i: usize| -90.0 + 180.0 * i as f64 / bands as f64;
    (0..=bands)
        .map(|i| latitude(i).to_radians().sin())
        .collect()
}

fn table(bands: usize, steps: usize, elements: &Elements) -> InsolationTable {
    let mut table = InsolationTable::new(&edges(bands), steps).unwrap();
    table.update(elements, 1361.0, EQUINOX);
    table
}

/// Integrals of cos z and cos^2 z over half a day at a point.
fn half_day_integrals(x: f64, season: Season) -> [f64; 2] {
    let p = x * season.sine;
    let q = (1.0 - x * x).sqrt() * season.cosine;
    let h = (-p / q).clamp(-1.0, 1.0).acos();
    let squares =
        (p * p + 0.5 * q * q) * h + 2.0 * p * q * h.sin() + 0.25 * q * q * (2.0 * h).sin();
    [p * h + q * h.sin(), squares]
}

#[test]
fn analytic_band_means_agree_with_quadrature_in_latitude() {
    let elements = orbit(0.04, 23.9, 250.0);
    let table = table(18, 24, &elements);
    let edges = edges(18);
    let points = 20_000;
    for (step, season) in table.seasons.iter().enumerate() {
        for band in 0..18 {
            let width = (edges[band + 1] - edges[band]) / f64::from(points);
            let mut sums = [0.0; 2];
            for i in 0..points {
                let x = edges[band] + (f64::from(i) + 0.5) * width;
                let at_point = half_day_integrals(x, *season);
                sums[0] += at_point[0];
                sums[1] += at_point[1];
            }
            let at = step * 18 + band;
            let mean = season.flux_w_m2 * sums[0] / f64::from(points);
            let error = table.daily_mean_w_m2[at] - mean;
            assert!(error.abs() < 2e-4, "step {step} band {band}: {error:e}");
            // In a band that the Sun only grazes the midpoint rule itself is poor.
            if mean > 0.05 {
                let error = table.zenith_cosine[at] - sums[1] / sums[0];
                assert!(error.abs() < 2e-6, "step {step} band {band}: {error:e}");
            } else {
                assert!((0.0..0.06).contains(&table.zenith_cosine[at]));
            }
        }
    }
}

#[test]
fn analytic_thin_bands_agree_with_the_closed_forms_at_a_point() {
    // Curvature at the terminator leaves 1.1e-6 W m-2; it falls with the square of the width.
    let width = 1e-5;
    let places: Vec<f64> = (-97..=97).map(|i| f64::from(i) / 98.0).collect();
    let thin: Vec<f64> = places
        .iter()
        .flat_map(|x| [x - width / 2.0, x + width / 2.0])
        .collect();
    let elements = orbit(0.04, 23.9, 250.0);
    let mut table = InsolationTable::new(&thin, 24).unwrap();
    table.update(&elements, 1361.0, EQUINOX);
    for step in 0..24 {
        let years = f64::from(step + 1) / 24.0 - EQUINOX;
        let longitude = crate::orbit::kepler::sun_longitude_deg(&elements, years);
        for (place, x) in places.iter().enumerate() {
            let step = usize::try_from(step).unwrap();
            let at = step * table.bands() + 2 * place;
            let latitude = x.asin().to_degrees();
            let point =
                crate::orbit::insolation::daily_mean_w_m2(&elements, 1361.0, latitude, longitude);
            let error = table.daily_mean_w_m2[at] - point;
            assert!(error.abs() < 2e-6, "step {step} x {x}: {error:e}");
            let [sunlight, squares] = half_day_integrals(*x, table.seasons[step]);
            if point > 1.0 {
                let error = table.zenith_cosine[at] - squares / sunlight;
                assert!(error.abs() < 1e-6, "step {step} x {x}: {error:e}");
            }
        }
    }
}

#[test]
fn conserves_the_flux_on_the_disc_at_every_step_and_over_the_year() {
    for elements in [
        orbit(0.0, 23.4, 0.0),
        orbit(0.0167, 23.44, 282.9),
        orbit(0.06, 24.5, 100.0),
    ] {
        let table = table(36, 72, &elements);
        let edges = edges(36);
        let area = |band: usize| 0.5 * (edges[band + 1] - edges[band]);
        for (row, season) in table.daily_mean_w_m2.chunks(36).zip(&table.seasons) {
            let mean: f64 = row.iter().enumerate().map(|(b, q)| area(b) * q).sum();
            let disc = season.flux_w_m2 * PI / 4.0;
            assert!((mean / disc - 1.0).abs() < 2e-14);
        }
        let annual = table.annual_mean_w_m2();
        let mean: f64 = annual.iter().enumerate().map(|(b, q)| area(b) * q).sum();
        let e = elements.eccentricity;
        let expected = 1361.0 / 4.0 / (1.0 - e * e).sqrt();
        assert!((mean / expected - 1.0).abs() < 1e-13, "{mean} {expected}");
    }
}

#[test]
fn analytic_polar_night_is_exactly_dark_and_polar_day_follows_the_declination() {
    // Obliquity 23.4, June solstice: the northernmost band has polar day, the southernmost night.
    let mut table = InsolationTable::new(&edges(36), 4).unwrap();
    table.update(&orbit(0.0, 23.4, 0.0), 1361.0, 0.0);
    let sine = 23.4_f64.to_radians().sin();
    let north = 1361.0 * sine * 0.5 * (1.0 + 85.0_f64.to_radians().sin());
    assert!((table.daily_mean_w_m2[35] - north).abs() < 1e-9);
    assert!(table.daily_mean_w_m2[0].abs() < f64::MIN_POSITIVE);
    assert!(table.zenith_cosine[0].abs() < f64::MIN_POSITIVE);
}

#[test]
fn analytic_mirrored_orbit_swaps_the_hemispheres_at_the_other_equinox() {
    // Q(x, longitude, perihelion) = Q(-x, longitude + 180, perihelion + 180).
    let (here, there) = (orbit(0.05, 23.0, 40.0), orbit(0.05, 23.0, 220.0));
    let mut at_spring = InsolationTable::new(&edges(36), 1).unwrap();
    at_spring.update(&here, 1361.0, 1.0);
    let mut at_autumn = InsolationTable::new(&edges(36), 1).unwrap();
    let half_year = crate::orbit::kepler::years_since_equinox(&there, 180.0);
    at_autumn.update(&there, 1361.0, 1.0 - half_year);
    for band in 0..36 {
        let q = at_spring.daily_mean_w_m2[band] - at_autumn.daily_mean_w_m2[35 - band];
        let z = at_spring.zenith_cosine[band] - at_autumn.zenith_cosine[35 - band];
        assert!(q.abs() < 1e-9 && z.abs() < 1e-9, "{band}: {q:e} {z:e}");
    }
}

#[test]
fn analytic_extreme_orbits_and_uneven_bands_stay_finite() {
    let x = [-1.0, -0.999_999_999_999, -0.3, 0.0, 1e-9, 0.917_754_6, 1.0];
    for obliquity in [0.0, 1e-9, 23.45, 66.6, 90.0] {
        for e in [0.0, 0.3, 0.95] {
            let mut table = InsolationTable::new(&x, 36).unwrap();
            table.update(&orbit(e, obliquity, 90.0), 1361.0, 0.0);
            for (q, z) in table.daily_mean_w_m2.iter().zip(&table.zenith_cosine) {
                assert!(
                    q.is_finite() && *q >= 0.0 && (0.0..=1.0).contains(z),
                    "{q} {z}"
                );
            }
        }
    }
}

#[test]
fn regress_wide_and_base_instructions_give_the_same_bits() {
    let elements = orbit(0.045, 24.1, 310.0);
    let wide = table(37, 73, &elements);
    let mut base = InsolationTable::new(&edges(37), 73).unwrap();
    base.place_sun(&elements, 1361.0, EQUINOX);
    Fill { table: &mut base }.run();
    let bits = |values: &[f64]| values.iter().map(|v| v.to_bits()).collect::<Vec<_>>();
    assert_eq!(bits(&wide.daily_mean_w_m2), bits(&base.daily_mean_w_m2));
    assert_eq!(bits(&wide.zenith_cosine), bits(&base.zenith_cosine));
}

#[test]
fn regress_layouts_without_meaning_are_refused() {
    let refused = |edges: &[f64], steps| InsolationTable::new(edges, steps).unwrap_err();
    assert_eq!(refused(&[0.0], 4), TableError::TooFewEdges { count: 1 });
    assert!(matches!(
        refused(&[0.0, f64::NAN], 4),
        TableError::BadEdge { index: 1, .. }
    ));
    assert!(matches!(
        refused(&[0.0, 0.0], 4),
        TableError::BadEdge { index: 1, .. }
    ));
    assert_eq!(refused(&[-1.0, 1.0], 0), TableError::NoSteps);
}

#[test]
fn analytic_mirrored_edges_give_the_bits_of_edges_taken_one_by_one() {
    for bands in [2, 4, 6, 12, 36, 72] {
        for sun in [10.0, 100.0, 283.0] {
            let elements = orbit(0.05, 24.1, sun);
            let mirrored = table(bands, 48, &elements);
            assert!(matches!(mirrored.edges, Edges::Mirrored { .. }), "{bands}");
            let mut single = mirrored.clone();
            single.edges = Edges::All(edges(bands).chunks(WIDTH).map(edge_block).collect());
            single.update(&elements, 1361.0, EQUINOX);
            let bits = |t: &InsolationTable| -> Vec<u64> {
                let all = t.daily_mean_w_m2.iter().chain(&t.zenith_cosine);
                all.map(|v| v.to_bits()).collect()
            };
            assert_eq!(bits(&mirrored), bits(&single), "{bands} bands");
        }
    }
    assert!(matches!(Edges::of(&[-0.5, 0.0, 0.6]), Edges::All(_)));
}
