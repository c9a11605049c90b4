//! Parameters of the rain belt's drive, as they stand in the configuration.
//!
//! Each field gives symbol, unit, allowed range and source; the equations are in the module above.

use crate::physics::{RangeError, Ranges};
use serde::{Deserialize, Serialize};

/// Parameters of [`super::RainBelt`].
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Params {
    /// Half-width of the belt whose mean energy input is N0, degrees, 1-20. Definition here.
    pub equatorial_half_width_deg: f64,
    /// Smallest N0 for which the relation is used, W m-2, > 0. Tuned here.
    pub smallest_energy_input_w_m2: f64,
    /// Equatorward limit of the land-sea contrast, degrees, 0-80. Definition here.
    pub contrast_from_deg: f64,
    /// Poleward limit, degrees, above the other, at most 90. Definition here.
    pub contrast_to_deg: f64,
}

impl Params {
    /// All parameters outside their ranges.
    ///
    /// # Errors
    /// When there is at least one.
    pub fn check(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let (width, from, to) = (
            self.equatorial_half_width_deg,
            self.contrast_from_deg,
            self.contrast_to_deg,
        );
        r.require(
            "equatorial_half_width_deg",
            width,
            (1.0..=20.0).contains(&width),
            "must lie between 1 and 20 degrees",
        );
        r.positive(
            "smallest_energy_input_w_m2",
            self.smallest_energy_input_w_m2,
        );
        r.require(
            "contrast_from_deg",
            from,
            (0.0..=80.0).contains(&from),
            "must lie between 0 and 80 degrees",
        );
        r.require(
            "contrast_to_deg",
            to,
            to > from && to <= 90.0,
            "must lie above contrast_from_deg and not beyond the pole",
        );
        r.finish()
    }
}
