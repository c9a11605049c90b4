//! Linear set-ups of the energy balance, driven by sunlight given as Legendre modes.

use orbicline::forcing::YearForcing;
use orbicline::grid::calendar::MonthWeights;
use orbicline::grid::latitude::{LatitudeBands, Spacing};
use orbicline::orbit::elements::{Elements, PerihelionLongitude};
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::Params;
use orbicline::physics::exchange::{Exchange, Surface};
use orbicline::physics::{Component, Setting};

/// The set-up file of the one-surface model.
pub(crate) fn one_surface() -> Params {
    toml::from_str(include_str!("one_surface.toml")).unwrap()
}

/// A planet with the same land fraction everywhere, at sea level.
pub(crate) fn planet(bands: usize, spacing: Spacing, steps_per_year: usize, land: f64) -> Setting {
    let bands = LatitudeBands::new(bands, spacing).unwrap();
    let n = bands.len();
    let surface = Surface {
        land_fraction: vec![land; n],
        land_elevation_m: vec![0.0; n],
        ice_sheet_fraction: vec![0.0; n],
        ocean_area_m2: bands.area_m2().iter().map(|a| a * (1.0 - land)).collect(),
        bands,
    };
    Setting {
        surface,
        months: MonthWeights::new(steps_per_year).unwrap(),
    }
}

/// Mean over a band of the n-th Legendre polynomial, from (2n+1) P_n = P'_{n+1} - P'_{n-1}.
pub(crate) fn mean_legendre(n: usize, low: f64, high: f64) -> f64 {
    if n == 0 {
        return 1.0;
    }
    let integral = |x: f64| (legendre(n + 1, x) - legendre(n - 1, x)) / (2 * n + 1) as f64;
    (integral(high) - integral(low)) / (high - low)
}

/// P_n(x) by the three-term recurrence.
pub(crate) fn legendre(n: usize, x: f64) -> f64 {
    let (mut below, mut here) = (1.0, x);
    if n == 0 {
        return below;
    }
    for k in 1..n {
        (below, here) = (
            here,
            ((2 * k + 1) as f64 * x * here - k as f64 * below) / (k + 1) as f64,
        );
    }
    here
}

/// Sunlight S(x, t) as band means at the end of each step: `share(n, t)` is the n-th Legendre
/// coefficient at time t (fraction of the year), W m-2.
pub(crate) fn sunlight(
    setting: &Setting,
    modes: &[usize],
    share: impl Fn(usize, f64) -> f64,
) -> Vec<f64> {
    let edges = setting.surface.bands.edge_sine();
    let steps = setting.steps_per_year();
    (1..=steps)
        .flat_map(|k| {
            let t = k as f64 / steps as f64;
            let coefficients: Vec<f64> = modes.iter().map(|&n| share(n, t)).collect();
            edges
                .windows(2)
                .map(|x| {
                    modes
                        .iter()
                        .zip(&coefficients)
                        .map(|(&n, c)| c * mean_legendre(n, x[0], x[1]))
                        .sum()
                })
                .collect::<Vec<f64>>()
        })
        .collect()
}

/// Runs `years` years of the same sunlight.
pub(crate) fn run(
    model: &mut EnergyBalance,
    setting: &Setting,
    sunlight: &[f64],
    years: usize,
) -> Exchange {
    let mut exchange = Exchange::new(setting.surface.bands.len());
    run_on(model, &mut exchange, sunlight, years);
    exchange
}

/// The same with a given exchange.
pub(crate) fn run_on(
    model: &mut EnergyBalance,
    exchange: &mut Exchange,
    sunlight: &[f64],
    years: usize,
) {
    let zenith = vec![0.65; sunlight.len()];
    let orbit = Elements {
        eccentricity: 0.0,
        obliquity_deg: 23.45,
        perihelion: PerihelionLongitude::from_heliocentric_deg(0.0),
    };
    let forcing = YearForcing {
        age_kyr: 0.0,
        orbit,
        co2_ppm: 353.0,
        greenhouse_w_m2: 0.0,
        insolation_w_m2: sunlight,
        zenith_cosine: &zenith,
        slow_years: 1.0,
    };
    for _ in 0..years {
        model.advance(&forcing, exchange).unwrap();
    }
}
