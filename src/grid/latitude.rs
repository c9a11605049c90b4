//! Latitude bands from pole to pole.
//!
//! Bands are finite volumes in x = sin(latitude); areas are exact, 2 pi R^2 (x_{i+1} - x_i).
//! Diffusion across the edge between two bands is (1 - x^2) dT/dx, taken as a two-point
//! difference in the coordinate in which the bands are equal:
//! - equal latitude: (1 - x^2) d/dx = cos(lat) d/dlat, so the weight is cos(edge) / dlat;
//! - equal x: the weight is (1 - x_edge^2) / dx, which is exact for the second Legendre mode and
//!   therefore serves the closed forms (both are second order).
//!
//! Bands equal in latitude are about three times more accurate at the same number.

use crate::units::EARTH_RADIUS_M;
use serde::{Deserialize, Serialize};
use std::f64::consts::PI;

/// The coordinate in which all bands are equally wide.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Spacing {
    /// Equal steps of latitude.
    EqualLatitude,
    /// Equal steps of sin(latitude): equal areas.
    EqualSine,
}

/// A number of bands the kernel cannot use.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
#[error(
    "{bands} latitude bands cannot be used: take a multiple of 4 from {min} to {max} (36 is 5 degrees)",
    min = LatitudeBands::MIN, max = LatitudeBands::MAX
)]
pub struct BandsError {
    /// The number asked for.
    pub bands: usize,
}

/// Bands from the south pole (index 0) to the north pole.
#[derive(Clone, Debug, PartialEq)]
pub struct LatitudeBands {
    spacing: Spacing,
    edge_sine: Vec<f64>,
    edge_deg: Vec<f64>,
    centre_deg: Vec<f64>,
    area_m2: Vec<f64>,
    gradient_weight: Vec<f64>,
}

impl LatitudeBands {
    /// Fewest bands that still resolve the belts of the model.
    pub const MIN: usize = 12;
    /// Most bands: a tenth of a degree.
    pub const MAX: usize = 1800;

    /// Whether this many bands can be built: a multiple of 4 within [`Self::MIN`]..=[`Self::MAX`].
    pub fn usable(bands: usize) -> bool {
        bands.is_multiple_of(4) && (Self::MIN..=Self::MAX).contains(&bands)
    }

    /// Builds `bands` bands.
    ///
    /// # Errors
    /// When the number is not [`Self::usable`].
    pub fn new(bands: usize, spacing: Spacing) -> Result<Self, BandsError> {
        if !Self::usable(bands) {
            return Err(BandsError { bands });
        }
        let fraction = |j: usize| 2.0 * j as f64 / bands as f64 - 1.0;
        let (edge_sine, edge_deg): (Vec<f64>, Vec<f64>) = (0..=bands)
            .map(|j| match spacing {
                Spacing::EqualLatitude => {
                    // Degrees first: 5-degree bands then have exact edges.
                    let degrees = 180.0 * j as f64 / bands as f64 - 90.0;
                    (degrees.to_radians().sin(), degrees)
                }
                Spacing::EqualSine => (fraction(j), fraction(j).asin().to_degrees()),
            })
            .unzip();
        let centre_deg = match spacing {
            Spacing::EqualLatitude => edge_deg.windows(2).map(|e| 0.5 * (e[0] + e[1])).collect(),
            Spacing::EqualSine => edge_sine
                .windows(2)
                .map(|e| (0.5 * (e[0] + e[1])).asin().to_degrees())
                .collect(),
        };
        let sphere = 2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
        let area_m2 = edge_sine
            .windows(2)
            .map(|e| sphere * (e[1] - e[0]))
            .collect();
        let width = 2.0 / bands as f64;
        let gradient_weight = (0..=bands)
            .map(|j| {
                if j == 0 || j == bands {
                    return 0.0;
                }
                match spacing {
                    Spacing::EqualLatitude => edge_deg[j].to_radians().cos() / (width * PI / 2.0),
                    Spacing::EqualSine => (1.0 - edge_sine[j] * edge_sine[j]) / width,
                }
            })
            .collect();
        Ok(Self {
            spacing,
            edge_sine,
            edge_deg,
            centre_deg,
            area_m2,
            gradient_weight,
        })
    }

