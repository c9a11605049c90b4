//! Parameters of the energy balance. Their values live in `configs/reference.toml`.
//!
//! Units are in the names. Each field gives symbol, allowed range and the kind of source; where
//! the reference value comes from stands beside the value.

pub use super::start::Start;
use crate::physics::{RangeError, Ranges};
use serde::{Deserialize, Serialize};

/// All parameters of [`super::EnergyBalance`].
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Params {
    /// chi, share of the absorbed sunlight that the air takes, 0-1. One: no sunlight reaches the
    /// surface and the air is the only reservoir (one-surface models).
    pub air_shortwave_share: f64,
    /// `C_a`, heat capacity of the air column, J m-2 K-1, >= 0. Zero: a massless air that only
    /// carries heat between the surfaces and along the meridian.
    pub air_heat_capacity_j_m2_k: f64,
    /// `C_l`, heat capacity of the land surface, J m-2 K-1, > 0.
    pub land_heat_capacity_j_m2_k: f64,
    /// Gamma, lapse rate by which land temperature and the air above it fall with elevation,
    /// K m-1, >= 0.
    pub lapse_rate_k_m: f64,
    /// `w_T`, weight of the surface in the 2 m air temperature, 0-1 (the rest is the air's).
    pub air_2m_surface_weight: f64,
    /// Outgoing longwave radiation.
    pub longwave: Longwave,
    /// Meridional heat transport of the air.
    pub transport: Transport,
    /// Heat exchange between surface and air.
    pub surface_exchange: SurfaceExchange,
    /// Planetary albedo.
    pub albedo: Albedo,
    /// Ocean mixed layer.
    pub mixed_layer: MixedLayer,
    /// Layer under the mixed layer that stores heat over the season.
    pub seasonal_thermocline: Option<SeasonalThermocline>,
    /// Sea ice.
    pub sea_ice: SeaIce,
    /// `D_o`, heat diffusivity of the wind-driven gyres, W m-2 K-1, >= 0.
    pub gyre_diffusivity_w_m2_k: f64,
    /// Where and when mixed-layer water sinks.
    pub sinking: Sinking,
    /// State from which a run begins.
    pub start: Start,
}

/// Outgoing longwave radiation A + B T - G, G the forcing of carbon dioxide.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Longwave {
    /// A, W m-2, at 0 degC and the reference carbon dioxide.
    pub offset_w_m2: f64,
    /// B, W m-2 K-1, > 0.
    pub slope_w_m2_k: f64,
    /// Which temperature T is.
    pub emitter: Emitter,
}

/// What radiates to space.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Emitter {
    /// The air; over land at the land's elevation.
    Air,
    /// Land, water and ice surfaces themselves.
    Surface,
}

/// Meridional heat transport of the air.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Transport {
    /// Diffusion of moist static energy: d/dx D (1 + d2 P2) (1 - x^2) dm/dx with
    /// m = T + (Lv/cp) r q*(T).
    Diffusion {
        /// D, W m-2 K-1, >= 0.
        diffusivity_w_m2_k: f64,
        /// d2, relative change of D with the second Legendre polynomial, -1 < d2 < 2.
        second_legendre_share: f64,
        /// r, relative humidity in the moist static energy, 0-1. Zero: dry.
        relative_humidity: f64,
    },
    /// Relaxation to the global mean: gamma (mean T - T) (Budyko 1969).
    MeanRelaxation {
        /// gamma, W m-2 K-1, >= 0.
        rate_w_m2_k: f64,
    },
}

/// Heat flux from a surface at `T_s` to the air at `T_a`:
/// `R0 ((T_s + 273.15)/288)^4 + c_s (T_s - T_a) + b c_L (q*(T_s) - r_a q*(T_a))`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SurfaceExchange {
    /// R0, net longwave radiation from surface to air at 288 K, W m-2, >= 0.
    pub radiative_w_m2: f64,
    /// `c_s`, sensible heat, W m-2 K-1, >= 0.
    pub sensible_w_m2_k: f64,
    /// `c_L`, latent heat, W m-2 per kg/kg, >= 0.
    pub latent_w_m2: f64,
    /// `r_a`, relative humidity of the air, 0-1.
    pub air_relative_humidity: f64,
    /// b over land, 0-1 (1 over water and ice).
    pub land_wetness: f64,
}

