//! Where the column meets the surface: its area and the weights of the bands.
//!
//! Upwelling into band i (m3 s-1): `u_i` = (`q_d` - `q_so`) `U_low,i` + `q_stc` `U_eq,i` + `q_so` `U_so,i`, each pattern
//! proportional to ocean area times a smooth window and with sum 1:
//! - broad: 1 - s(|lat|; limit, width), s(y; c, w) = (1 + tanh((y - c)/w))/2;
//! - equatorial: exp(-(lat/width)^2/2);
//! - Southern Ocean: exp(-((lat - centre)/width)^2/2).
//!
//! Exchange with the mixed layers: area `A_ocean,i` (1 - s(|lat|; limit, width)). All windows are taken at
//! the middle of the bands; where there is no ocean every weight is zero. The column's own area is the
//! ocean area equatorward of the limiting latitude. Units: m2. Source: definitions here.

use super::params::Params;
use crate::numerics::sum::compensated;
use crate::physics::exchange::Surface;
use crate::physics::{RangeError, Ranges, smooth_step};

/// Areas and weights of all bands.
#[derive(Clone, Debug)]
pub struct Patterns {
    /// Area of the column, m2.
    pub column_area_m2: f64,
    /// Share of it in each band, sum 1.
    pub area_share: Vec<f64>,
    /// Broad upwelling, sum 1.
    pub broad: Vec<f64>,
    /// Equatorial upwelling, sum 1.
    pub equatorial: Vec<f64>,
    /// Upwelling in the Southern Ocean, sum 1.
    pub southern: Vec<f64>,
    /// Area over which each band exchanges water with the top level, m2.
    pub exchange_area_m2: Vec<f64>,
}

impl Patterns {
    /// Builds the weights.
    ///
    /// # Errors
    /// When there is no ocean under one of the windows.
    pub fn new(params: &Params, surface: &Surface) -> Result<Self, Vec<RangeError>> {
        let latitude = surface.bands.centre_deg();
        let under = |window: &dyn Fn(f64) -> f64| -> Vec<f64> {
            let pairs = latitude.iter().zip(&surface.ocean_area_m2);
            pairs
                .map(|(lat, a)| if *a > 0.0 { a * window(*lat) } else { 0.0 })
                .collect()
        };
        let up = &params.upwelling;
        let bell = |distance: f64, width: f64| (-0.5 * (distance / width).powi(2)).exp();
        let edge = |lat: f64, limit: f64, width: f64| 1.0 - smooth_step(lat.abs(), limit, width);
        let exchange = &params.surface_exchange;
        let inside = surface
            .bands
            .share_between(-params.area_limit_deg, params.area_limit_deg);
        let area: Vec<f64> = inside
            .iter()
            .zip(&surface.ocean_area_m2)
            .map(|(s, a)| s * a)
            .collect();
        let column_area_m2: f64 = area.iter().sum();
        let mut ranges = Ranges::default();
        let patterns = Self {
            column_area_m2,
            area_share: normalised(&mut ranges, "area_limit_deg", area),
            broad: normalised(
                &mut ranges,
                "upwelling.broad_limit_deg",
                under(&|lat| edge(lat, up.broad_limit_deg, up.broad_width_deg)),
            ),
            equatorial: normalised(
                &mut ranges,
                "upwelling.equatorial_width_deg",
                under(&|lat| bell(lat, up.equatorial_width_deg)),
            ),
            southern: normalised(
                &mut ranges,
                "upwelling.southern_latitude_deg",
                under(&|lat| bell(lat - up.southern_latitude_deg, up.southern_width_deg)),
            ),
            exchange_area_m2: under(&|lat| edge(lat, exchange.limit_deg, exchange.width_deg)),
        };
        let exchanging: f64 = patterns.exchange_area_m2.iter().sum();
        let limit = "leaves no ocean under this window";
        ranges.require(
            "surface_exchange.limit_deg",
            exchanging,
            exchanging > 0.0,
            limit,
        );
        ranges.finish().map(|()| patterns)
    }

    /// Mean of a field over the area that exchanges water with the column.
    pub fn exchange_mean(&self, field: &[f64]) -> f64 {
        self.exchange_sum(field) / self.exchange_area_m2.iter().sum::<f64>()
    }

    /// Sum of area times field over that area; bands without it do not count, whatever they hold.
    pub fn exchange_sum(&self, field: &[f64]) -> f64 {
        self.exchange_area_m2
            .iter()
            .zip(field)
            .filter(|(a, _)| **a > 0.0)
            .map(|(a, v)| a * v)
            .sum()
    }
}

fn normalised(ranges: &mut Ranges, key: &str, mut weights: Vec<f64>) -> Vec<f64> {
    let sum: f64 = weights.iter().sum();
    ranges.require(key, sum, sum > 0.0, "leaves no ocean under this window");
    for w in &mut weights {
        *w /= sum;
    }
    // The last rounding goes to the largest weight: heat handed out must sum to heat given.
    let rest = 1.0 - compensated(weights.iter().copied());
    if let Some(largest) = weights.iter_mut().max_by(|a, b| a.total_cmp(b)) {
        *largest += rest;
    }
    weights
}
