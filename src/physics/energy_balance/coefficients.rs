//! Parameters turned into the numbers the time step uses, one per band where they vary.
//!
//! Built once; nothing here changes during a run except the albedos of an ice-line set-up, which
//! `ice_line` renews at each step, and the land under a prescribed ice sheet, renewed with the year.

use super::params::{Albedo, Emitter, Params};
use crate::grid::calendar::MonthWeights;
use crate::numerics::lanes::{Lanes, WIDTH};
use crate::numerics::profile;
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

/// What is constant in a time step and differs from band to band, for four bands.
#[derive(Clone, Copy, Debug)]
pub(super) struct BandRow {
    pub area_m2: Lanes,
    pub land: Lanes,
    pub ocean: Lanes,
    pub ocean_area_m2: Lanes,
    /// 1 / ocean area, zero where there is no ocean, m-2.
    pub per_ocean_area: Lanes,
    /// One where there is ocean, else zero.
    pub has_ocean: Lanes,
    /// Gamma z: land temperature excess when brought to sea level, K.
    pub elevation_k: Lanes,
    /// 1 / (heat capacity of the mixed layer), m2 K J-1.
    pub per_water_capacity: Lanes,
    pub air_emission_offset: Lanes,
    pub water_albedo: Lanes,
    pub snow_albedo: Lanes,
    pub ice_albedo: Lanes,
    /// Fraction of land under permanent ice.
    pub sheet: Lanes,
    /// Ocean area times deep-sinking window, m2.
    pub deep_window: Lanes,
    /// Ocean area times subtropical window, m2.
    pub subtropical_window: Lanes,
}

/// Everything constant in a time step.
#[derive(Clone, Debug)]
pub(super) struct Coefficients {
    pub bands: usize,
    pub steps: usize,
    pub step_s: f64,
    /// gamma of the third-order formula: 6 h / 11, s.
    pub gamma_s: f64,
    pub months: MonthWeights,
    pub rows: Vec<BandRow>,
    /// Area and 1 / ocean area of each band once more, for the loops along the meridian.
    pub area_m2: Vec<f64>,
    pub per_ocean_area: Vec<f64>,

    pub air_share: f64,
    pub air_capacity: f64,
    pub land_capacity: f64,
    /// Heat capacity of the seasonal thermocline, J m-2 K-1.
    pub sub_capacity: f64,
    /// Exchange with it seen by a step, lambda / (1 + gamma lambda / C), W m-2 K-1.
    pub sub_exchange: f64,

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

    pub water_zenith: f64,
    pub land_excess: f64,
    pub sheet_albedo: f64,
    pub snow_temperature: f64,
    pub snow_steepness: f64,

    pub cover_thickness: f64,
    pub conductivity: f64,

    /// Gyre conductance of each edge, W K-1, `bands + 1`.
    pub gyre_conductance: Vec<f64>,
    /// Matrix of the implicit correction; none where explicit gyres are stable by far.
    pub gyre_factors: Option<Factored>,
    pub loss_smoothing_squared: f64,
    pub per_convection_temperature: f64,
}

/// Newton slopes of land and ocean are limited to this share (tuned here) of their storage term. Where the
/// limit acts the albedo feedback outruns the step (seen with few steps in very cold climates); the
/// step then stays finite, and the year is refused as too coarse.
pub(super) const LEAST_NEWTON_SHARE: f64 = 0.25;

/// Ice thinner than this is treated as this thick in the conductance, m (keeps k/h finite; the
/// flux k phi/h tends to k/h0 and does not depend on it).
pub(super) const LEAST_ICE_M: f64 = 1.0e-6;

