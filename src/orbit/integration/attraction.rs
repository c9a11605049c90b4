//! Forces between the Sun and the planets, as they act on Jacobi coordinates.
//!
//! What: what remains of the accelerations when each planet's own Kepler motion is taken away, and
//! the energy.
//! Equations: Jacobi coordinate r'_i = r_i - (sum_{j<i} m_j r_j)/eta_{i-1}, with m = G times mass
//! and eta_i = sum_{j<=i} m_j, Sun = 0. Kick
//!   a'_i = a_i - (sum_{j<i} m_j a_j)/eta_{i-1} + eta_i r'_i/|r'_i|^3,
//! a_i the full accelerations. Between planets Newton's law; between Sun and planet Newton's law
//! times 1 + 6 m_0/(c^2 r) + L/r^2 with
//!   L = (3/4) f q/(1+q)^2 R^2 (Earth and Moon only) + (3/2) J2 R_sun^2;
//! the first term turns the perihelia as general relativity does (potential -3 (m_0/(c r))^2), the
//! second is the mean quadrupole of the Moon's motion, the last the flattening of the Sun with all
//! orbits taken to lie in its equator.
//! Units: AU, d, AU^3 d^-2.
//! Numerics: each of the 28 pairs once, in seven rows of four; equal and opposite forces, so the
//! total momentum is kept to rounding.
//! Source: Jacobi splitting of Wisdom & Holman 1991, Astron. J. 102:1528; relativity as a potential
//! of Nobili & Roxburgh 1986, IAU Symp. 114:105; Moon: Quinn, Tremaine & Duncan 1991, Astron. J.
//! 101:2287 (all from memory).
#![expect(
    clippy::inline_always,
    reason = "the caller's vector instructions must reach these bodies"
)]

use super::constants::Constants;
use super::drift::Attraction;
use super::eight::{Eight, PLANETS, Vectors, dot};
use crate::numerics::lanes::Lanes;

/// The Earth with its Moon, in the order of the planets.
pub(super) const EARTH: usize = 2;

/// A vector for each of four bodies.
type Row = [Lanes; 3];

/// Masses and the lengths of the corrections.
#[derive(Clone, Debug)]
pub(super) struct Forces {
    sun: f64,
    planets: Eight,
    /// m_i / eta_i.
    share: [f64; PLANETS],
    /// m_i.
    mass: [f64; PLANETS],
    /// 1 / eta_{i-1}.
    inverse_inner: [f64; PLANETS],
    /// m_i eta_{i-1} / eta_i, the mass that moves with a Jacobi coordinate.
    reduced: Eight,
    relativity_au: f64,
    quadrupole_au2: Eight,
    kepler: Attraction,
}

impl Forces {
    /// From checked constants.
    pub(super) fn new(constants: &Constants) -> Self {
        let sun = constants.sun.gm_au3_d2;
        let mass: [f64; PLANETS] = std::array::from_fn(|i| constants.planet[i].gm_au3_d2);
        let mut outer = [0.0; PLANETS];
        let mut inner = [0.0; PLANETS];
        let mut eta = sun;
        for i in 0..PLANETS {
            inner[i] = eta;
            eta += mass[i];
            outer[i] = eta;
        }
        let mut quadrupole = [constants.sun_flattening_au2(); PLANETS];
        quadrupole[EARTH] += constants.moon_quadrupole_au2();
        Self {
            sun,
            planets: Eight::from_array(&mass),
            share: std::array::from_fn(|i| mass[i] / outer[i]),
            mass,
            inverse_inner: inner.map(|eta| 1.0 / eta),
            reduced: Eight::from_array(&std::array::from_fn(|i| mass[i] * inner[i] / outer[i])),
            relativity_au: constants.relativity_au(),
            quadrupole_au2: Eight::from_array(&quadrupole),
            kepler: Attraction::new(Eight::from_array(&outer)),
        }
    }

    /// The Kepler motion that the kick leaves out.
    #[inline(always)]
    pub(super) fn kepler(&self) -> &Attraction {
        &self.kepler
    }

