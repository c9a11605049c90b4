//! Parameters turned into the numbers the time step uses, one per band where they vary.
//!
//! Built once; nothing here changes during a run except the albedos of an ice-line set-up, which
//! [`super::ice_line`] renews at each step.

use super::params::{Albedo, Emitter, Params};
use crate::grid::calendar::MonthWeights;
use crate::numerics::lanes::Rows;
use crate::numerics::tridiagonal::Factored;
use crate::physics::exchange::Surface;
use crate::physics::{Setting, saturation::saturation_humidity, smooth_step};
use crate::units::{
    CELSIUS_ZERO_K, EARTH_RADIUS_M, SEA_WATER_FREEZING_C, SEA_WATER_HEAT_CAPACITY_J_M3_K,
    YEAR_SECONDS,
};
use std::f64::consts::PI;

/// Temperature at which the radiative surface flux equals `R0`, K.
const RADIATIVE_REFERENCE_K: f64 = 288.0;

/// Everything constant in a time step. Fields over bands unless said otherwise.
#[derive(Clone, Debug)]
pub(super) struct Coefficients {
    pub bands: usize,
    pub steps: usize,
    pub step_s: f64,
    /// gamma of the third-order formula: 6 h / 11, s.
    pub gamma_s: f64,
    pub months: MonthWeights,

    pub area_m2: Rows,
    pub land: Rows,
    pub ocean: Rows,
    pub ocean_area_m2: Rows,
    /// 1 / ocean area, zero where there is no ocean, m-2.
    pub per_ocean_area: Rows,
    /// One where there is ocean, else zero.
    pub has_ocean: Rows,
    /// Gamma z: land temperature excess when brought to sea level, K.
    pub elevation_k: Rows,

    pub air_share: f64,
    pub air_capacity: f64,
    pub land_capacity: f64,
    pub water_capacity: Rows,
    /// 1 / (heat capacity of the mixed layer), m2 K J-1.
    pub per_water_capacity: Rows,
    /// Heat capacity of the seasonal thermocline, J m-2 K-1.
    pub sub_capacity: f64,
    /// Exchange with it seen by a step, lambda / (1 + gamma lambda / C), W m-2 K-1.
    pub sub_exchange: f64,

    pub air_emission_offset: Rows,
    pub air_emission_slope: f64,
    pub surface_emission_offset: f64,
    pub surface_emission_slope: f64,

    /// `R0` / 288^4, W m-2 K-4.
    pub radiative: f64,
    pub sensible: f64,
    pub latent: f64,
    pub air_humidity: f64,
    pub land_wetness: f64,
    /// Radiative plus latent flux of water at the freezing point without the air's part, W m-2.
    pub freezing_flux: f64,

    pub water_albedo: Rows,
    pub water_zenith: f64,
    pub land_excess: f64,
    pub snow_albedo: Rows,
    pub ice_albedo: Rows,
    pub sheet_albedo: f64,
    /// Fraction of land under permanent ice.
    pub sheet: Rows,
    pub snow_temperature: f64,
    pub snow_steepness: f64,

    pub cover_thickness: f64,
    pub conductivity: f64,

    /// Gyre conductance of each edge, W K-1, `bands + 1`.
    pub gyre_conductance: Vec<f64>,
    pub gyre_factors: Factored,
    /// Ocean area times deep-sinking window, m2.
    pub deep_window: Rows,
    /// Ocean area times subtropical window, m2.
    pub subtropical_window: Rows,
    pub loss_smoothing_squared: f64,
    pub per_convection_temperature: f64,
}

/// Newton slope of the land may not fall below this share of its storage term: keeps the step
/// well posed should the albedo feedback ever outrun it (never seen at 24 steps a year or more).
pub(super) const LEAST_LAND_SLOPE: f64 = 0.25;

/// Ice thinner than this is treated as this thick in the conductance, m (keeps k/h finite; the
/// flux k phi/h tends to k/h0 and does not depend on it).
pub(super) const LEAST_ICE_M: f64 = 1.0e-6;

