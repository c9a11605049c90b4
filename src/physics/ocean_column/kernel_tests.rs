//! Closed forms of the vertical kernel.

use super::mixing::{Column, Face, Sources, steady_profile};
use super::params::AdvectionScheme::{self, ExponentialFit, Upwind};
use crate::grid::column::ColumnLevels;

/// Munk 1966, as a textbook gives it: 1.2 cm a day and 1.3e-4 m2/s.
const UPWELLING_M_S: f64 = 0.012 / 86_400.0;
const DIFFUSIVITY_M2_S: f64 = 1.3e-4;
const DEPTH_M: f64 = 4000.0;

/// Temperature between 0 at the bottom and 1 at the top, computed from the closed form
/// (e^{-z w/k} - e^{-H w/k})/(1 - e^{-H w/k}).
fn munk(z: f64) -> f64 {
    let scale = DIFFUSIVITY_M2_S / UPWELLING_M_S;
    let floor = (-DEPTH_M / scale).exp();
    ((-z / scale).exp() - floor) / (1.0 - floor)
}

/// Levels of almost equal thickness.
fn even(count: usize) -> ColumnLevels {
    ColumnLevels::new(count, DEPTH_M, 0.9999 * DEPTH_M / count as f64).unwrap()
}

fn solve(levels: &ColumnLevels, scheme: AdvectionScheme) -> Vec<f64> {
    steady_profile(
        levels,
        scheme,
        UPWELLING_M_S,
        |_| DIFFUSIVITY_M2_S,
        [1.0, 0.0],
    )
}

/// Cubic through the four level middles around `z`.
fn cubic(levels: &ColumnLevels, values: &[f64], z: f64) -> f64 {
    let m = levels.middle_m();
    let k = m.partition_point(|v| *v < z).clamp(2, m.len() - 2) - 2;
    (k..k + 4)
        .map(|i| {
            let others = (k..k + 4).filter(|j| *j != i);
            values[i] * others.map(|j| (z - m[j]) / (m[i] - m[j])).product::<f64>()
        })
        .sum()
}

fn largest_error(levels: &ColumnLevels, values: &[f64], exact: impl Fn(f64) -> f64) -> f64 {
    let pairs = levels.middle_m().iter().zip(values);
    pairs
        .map(|(z, t)| (t - exact(*z)).abs())
        .fold(0.0, f64::max)
}

#[test]
fn published_munk_profile_at_five_depths() {
    // Values computed from the closed form with H = 4000 m; tolerance 1e-6 of the converged profile.
    let levels = even(400);
    let profile = solve(&levels, ExponentialFit);
    for (z, expected) in [
        (200.0, 0.804_892_23),
        (500.0, 0.580_297_36),
        (1000.0, 0.334_290_75),
        (2000.0, 0.105_575_69),
        (3000.0, 0.026_996_97),
    ] {
        let found = cubic(&levels, &profile, z);
        assert!((found - expected).abs() < 1e-6, "{z} m: {found}");
        assert!((munk(z) - expected).abs() < 1e-8);
    }
}

#[test]
fn analytic_exponential_fit_is_exact_for_munk_on_any_levels() {
    for levels in [even(20), ColumnLevels::new(40, DEPTH_M, 15.0).unwrap()] {
        let error = largest_error(&levels, &solve(&levels, ExponentialFit), munk);
        assert!(error < 1e-12, "{error:e}");
    }
}

#[test]
fn converges_upwind_is_first_order() {
    let error = |n: usize| largest_error(&even(n), &solve(&even(n), Upwind), munk);
    let (coarse, fine) = (error(100), error(200));
    let order = (coarse / fine).log2();
    assert!((order - 1.0).abs() < 0.05, "{order} {coarse:e} {fine:e}");
}

/// kappa growing with depth by a factor of ten, with its closed-form profile by fine quadrature.
fn variable_kappa(z: f64) -> f64 {
    3e-5 + 2.7e-4 * 0.5 * (1.0 + ((z - 1500.0) / 500.0).tanh())
}

