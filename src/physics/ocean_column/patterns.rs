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

const NO_OCEAN: &str = "leaves no ocean under this window";

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
        let up = &params.upwelling;
        let bell = |distance: f64, width: f64| (-0.5 * (distance / width).powi(2)).exp();
        let edge = |lat: f64, limit: f64, width: f64| 1.0 - smooth_step(lat.abs(), limit, width);
        let exchange = &params.surface_exchange;
        let limit = params.area_limit_deg;
        let inside = surface.bands.share_between(-limit, limit);
        let area = inside.iter().zip(&surface.ocean_area_m2);
        let area: Vec<f64> = area.map(|(s, a)| s * a).collect();
        let broad = under(surface, |lat| {
            edge(lat, up.broad_limit_deg, up.broad_width_deg)
        });
        let equatorial = under(surface, |lat| bell(lat, up.equatorial_width_deg));
        let southern = under(surface, |lat| {
            bell(lat - up.southern_latitude_deg, up.southern_width_deg)
        });
        let mut ranges = Ranges::default();
        let r = &mut ranges;
        let patterns = Self {
            column_area_m2: area.iter().sum(),
            area_share: normalised(r, "area_limit_deg", area),
            broad: normalised(r, "upwelling.broad_limit_deg", broad),
            equatorial: normalised(r, "upwelling.equatorial_width_deg", equatorial),
            southern: normalised(r, "upwelling.southern_latitude_deg", southern),
            exchange_area_m2: under(surface, |lat| {
                edge(lat, exchange.limit_deg, exchange.width_deg)
            }),
        };
        let exchanging: f64 = patterns.exchange_area_m2.iter().sum();
        let key = "surface_exchange.limit_deg";
        ranges.require(key, exchanging, exchanging > 0.0, NO_OCEAN);
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

/// Ocean area times window, exactly zero without ocean.
fn under(surface: &Surface, window: impl Fn(f64) -> f64) -> Vec<f64> {
    let pairs = surface
        .bands
        .centre_deg()
        .iter()
        .zip(&surface.ocean_area_m2);
    pairs
        .map(|(lat, a)| if *a > 0.0 { a * window(*lat) } else { 0.0 })
        .collect()
}

fn normalised(ranges: &mut Ranges, key: &str, mut weights: Vec<f64>) -> Vec<f64> {
    let sum: f64 = weights.iter().sum();
    ranges.require(key, sum, sum > 0.0, NO_OCEAN);
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