    /// Number of bands.
    #[expect(
        clippy::len_without_is_empty,
        reason = "never empty: at least MIN bands"
    )]
    pub fn len(&self) -> usize {
        self.area_m2.len()
    }

    /// The coordinate in which the bands are equal.
    pub fn spacing(&self) -> Spacing {
        self.spacing
    }

    /// sin(latitude) of the edges, `len() + 1` values, south to north.
    pub fn edge_sine(&self) -> &[f64] {
        &self.edge_sine
    }

    /// Latitude of the edges, degrees north, `len() + 1` values.
    pub fn edge_deg(&self) -> &[f64] {
        &self.edge_deg
    }

    /// Middle of each band in the coordinate of [`Self::spacing`], degrees north.
    pub fn centre_deg(&self) -> &[f64] {
        &self.centre_deg
    }

    /// Area of each band, m2.
    pub fn area_m2(&self) -> &[f64] {
        &self.area_m2
    }

    /// Weight w of each edge in (1 - x^2) dT/dx = w (T_north - T_south); zero at the poles.
    pub fn gradient_weight(&self) -> &[f64] {
        &self.gradient_weight
    }

    /// Mean of the second Legendre polynomial over each band.
    pub fn mean_p2(&self) -> Vec<f64> {
        let integral = |x: f64| 0.5 * (x * x * x - x);
        self.edge_sine
            .windows(2)
            .map(|e| (integral(e[1]) - integral(e[0])) / (e[1] - e[0]))
            .collect()
    }

    /// Mean of sin(latitude) over each band.
    pub fn mean_sine(&self) -> Vec<f64> {
        self.edge_sine
            .windows(2)
            .map(|e| 0.5 * (e[0] + e[1]))
            .collect()
    }

    /// Area-weighted mean of a field over all bands.
    ///
    /// # Panics
    /// When `field` is shorter than the grid.
    pub fn mean(&self, field: &[f64]) -> f64 {
        let field = &field[..self.len()];
        let total: f64 = self.area_m2.iter().sum();
        self.area_m2
            .iter()
            .zip(field)
            .map(|(a, v)| a * v)
            .sum::<f64>()
            / total
    }

    /// Share of each band's area that lies between two latitudes (degrees north), 0-1.
    pub fn share_between(&self, south_deg: f64, north_deg: f64) -> Vec<f64> {
        let limit = |deg: f64| deg.clamp(-90.0, 90.0).to_radians().sin();
        let (south, north) = (limit(south_deg), limit(north_deg));
        self.edge_sine
            .windows(2)
            .map(|e| (e[1].min(north) - e[0].max(south)).max(0.0) / (e[1] - e[0]))
            .map(|share| share.min(1.0))
            .collect()
    }

    /// Field given on equally wide source bands in latitude, averaged conservatively onto these.
    ///
    /// `source[k]` holds from -90 + 180 k/K to -90 + 180 (k+1)/K degrees; weights are areas.
    pub fn remap_equal_latitude(&self, source: &[f64]) -> Vec<f64> {
        let count = source.len();
        let edge = |k: usize| (PI * (k as f64 / count as f64 - 0.5)).sin();
        self.edge_sine
            .windows(2)
            .map(|e| {
                let (mut weight, mut sum) = (0.0, 0.0);
                for (k, value) in source.iter().enumerate() {
                    let overlap = edge(k + 1).min(e[1]) - edge(k).max(e[0]);
                    if overlap > 1e-12 {
                        weight += overlap;
                        sum += overlap * value;
                    }
                }
                sum / weight
            })
            .collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn analytic_areas_sum_to_the_sphere_and_means_are_exact() {
        for spacing in [Spacing::EqualLatitude, Spacing::EqualSine] {
            let bands = LatitudeBands::new(36, spacing).unwrap();
            let total: f64 = bands.area_m2().iter().sum();
            let sphere = 4.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
            assert!((total / sphere - 1.0).abs() < 1e-14);
            assert!(bands.mean(&bands.mean_p2()).abs() < 1e-15);
            assert!(bands.mean(&bands.mean_sine()).abs() < 1e-15);
        }
    }

    #[test]
    fn analytic_remap_keeps_values_on_the_same_grid_and_the_global_mean() {
        let bands = LatitudeBands::new(36, Spacing::EqualLatitude).unwrap();
        let source: Vec<f64> = (0..36).map(|k| f64::from(k * k)).collect();
        for (a, b) in bands.remap_equal_latitude(&source).iter().zip(&source) {
            assert!((a - b).abs() < 1e-9);
        }
        let fine = LatitudeBands::new(144, Spacing::EqualSine).unwrap();
        let mean = fine.mean(&fine.remap_equal_latitude(&source));
        assert!((mean - bands.mean(&source)).abs() < 1e-9);
    }

    #[test]
    fn analytic_shares_between_latitudes_add_up_to_the_zone() {
        let bands = LatitudeBands::new(36, Spacing::EqualSine).unwrap();
        let share = bands.share_between(-8.0, 47.0);
        let zone = 2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M;
        let zone = zone * (47_f64.to_radians().sin() + 8_f64.to_radians().sin());
        let sum: f64 = share.iter().zip(bands.area_m2()).map(|(s, a)| s * a).sum();
        assert!((sum / zone - 1.0).abs() < 1e-13);
    }

    #[test]
    fn unusable_numbers_of_bands_are_refused() {
        for bands in [0, 8, 37, 4000] {
            assert_eq!(
                LatitudeBands::new(bands, Spacing::EqualSine),
                Err(BandsError { bands })
            );
        }
    }
}
