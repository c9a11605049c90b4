//! Seasonal cycle and decay of single modes against closed forms. See README.md.

use crate::energy_balance_set_up::{amplitude, mode, one_surface, planet, run, sunlight};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, Params, Transport};
use orbicline::units::{YEAR_DAYS, YEAR_SECONDS};
use std::f64::consts::PI;

/// B and D of North 1975, W m-2 K-1 (memory).
const SLOPE: f64 = 1.45;
const DIFFUSIVITY: f64 = 0.4495;
/// The listed numbers count years of 365.25 days.
const LISTED_YEAR_DAYS: f64 = 365.25;

/// One surface without mean sunlight or offset, on 60 m of water.
fn swinging() -> Params {
    let mut p = one_surface();
    p.longwave.offset_w_m2 = 0.0;
    p.longwave.slope_w_m2_k = SLOPE;
    p.transport = Transport::Diffusion {
        diffusivity_w_m2_k: DIFFUSIVITY,
        second_legendre_share: 0.0,
        relative_humidity: 0.0,
    };
    // omega C as in the listed numbers.
    p.air_heat_capacity_j_m2_k = 1025.0 * 3990.0 * 60.0 * YEAR_DAYS / LISTED_YEAR_DAYS;
    if let Albedo::IceLine { free, .. } = &mut p.albedo {
        *free = 0.30;
    }
    p
}

/// Complex response Z of mode n to sunlight 340 S cos(2 pi k t): T = Re(Z exp(2 pi i k t)).
fn response(steps: usize, n: usize, k: f64, share: f64) -> [f64; 2] {
    let setting = planet(12, Spacing::EqualSine, steps, 0.0);
    [0.0, 0.25].map(|delay| {
        let mut model = EnergyBalance::new(&swinging(), &setting).unwrap();
        model.set_air_temperature_c(&[0.0; 12]);
        let light = sunlight(&setting, &[n], |_, t| {
            340.0 * share * (2.0 * PI * (k * t - delay)).cos()
        });
        run(&mut model, &setting, &light, 100);
        amplitude(&setting, &model.air_temperature_c(), n)
    })
}

/// Q a S / (n(n+1) D + B + i k omega C).
fn exact_response(n: usize, k: f64, share: f64) -> [f64; 2] {
    let held = (n * (n + 1)) as f64 * DIFFUSIVITY + SLOPE;
    let swing = k * 2.0 * PI / YEAR_SECONDS * swinging().air_heat_capacity_j_m2_k;
    let size = 340.0 * 0.7 * share / (held * held + swing * swing);
    [size * held, -size * swing]
}

#[test]
fn analytic_seasonal_amplitude_and_lag() {
    // Listed numbers: C.
    let [re, im] = response(192, 1, 1.0, 0.796);
    let (size, lag) = (re.hypot(im), (-im).atan2(re).to_degrees());
    assert!((size - 3.873_15).abs() < 5e-5, "annual amplitude {size:.6}");
    assert!((lag - 87.2474).abs() < 2e-3, "annual lag {lag:.5} deg");
    let [re, im] = response(192, 2, 2.0, 0.147);
    let (size, lag) = (re.hypot(im), (-im).atan2(re).to_degrees());
    let days = lag / 720.0 * LISTED_YEAR_DAYS;
    assert!((size - 0.357_73).abs() < 5e-5, "semi-annual {size:.6}");
    assert!((days - 44.423).abs() < 3e-3, "semi-annual lag {days:.5} d");
}

#[test]
fn converges_third_order_in_steps_for_the_seasonal_cycle() {
    for (n, k, share) in [(1, 1.0, 0.796), (2, 2.0, 0.147)] {
        let [re, im] = exact_response(n, k, share);
        let errors = [24, 48, 96, 192].map(|steps| {
            let z = response(steps, n, k, share);
            (z[0] - re).hypot(z[1] - im)
        });
        let orders: Vec<f64> = errors.windows(2).map(|e| (e[0] / e[1]).log2()).collect();
        assert!(
            orders[1] > 2.9 && orders[2] > 2.9,
            "mode {n}: orders {orders:.3?}, errors {errors:?} K"
        );
    }
}

#[test]
fn analytic_single_modes_decay_with_their_relaxation_times() {
    let setting = planet(288, Spacing::EqualSine, 96, 0.0);
    let dark = sunlight(&setting, &[0], |_, _| 0.0);
    // Years of 365.25 days (C).
    let listed = [(0, 5.362_61), (1, 3.310_25), (2, 1.875_04), (4, 0.744_81)];
    for (n, tau) in listed {
        let mut model = EnergyBalance::new(&swinging(), &setting).unwrap();
        model.set_air_temperature_c(&mode(&setting, n));
        // The first year forgets the start at rest.
        run(&mut model, &setting, &dark, 1);
        let before = amplitude(&setting, &model.air_temperature_c(), n);
        run(&mut model, &setting, &dark, 1);
        let after = amplitude(&setting, &model.air_temperature_c(), n);
        let found = 1.0 / (before / after).ln();
        assert!(
            (found / tau - 1.0).abs() < 2e-5,
            "mode {n}: {found:.6} yr, exact {tau}"
        );
    }
}