impl Coefficients {
    pub(super) fn new(p: &Params, setting: &Setting) -> Self {
        let (surface, steps) = (&setting.surface, setting.steps_per_year());
        let bands = &surface.bands;
        let n = bands.len();
        let step_s = YEAR_SECONDS / steps as f64;
        let gamma_s = 6.0 * step_s / 11.0;
        let ocean_flag: Vec<f64> = surface
            .ocean_area_m2
            .iter()
            .map(|a| f64::from(u8::from(*a > 0.0)))
            .collect();
        let ocean: Vec<f64> = surface
            .land_fraction
            .iter()
            .zip(&ocean_flag)
            .map(|(f, o)| (1.0 - f) * o)
            .collect();
        let depth: Vec<f64> = mixed_layer_depth(p, bands.centre_deg());
        let capacity: Vec<f64> = depth
            .iter()
            .map(|d| SEA_WATER_HEAT_CAPACITY_J_M3_K * d)
            .collect();
        let elevation: Vec<f64> = surface
            .land_elevation_m
            .iter()
            .map(|z| p.lapse_rate_k_m * z)
            .collect();
        let (sub_capacity, sub_exchange) = seasonal_layer(p, gamma_s);
        let gyre_conductance = gyre(p, surface);
        let gyre_factors = gyre_matrix(surface, &capacity, &gyre_conductance, gamma_s);
        let optics = Optics::new(p, surface);
        let radiative = p.surface_exchange.radiative_w_m2 / RADIATIVE_REFERENCE_K.powi(4);
        let freezing_k = SEA_WATER_FREEZING_C + CELSIUS_ZERO_K;
        let freezing_flux = radiative * freezing_k.powi(4)
            + p.surface_exchange.latent_w_m2 * saturation_humidity(SEA_WATER_FREEZING_C);
        let (air_on, surface_on) = match p.longwave.emitter {
            Emitter::Air => (1.0, 0.0),
            Emitter::Surface => (0.0, 1.0),
        };
        let slope = p.longwave.slope_w_m2_k;
        let air_emission: Vec<f64> = surface
            .land_fraction
            .iter()
            .zip(&elevation)
            .map(|(f, e)| air_on * (p.longwave.offset_w_m2 - slope * f * e))
            .collect();
        Self {
            bands: n,
            steps,
            step_s,
            gamma_s,
            months: setting.months.clone(),
            area_m2: Rows::from_slice(bands.area_m2()),
            land: Rows::from_slice(&surface.land_fraction),
            ocean: Rows::from_slice(&ocean),
            ocean_area_m2: Rows::from_slice(&surface.ocean_area_m2),
            per_ocean_area: Rows::from_slice(&inverse(&surface.ocean_area_m2)),
            has_ocean: Rows::from_slice(&ocean_flag),
            elevation_k: Rows::from_slice(&elevation),
            air_share: p.air_shortwave_share,
            air_capacity: p.air_heat_capacity_j_m2_k,
            land_capacity: p.land_heat_capacity_j_m2_k,
            per_water_capacity: Rows::from_slice(&inverse(&capacity)),
            water_capacity: Rows::from_slice(&capacity),
            sub_capacity,
            sub_exchange,
            air_emission_offset: Rows::from_slice(&air_emission),
            air_emission_slope: air_on * slope,
            surface_emission_offset: surface_on * p.longwave.offset_w_m2,
            surface_emission_slope: surface_on * slope,
            radiative,
            sensible: p.surface_exchange.sensible_w_m2_k,
            latent: p.surface_exchange.latent_w_m2,
            air_humidity: p.surface_exchange.air_relative_humidity,
            land_wetness: p.surface_exchange.land_wetness,
            freezing_flux,
            water_albedo: optics.water,
            water_zenith: optics.zenith,
            land_excess: optics.land_excess,
            snow_albedo: Rows::new(n, optics.snow),
            ice_albedo: Rows::new(n, optics.ice),
            sheet_albedo: optics.sheet_albedo,
            sheet: optics.sheet,
            snow_temperature: optics.snow_temperature,
            snow_steepness: optics.snow_steepness,
            cover_thickness: p.sea_ice.cover_thickness_m,
            conductivity: p.sea_ice.conductivity_w_m_k,
            gyre_conductance,
            gyre_factors,
            deep_window: window(surface, |lat| {
                smooth_step(lat, p.sinking.deep_latitude_deg, p.sinking.edge_width_deg)
            }),
            subtropical_window: window(surface, |lat| {
                let [low, high] = p.sinking.subtropical_latitudes_deg;
                let width = p.sinking.edge_width_deg;
                smooth_step(lat, low, width) * (1.0 - smooth_step(lat, high, width))
            }),
            loss_smoothing_squared: p.sinking.loss_smoothing_w_m2.powi(2),
            per_convection_temperature: 1.0 / p.sinking.convection_temperature_k,
        }
    }

    /// Whether the air has no heat capacity of its own.
    pub(super) fn massless_air(&self) -> bool {
        self.air_capacity <= 0.0
    }
}

