//! Made-up courses of one orbital element: constant, sinusoid, uniform rotation.
//!
//! What: the value of an element at an age, for experiments that vary one element alone.
//! Equations: sinusoid mean + amplitude cos(2 pi (age - age of a maximum) / period); uniform
//! rotation longitude(1950) - 360 age / period, so that perihelion advances towards the future
//! through the seasons, as it does on Earth (about once in 21 kyr).
//! Units: kyr before 1950 CE, degrees.
//! Numerics: closed form; valid at every finite age.
//! Source: definitions.

use std::f64::consts::TAU;

/// A sinusoid in age, in the unit of its mean.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Sinusoid {
    pub(super) mean: f64,
    pub(super) amplitude: f64,
    pub(super) period_kyr: f64,
    pub(super) maximum_at_kyr: f64,
}

impl Sinusoid {
    /// Value at an age, kyr before 1950.
    pub(super) fn at(&self, age_kyr: f64) -> f64 {
        let phase = TAU * (age_kyr - self.maximum_at_kyr) / self.period_kyr;
        self.mean + self.amplitude * phase.cos()
    }

    /// Smallest and largest value.
    pub(super) fn extremes(&self) -> [f64; 2] {
        let reach = self.amplitude.abs();
        [self.mean - reach, self.mean + reach]
    }
}

/// Longitude of a perihelion that moves uniformly, degrees (not wrapped).
pub(super) fn rotating_deg(at_1950_deg: f64, period_kyr: f64, age_kyr: f64) -> f64 {
    at_1950_deg - 360.0 * (age_kyr / period_kyr).rem_euclid(1.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_sinusoid_peaks_where_it_is_told() {
        let wave = Sinusoid {
            mean: 0.03,
            amplitude: 0.01,
            period_kyr: 100.0,
            maximum_at_kyr: 7.0,
        };
        assert!((wave.at(7.0) - 0.04).abs() < 1e-15);
        assert!((wave.at(57.0) - 0.02).abs() < 1e-15);
        assert!((wave.at(-93.0) - 0.04).abs() < 1e-15);
    }

    #[test]
    fn analytic_perihelion_was_at_smaller_longitude_in_the_past() {
        assert!((rotating_deg(102.0, 21.0, 5.25) - 12.0).abs() < 1e-12);
        assert!((rotating_deg(102.0, 21.0, 2.1e6) - 102.0).abs() < 1e-6);
    }
}
