//! Parameters of the equatorial feedback, as they stand in the configuration.
//!
//! Each field gives symbol, unit, allowed range and source; the equations are in the module above.

use crate::physics::{RangeError, Ranges};
use serde::{Deserialize, Serialize};

/// Parameters of [`super::EquatorialPacific`].
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Params {
    /// Half-width of the equatorial belt whose mean is the reference temperature, degrees, 1-30.
    /// Tuned here.
    pub half_width_deg: f64,
    /// dTq, K, -10 to 10: the Pacific belt minus the belt of all oceans. Tuned here.
    pub offset_k: f64,
    /// f, dimensionless, 0.05-0.95: share of the equator that belongs to the east. Tuned here.
    pub east_share: f64,
    /// tau0, dimensionless, >= 0: wind stress without an east-west contrast. Tuned here.
    pub stress_base: f64,
    /// mu, K-1, >= 0: growth of the wind stress with the contrast. Tuned here.
    pub stress_per_k: f64,
    /// taumax, dimensionless, >= tau0: largest wind stress. Tuned here.
    pub stress_limit: f64,
    /// `z_ent`, m, > 0: depth from which water is entrained without wind. Tuned here.
    pub entrainment_depth_m: f64,
    /// sl, m, >= 0: how much a unit of wind stress lifts the eastern thermocline. Tuned here.
    pub tilt_m: f64,
    /// `a_eq`, dimensionless, >= 0: contrast of the column felt at the eastern surface. Tuned here.
    pub entrainment_efficiency: f64,
    /// `w_z`, s-1, >= 0: rate of upwelling per unit of wind stress. Tuned here (1/48 per day).
    pub upwelling_rate_s: f64,
    /// eps, s-1, > 0: damping of a surface anomaly. Tuned here (1/90 per day).
    pub damping_rate_s: f64,
    /// Largest west-east contrast looked for, K, 1-40. Tuned here.
    pub largest_contrast_k: f64,
    /// Contrast from which the first year starts, K, 0 to the largest. Observed 4.2 (29.2 - 25.0 degC).
    pub initial_contrast_k: f64,
    /// Upwelling coasts.
    pub coast: Coast,
}

/// Upwelling coasts.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Coast {
    /// Latitudes, degrees north, -60 to 60. User's choice: west coasts of the continents.
    pub coastal_latitudes_deg: Vec<f64>,
    /// `a_c`, dimensionless, 0-1: contrast of the column felt at the coast. Tuned here.
    pub efficiency: f64,
    /// `z_src`, m, 10-300: depth of the water that comes up. Within 60-150 m; tuned here.
    pub source_depth_m: f64,
}

impl Params {
    /// All parameters outside their ranges.
    ///
    /// # Errors
    /// When there is at least one.
    pub fn check(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let most = self.largest_contrast_k;
        for (key, value, [low, high], limit) in [
            (
                "half_width_deg",
                self.half_width_deg,
                [1.0, 30.0],
                "must lie between 1 and 30 degrees",
            ),
            (
                "offset_k",
                self.offset_k,
                [-10.0, 10.0],
                "must lie between -10 and 10 K",
            ),
            (
                "east_share",
                self.east_share,
                [0.05, 0.95],
                "must lie between 0.05 and 0.95",
            ),
            (
                "largest_contrast_k",
                most,
                [1.0, 40.0],
                "must lie between 1 and 40 K",
            ),
            (
                "initial_contrast_k",
                self.initial_contrast_k,
                [0.0, most],
                "must lie between 0 and the largest contrast",
            ),
        ] {
            r.require(key, value, low <= value && value <= high, limit);
        }
        self.check_feedback(&mut r);
        self.coast.check(&mut r);
        r.finish()
    }

    fn check_feedback(&self, r: &mut Ranges) {
        r.not_negative("stress_base", self.stress_base);
        r.not_negative("stress_per_k", self.stress_per_k);
        let ordered = self.stress_limit >= self.stress_base && self.stress_limit.is_finite();
        r.require(
            "stress_limit",
            self.stress_limit,
            ordered,
            "must be at least stress_base",
        );
        r.positive("entrainment_depth_m", self.entrainment_depth_m);
        r.not_negative("tilt_m", self.tilt_m);
        r.not_negative("entrainment_efficiency", self.entrainment_efficiency);
        r.not_negative("upwelling_rate_s", self.upwelling_rate_s);
        r.positive("damping_rate_s", self.damping_rate_s);
    }
}

impl Coast {
    fn check(&self, r: &mut Ranges) {
        r.fraction("coast.efficiency", self.efficiency);
        r.require(
            "coast.source_depth_m",
            self.source_depth_m,
            (10.0..=300.0).contains(&self.source_depth_m),
            "must lie between 10 and 300 m",
        );
        let coasts = &self.coastal_latitudes_deg;
        r.require(
            "coast.coastal_latitudes_deg (number of values)",
            coasts.len() as f64,
            !coasts.is_empty(),
            "needs at least one latitude",
        );
        for (i, latitude) in coasts.iter().enumerate() {
            r.require(
                &format!("coast.coastal_latitudes_deg[{i}]"),
                *latitude,
                (-60.0..=60.0).contains(latitude) && (i == 0 || *latitude > coasts[i - 1]),
                "must lie between 60S and 60N and increase",
            );
        }
    }
}
