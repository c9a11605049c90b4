//! Component `rain_belt`: what drives the tropical rain belt. An index of the drive, *not* rainfall.
//!
//! A diagnostic: it reads the exchange and moves nothing.
//! - Energy-flux equator: latitude (radians) -F0/(a N0), where the northward energy transport of the
//!   atmosphere passes zero if it grows linearly from the equator. F0 = transport across the equator per metre
//!   of latitude circle, transport/(2 pi a), W m-1; N0 = net energy input to the atmosphere (top minus
//!   surface) averaged over |lat| < a limit, W m-2; a = Earth's radius, m. A northward transport puts it
//!   south. NaN when N0 is below a limit: the relation then has no meaning. Valid within the
//!   tropics only; the value is not clipped.
//! - Summer land-sea contrast: land minus ocean 2 m temperature (K), June-August in the north and
//!   December-February in the south, by band, and as area-weighted mean of the bands between two
//!   latitudes of each hemisphere that hold both land and ocean; NaN where there are none.
//!
//! Numerics: a band belongs to a zone with the share of its area inside; exact for band means.
//! Sources (from memory): Kang et al. 2008 and Bischoff & Schneider 2014 for the energy-flux
//! equator; Byrne & O'Gorman 2013 for the mechanism of the contrast, whose measure is defined here.

pub mod params;

pub use params::Params;

use crate::forcing::YearForcing;
use crate::physics::budget::{Account, Quantity};
use crate::physics::exchange::{Exchange, Surface};
use crate::physics::{Build, Component, PhysicsError, RangeError, Setting};
use crate::series::{Axis, Scale, Statistic, Variable};
use crate::units::{EARTH_RADIUS_M, PETAWATT_W};
use std::f64::consts::PI;

const NAME: &str = "rain_belt";
/// Months of summer, counted from January = 0: southern, then northern hemisphere.
const SUMMER: [[usize; 3]; 2] = [[11, 0, 1], [5, 6, 7]];

/// The drive of the rain belt.
#[derive(Clone, Debug)]
pub struct RainBelt {
    params: Params,
    /// Weights of the belt that gives N0, sum 1.
    belt: Vec<f64>,
    /// Weights of the land-sea contrast, m2, zero where land or ocean is missing.
    contrast_area_m2: Vec<f64>,
    has_both: Vec<bool>,
    transport_w: f64,
    energy_input_w_m2: f64,
    contrast_k: [f64; 2],
    contrast_by_band_k: Vec<f64>,
}

impl RainBelt {
    /// Builds the component.
    ///
    /// # Errors
    /// All parameters out of range.
    pub fn new(params: &Params, surface: &Surface) -> Result<Self, Vec<RangeError>> {
        params.check()?;
        let bands = &surface.bands;
        let width = params.equatorial_half_width_deg;
        let share = bands.share_between(-width, width);
        let pairs = share.iter().zip(bands.area_m2());
        let mut belt: Vec<f64> = pairs.map(|(s, a)| s * a).collect();
        let total: f64 = belt.iter().sum();
        for w in &mut belt {
            *w /= total;
        }
        let (from, to) = (params.contrast_from_deg, params.contrast_to_deg);
        let (south, north) = (
            bands.share_between(-to, -from),
            bands.share_between(from, to),
        );
        let has_both: Vec<bool> = (0..bands.len())
            .map(|i| surface.land_fraction[i] > 0.0 && surface.ocean_area_m2[i] > 0.0)
            .collect();
        let contrast_area_m2 = (0..bands.len())
            .map(|i| f64::from(u8::from(has_both[i])) * (south[i] + north[i]) * bands.area_m2()[i])
            .collect();
        Ok(Self {
            params: *params,
            belt,
            contrast_area_m2,
            contrast_by_band_k: vec![f64::NAN; has_both.len()],
            has_both,
            transport_w: f64::NAN,
            energy_input_w_m2: f64::NAN,
            contrast_k: [f64::NAN; 2],
        })
    }

    /// Latitude of the energy-flux equator, degrees north; NaN when the energy input is too small.
    pub fn energy_flux_equator_deg(&self) -> f64 {
        energy_flux_equator_deg(
            self.transport_w,
            self.energy_input_w_m2,
            self.params.smallest_energy_input_w_m2,
        )
    }

    /// Land minus ocean 2 m temperature in local summer, K, `[south, north]`.
    pub fn summer_contrast_k(&self) -> [f64; 2] {
        self.contrast_k
    }