    /// Jacobi from heliocentric vectors (positions or velocities).
    pub(super) fn to_jacobi(&self, from_sun: &Vectors) -> Vectors {
        from_sun.map(|component| {
            let r = component.to_array();
            let mut jacobi = [0.0; PLANETS];
            let mut centre = 0.0;
            for i in 0..PLANETS {
                jacobi[i] = r[i] - centre;
                centre += self.share[i] * jacobi[i];
            }
            Eight::from_array(&jacobi)
        })
    }

    /// Heliocentric from Jacobi vectors (positions or velocities).
    #[inline(always)]
    pub(super) fn to_heliocentric(&self, jacobi: &Vectors) -> Vectors {
        let of = |component: Eight| {
            let mut r = component.to_array();
            let mut centre = 0.0;
            for (value, share) in r.iter_mut().zip(&self.share) {
                let step = share * *value;
                *value += centre;
                centre += step;
            }
            Eight::from_array(&r)
        };
        [of(jacobi[0]), of(jacobi[1]), of(jacobi[2])]
    }

    /// The kick's accelerations of the Jacobi coordinates, AU d^-2.
    #[inline(always)]
    pub(super) fn kick(&self, jacobi: &Vectors) -> Vectors {
        let r = self.to_heliocentric(jacobi);
        let strength = self.pull_of_sun(&r);
        let mutual = between_planets(&r, self.planets);
        let square = dot(jacobi, jacobi);
        let kepler = self.kepler.mu() / (square * square.sqrt());
        let of = |i: usize| {
            // m_0 a_0 and then the sums of m_j a_j.
            let pull = strength * r[i];
            let sun = (self.planets * pull).sum() * self.sun;
            let own = (mutual[i] - pull * self.sun).to_array();
            let mut result = [0.0; PLANETS];
            let mut inner = sun;
            for planet in 0..PLANETS {
                result[planet] = own[planet] - inner * self.inverse_inner[planet];
                inner += self.mass[planet] * own[planet];
            }
            Eight::from_array(&result) + kepler * jacobi[i]
        };
        [of(0), of(1), of(2)]
    }

    /// The Sun's acceleration of each planet for unit mass and unit distance vector.
    #[inline(always)]
    fn pull_of_sun(&self, r: &Vectors) -> Eight {
        let square = dot(r, r);
        let inverse_square = Eight::splat(1.0) / square;
        let inverse = inverse_square * square.sqrt();
        let correction = inverse * self.relativity_au + self.quadrupole_au2 * inverse_square;
        inverse * inverse_square * (correction + 1.0)
    }

    /// The masses that move with the Jacobi coordinates, times G, AU^3 d^-2.
    #[cfg(test)]
    pub(super) fn reduced(&self) -> Eight {
        self.reduced
    }

    /// Total energy times G, AU^5 d^-4, of Jacobi positions and velocities.
    pub(super) fn energy(&self, position: &Vectors, velocity: &Vectors) -> f64 {
        let r = self.to_heliocentric(position);
        let kinetic = (self.reduced * dot(velocity, velocity)).sum() * 0.5;
        let inverse = Eight::splat(1.0) / dot(&r, &r).sqrt();
        let square = inverse * inverse;
        let correction =
            inverse * (0.5 * self.relativity_au) + self.quadrupole_au2 * square * (1.0 / 3.0);
        let mut potential = (self.planets * inverse * (correction + 1.0)).sum() * self.sun;
        let r = r.map(Eight::to_array);
        for i in 0..PLANETS {
            for j in 0..i {
                let square: f64 = r.iter().map(|x| (x[i] - x[j]) * (x[i] - x[j])).sum();
                potential += self.mass[i] * self.mass[j] / square.sqrt();
            }
        }
        kinetic - potential
    }
}