/// Planetary albedo.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum Albedo {
    /// By surface: water, bare land, snow, sea ice, ice sheet.
    Surfaces {
        /// a0, water, mean.
        water: f64,
        /// a1, change with sin(latitude).
        water_sine: f64,
        /// a2, change with the second Legendre polynomial.
        water_second_legendre: f64,
        /// Change with the sun's height: `az (0.65 - mu)`, mu the cosine of the zenith angle.
        water_zenith: f64,
        /// Bare land minus water.
        land_excess: f64,
        /// Snow on land.
        snow: f64,
        /// Sea ice.
        sea_ice: f64,
        /// Ice sheet.
        ice_sheet: f64,
        /// Land temperature at which half the land is snow-covered, degC.
        snow_temperature_c: f64,
        /// Width of that transition, K, > 0: cover = (1 - tanh((T - T0)/width))/2.
        snow_width_k: f64,
    },
    /// One albedo with a sharp edge (closed forms): ice poleward of the edge, inside it
    /// free + `free_second_legendre` P2.
    IceLine {
        /// Mean albedo equatorward of the edge.
        free: f64,
        /// Its second Legendre coefficient.
        free_second_legendre: f64,
        /// Albedo poleward of the edge.
        ice: f64,
        /// Where the edge is.
        edge: IceEdge,
    },
}

/// How the edge of [`Albedo::IceLine`] is found.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
pub enum IceEdge {
    /// At a given latitude, both hemispheres alike.
    Prescribed {
        /// sin(latitude), 0-1.
        sine: f64,
    },
    /// Where the air temperature crosses a threshold, in each hemisphere.
    Temperature {
        /// Threshold, degC.
        threshold_c: f64,
    },
}

/// Depth of the mixed layer: `depth_scale` times a table interpolated linearly in latitude.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct MixedLayer {
    /// Factor on the table, > 0.
    pub depth_scale: f64,
    /// Latitudes, degrees north, increasing.
    pub latitude_deg: Vec<f64>,
    /// Depths at those latitudes, m, > 0.
    pub depth_m: Vec<f64>,
}

/// A layer under the mixed layer that exchanges lambda (`T_o` - `T_sub`) with it.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SeasonalThermocline {
    /// Thickness, m, > 0.
    pub thickness_m: f64,
    /// lambda, W m-2 K-1, >= 0.
    pub exchange_w_m2_k: f64,
}

/// Sea ice: cover 1 - exp(-h/h0), heat conduction k (Tf - Ti)/(h/cover).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct SeaIce {
    /// h0, mean thickness at which 63 % of the water is covered, m, > 0.
    pub cover_thickness_m: f64,
    /// k, W m-1 K-1, > 0.
    pub conductivity_w_m_k: f64,
}

/// Weights by which the two sinking rates are spread over bands and steps.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Sinking {
    /// Latitude poleward of which deep water sinks, degrees, both hemispheres.
    pub deep_latitude_deg: f64,
    /// Latitudes between which water of the shallow cell sinks, degrees, both hemispheres.
    pub subtropical_latitudes_deg: [f64; 2],
    /// Width of the smooth edges of these regions, degrees, > 0.
    pub edge_width_deg: f64,
    /// Heat loss over which the weight changes from none to proportional, W m-2, > 0.
    pub loss_smoothing_w_m2: f64,
    /// Temperature above freezing over which deep sinking falls by e, K, > 0.
    pub convection_temperature_k: f64,
}

impl Params {
    /// Checks every range and reports all violations at once.
    ///
    /// # Errors
    /// The list of violations.
    pub fn check(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        r.fraction("air_shortwave_share", self.air_shortwave_share);
        r.not_negative("air_heat_capacity_j_m2_k", self.air_heat_capacity_j_m2_k);
        r.positive("land_heat_capacity_j_m2_k", self.land_heat_capacity_j_m2_k);
        r.not_negative("lapse_rate_k_m", self.lapse_rate_k_m);
        r.fraction("air_2m_surface_weight", self.air_2m_surface_weight);
        r.finite("longwave.offset_w_m2", self.longwave.offset_w_m2);
        r.positive("longwave.slope_w_m2_k", self.longwave.slope_w_m2_k);
        r.not_negative("gyre_diffusivity_w_m2_k", self.gyre_diffusivity_w_m2_k);
        r.positive("sea_ice.cover_thickness_m", self.sea_ice.cover_thickness_m);
        r.positive(
            "sea_ice.conductivity_w_m_k",
            self.sea_ice.conductivity_w_m_k,
        );
        if let Some(layer) = &self.seasonal_thermocline {
            r.positive("seasonal_thermocline.thickness_m", layer.thickness_m);
            r.not_negative(
                "seasonal_thermocline.exchange_w_m2_k",
                layer.exchange_w_m2_k,
            );
        }
        self.check_exchange(&mut r);
        self.check_transport(&mut r);
        self.check_albedo(&mut r);
        self.check_mixed_layer(&mut r);
        self.check_sinking(&mut r);
        self.start.check(&mut r);
        r.finish()
    }

