//! The symplectic map that moves the planets, and the Earth's mean elements from it.
//!
//! What: block means over 100 years of k = e cos(varpi), h = e sin(varpi), q = tan(i/2) cos(Omega)
//! and p = tan(i/2) sin(Omega) of the Earth and Moon around the Sun, for as many blocks as are
//! asked for, into the past or the future.
//! Equations: SABA4 of Laskar & Robutel 2001, Celest. Mech. 80:39 (memory): in a step tau, Kepler
//! drifts between the ends of the step and the four Gauss-Legendre nodes on it, and at the nodes
//! kicks with the Gauss-Legendre weights. Its error is of order eps tau^8 + eps^2 tau^2 with eps
//! the planets' mass over the Sun's. Elements from the position r and velocity v at a time: with
//! L = r x v, n = L/|L| = (2p, -2q, 1-p^2-q^2)/(1+p^2+q^2), eccentricity vector v x L/mu - r/|r|,
//! mu = G (sun + earth + moon).
//! Units: AU, d; angles from the equinox of J2000.0 in the ecliptic of J2000.0.
//! Numerics: the last drift of a step and the first of the next are one, except where the elements
//! are looked at; those times lie at odd multiples of half a sample, so that the mean of a block is
//! centred on it. Square roots and the four operations only, compiled for AVX2 as well; the same
//! bits either way.
#![expect(
    clippy::inline_always,
    reason = "the kernel's bodies must be compiled with its vector instructions"
)]

use super::attraction::{EARTH, Forces};
use super::constants::Constants;
use super::drift::drift;
use super::eight::{Eight, Vectors, combine};
use crate::numerics::dispatch::{Kernel, widest};

/// Gauss-Legendre nodes on [0, 1], (1 -+ sqrt((3 -+ 2 sqrt(6/5))/7))/2, as distances between them.
const DRIFTS: [f64; 3] = [
    0.069_431_844_202_973_71,
    0.260_577_634_004_598_16,
    0.339_981_043_584_856_26,
];
/// Gauss-Legendre weights on [0, 1], (18 -+ sqrt 30)/72.
const KICKS: [f64; 2] = [0.173_927_422_568_726_93, 0.326_072_577_431_273_07];

/// Mean elements of the Earth's orbit: k, h, q, p.
pub(super) type MeanElements = [f64; 4];

/// Which way in time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Direction {
    /// From J2000.0 into the past.
    Past,
    /// From J2000.0 into the future.
    Future,
}

impl Direction {
    /// Sign of time.
    pub(super) fn sign(self) -> f64 {
        match self {
            Self::Past => -1.0,
            Self::Future => 1.0,
        }
    }
}

/// The planets at a moment, in Jacobi coordinates.
#[derive(Clone, Debug)]
pub(super) struct Planets {
    forces: Forces,
    position: Vectors,
    velocity: Vectors,
    step_d: f64,
    samples: u32,
    steps_per_sample: u32,
    earth_mu: f64,
    started: bool,
}

impl Planets {
    /// At J2000.0, from checked constants.
    pub(super) fn new(constants: &Constants, direction: Direction) -> Self {
        let forces = Forces::new(constants);
        let component = |of: &dyn Fn(usize) -> f64| Eight::from_array(&std::array::from_fn(of));
        let vectors = |of: &dyn Fn(usize, usize) -> f64| {
            let part = |axis| component(&|planet| of(planet, axis));
            forces.to_jacobi(&[part(0), part(1), part(2)])
        };
        let position = vectors(&|planet, axis| constants.planet[planet].position_au[axis]);
        let velocity = vectors(&|planet, axis| constants.planet[planet].velocity_au_d[axis]);
        let map = &constants.map;
        Self {
            position,
            velocity,
            step_d: constants.step_d() * direction.sign(),
            samples: map.steps_per_century / map.steps_per_sample,
            steps_per_sample: map.steps_per_sample,
            earth_mu: constants.sun.gm_au3_d2 + constants.planet[EARTH].gm_au3_d2,
            started: false,
            forces,
        }
    }

    /// Means over the next 100 years.
    pub(super) fn next_block(&mut self) -> MeanElements {
        widest(Block(self))
    }

    /// Total energy times G, AU^5 d^-4.
    pub(super) fn energy(&self) -> f64 {
        self.forces.energy(&self.position, &self.velocity)
    }

    /// Angular momentum times G, AU^5 d^-3, about the centre of mass.
    #[cfg(test)]
    pub(super) fn angular_momentum(&self) -> [f64; 3] {
        let (r, v) = (&self.position, &self.velocity);
        let reduced = self.forces.reduced();
        [(1, 2), (2, 0), (0, 1)].map(|(i, j)| (reduced * (r[i] * v[j] - r[j] * v[i])).sum())
    }

