//! Motion of every planet on its own Kepler ellipse for a given time.
//!
//! What: position and velocity after a time dt under the acceleration -mu r / |r|^3.
//! Equations: with r0 = |r|, 1/a = 2/r0 - v^2/mu, n = sqrt(mu/a^3), rho = r0/a, c = 1 - rho and
//! s = r.v / sqrt(mu a), the change E of the eccentric anomaly obeys
//!   E - c sin E + s (1 - cos E) = n dt;
//! with D = 1 - c cos E + s sin E the new state is r + (f-1) r + g v and v + f' r + (g'-1) v,
//!   f-1 = -(1 - cos E)/rho, g = dt - (E - sin E)/n,
//!   f' = -sqrt(mu/a) sin E / (r0 D), g'-1 = -(1 - cos E)/D.
//! Units: AU, d, AU^3 d^-2.
//! Numerics: start from the expansion of E to third order in dt; one correction of fourth order
//! with short series of sine and cosine, a second one with full series, whose small step turns sine
//! and cosine by addition. Fixed number of operations, no branch, so the eight planets go side by
//! side. Series by Taylor, remainder below 4e-18 for |E| <= 1.3 rad, which an orbit with
//! eccentricity below 0.35 keeps for n dt up to 0.85 (Mercury: 12 d). Forward and backward.
//! Source: standard f and g functions (e.g. Danby 1988, Fundamentals of Celestial Mechanics, ch. 6;
//! memory); the iteration is the reversed Taylor series of the equation.
#![expect(
    clippy::inline_always,
    reason = "the caller's vector instructions must reach these bodies"
)]

use super::eight::{Eight, Vectors, combine, dot};

/// (x - sin x) / x^3 in powers of x^2.
const SINE_REST: [f64; 9] = [
    1.0 / 6.0,
    -1.0 / 120.0,
    1.0 / 5_040.0,
    -1.0 / 362_880.0,
    1.0 / 39_916_800.0,
    -1.0 / 6_227_020_800.0,
    1.0 / 1_307_674_368_000.0,
    -1.0 / 355_687_428_096_000.0,
    1.0 / 121_645_100_408_832_000.0,
];

/// (1 - cos x) / x^2 in powers of x^2.
const COSINE_REST: [f64; 9] = [
    1.0 / 2.0,
    -1.0 / 24.0,
    1.0 / 720.0,
    -1.0 / 40_320.0,
    1.0 / 3_628_800.0,
    -1.0 / 479_001_600.0,
    1.0 / 87_178_291_200.0,
    -1.0 / 20_922_789_888_000.0,
    1.0 / 6_402_373_705_728_000.0,
];

/// Terms kept for the first correction: an error of 1e-6 rad, which the second takes away.
const SHORT: usize = 4;

/// What stays the same from step to step.
#[derive(Clone, Copy, Debug)]
pub(super) struct Attraction {
    mu: Eight,
    inverse: Eight,
}

impl Attraction {
    /// From the gravitational parameters, AU^3 d^-2.
    pub(super) fn new(mu: Eight) -> Self {
        Self {
            mu,
            inverse: Eight::splat(1.0) / mu,
        }
    }

    /// The gravitational parameters, AU^3 d^-2.
    #[inline(always)]
    pub(super) fn mu(&self) -> Eight {
        self.mu
    }
}

/// Kepler's equation of one drift.
struct Equation {
    rho: Eight,
    c: Eight,
    s: Eight,
    mean: Eight,
}

/// An eccentric anomaly with its functions.
struct Angle {
    /// E - sin E.
    sine_rest: Eight,
    /// 1 - cos E.
    versine: Eight,
    /// sin E.
    sine: Eight,
}

impl Angle {
    #[inline(always)]
    fn of<const K: usize>(angle: Eight) -> Self {
        let square = angle * angle;
        let sine_rest = angle * square * series::<K>(square, &SINE_REST);
        Self {
            sine_rest,
            versine: square * series::<K>(square, &COSINE_REST),
            sine: angle - sine_rest,
        }
    }