    fn measure_contrast(&mut self, exchange: &Exchange) {
        let n = self.has_both.len();
        let (mut sum, mut area) = ([0.0; 2], [0.0; 2]);
        for i in 0..n {
            let side = usize::from(i >= n / 2);
            let difference = SUMMER[side]
                .iter()
                .map(|month| {
                    let at = month * n + i;
                    exchange.land_air_2m_c[at] - exchange.ocean_air_2m_c[at]
                })
                .sum::<f64>()
                / 3.0;
            self.contrast_by_band_k[i] = if self.has_both[i] {
                difference
            } else {
                f64::NAN
            };
            if self.contrast_area_m2[i] > 0.0 {
                sum[side] += self.contrast_area_m2[i] * difference;
                area[side] += self.contrast_area_m2[i];
            }
        }
        // No area: 0/0, NaN.
        self.contrast_k = [sum[0] / area[0], sum[1] / area[1]];
    }
}

/// Latitude of the energy-flux equator, degrees north, from the northward transport across the
/// equator (W) and the energy input of the equatorial atmosphere (W m-2); NaN below `smallest_w_m2`.
pub fn energy_flux_equator_deg(transport_w: f64, input_w_m2: f64, smallest_w_m2: f64) -> f64 {
    if input_w_m2 >= smallest_w_m2 {
        let per_metre = transport_w / (2.0 * PI * EARTH_RADIUS_M);
        (-per_metre / (EARTH_RADIUS_M * input_w_m2)).to_degrees()
    } else {
        f64::NAN
    }
}

impl Build for RainBelt {
    type Params = Params;

    fn check(params: &Params) -> Result<(), Vec<RangeError>> {
        params.check()
    }

    fn build(
        params: &Params,
        setting: &Setting,
        _: &mut Exchange,
    ) -> Result<Self, Vec<RangeError>> {
        Self::new(params, &setting.surface)
    }
}