    /// Goes to the end of the century, half a sample after the last look at the elements, and turns
    /// the other way in time.
    #[cfg(test)]
    pub(super) fn turn_round(&mut self) {
        self.advance(self.steps_per_sample / 2);
        self.step_d = -self.step_d;
        self.started = false;
    }

    /// Largest difference of a coordinate, AU.
    #[cfg(test)]
    pub(super) fn distance_from(&self, other: &Self) -> f64 {
        let pairs = self.position.iter().zip(&other.position);
        let differences = pairs.flat_map(|(a, b)| (*a - *b).to_array());
        differences.fold(0.0, |largest, d| largest.max(d.abs()))
    }

    /// A number of steps, from and to the ends of steps.
    #[inline(always)]
    fn advance(&mut self, steps: u32) {
        let (kick, long_kick) = (KICKS[0] * self.step_d, KICKS[1] * self.step_d);
        let [first, second, third] = DRIFTS.map(|share| share * self.step_d);
        self.drift(first);
        for step in 0..steps {
            let last = if step + 1 < steps { 2.0 * first } else { first };
            let stages = [
                (kick, second),
                (long_kick, third),
                (long_kick, second),
                (kick, last),
            ];
            for (kick, drift) in stages {
                self.kick(kick);
                self.drift(drift);
            }
        }
    }

    #[inline(always)]
    fn drift(&mut self, days: f64) {
        let kepler = self.forces.kepler();
        drift(kepler, &mut self.position, &mut self.velocity, days);
    }

    #[inline(always)]
    fn kick(&mut self, days: f64) {
        let acceleration = self.forces.kick(&self.position);
        self.velocity = combine(&self.velocity, &acceleration, |v, a| v + a * days);
    }

    #[inline(always)]
    fn block(&mut self) -> MeanElements {
        let mut sum = [0.0; 4];
        for _ in 0..self.samples {
            // The first sample stands half a sample's time after the start.
            let steps = if self.started {
                self.steps_per_sample
            } else {
                self.steps_per_sample / 2
            };
            self.started = true;
            self.advance(steps);
            for (sum, value) in sum.iter_mut().zip(self.earth_elements()) {
                *sum += value;
            }
        }
        sum.map(|sum| sum / f64::from(self.samples))
    }

    /// k, h, q, p of the Earth and Moon now.
    #[inline(always)]
    fn earth_elements(&self) -> MeanElements {
        let of_earth = |vectors: &Vectors| {
            let from_sun = self.forces.to_heliocentric(vectors);
            from_sun.map(|component| component.to_array()[EARTH])
        };
        let (r, v) = (of_earth(&self.position), of_earth(&self.velocity));
        let momentum = cross(&r, &v);
        let length = norm(&momentum);
        let n = momentum.map(|x| x / length);
        let (q, p) = (-n[1] / (1.0 + n[2]), n[0] / (1.0 + n[2]));
        let turned = cross(&v, &momentum);
        let distance = norm(&r);
        let e: [f64; 3] = std::array::from_fn(|i| turned[i] / self.earth_mu - r[i] / distance);
        let [f, g] = orbit_axes(q, p);
        [dot(&e, &f), dot(&e, &g), q, p]
    }
}

/// Computes one block.
pub(super) struct Block<'a>(pub(super) &'a mut Planets);

impl Kernel for Block<'_> {
    type Output = MeanElements;

    #[inline(always)]
    fn run(self) -> MeanElements {
        self.0.block()
    }
}

/// The two axes in the orbit's plane against which the longitude of perihelion is counted.
#[inline(always)]
pub(super) fn orbit_axes(q: f64, p: f64) -> [[f64; 3]; 2] {
    let sum = 1.0 + p * p + q * q;
    let f = [1.0 - p * p + q * q, 2.0 * p * q, -2.0 * p];
    let g = [2.0 * p * q, 1.0 + p * p - q * q, 2.0 * q];
    [f.map(|x| x / sum), g.map(|x| x / sum)]
}

/// Normal of the orbit's plane.
pub(super) fn orbit_normal(q: f64, p: f64) -> [f64; 3] {
    let sum = 1.0 + p * p + q * q;
    [2.0 * p, -2.0 * q, 1.0 - p * p - q * q].map(|x| x / sum)
}

/// Vector product.
#[inline(always)]
pub(super) fn cross(a: &[f64; 3], b: &[f64; 3]) -> [f64; 3] {
    [
        a[1] * b[2] - a[2] * b[1],
        a[2] * b[0] - a[0] * b[2],
        a[0] * b[1] - a[1] * b[0],
    ]
}

/// Scalar product.
#[inline(always)]
pub(super) fn dot(a: &[f64; 3], b: &[f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// Length.
#[inline(always)]
pub(super) fn norm(a: &[f64; 3]) -> f64 {
    dot(a, a).sqrt()
}