/// Accelerations of the planets by one another.
#[inline(always)]
fn between_planets(r: &Vectors, mass: Eight) -> Vectors {
    let a = [r[0].0, r[1].0, r[2].0];
    let b = [r[0].1, r[1].1, r[2].1];
    let (mut on_a, mut on_b) = ([Lanes::splat(0.0); 3], [Lanes::splat(0.0); 3]);

    // Inner with outer planets: the outer row in four orders.
    macro_rules! across {
        ($order:ident) => {
            let other = [$order(b[0]), $order(b[1]), $order(b[2])];
            let (left, right) = pull(&a, &other, mass.0, $order(mass.1));
            for i in 0..3 {
                on_a[i] += left[i];
                on_b[i] += $order(right[i]);
            }
        };
    }
    across!(same);
    across!(neighbours);
    across!(halves);
    across!(reversed);

    // Inner with inner and outer with outer planets: two pairs of each in a row. The orders are
    // their own inverses.
    macro_rules! within {
        ($left:ident, $right:ident, $cross:ident) => {
            let first = [$left(a[0], b[0]), $left(a[1], b[1]), $left(a[2], b[2])];
            let second = [
                $cross($right(a[0], b[0])),
                $cross($right(a[1], b[1])),
                $cross($right(a[2], b[2])),
            ];
            let masses = [$left(mass.0, mass.1), $cross($right(mass.0, mass.1))];
            let (left, right) = pull(&first, &second, masses[0], masses[1]);
            for i in 0..3 {
                let right = $cross(right[i]);
                on_a[i] += $left(left[i], right);
                on_b[i] += $right(left[i], right);
            }
        };
    }
    within!(even, odd, same);
    within!(low, high, same);
    within!(low, high, neighbours);

    [
        Eight(on_a[0], on_b[0]),
        Eight(on_a[1], on_b[1]),
        Eight(on_a[2], on_b[2]),
    ]
}

/// Accelerations of `left` and `right`, pair by pair.
#[inline(always)]
fn pull(left: &Row, right: &Row, left_mass: Lanes, right_mass: Lanes) -> (Row, Row) {
    let d = [right[0] - left[0], right[1] - left[1], right[2] - left[2]];
    let square = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
    let cube = Lanes::splat(1.0) / (square * square.sqrt());
    let (on_left, on_right) = (right_mass * cube, -(left_mass * cube));
    (
        [on_left * d[0], on_left * d[1], on_left * d[2]],
        [on_right * d[0], on_right * d[1], on_right * d[2]],
    )
}

macro_rules! orders {
    ($($name:ident($($row:ident),+) = $picked:expr;)+) => {
        $(
            #[inline(always)]
            fn $name($($row: Lanes),+) -> Lanes {
                $(let $row = $row.0;)+
                Lanes($picked)
            }
        )+
    };
}
orders! {
    same(a) = a;
    neighbours(a) = [a[1], a[0], a[3], a[2]];
    halves(a) = [a[2], a[3], a[0], a[1]];
    reversed(a) = [a[3], a[2], a[1], a[0]];
    even(a, b) = [a[0], b[0], a[2], b[2]];
    odd(a, b) = [a[1], b[1], a[3], b[3]];
    low(a, b) = [a[0], a[1], b[0], b[1]];
    high(a, b) = [a[2], a[3], b[2], b[3]];
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_every_pair_acts_once() {
        let place = |axis: usize| {
            let of = |i: usize| ((3 * i + axis + 1) as f64 * 0.73).sin() * (1.0 + i as f64);
            Eight::from_array(&std::array::from_fn(of))
        };
        let r = [place(0), place(1), place(2)];
        let mass: [f64; PLANETS] = std::array::from_fn(|i| 1.0 + i as f64 * 0.3);
        let got = between_planets(&r, Eight::from_array(&mass)).map(Eight::to_array);
        let r = r.map(Eight::to_array);
        for i in 0..PLANETS {
            let mut expected = [0.0; 3];
            for j in (0..PLANETS).filter(|&j| j != i) {
                let d = [0, 1, 2].map(|axis| r[axis][j] - r[axis][i]);
                let cube = d.iter().map(|x| x * x).sum::<f64>().powf(1.5);
                for (sum, d) in expected.iter_mut().zip(d) {
                    *sum += mass[j] * d / cube;
                }
            }
            for axis in 0..3 {
                let error = got[axis][i] - expected[axis];
                assert!(error.abs() < 1e-13, "{i} {axis}: {error:e}");
            }
        }
        for component in got {
            let momentum: f64 = component.iter().zip(mass).map(|(a, m)| a * m).sum();
            assert!(momentum.abs() < 1e-13, "{momentum:e}");
        }
    }
}
