//! Land and ocean exchanging heat through a massless air that carries the transport, against the
//! closed form of each mode (two-surface seasonal model in the manner of North & Coakley 1979).
//! Derivation and tolerances: README.md.

use crate::energy_balance_set_up::{amplitude, one_surface, planet, run, sunlight};
use nalgebra::{Complex, Matrix2, Vector2};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::Setting;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Emitter, Params};
use orbicline::units::{SEA_WATER_FREEZING_C, SEA_WATER_HEAT_CAPACITY_J_M3_K, YEAR_SECONDS};
use std::f64::consts::PI;

type Pair = Vector2<Complex<f64>>;

/// c, W m-2 K-1; f; C of the land, J m-2 K-1; depth of the ocean layer, m (all chosen here).
const EXCHANGE: f64 = 12.0;
const LAND: f64 = 0.4;
const LAND_CAPACITY: f64 = 1.0e7;
const DEPTH_M: f64 = 60.0;
/// A, W m-2: low, so that no water freezes.
const OFFSET: f64 = 180.0;
/// B and D, W m-2 K-1, and co-albedo.
const SLOPE: f64 = 2.09;
const DIFFUSIVITY: f64 = 0.649;
const CO_ALBEDO: f64 = 0.697;
/// Q, W m-2, and seasonal parts of the sunlight (North & Coakley 1979, memory).
const Q: f64 = 340.0;
const STEADY_2: f64 = -0.477;
const ANNUAL_1: f64 = -0.796;
const SEMI_ANNUAL_2: f64 = 0.147;

fn two_surfaces() -> Params {
    let mut p = one_surface();
    p.air_shortwave_share = 0.0;
    p.air_heat_capacity_j_m2_k = 0.0;
    p.land_heat_capacity_j_m2_k = LAND_CAPACITY;
    p.longwave.offset_w_m2 = OFFSET;
    p.longwave.emitter = Emitter::Surface;
    p.surface_exchange.sensible_w_m2_k = EXCHANGE;
    p.mixed_layer.depth_m = vec![DEPTH_M];
    p
}

/// Response of land and ocean to co-albedo times sunlight of mode n at frequency k per year.
fn exact(n: usize, k: f64, sunlight: f64) -> Pair {
    let carried = (n * (n + 1)) as f64 * DIFFUSIVITY;
    let passed = EXCHANGE * EXCHANGE / (EXCHANGE + carried);
    let omega = 2.0 * PI * k / YEAR_SECONDS;
    let own = |capacity: f64| Complex::new(SLOPE + EXCHANGE, omega * capacity);
    let (land, ocean) = (passed * LAND, passed * (1.0 - LAND));
    let matrix = Matrix2::new(
        own(LAND_CAPACITY) - land,
        Complex::from(-ocean),
        Complex::from(-land),
        own(SEA_WATER_HEAT_CAPACITY_J_M3_K * DEPTH_M) - ocean,
    );
    let taken = Complex::from(CO_ALBEDO * sunlight);
    matrix.lu().solve(&Vector2::new(taken, taken)).unwrap()
}

/// Fields of land and ocean (degC) at the end of the year when the seasonal sunlight runs
/// `delay` of a period late.
fn fields(setting: &Setting, delay: f64) -> [Vec<f64>; 2] {
    let mut model = EnergyBalance::new(&two_surfaces(), setting).unwrap();
    let swing = |k: f64, t: f64| (2.0 * PI * (k * t - delay)).cos();
    let light = sunlight(setting, &[0, 1, 2], |n, t| match n {
        0 => Q,
        1 => Q * ANNUAL_1 * swing(1.0, t),
        _ => Q * (STEADY_2 + SEMI_ANNUAL_2 * swing(2.0, t)),
    });
    run(&mut model, setting, &light, 80);
    let held = model.ocean_enthalpy_j_m2();
    assert!(held.iter().all(|e| *e > 0.0), "the ocean froze");
    let capacity = SEA_WATER_HEAT_CAPACITY_J_M3_K * DEPTH_M;
    let ocean = held.iter().map(|e| SEA_WATER_FREEZING_C + e / capacity);
    [model.land_temperature_c(), ocean.collect()]
}

/// Errors of land and ocean, K: steady modes 0 and 2, annual mode 1, semi-annual mode 2.
fn errors(steps: usize) -> Vec<(&'static str, [f64; 2])> {
    let setting = planet(24, Spacing::EqualSine, steps, LAND);
    let [now, quarter, half] = [0.0, 0.25, 0.5].map(|delay| fields(&setting, delay));
    let read = |fields: &[Vec<f64>; 2], n| [0, 1].map(|s| amplitude(&setting, &fields[s], n));
    let steady = |n| {
        let (a, b) = (read(&now, n), read(&half, n));
        [0, 1].map(|s| 0.5 * (a[s] + b[s]))
    };
    let swinging = |n: usize, z: Pair| {
        let (a, b, base) = (read(&now, n), read(&quarter, n), steady(n));
        [0, 1].map(|s| (Complex::new(a[s] - base[s], b[s] - base[s]) - z[s]).norm())
    };
    let mean = (CO_ALBEDO * Q - OFFSET) / SLOPE;
    let second = exact(2, 0.0, Q * STEADY_2);
    vec![
        ("mean", steady(0).map(|t| (t - mean).abs())),
        (
            "steady 2",
            [0, 1].map(|s| (steady(2)[s] - second[s].re).abs()),
        ),
        ("annual 1", swinging(1, exact(1, 1.0, Q * ANNUAL_1))),
        (
            "semi-annual 2",
            swinging(2, exact(2, 2.0, Q * SEMI_ANNUAL_2)),
        ),
    ]
}

#[test]
fn analytic_two_surfaces_meet_amplitude_and_phase() {
    for (what, found) in errors(288) {
        for (surface, error) in ["land", "ocean"].iter().zip(found) {
            assert!(error < 2e-4, "{what}, {surface}: {error:e} K");
        }
    }
}

#[test]
fn converges_third_order_in_steps_for_two_surfaces() {
    let (coarse, fine) = (errors(96), errors(192));
    for ((what, a), (_, b)) in coarse.iter().zip(&fine).skip(2) {
        for (surface, s) in [("land", 0), ("ocean", 1)] {
            let order = (a[s] / b[s]).log2();
            assert!(
                order > 2.85,
                "{what}, {surface}: {a:?} {b:?} K, order {order}"
            );
        }
    }
}

#[test]
fn analytic_exchange_of_the_mean_is_that_of_two_surfaces_coupled_directly() {
    // Without transport the massless air leaves nu = c f (1 - f) between land and ocean.
    let nu = EXCHANGE * LAND * (1.0 - LAND);
    let omega = 2.0 * PI / YEAR_SECONDS;
    let water = SEA_WATER_HEAT_CAPACITY_J_M3_K * DEPTH_M;
    let own = |capacity: f64, share: f64| Complex::new(SLOPE + nu / share, omega * capacity);
    let matrix = Matrix2::new(
        own(LAND_CAPACITY, LAND),
        Complex::from(-nu / LAND),
        Complex::from(-nu / (1.0 - LAND)),
        own(water, 1.0 - LAND),
    );
    let taken = Complex::from(CO_ALBEDO * 10.0);
    let direct = matrix.lu().solve(&Vector2::new(taken, taken)).unwrap();
    let through_air = exact(0, 1.0, 10.0);
    assert!((direct - through_air).norm() < 1e-12);
}
