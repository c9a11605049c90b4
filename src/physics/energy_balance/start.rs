//! The state from which a run begins. It is forgotten in the spin-up unless there are several
//! balances: a warm and a frozen start then lead to different ones.

use crate::physics::Ranges;
use serde::{Deserialize, Serialize};

/// Start state: T0 - dT sin^2(latitude) for the air, the surfaces 2 K warmer, water not below
/// freezing; ice where the air is below freezing.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Start {
    /// T0, air at the equator, degC, -100 to 60.
    pub equator_c: f64,
    /// dT, fall from the equator to the poles, K, 0 to 100.
    pub fall_k: f64,
    /// Thickness of the ice, m, 0 to 50.
    pub sea_ice_m: f64,
}

impl Start {
    pub(super) fn check(&self, r: &mut Ranges) {
        for (key, value, allowed, limit) in [
            (
                "start.equator_c",
                self.equator_c,
                -100.0..=60.0,
                "must lie between -100 and 60 degC",
            ),
            (
                "start.fall_k",
                self.fall_k,
                0.0..=100.0,
                "must lie between 0 and 100 K",
            ),
            (
                "start.sea_ice_m",
                self.sea_ice_m,
                0.0..=50.0,
                "must lie between 0 and 50 m",
            ),
        ] {
            r.require(key, value, allowed.contains(&value), limit);
        }
    }
}
