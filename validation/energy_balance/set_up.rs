//! Set-ups of the energy balance, driven by sunlight given as Legendre modes, and how fields on
//! bands are read: amplitude of a mode, value at a latitude.

use orbicline::config::run::Experiment;
use orbicline::forcing::YearForcing;
use orbicline::grid::calendar::Calendar;
use orbicline::grid::calendar::MonthWeights;
use orbicline::grid::latitude::{LatitudeBands, Spacing};
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::Params;
use orbicline::physics::exchange::{Exchange, Surface};
use orbicline::physics::{Component, Setting};
use std::path::Path;

use crate::csv::orbit;

/// Steps a year where only the steady state matters.
pub(crate) const FEW_STEPS: usize = 24;

/// The set-up file of the one-surface model.
pub(crate) fn one_surface() -> Params {
    toml::from_str(include_str!("one_surface.toml")).unwrap()
}

/// The reference configuration with edits.
pub(crate) fn reference(edits: &[String]) -> Experiment {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml");
    Experiment::load(&file, edits).unwrap()
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

/// `P_n(x)` by the three-term recurrence.
pub(crate) fn legendre(n: usize, x: f64) -> f64 {
    let (mut below, mut here) = (1.0, x);
    if n == 0 {
        return below;
    }
    for k in 1..n {
        let k_f = k as f64;
        (below, here) = (
            here,
            ((2.0 * k_f + 1.0) * x * here - k_f * below) / (k_f + 1.0),
        );
    }
    here
}

/// Mean of `P_n` between two x, from `(2n+1) P_n = P'_{n+1} - P'_{n-1}`.
pub(crate) fn mean_legendre(n: usize, low: f64, high: f64) -> f64 {
    if n == 0 {
        return 1.0;
    }
    let integral = |x: f64| (legendre(n + 1, x) - legendre(n - 1, x)) / (2 * n + 1) as f64;
    (integral(high) - integral(low)) / (high - low)
}

/// Band means of `P_n`.
pub(crate) fn mode(setting: &Setting, n: usize) -> Vec<f64> {
    let edges = setting.surface.bands.edge_sine();
    edges
        .windows(2)
        .map(|x| mean_legendre(n, x[0], x[1]))
        .collect()
}

/// Amplitude of `P_n` in a field by least squares on the band means; exact for a single mode.
pub(crate) fn amplitude(setting: &Setting, field: &[f64], n: usize) -> f64 {
    let (mut field_by_mode, mut mode_squared) = (0.0, 0.0);
    let area = setting.surface.bands.area_m2();
    for ((a, v), m) in area.iter().zip(field).zip(mode(setting, n)) {
        field_by_mode += a * v * m;
        mode_squared += a * m * m;
    }
    field_by_mode / mode_squared
}

/// Value at a latitude on bands equal in latitude: cubic through the four nearest centres, the
/// field continued over the poles by its mirror image along the meridian.
pub(crate) fn at_latitude(field: &[f64], latitude_deg: f64) -> f64 {
    let n = field.len();
    let place = (latitude_deg + 90.0) / 180.0 * n as f64 - 0.5;
    let value = |k: i64| {
        let last = i64::try_from(n).unwrap() - 1;
        let inside = if k < 0 {
            -1 - k
        } else if k > last {
            2 * last + 1 - k
        } else {
            k
        };
        field[usize::try_from(inside).unwrap()]
    };
    #[expect(clippy::cast_possible_truncation, reason = "a band number")]
    let first = place.floor() as i64 - 1;
    (0..4)
        .map(|j| {
            let weight: f64 = (0..4)
                .filter(|&m| m != j)
                .map(|m| (place - (first + m) as f64) / (j - m) as f64)
                .product();
            weight * value(first + j)
        })
        .sum()
}

/// Sunlight S(x, t) as band means at the end of each step: `share(n, t)` is the n-th Legendre
/// coefficient at time t (fraction of the year), W m-2.
pub(crate) fn sunlight(
    setting: &Setting,
    modes: &[usize],
    share: impl Fn(usize, f64) -> f64,
) -> Vec<f64> {
    let shapes: Vec<Vec<f64>> = modes.iter().map(|&n| mode(setting, n)).collect();
    let steps = setting.steps_per_year();
    let mut light = Vec::with_capacity(steps * setting.surface.bands.len());
    for k in 1..=steps {
        let t = k as f64 / steps as f64;
        let shares: Vec<f64> = modes.iter().map(|&n| share(n, t)).collect();
        light.extend((0..setting.surface.bands.len()).map(|i| {
            let terms = shapes.iter().zip(&shares);
            terms.map(|(shape, c)| c * shape[i]).sum::<f64>()
        }));
    }
    light
}

/// Runs years of the same sunlight on a given exchange, with the sun at the height at which the
/// albedo of water is its mean.
pub(crate) fn run_on(
    model: &mut EnergyBalance,
    exchange: &mut Exchange,
    light: &[f64],
    years: usize,
) {
    run_with(
        model,
        exchange,
        (light, &vec![0.65; light.len()]),
        0.0,
        years,
    );
}

/// The same with zenith cosines and a greenhouse forcing, W m-2.
pub(crate) fn run_with(
    model: &mut EnergyBalance,
    exchange: &mut Exchange,
    (insolation_w_m2, zenith_cosine): (&[f64], &[f64]),
    greenhouse_w_m2: f64,
    years: usize,
) {
    let forcing = YearForcing {
        age_kyr: 0.0,
        orbit: orbit(0.0, 23.45, 0.0),
        co2_ppm: 353.0,
        greenhouse_w_m2,
        land_ice_edge_deg: None,
        insolation_w_m2,
        zenith_cosine,
        month_bounds: Calendar.month_bounds_fraction(),
        slow_years: 1.0,
    };
    for _ in 0..years {
        model.advance(&forcing, exchange).unwrap();
    }
}

/// Runs years of the same sunlight without neighbours.
pub(crate) fn run(
    model: &mut EnergyBalance,
    setting: &Setting,
    light: &[f64],
    years: usize,
) -> Exchange {
    let mut exchange = Exchange::new(setting.surface.bands.len());
    run_on(model, &mut exchange, light, years);
    exchange
}

/// Steady air temperature (degC) under sunlight Q (1 + s2 P2), and what the year told. The air
/// is given no heat capacity: the first step then is the steady state.
pub(crate) fn steady(p: &Params, setting: &Setting, q: f64, s2: f64) -> (Vec<f64>, Exchange) {
    let p = Params {
        air_heat_capacity_j_m2_k: 0.0,
        ..p.clone()
    };
    let mut model = EnergyBalance::new(&p, setting).unwrap();
    let light = sunlight(setting, &[0, 2], |n, _| if n == 0 { q } else { q * s2 });
    let exchange = run(&mut model, setting, &light, 1);
    (model.air_temperature_c(), exchange)
}

/// Largest absolute value.
pub(crate) fn largest(values: impl IntoIterator<Item = f64>) -> f64 {
    values.into_iter().fold(0.0, |m, v| v.abs().max(m))
}