fn variable_exact(points: &[f64]) -> Vec<f64> {
    // T(z) = 1 - F(z)/F(H), F = int exp(-int w/kappa)/kappa; midpoint sums of 0.05 m.
    let (h, mut decay, mut fall) = (0.05, 0.0, 0.0);
    let mut falls = Vec::new();
    for i in 0..80_000_i32 {
        let z = h * f64::from(i);
        while points.get(falls.len()).is_some_and(|p| *p < z + h) {
            let part = points[falls.len()] - z;
            falls.push(fall + part * f64::exp(-decay) / variable_kappa(z));
        }
        let kappa = variable_kappa(z + 0.5 * h);
        let across = h * UPWELLING_M_S / kappa;
        fall += h * f64::exp(-decay - 0.5 * across) / kappa;
        decay += across;
    }
    falls.iter().map(|f| 1.0 - f / fall).collect()
}

#[test]
fn converges_exponential_fit_is_second_order_with_variable_mixing() {
    // Steady balance w T' + (kappa T')' = 0 gives kappa T' = -C exp(-int w/kappa).
    let error = |n: usize, scheme| {
        let levels = even(n);
        let found = steady_profile(&levels, scheme, UPWELLING_M_S, variable_kappa, [1.0, 0.0]);
        let exact = variable_exact(levels.middle_m());
        let pairs = found.iter().zip(&exact);
        pairs.map(|(a, b)| (a - b).abs()).fold(0.0, f64::max)
    };
    let (coarse, fine) = (error(50, ExponentialFit), error(100, ExponentialFit));
    let order = (coarse / fine).log2();
    assert!((order - 2.0).abs() < 0.1, "{order} {coarse:e} {fine:e}");
    assert!(error(100, Upwind) > 10.0 * fine);
}

#[test]
fn analytic_weights_are_positive_and_carry_uniform_water_unchanged() {
    for scheme in [Upwind, ExponentialFit] {
        for flow in [-1e9, -3.0, -1e-8, 0.0, 1e-3, 0.9e-2, 1.1e-2, 5.0, 1e9] {
            let face = Face::new(scheme, flow, 1.0);
            assert!(face.below >= 0.0 && face.above >= 0.0);
            assert!((face.below - face.above - flow).abs() <= 1e-15 * flow.abs().max(1.0));
        }
    }
    // Both sides of the switch from series to quotient agree.
    let weight = |flow| Face::new(ExponentialFit, flow, 1.0).above;
    assert!((weight(0.01 - 1e-13) - weight(0.01 + 1e-13)).abs() < 1e-13);
}

#[test]
fn converges_diffusion_in_time_is_first_order() {
    // Cosine mode between insulated ends decays as exp(-kappa (pi/H)^2 t); computed.
    let levels = even(100);
    let rate = |wave: f64| 1e-3 * (wave / DEPTH_M).powi(2);
    let wave = std::f64::consts::PI;
    let time = 0.5 / rate(wave);
    let error = |steps: u32| {
        let mut column = Column::new(&levels, 1.0, ExponentialFit, |_| 1e-3, 0.0);
        let mode = |z: &f64| (wave * z / DEPTH_M).cos();
        let mut t: Vec<f64> = levels.middle_m().iter().map(mode).collect();
        for _ in 0..steps {
            column.step(&mut t, &Sources::none(100), time / f64::from(steps));
        }
        largest_error(&levels, &t, |z| mode(&z) * (-0.5_f64).exp())
    };
    let order = (error(10) / error(20)).log2();
    assert!((order - 1.0).abs() < 0.1, "{order}");
}

#[test]
fn analytic_convection_removes_an_inversion_in_one_long_step() {
    let levels = even(20);
    let mut column = Column::new(&levels, 1.0, ExponentialFit, |_| 1e-9, 1e-2);
    let mut t = vec![1.0; 20];
    t[10] = 5.0;
    t[9] = 0.0;
    for _ in 0..50 {
        column.step(&mut t, &Sources::none(20), 1.6e8);
    }
    assert!(t.windows(2).all(|w| w[0] >= w[1] - 1e-2), "{t:?}");
}