/// The albedo set-up as plain numbers; an ice-line set-up starts from zero and is renewed.
struct Optics {
    water: Rows,
    zenith: f64,
    land_excess: f64,
    snow: f64,
    ice: f64,
    sheet_albedo: f64,
    sheet: Rows,
    snow_temperature: f64,
    snow_steepness: f64,
}

impl Optics {
    fn new(p: &Params, surface: &Surface) -> Self {
        let bands = &surface.bands;
        match &p.albedo {
            Albedo::Surfaces {
                water,
                water_sine,
                water_second_legendre,
                water_zenith,
                land_excess,
                snow,
                sea_ice,
                ice_sheet,
                snow_temperature_c,
                snow_width_k,
            } => {
                let by_band: Vec<f64> = bands
                    .mean_sine()
                    .iter()
                    .zip(bands.mean_p2())
                    .map(|(x, p2)| water + water_sine * x + water_second_legendre * p2)
                    .collect();
                Self {
                    water: Rows::from_slice(&by_band),
                    zenith: *water_zenith,
                    land_excess: *land_excess,
                    snow: *snow,
                    ice: *sea_ice,
                    sheet_albedo: *ice_sheet,
                    sheet: Rows::from_slice(&surface.ice_sheet_fraction),
                    snow_temperature: *snow_temperature_c,
                    snow_steepness: 2.0 / snow_width_k,
                }
            }
            Albedo::IceLine { .. } => Self {
                water: Rows::new(bands.len(), 0.0),
                zenith: 0.0,
                land_excess: 0.0,
                snow: 0.0,
                ice: 0.0,
                sheet_albedo: 0.0,
                sheet: Rows::new(bands.len(), 0.0),
                snow_temperature: 0.0,
                snow_steepness: 1.0,
            },
        }
    }
}

fn inverse(values: &[f64]) -> Vec<f64> {
    values
        .iter()
        .map(|v| if *v > 0.0 { 1.0 / v } else { 0.0 })
        .collect()
}

fn window(surface: &Surface, shape: impl Fn(f64) -> f64) -> Rows {
    let weights: Vec<f64> = surface
        .ocean_area_m2
        .iter()
        .zip(surface.bands.centre_deg())
        .map(|(area, lat)| area * shape(lat.abs()))
        .collect();
    Rows::from_slice(&weights)
}

fn mixed_layer_depth(p: &Params, latitude_deg: &[f64]) -> Vec<f64> {
    let m = &p.mixed_layer;
    latitude_deg
        .iter()
        .map(|lat| {
            m.depth_scale * crate::numerics::interpolate::linear(&m.latitude_deg, &m.depth_m, *lat)
        })
        .collect()
}

fn seasonal_layer(p: &Params, gamma_s: f64) -> (f64, f64) {
    p.seasonal_thermocline.as_ref().map_or((1.0, 0.0), |layer| {
        let capacity = SEA_WATER_HEAT_CAPACITY_J_M3_K * layer.thickness_m;
        let lambda = layer.exchange_w_m2_k;
        (capacity, lambda / (1.0 + gamma_s * lambda / capacity))
    })
}

fn gyre(p: &Params, surface: &Surface) -> Vec<f64> {
    let n = surface.bands.len();
    let circle = 2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M * p.gyre_diffusivity_w_m2_k;
    let ocean = |i: usize| {
        if surface.ocean_area_m2[i] > 0.0 {
            1.0 - surface.land_fraction[i]
        } else {
            0.0
        }
    };
    let weight = surface.bands.gradient_weight();
    (0..=n)
        .map(|j| {
            if j == 0 || j == n {
                0.0
            } else {
                circle * weight[j] * ocean(j - 1).min(ocean(j))
            }
        })
        .collect()
}

/// Matrix of the implicit correction of gyre diffusion, (C A/gamma - L) with constant entries.
fn gyre_matrix(surface: &Surface, capacity: &[f64], conductance: &[f64], gamma_s: f64) -> Factored {
    let n = capacity.len();
    let area = surface.bands.area_m2();
    let lower: Vec<f64> = (0..n).map(|i| -conductance[i]).collect();
    let upper: Vec<f64> = (0..n).map(|i| -conductance[i + 1]).collect();
    let diagonal: Vec<f64> = (0..n)
        .map(|i| {
            let held = surface.ocean_area_m2[i];
            let held = if held > 0.0 { held } else { area[i] };
            capacity[i] * held / gamma_s + conductance[i] + conductance[i + 1]
        })
        .collect();
    Factored::new(&lower, &diagonal, &upper)
}
