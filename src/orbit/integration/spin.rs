//! The Earth's axis under the pull of the Sun and the Moon, with tides.
//!
//! What: obliquity and the angle from the moving equinox to the axes of the orbit, every 100
//! years, along a given mean orbit.
//! Equations: s the axis, n the orbit's normal, c = s.n,
//!   ds/dt = (alpha c - w) (s x n) + d (c s - n)/sqrt(1 - c^2),
//!   alpha = A_S (1 + r_S t) (1 - e^2)^(-3/2) + A_M (1 + r_M t),
//! A_S and A_M the precession constants of Sun and Moon today, r_S and r_M their changes by the
//! tide, w the geodesic precession, d the rise of the obliquity by the tide; see `constants.rs`.
//! Equinox g = s x n/|s x n|, obliquity atan2(|s x n|, c), and
//! precession p = atan2(f.(n x g), f.g) with f the orbit's axis of `planets.rs`, made continuous;
//! then the longitude of perihelion from the equinox is atan2(h, k) + p.
//! Units: rad, years from J2000.0.
//! Numerics: Runge-Kutta of fourth order with steps of 50 years; s is scaled to length one after
//! each. Arc tangents by `libm`, whose digits are the same everywhere.
//! Source: precession of a rigid axis averaged over day, month and year (e.g. Laskar et al. 2004,
//! A&A 428:261; memory).

use std::f64::consts::{PI, TAU};

use super::constants::Constants;
use super::planets::{Direction, cross, dot, norm, orbit_axes, orbit_normal};
use super::smoothing::{BLOCK_YR, MeanOrbit};

/// Steps in 100 years.
const STEPS: u32 = 2;

/// Attitude of the axis at a moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Attitude {
    /// Obliquity, rad.
    pub(super) obliquity_rad: f64,
    /// From the equinox to the orbit's axis, rad, continuous in time.
    pub(super) precession_rad: f64,
}

/// Torques on the axis.
#[derive(Clone, Copy, Debug)]
pub(super) struct Torques {
    obliquity_rad: f64,
    solar_rad_yr: f64,
    solar_change_1_yr: f64,
    lunar_rad_yr: f64,
    lunar_change_1_yr: f64,
    geodesic_rad_yr: f64,
    drift_rad_yr: f64,
    /// Steps in 100 years.
    steps: u32,
}

impl Torques {
    /// From checked constants.
    pub(super) fn new(constants: &Constants) -> Self {
        Self {
            obliquity_rad: constants.obliquity_rad(),
            solar_rad_yr: constants.solar_precession_rad_yr(),
            solar_change_1_yr: constants.rotation_rate_1_yr(),
            lunar_rad_yr: constants.lunar_precession_rad_yr(),
            lunar_change_1_yr: constants.lunar_torque_rate_1_yr(),
            geodesic_rad_yr: constants.geodesic_rad_yr(),
            drift_rad_yr: constants.obliquity_drift_rad_yr(),
            steps: STEPS,
        }
    }

    /// Attitudes at the centres of the first `count` blocks from J2000.0 in one direction.
    pub(super) fn follow(
        &self,
        orbit: &MeanOrbit,
        direction: Direction,
        count: usize,
    ) -> Vec<Attitude> {
        let mut axis = [
            0.0,
            libm::sin(self.obliquity_rad),
            libm::cos(self.obliquity_rad),
        ];
        let mut last = 0.0;
        let mut attitudes = Vec::with_capacity(count);
        for block in 0..count {
            // From centre to centre; the first stretch begins at the edge of its block.
            let length = if block == 0 { 0.5 } else { 1.0 } * BLOCK_YR;
            let step = length * direction.sign() / f64::from(self.steps);
            let years = (block as f64 + 0.5) * BLOCK_YR * direction.sign();
            for left in (1..=self.steps).rev() {
                axis = self.step(orbit, &axis, years - f64::from(left) * step, step);
            }
            let attitude = attitude(orbit, &axis, years, last);
            last = attitude.precession_rad;
            attitudes.push(attitude);
        }
        attitudes
    }

    /// The axis one Runge-Kutta step later.
    fn step(&self, orbit: &MeanOrbit, axis: &[f64; 3], years: f64, step: f64) -> [f64; 3] {
        let half = 0.5 * step;
        let moved = |rate: &[f64; 3], by: f64| std::array::from_fn(|i| axis[i] + by * rate[i]);
        let middle = Torque::new(self, orbit, years + half);
        let first = Torque::new(self, orbit, years).on(axis);
        let second = middle.on(&moved(&first, half));
        let third = middle.on(&moved(&second, half));
        let fourth = Torque::new(self, orbit, years + step).on(&moved(&third, step));
        let sum: [f64; 3] = std::array::from_fn(|i| {
            axis[i] + step / 6.0 * (first[i] + 2.0 * (second[i] + third[i]) + fourth[i])
        });
        let length = norm(&sum);
        sum.map(|x| x / length)
    }
}

/// What acts on the axis at one time.
struct Torque {
    normal: [f64; 3],
    /// alpha, rad/yr.
    precession: f64,
    geodesic: f64,
    drift: f64,
}

impl Torque {
    fn new(torques: &Torques, orbit: &MeanOrbit, years: f64) -> Self {
        let [k, h, q, p] = orbit.at(years);
        let circle = 1.0 - k * k - h * h;
        let solar = torques.solar_rad_yr * (1.0 + torques.solar_change_1_yr * years);
        let lunar = torques.lunar_rad_yr * (1.0 + torques.lunar_change_1_yr * years);
        Self {
            normal: orbit_normal(q, p),
            precession: solar / (circle * circle.sqrt()) + lunar,
            geodesic: torques.geodesic_rad_yr,
            drift: torques.drift_rad_yr,
        }
    }

    /// Rate of change of the axis, 1/yr.
    fn on(&self, axis: &[f64; 3]) -> [f64; 3] {
        let cosine = dot(axis, &self.normal);
        let across = cross(axis, &self.normal);
        let turning = self.precession * cosine - self.geodesic;
        // |s x n| is sqrt(1 - c^2); an axis along the normal has no direction to tilt to.
        let tilting = self.drift / norm(&across).max(f64::MIN_POSITIVE);
        std::array::from_fn(|i| turning * across[i] + tilting * (cosine * axis[i] - self.normal[i]))
    }
}

/// Angles of an axis; `near` is a precession less than half a turn away.
fn attitude(orbit: &MeanOrbit, axis: &[f64; 3], years: f64, near: f64) -> Attitude {
    let [_, _, q, p] = orbit.at(years);
    let normal = orbit_normal(q, p);
    let across = cross(axis, &normal);
    let sine = norm(&across);
    let equinox = across.map(|x| x / sine);
    let [f, _] = orbit_axes(q, p);
    let angle = libm::atan2(dot(&f, &cross(&normal, &equinox)), dot(&f, &equinox));
    let turns = ((near - angle + PI) / TAU).floor();
    Attitude {
        obliquity_rad: libm::atan2(sine, dot(axis, &normal)),
        precession_rad: angle + turns * TAU,
    }
}

#[cfg(test)]
#[path = "spin_tests.rs"]
mod tests;