impl Coefficients {
    pub(super) fn new(p: &Params, setting: &Setting) -> Self {
        let (surface, steps) = (&setting.surface, setting.steps_per_year());
        let bands = &surface.bands;
        let step_s = YEAR_SECONDS / steps as f64;
        let gamma_s = 6.0 * step_s / 11.0;
        let depth = mixed_layer_depth(p, bands.centre_deg());
        let capacity: Vec<f64> = depth
            .iter()
            .map(|d| SEA_WATER_HEAT_CAPACITY_J_M3_K * d)
            .collect();
        let (sub_capacity, sub_exchange) = seasonal_layer(p, gamma_s);
        let gyre_conductance = gyre(p, surface);
        let optics = Optics::new(p, surface);
        let radiative = p.surface_exchange.radiative_w_m2 / RADIATIVE_REFERENCE_K.powi(4);
        let freezing_k = SEA_WATER_FREEZING_C + CELSIUS_ZERO_K;
        let latent = p.surface_exchange.latent_w_m2;
        let (air_on, surface_on) = match p.longwave.emitter {
            Emitter::Air => (1.0, 0.0),
            Emitter::Surface => (0.0, 1.0),
        };
        Self {
            bands: bands.len(),
            steps,
            step_s,
            gamma_s,
            months: setting.months.clone(),
            rows: band_rows(p, surface, &capacity, &optics, air_on),
            area_m2: bands.area_m2().to_vec(),
            per_ocean_area: inverse(&surface.ocean_area_m2),
            air_share: p.air_shortwave_share,
            air_capacity: p.air_heat_capacity_j_m2_k,
            land_capacity: p.land_heat_capacity_j_m2_k,
            sub_capacity,
            sub_exchange,
            air_emission_slope: air_on * p.longwave.slope_w_m2_k,
            surface_emission_offset: surface_on * p.longwave.offset_w_m2,
            surface_emission_slope: surface_on * p.longwave.slope_w_m2_k,
            radiative,
            sensible: p.surface_exchange.sensible_w_m2_k,
            latent,
            air_humidity: p.surface_exchange.air_relative_humidity,
            land_wetness: p.surface_exchange.land_wetness,
            freezing_flux: radiative * freezing_k.powi(4)
                + latent * saturation_humidity(SEA_WATER_FREEZING_C),
            water_zenith: optics.zenith,
            land_excess: optics.land_excess,
            sheet_albedo: optics.sheet_albedo,
            snow_temperature: optics.snow_temperature,
            snow_steepness: optics.snow_steepness,
            cover_thickness: p.sea_ice.cover_thickness_m,
            conductivity: p.sea_ice.conductivity_w_m_k,
            gyre_factors: gyre_matrix(surface, &capacity, &gyre_conductance, gamma_s),
            gyre_conductance,
            loss_smoothing_squared: p.sinking.loss_smoothing_w_m2.powi(2),
            per_convection_temperature: 1.0 / p.sinking.convection_temperature_k,
        }
    }

    /// Replaces the fraction of land under permanent ice, `[band]`.
    pub(super) fn set_sheet(&mut self, sheet: &[f64]) {
        for (row, i) in self.rows.iter_mut().zip((0..).step_by(WIDTH)) {
            row.sheet = Lanes::load(sheet, i);
        }
    }

    /// Whether the air has no heat capacity of its own.
    pub(super) fn massless_air(&self) -> bool {
        self.air_capacity <= 0.0
    }
}