    fn check_exchange(&self, r: &mut Ranges) {
        let s = &self.surface_exchange;
        r.not_negative("surface_exchange.radiative_w_m2", s.radiative_w_m2);
        r.not_negative("surface_exchange.sensible_w_m2_k", s.sensible_w_m2_k);
        r.not_negative("surface_exchange.latent_w_m2", s.latent_w_m2);
        r.fraction(
            "surface_exchange.air_relative_humidity",
            s.air_relative_humidity,
        );
        r.fraction("surface_exchange.land_wetness", s.land_wetness);
        let massless = self.air_heat_capacity_j_m2_k <= 0.0;
        let coupled = s.sensible_w_m2_k > 0.0 || self.longwave.emitter == Emitter::Air;
        r.require(
            "surface_exchange.sensible_w_m2_k",
            s.sensible_w_m2_k,
            !massless || coupled,
            "must be positive when the air has no heat capacity and does not radiate",
        );
    }

    fn check_transport(&self, r: &mut Ranges) {
        match self.transport {
            Transport::Diffusion {
                diffusivity_w_m2_k,
                second_legendre_share,
                relative_humidity,
            } => {
                r.not_negative("transport.diffusivity_w_m2_k", diffusivity_w_m2_k);
                let d2 = second_legendre_share;
                let limit =
                    "must lie between -1 and 2, or the diffusivity would be negative somewhere";
                r.require(
                    "transport.second_legendre_share",
                    d2,
                    d2 > -1.0 && d2 < 2.0,
                    limit,
                );
                r.fraction("transport.relative_humidity", relative_humidity);
            }
            Transport::MeanRelaxation { rate_w_m2_k } => {
                r.not_negative("transport.rate_w_m2_k", rate_w_m2_k);
            }
        }
    }

    fn check_albedo(&self, r: &mut Ranges) {
        match &self.albedo {
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
                r.fraction("albedo.water", *water);
                r.fraction("albedo.snow", *snow);
                r.fraction("albedo.sea_ice", *sea_ice);
                r.fraction("albedo.ice_sheet", *ice_sheet);
                r.finite("albedo.water_sine", *water_sine);
                r.finite("albedo.water_second_legendre", *water_second_legendre);
                r.not_negative("albedo.water_zenith", *water_zenith);
                r.finite("albedo.land_excess", *land_excess);
                r.finite("albedo.snow_temperature_c", *snow_temperature_c);
                r.positive("albedo.snow_width_k", *snow_width_k);
            }
            Albedo::IceLine {
                free,
                free_second_legendre,
                ice,
                edge,
            } => {
                r.fraction("albedo.free", *free);
                r.finite("albedo.free_second_legendre", *free_second_legendre);
                r.fraction("albedo.ice", *ice);
                match edge {
                    IceEdge::Prescribed { sine } => r.fraction("albedo.edge.sine", *sine),
                    IceEdge::Temperature { threshold_c } => {
                        r.finite("albedo.edge.threshold_c", *threshold_c);
                    }
                }
            }
        }
    }

    fn check_mixed_layer(&self, r: &mut Ranges) {
        let m = &self.mixed_layer;
        r.positive("mixed_layer.depth_scale", m.depth_scale);
        let lengths = !m.depth_m.is_empty() && m.depth_m.len() == m.latitude_deg.len();
        let limit = "needs as many depths as latitudes, at least one";
        r.require(
            "mixed_layer.depth_m (number of values)",
            m.depth_m.len() as f64,
            lengths,
            limit,
        );
        for (i, &depth) in m.depth_m.iter().enumerate() {
            r.positive(&format!("mixed_layer.depth_m[{i}]"), depth);
        }
        let mut south = -90.0;
        for (i, &latitude) in m.latitude_deg.iter().enumerate() {
            let key = format!("mixed_layer.latitude_deg[{i}]");
            let fine = (south..=90.0).contains(&latitude) && (i == 0 || latitude > south);
            let limit = "latitudes must increase, from -90 to 90 degrees north";
            r.require(&key, latitude, fine, limit);
            south = if fine { latitude } else { south };
        }
    }

    fn check_sinking(&self, r: &mut Ranges) {
        let s = &self.sinking;
        let latitude = |v: f64| (0.0..=90.0).contains(&v);
        let limit = "must be a latitude from 0 to 90 degrees";
        r.require(
            "sinking.deep_latitude_deg",
            s.deep_latitude_deg,
            latitude(s.deep_latitude_deg),
            limit,
        );
        let [low, high] = s.subtropical_latitudes_deg;
        let limit = "must be two increasing latitudes from 0 to 90 degrees";
        let ordered = latitude(low) && latitude(high) && low < high;
        r.require("sinking.subtropical_latitudes_deg", low, ordered, limit);
        r.positive("sinking.edge_width_deg", s.edge_width_deg);
        r.positive("sinking.loss_smoothing_w_m2", s.loss_smoothing_w_m2);
        r.positive(
            "sinking.convection_temperature_k",
            s.convection_temperature_k,
        );
    }
}
