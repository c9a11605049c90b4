//! The motion of the axis against closed forms, and its order.

use super::*;
use crate::orbit::integration::planets::MeanElements;

/// Torques without tide.
fn torques(steps: u32) -> Torques {
    Torques {
        obliquity_rad: 0.41,
        solar_rad_yr: 8.4e-5,
        solar_change_1_yr: 0.0,
        lunar_rad_yr: 1.8e-4,
        lunar_change_1_yr: 0.0,
        geodesic_rad_yr: 9e-8,
        drift_rad_yr: 0.0,
        steps,
    }
}

/// A mean orbit from its elements at a time in years.
fn orbit(blocks: usize, elements: impl Fn(f64) -> MeanElements) -> MeanOrbit {
    let of = |sign: f64| {
        (0..blocks)
            .map(|c| elements(sign * (c as f64 + 0.5) * BLOCK_YR))
            .collect::<Vec<_>>()
    };
    MeanOrbit::new(&of(-1.0), &of(1.0))
}

#[test]
fn analytic_precession_is_uniform_on_an_orbit_at_rest() {
    let e = 0.03_f64;
    let orbit = orbit(300, |_| [e * 0.6, e * 0.8, 0.0, 0.0]);
    let torques = torques(STEPS);
    let alpha = torques.solar_rad_yr * (1.0 - e * e).powf(-1.5) + torques.lunar_rad_yr;
    let rate = alpha * torques.obliquity_rad.cos() - torques.geodesic_rad_yr;
    for direction in [Direction::Past, Direction::Future] {
        let attitudes = torques.follow(&orbit, direction, 250);
        for (block, attitude) in attitudes.iter().enumerate() {
            let years = (block as f64 + 0.5) * BLOCK_YR * direction.sign();
            assert!((attitude.obliquity_rad - torques.obliquity_rad).abs() < 1e-10);
            // From the equinox, which moves backwards, to a direction at rest. One and a half turns.
            let error = attitude.precession_rad - rate * years;
            assert!(error.abs() < 1e-8, "{years}: {error:e}");
        }
    }
}

#[test]
fn analytic_the_tide_raises_the_obliquity_and_slows_the_precession() {
    let orbit = orbit(300, |_| [0.0; 4]);
    let mut tidal = torques(STEPS);
    tidal.drift_rad_yr = 1e-9;
    let last = tidal.follow(&orbit, Direction::Past, 250)[249];
    let years = -249.5 * BLOCK_YR;
    let risen = last.obliquity_rad - tidal.obliquity_rad - 1e-9 * years;
    assert!(risen.abs() < 1e-10, "{risen:e}");
    let mut slowing = torques(STEPS);
    slowing.lunar_change_1_yr = -1e-7;
    let slowed = slowing.follow(&orbit, Direction::Past, 250)[249];
    let plain = torques(STEPS).follow(&orbit, Direction::Past, 250)[249];
    let expected = -1e-7 * 0.5 * years * years * slowing.lunar_rad_yr * slowing.obliquity_rad.cos();
    let difference = slowed.precession_rad - plain.precession_rad;
    assert!(
        (difference / expected - 1.0).abs() < 1e-6,
        "{difference} {expected}"
    );
}

#[test]
fn converges_with_the_fourth_power_of_the_step() {
    // An orbit that nods as the real one does, 1.5 degrees in 70 kyr; values at the same centres.
    let nodding = |t: f64| {
        let angle = t * 9e-5;
        [0.02, 0.01, 0.013 * angle.cos(), 0.013 * angle.sin()]
    };
    let orbit = orbit(600, nodding);
    let last = |steps| torques(steps).follow(&orbit, Direction::Past, 500)[499];
    let (coarse, middle, fine) = (last(1), last(2), last(4));
    let first = coarse.precession_rad - middle.precession_rad;
    let second = middle.precession_rad - fine.precession_rad;
    let order = (first / second).abs().log2();
    assert!((order - 4.0).abs() < 0.3, "order {order}");
    // 50 kyr; what the steps used leave over 5.5 Myr is then below 1e-4 degrees.
    assert!(second.abs().to_degrees() < 1e-6, "{second:e}");
}