impl Component for RainBelt {
    fn name(&self) -> &'static str {
        NAME
    }

    fn advance(
        &mut self,
        _forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        // The number of bands is even: the middle edge is the equator.
        self.transport_w = exchange.atmosphere_transport_w[self.belt.len() / 2];
        let input = self.belt.iter().zip(&exchange.atmosphere_energy_input_w_m2);
        self.energy_input_w_m2 = input.map(|(w, n)| w * n).sum();
        if !(self.transport_w.is_finite() && self.energy_input_w_m2.is_finite()) {
            return Err(PhysicsError::NotFinite {
                component: NAME,
                variable: "energy transport or input of the atmosphere",
                place: "equator".to_owned(),
            });
        }
        self.measure_contrast(exchange);
        Ok(())
    }

    fn conserves(&self) -> &'static [Quantity] {
        &[]
    }

    fn accounts(&self) -> Vec<Account> {
        Vec::new()
    }

    fn variables(&self) -> Vec<Variable> {
        let plain = |name, units, long_name| Variable {
            name,
            axes: &[],
            units,
            long_name,
            standard_name: None,
            scale: Scale::Plain,
            statistic: Statistic::Mean,
        };
        let contrast = |name, axes, long_name| Variable {
            axes,
            scale: Scale::TemperatureDifference,
            ..plain(name, "K", long_name)
        };
        vec![
            plain(
                "energy_flux_equator",
                "degrees_north",
                "latitude of the energy-flux equator: an index of the drive of the rain belt, not rainfall",
            ),
            plain(
                "cross_equatorial_atmosphere_transport",
                "PW",
                "northward heat transport of the atmosphere across the equator",
            ),
            plain(
                "equatorial_energy_input",
                "W m-2",
                "net energy input to the equatorial atmosphere",
            ),
            contrast(
                "summer_land_sea_contrast",
                &[Axis::Hemisphere],
                "land minus ocean 2 m temperature of local summer in the subtropics",
            ),
            contrast(
                "summer_land_sea_contrast_by_band",
                &[Axis::Latitude],
                "land minus ocean 2 m temperature of local summer",
            ),
        ]
    }

    fn record(&self, values: &mut Vec<f64>) {
        values.extend([
            self.energy_flux_equator_deg(),
            self.transport_w / PETAWATT_W,
            self.energy_input_w_m2,
        ]);
        values.extend(self.contrast_k);
        values.extend_from_slice(&self.contrast_by_band_k);
    }

    fn save(&self) -> Vec<f64> {
        Vec::new()
    }

    fn weights(&self) -> Vec<f64> {
        Vec::new()
    }

    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError> {
        if state.is_empty() {
            return Ok(());
        }
        Err(PhysicsError::RestartLength {
            component: NAME,
            found: state.len(),
            needed: 0,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physics::fixtures::{reference, surface, year};

    fn params() -> Params {
        reference("rain_belt")
    }

    fn advanced(exchange: &mut Exchange) -> RainBelt {
        let mut belt = RainBelt::new(&params(), &surface(36)).unwrap();
        belt.advance(&year(1.0), exchange).unwrap();
        belt
    }

    #[test]
    fn analytic_index_is_where_a_linear_transport_passes_zero() {
        // Steady atmosphere with uniform input N in the tropics: the transport through latitude phi is
        // F + 2 pi a^2 N sin(phi), in W; it is zero at sin(phi) = -F/(2 pi a^2 N).
        let bands = surface(36).bands;
        for (flux, input) in [(-0.3e15, 20.0), (0.2e15, 15.0), (0.0, 20.0)] {
            let mut e = Exchange::new(36);
            e.atmosphere_energy_input_w_m2.fill(input);
            let scale = 2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M * input;
            for (t, x) in e.atmosphere_transport_w.iter_mut().zip(bands.edge_sine()) {
                *t = flux + scale * x;
            }
            let exact = (-flux / scale).asin().to_degrees();
            let found = advanced(&mut e).energy_flux_equator_deg();
            // Linear in latitude instead of its sine: off by phi^3/6.
            assert!((found - exact).abs() < 0.01, "{found} {exact}");
            assert!(flux == 0.0 || (found > 0.0) == (flux < 0.0));
        }
    }

    #[test]
    fn published_size_for_the_observed_order_of_the_transport() {
        // -0.33 PW and 15 W/m2 (order of the observed values; memory) give about 5 degrees north:
        // 0.33e15/(2 pi 6.371e6^2 15) = 0.0863 rad = 4.94 degrees.
        let found = energy_flux_equator_deg(-0.33e15, 15.0, 1.0);
        assert!((found - 4.943).abs() < 0.005, "{found}");
    }

    #[test]
    fn analytic_no_index_without_energy_input() {
        for input in [-10.0, 0.0, 0.5, f64::NAN] {
            assert!(energy_flux_equator_deg(1e14, input, 1.0).is_nan());
        }
    }

    #[test]
    fn analytic_contrast_takes_the_summer_of_each_hemisphere() {
        let mut e = Exchange::new(36);
        for month in 0..12 {
            for band in 0..36 {
                let summer = SUMMER[usize::from(band >= 18)].contains(&month);
                let size = if band >= 18 { 7.0 } else { 4.0 };
                e.land_air_2m_c[36 * month + band] = if summer { size } else { -30.0 };
                e.ocean_air_2m_c[36 * month + band] = 1.0;
            }
        }
        let belt = advanced(&mut e);
        let [south, north] = belt.summer_contrast_k();
        assert!((south - 3.0).abs() < 1e-12 && (north - 6.0).abs() < 1e-12);
        // All land poleward of 80S: no contrast there.
        assert!(belt.contrast_by_band_k[0].is_nan() && belt.contrast_by_band_k[20] > 0.0);
        let mut values = Vec::new();
        belt.record(&mut values);
        assert_eq!(values.len(), 3 + 2 + 36);
    }

    #[test]
    fn regress_without_land_there_is_no_contrast_and_bad_input_is_an_error() {
        let mut ocean = surface(36);
        ocean.land_fraction.fill(0.0);
        let mut belt = RainBelt::new(&params(), &ocean).unwrap();
        let mut e = Exchange::new(36);
        belt.advance(&year(1.0), &mut e).unwrap();
        assert!(belt.summer_contrast_k().iter().all(|c| c.is_nan()));
        assert!(belt.energy_flux_equator_deg().is_nan());
        e.atmosphere_transport_w[18] = f64::INFINITY;
        assert!(belt.advance(&year(1.0), &mut e).is_err());
        assert!(belt.restore(&[]).is_ok() && belt.restore(&[1.0]).is_err());
        let mut bad = params();
        bad.contrast_to_deg = 5.0;
        assert!(RainBelt::new(&bad, &ocean).is_err());
    }
}
