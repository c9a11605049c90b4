//! The planet's surface from a configuration: how much of each band is land, and how high.

use super::exchange::Surface;
use super::{RangeError, Ranges};
use crate::grid::latitude::LatitudeBands;
use serde::{Deserialize, Serialize};

/// Surface in a configuration: values on equally wide latitude bands from pole to pole (any
/// number of them), averaged conservatively onto the bands of the run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SurfaceSpec {
    /// Land fraction, south to north, 0-1.
    pub land_fraction: Vec<f64>,
    /// Mean elevation of the land, south to north, m.
    pub land_elevation_m: Vec<f64>,
    /// South of this latitude everything counts as land (ice shelves; small enclosed seas there
    /// would grow ice without bound), degrees north.
    pub all_land_south_of_deg: f64,
    /// South of this latitude land carries a permanent ice sheet, degrees north.
    pub ice_sheet_south_of_deg: f64,
}

impl SurfaceSpec {
    /// Averages onto bands.
    ///
    /// # Errors
    /// All values out of range.
    pub fn build(&self, bands: &LatitudeBands) -> Result<Surface, Vec<RangeError>> {
        self.check()?;
        let fraction = bands.remap_equal_latitude(&self.land_fraction);
        let weighted: Vec<f64> = self
            .land_fraction
            .iter()
            .zip(&self.land_elevation_m)
            .map(|(f, z)| f * z)
            .collect();
        let height = bands.remap_equal_latitude(&weighted);
        let centre = bands.centre_deg();
        let land_fraction: Vec<f64> = fraction
            .iter()
            .zip(centre)
            .map(|(f, lat)| {
                if *lat < self.all_land_south_of_deg {
                    1.0
                } else {
                    f.min(1.0)
                }
            })
            .collect();
        let ocean_area_m2 = land_fraction
            .iter()
            .zip(bands.area_m2())
            .map(|(f, a)| (1.0 - f) * a);
        let share = |lat: &f64| f64::from(u8::from(*lat < self.ice_sheet_south_of_deg));
        Ok(Surface {
            land_elevation_m: fraction
                .iter()
                .zip(&height)
                .map(|(f, z)| if *f > 0.0 { z / f } else { 0.0 })
                .collect(),
            ice_sheet_fraction: centre.iter().map(share).collect(),
            ocean_area_m2: ocean_area_m2.collect(),
            land_fraction,
            bands: bands.clone(),
        })
    }

    fn check(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let (fractions, heights) = (self.land_fraction.len(), self.land_elevation_m.len());
        let limit = "needs as many elevations as land fractions, at least two";
        let fits = fractions == heights && fractions >= 2;
        r.require(
            "surface.land_elevation_m (number of values)",
            heights as f64,
            fits,
            limit,
        );
        for (i, &fraction) in self.land_fraction.iter().enumerate() {
            r.fraction(&format!("surface.land_fraction[{i}]"), fraction);
        }
        for (i, &height) in self.land_elevation_m.iter().enumerate() {
            let limit = "must lie between -500 and 9000 m";
            r.require(
                &format!("surface.land_elevation_m[{i}]"),
                height,
                (-500.0..=9000.0).contains(&height),
                limit,
            );
        }
        let ocean = self.land_fraction.iter().any(|f| *f < 1.0);
        r.require(
            "surface.land_fraction (largest sea)",
            0.0,
            ocean || fractions < 2,
            "must leave some ocean",
        );
        for (key, value) in [
            ("surface.all_land_south_of_deg", self.all_land_south_of_deg),
            (
                "surface.ice_sheet_south_of_deg",
                self.ice_sheet_south_of_deg,
            ),
        ] {
            let limit = "must be a latitude from -90 (nowhere) to 0 degrees north";
            r.require(key, value, (-90.0..=0.0).contains(&value), limit);
        }
        r.finish()
    }
}