    /// After a further turn by a small angle, to its fourth power.
    #[inline(always)]
    fn turned(&self, by: Eight) -> Self {
        let half = by * by * 0.5;
        let rest = by * half * (1.0 / 3.0);
        let cosine = -self.versine + 1.0;
        // sin and cos of a sum with sin x = x - x^3/6, 1 - cos x = x^2/2.
        let sine_step = cosine * (by - rest) - self.sine * half;
        Self {
            sine_rest: self.sine_rest + (by - sine_step),
            versine: self.versine + (self.sine * (by - rest) + cosine * half),
            sine: self.sine + sine_step,
        }
    }
}

/// The first `K` terms of a power series, even and odd powers apart: two short chains.
#[inline(always)]
fn series<const K: usize>(x: Eight, coefficients: &[f64; 9]) -> Eight {
    let square = x * x;
    let last = K - 1;
    let mut one = Eight::splat(coefficients[last]);
    let mut other = Eight::splat(coefficients[last - 1]);
    let mut k = last;
    while k >= 3 {
        one = one * square + coefficients[k - 2];
        other = other * square + coefficients[k - 3];
        k -= 2;
    }
    // `one` holds powers k, k+2, ..., `other` one power less.
    if k == 2 {
        one = one * square + coefficients[0];
        one + x * other
    } else {
        other + x * one
    }
}

impl Equation {
    /// D, the distance from the Sun over a, at an angle.
    #[inline(always)]
    fn slope(&self, angle: &Angle) -> Eight {
        self.rho + (self.c * angle.versine + self.s * angle.sine)
    }

    /// The step to the root from an approximation, with an error of the fourth power of the step.
    #[inline(always)]
    fn correction(&self, angle: &Angle, value: Eight) -> Eight {
        let (c, s) = (self.c, self.s);
        let cosine = -angle.versine + 1.0;
        let residual = (value - self.mean) - c * angle.sine + s * angle.versine;
        let inverse = Eight::splat(1.0) / self.slope(angle);
        let step = residual * inverse;
        let second = (c * angle.sine + s * cosine) * inverse * 0.5;
        let third = (c * cosine - s * angle.sine) * inverse * (1.0 / 6.0);
        -step * ((step * (second + step * (second * second * 2.0 - third))) + 1.0)
    }
}

/// Moves all planets for `days` (negative into the past).
#[inline(always)]
pub(super) fn drift(
    attraction: &Attraction,
    position: &mut Vectors,
    velocity: &mut Vectors,
    days: f64,
) {
    let inverse_mu = attraction.inverse;
    let r = dot(position, position).sqrt();
    let inverse_r = Eight::splat(1.0) / r;
    let r_dot_v = dot(position, velocity);
    let inverse_a = inverse_r * 2.0 - dot(velocity, velocity) * inverse_mu;
    // sqrt(mu/a), the speed on a circle of radius a.
    let speed = (attraction.mu * inverse_a).sqrt();
    let a = Eight::splat(1.0) / inverse_a;
    let inverse_rho = a * inverse_r;
    let rho = r * inverse_a;
    let equation = Equation {
        rho,
        c: -rho + 1.0,
        s: r_dot_v * speed * inverse_mu,
        mean: speed * inverse_a * days,
    };
    let y = equation.mean * inverse_rho;
    let q = equation.s * y * inverse_rho * 0.5;
    let curved = equation.c * y * y * inverse_rho * (1.0 / 6.0);
    let start = y * (q * (q * 2.0 - 1.0) - curved + 1.0);

    let rough = start + equation.correction(&Angle::of::<SHORT>(start), start);
    let angle = Angle::of::<9>(rough);
    let angle = angle.turned(equation.correction(&angle, rough));

    let inverse_d = Eight::splat(1.0) / equation.slope(&angle);
    let f = -(inverse_rho * angle.versine);
    let inverse_n = a * a * speed * inverse_mu;
    let g = -(angle.sine_rest * inverse_n) + days;
    let f_rate = -(speed * angle.sine * inverse_r * inverse_d);
    let g_rate = -(angle.versine * inverse_d);
    let moved = combine(position, velocity, |r, v| r + (f * r + g * v));
    *velocity = combine(position, velocity, |r, v| v + (f_rate * r + g_rate * v));
    *position = moved;
}

#[cfg(test)]
#[path = "drift_tests.rs"]
mod tests;