/// The constants of each band, in rows of four.
fn band_rows(
    p: &Params,
    surface: &Surface,
    capacity: &[f64],
    optics: &Optics,
    air_on: f64,
) -> Vec<BandRow> {
    let s = &p.sinking;
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
    let elevation: Vec<f64> = surface
        .land_elevation_m
        .iter()
        .map(|z| p.lapse_rate_k_m * z)
        .collect();
    let air_emission: Vec<f64> = surface
        .land_fraction
        .iter()
        .zip(&elevation)
        .map(|(f, e)| air_on * (p.longwave.offset_w_m2 - p.longwave.slope_w_m2_k * f * e))
        .collect();
    let deep = window(surface, |lat| {
        smooth_step(lat, s.deep_latitude_deg, s.edge_width_deg)
    });
    let subtropical = window(surface, |lat| {
        let [low, high] = s.subtropical_latitudes_deg;
        smooth_step(lat, low, s.edge_width_deg) * (1.0 - smooth_step(lat, high, s.edge_width_deg))
    });
    let (per_ocean, per_capacity) = (inverse(&surface.ocean_area_m2), inverse(capacity));
    (0..surface.bands.len())
        .step_by(WIDTH)
        .map(|i| BandRow {
            area_m2: Lanes::load(surface.bands.area_m2(), i),
            land: Lanes::load(&surface.land_fraction, i),
            ocean: Lanes::load(&ocean, i),
            ocean_area_m2: Lanes::load(&surface.ocean_area_m2, i),
            per_ocean_area: Lanes::load(&per_ocean, i),
            has_ocean: Lanes::load(&ocean_flag, i),
            elevation_k: Lanes::load(&elevation, i),
            per_water_capacity: Lanes::load(&per_capacity, i),
            air_emission_offset: Lanes::load(&air_emission, i),
            water_albedo: Lanes::load(&optics.water, i),
            snow_albedo: Lanes::splat(optics.snow),
            ice_albedo: Lanes::splat(optics.ice),
            sheet: Lanes::load(&optics.sheet, i),
            deep_window: Lanes::load(&deep, i),
            subtropical_window: Lanes::load(&subtropical, i),
        })
        .collect()
}

/// The albedo set-up as plain numbers; an ice-line set-up starts from zero and is renewed.
struct Optics {
    water: Vec<f64>,
    zenith: f64,
    land_excess: f64,
    snow: f64,
    ice: f64,
    sheet_albedo: f64,
    sheet: Vec<f64>,
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
                    water: by_band,
                    zenith: *water_zenith,
                    land_excess: *land_excess,
                    snow: *snow,
                    ice: *sea_ice,
                    sheet_albedo: *ice_sheet,
                    sheet: surface.ice_sheet_fraction.clone(),
                    snow_temperature: *snow_temperature_c,
                    snow_steepness: 2.0 / snow_width_k,
                }
            }
            Albedo::IceLine { .. } => Self {
                water: vec![0.0; bands.len()],
                zenith: 0.0,
                land_excess: 0.0,
                snow: 0.0,
                ice: 0.0,
                sheet_albedo: 0.0,
                sheet: vec![0.0; bands.len()],
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

fn window(surface: &Surface, shape: impl Fn(f64) -> f64) -> Vec<f64> {
    let latitudes = surface.bands.centre_deg();
    surface
        .ocean_area_m2
        .iter()
        .zip(latitudes)
        .map(|(area, lat)| area * shape(lat.abs()))
        .collect()
}

fn mixed_layer_depth(p: &Params, latitude_deg: &[f64]) -> Vec<f64> {
    let m = &p.mixed_layer;
    latitude_deg
        .iter()
        .map(|lat| m.depth_scale * profile::value(&m.latitude_deg, &m.depth_m, *lat))
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

/// Explicit gyre diffusion is kept while gamma (`k_south` + `k_north`)/(C A) stays below this in
/// every band. Third-order differences with a third-order extrapolated term bear h lambda < 20/21 on
/// the real axis (root -1 of 11/6 z^3 - 3 z^2 + 3/2 z - 1/3 = -h lambda (3 z^2 - 3 z + 1)); with
/// gamma = 6 h/11 and lambda at most twice the sum above (Gershgorin) the limit would be 0.26. Below
/// a fifth of it the dropped correction is of this size times the error of the extrapolation.
const EXPLICIT_GYRE_LIMIT: f64 = 0.05;

/// Matrix of the implicit correction of gyre diffusion, (C A/gamma - L) with constant entries.
fn gyre_matrix(
    surface: &Surface,
    capacity: &[f64],
    conductance: &[f64],
    gamma_s: f64,
) -> Option<Factored> {
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
    let stiffness = (0..n).map(|i| {
        let through = conductance[i] + conductance[i + 1];
        through / (diagonal[i] - through)
    });
    (stiffness.fold(0.0, f64::max) > EXPLICIT_GYRE_LIMIT)
        .then(|| Factored::new(&lower, &diagonal, &upper))
}
