//! Saturation specific humidity of air, as the model defines it.
//!
//! q*(T) = (sum_k c_k u^k)^16, u = (T + 10)/70, -80 <= T <= 60 degC: a polynomial form of
//! q* = 0.622 e_s / p with e_s after Bolton (1980, Mon. Weather Rev. 108:1046, eq. 10) at
//! p = 1013.25 hPa. It agrees with that formula to 2e-6 (relative) and *is* the
//! definition used everywhere, so that all instruction sets give the same bits. Temperatures
//! outside the range are limited to it. The slope is q* times a polynomial with an error of
//! 2e-3: it is only used to linearise.

use crate::numerics::lanes::{Lanes, polynomial};

const ROOT: [f64; 8] = [
    0.672_744_858_169_386_5,
    0.232_268_681_934_757_72,
    -0.029_532_819_425_901_1,
    0.001_446_311_949_049_301_2,
    0.000_790_510_722_198_605_4,
    -0.000_401_691_367_631_977_6,
    0.000_148_422_178_914_201_46,
    -4.008_240_736_346_437e-5,
];

const LOG_SLOPE: [f64; 5] = [
    0.078_894_091_9,
    -0.047_041_708_6,
    0.021_405_118_6,
    -0.009_860_815_6,
    0.003_392_854_8,
];

/// Saturation specific humidity and its slope with temperature.
#[derive(Clone, Copy, Debug)]
pub struct Saturation {
    /// q*, kg/kg.
    pub humidity: Lanes,
    /// dq*/dT, K-1.
    pub slope: Lanes,
}

/// Saturation at `temperature_c` (degC).
#[inline(always)]
pub fn saturation(temperature_c: Lanes) -> Saturation {
    let u = (temperature_c
        .max(Lanes::splat(-80.0))
        .min(Lanes::splat(60.0))
        + 10.0)
        * (1.0 / 70.0);
    let root = polynomial(u, &ROOT);
    let square = root * root;
    let fourth = square * square;
    let eighth = fourth * fourth;
    let humidity = eighth * eighth;
    Saturation {
        humidity,
        slope: humidity * polynomial(u, &LOG_SLOPE),
    }
}

/// Saturation specific humidity of one temperature (degC), kg/kg.
pub fn saturation_humidity(temperature_c: f64) -> f64 {
    saturation(Lanes::splat(temperature_c)).humidity.0[0]
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Bolton (1980) eq. 10 (memory): `e_s` = 6.112 hPa exp(17.67 T / (T + 243.5)), at 1013.25 hPa.
    fn bolton(t: f64) -> f64 {
        0.622 * 6.112 * (17.67 * t / (t + 243.5)).exp() / 1013.25
    }

    #[test]
    fn published_humidity_follows_bolton_1980() {
        for i in -80..=60 {
            let t = f64::from(i);
            assert!(
                (saturation_humidity(t) / bolton(t) - 1.0).abs() < 2.2e-6,
                "{t}"
            );
        }
    }

    #[test]
    fn analytic_slope_is_the_derivative_to_its_stated_error() {
        for i in -79..60 {
            let t = f64::from(i);
            let difference = (saturation_humidity(t + 1e-3) - saturation_humidity(t - 1e-3)) / 2e-3;
            let slope = saturation(Lanes::splat(t)).slope.0[0];
            assert!(
                (slope / difference - 1.0).abs() < 3e-3,
                "{t}: {slope} {difference}"
            );
        }
    }
}
