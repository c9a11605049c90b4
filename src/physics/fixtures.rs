//! What the tests of the components share: a planet, a year, noise.

use super::exchange::Surface;
use crate::forcing::YearForcing;
use crate::grid::calendar::Calendar;
use crate::grid::latitude::{LatitudeBands, Spacing};
use crate::orbit::elements::{Elements, PerihelionLongitude};

/// Land fraction of 10-degree bands, 90S to 90N (global 30-second relief; shelves as land).
const LAND: [f64; 18] = [
    1.0, 0.8, 0.086, 0.009, 0.032, 0.114, 0.232, 0.221, 0.237, 0.228, 0.263, 0.377, 0.429, 0.523,
    0.571, 0.709, 0.306, 0.1,
];

/// An Earth-like surface of `bands` bands.
pub(crate) fn surface(bands: usize) -> Surface {
    let bands = LatitudeBands::new(bands, Spacing::EqualLatitude).unwrap();
    let land_fraction = bands.remap_equal_latitude(&LAND);
    let ocean_area_m2 = land_fraction
        .iter()
        .zip(bands.area_m2())
        .map(|(f, a)| (1.0 - f) * a)
        .collect();
    let none = vec![0.0; bands.len()];
    Surface {
        land_fraction,
        land_elevation_m: none.clone(),
        ice_sheet_fraction: none,
        ocean_area_m2,
        bands,
    }
}

/// A year in which slow components advance `slow_years`.
pub(crate) fn year(slow_years: f64) -> YearForcing<'static> {
    YearForcing {
        age_kyr: 0.0,
        orbit: Elements {
            eccentricity: 0.0,
            obliquity_deg: 23.25,
            perihelion: PerihelionLongitude::from_heliocentric_deg(0.0),
        },
        co2_ppm: 280.0,
        greenhouse_w_m2: 0.0,
        land_ice_edge_deg: None,
        insolation_w_m2: &[],
        zenith_cosine: &[],
        month_bounds: Calendar.month_bounds_fraction(),
        slow_years,
    }
}

/// Reproducible noise in (-0.5, 0.5) (linear congruence with Knuth's multiplier).
pub(crate) struct Noise(pub(crate) u64);

impl Noise {
    pub(crate) fn next(&mut self) -> f64 {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / 9_007_199_254_740_992.0 - 0.5
    }
}

/// The table of a component in the reference configuration.
pub(crate) fn reference<T: serde::de::DeserializeOwned>(component: &str) -> T {
    let tree: toml::Table = include_str!("../../configs/reference.toml")
        .parse()
        .unwrap();
    tree["physics"][component].clone().try_into().unwrap()
}
