//! The full non-linear model at rest under constant sunlight: its state must satisfy the published
//! equations, written here once more without linearisation. See README.md.

use crate::energy_balance_set_up::{largest, planet, reference, run_on, sunlight};
use orbicline::grid::latitude::Spacing;
use orbicline::physics::Setting;
use orbicline::physics::energy_balance::EnergyBalance;
use orbicline::physics::energy_balance::params::{Albedo, Params, Transport};
use orbicline::physics::exchange::Exchange;
use orbicline::physics::saturation::saturation_humidity;
use orbicline::units::{
    EARTH_RADIUS_M, SEA_ICE_LATENT_HEAT_J_M3, SEA_WATER_FREEZING_C, SEA_WATER_HEAT_CAPACITY_J_M3_K,
};
use std::f64::consts::PI;

/// Land fraction and elevation (m), uniform.
const LAND: f64 = 0.3;
const ELEVATION_M: f64 = 500.0;
/// Depth of the mixed layer, m.
const DEPTH_M: f64 = 20.0;
/// Heat from below, W per m2 of ocean: without it ice far from open water would thicken for ever.
const BELOW_W_M2: f64 = 6.0;
/// `L/c_p` of moist air, K.
const LATENT_K: f64 = 2.501e6 / 1004.6;

/// Reference parameters on a layer of one depth, without the sun's height in the albedo.
fn at_rest() -> Params {
    let mut p = reference(&[]).run.physics.energy_balance.unwrap();
    p.mixed_layer.depth_scale = 1.0;
    p.mixed_layer.depth_m.fill(DEPTH_M);
    p.seasonal_thermocline = None;
    p
}

/// Flux from a surface at `skin` (brought to sea level: `lifted`) to air at `air`.
fn flux(p: &Params, skin: f64, lifted: f64, wetness: f64, air: f64) -> f64 {
    let s = &p.surface_exchange;
    let humid = saturation_humidity(lifted) - s.air_relative_humidity * saturation_humidity(air);
    s.radiative_w_m2 * ((skin + 273.15) / 288.0).powi(4)
        + s.sensible_w_m2_k * (lifted - air)
        + wetness * s.latent_w_m2 * humid
}

/// Convergence of -2 pi R^2 D(x) w dm at the edges, W m-2 of band.
fn convergence(setting: &Setting, field: &[f64], diffusivity: impl Fn(f64) -> f64) -> Vec<f64> {
    let bands = &setting.surface.bands;
    let n = field.len();
    let across = |j: usize| {
        if j == 0 || j == n {
            return 0.0;
        }
        let x = bands.edge_sine()[j];
        let slope = (1.0 - x * x).sqrt() / (PI / n as f64) * (field[j] - field[j - 1]);
        -2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M * diffusivity(x) * slope
    };
    let area = bands.area_m2();
    (0..n)
        .map(|i| (across(i) - across(i + 1)) / area[i])
        .collect()
}

/// Convergence of the air's transport of moist static energy, W m-2.
fn carried(p: &Params, setting: &Setting, air: &[f64]) -> Vec<f64> {
    let Transport::Diffusion {
        diffusivity_w_m2_k,
        second_legendre_share,
        relative_humidity,
    } = p.transport
    else {
        panic!("diffusion expected")
    };
    let humid = |t: &f64| t + LATENT_K * relative_humidity * saturation_humidity(*t);
    let energy: Vec<f64> = air.iter().map(humid).collect();
    convergence(setting, &energy, |x| {
        diffusivity_w_m2_k * (1.0 + second_legendre_share * (1.5 * x * x - 0.5))
    })
}

/// Absorptances of water, land and ice in a band.
fn absorptances(p: &Params, setting: &Setting, i: usize, land_c: f64) -> [f64; 3] {
    let Albedo::Surfaces {
        water,
        water_sine,
        water_second_legendre,
        land_excess,
        snow,
        sea_ice,
        snow_temperature_c,
        snow_width_k,
        ..
    } = p.albedo
    else {
        panic!("albedo by surface expected")
    };
    let bands = &setting.surface.bands;
    let sea =
        water + water_sine * bands.mean_sine()[i] + water_second_legendre * bands.mean_p2()[i];
    let cover = 0.5 * (1.0 - ((land_c - snow_temperature_c) / snow_width_k).tanh());
    let bare = sea + land_excess;
    [1.0 - sea, 1.0 - bare - (snow - bare) * cover, 1.0 - sea_ice]
}

/// Temperature of ice of thickness h at which it takes up nothing, at most 0 degC.
fn ice_surface(p: &Params, light: f64, air: f64, conductance: f64) -> f64 {
    let gain = |t: f64| light - flux(p, t, t, 1.0, air) + conductance * (SEA_WATER_FREEZING_C - t);
    let (mut low, mut high) = (-80.0, 0.0);
    if gain(high) >= 0.0 {
        return high;
    }
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if gain(middle) > 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Water temperature, and per area of ocean what the surface absorbs of the light and gives to
/// the air; and the absorptance.
fn ocean(p: &Params, held: f64, light: f64, air: f64, absorptance: [f64; 3]) -> [f64; 4] {
    let warm = held.max(0.0) / (SEA_WATER_HEAT_CAPACITY_J_M3_K * DEPTH_M) + SEA_WATER_FREEZING_C;
    let open = flux(p, warm, warm, 1.0, air);
    let thickness = (-held).max(0.0) / SEA_ICE_LATENT_HEAT_J_M3;
    let cover = 1.0 - (-thickness / p.sea_ice.cover_thickness_m).exp();
    let mut frozen = 0.0;
    if cover > 0.0 {
        let conductance = p.sea_ice.conductivity_w_m_k * cover / thickness;
        let skin = ice_surface(p, light * absorptance[2], air, conductance);
        frozen = flux(p, skin, skin, 1.0, air);
    }
    let taken = (1.0 - cover) * absorptance[0] + cover * absorptance[2];
    let given = (1.0 - cover) * open + cover * frozen;
    [warm, light * taken, given, taken]
}

/// Largest imbalance of air, land and ocean, W m-2, and the number of bands with sea ice.
fn imbalance(p: &Params) -> ([f64; 3], usize) {
    let mut setting = planet(24, Spacing::EqualLatitude, 48, LAND);
    setting.surface.land_elevation_m.fill(ELEVATION_M);
    let mut model = EnergyBalance::new(p, &setting).unwrap();
    let light = sunlight(&setting, &[0, 1, 2], |n, _| [340.0, 8.0, -160.0][n]);
    let mut exchange = Exchange::new(setting.surface.bands.len());
    let from_below = setting.surface.ocean_area_m2.iter().map(|a| BELOW_W_M2 * a);
    exchange.column_heat_w = from_below.collect();
    run_on(&mut model, &mut exchange, &light, 400);
    let (air, land) = (model.air_temperature_c(), model.land_temperature_c());
    let held = model.ocean_enthalpy_j_m2();
    let lift = p.lapse_rate_k_m * ELEVATION_M;
    let brought = carried(p, &setting, &air);
    let mut residual = [const { Vec::new() }; 3];
    let mut water = Vec::new();
    for i in 0..air.len() {
        let reaches = light[i] * (1.0 - p.air_shortwave_share);
        let a = absorptances(p, &setting, i, land[i]);
        let [warm, taken, given, share] = ocean(p, held[i], reaches, air[i], a);
        let up = flux(
            p,
            land[i],
            land[i] + lift,
            p.surface_exchange.land_wetness,
            air[i],
        );
        let stopped = p.air_shortwave_share * light[i] * (LAND * a[1] + (1.0 - LAND) * share);
        let emitted = p.longwave.offset_w_m2 + p.longwave.slope_w_m2_k * (air[i] - LAND * lift);
        let surfaces = LAND * up + (1.0 - LAND) * given;
        residual[0].push(stopped + surfaces - emitted + brought[i]);
        residual[1].push(reaches * a[1] - up);
        residual[2].push(taken - given + BELOW_W_M2);
        water.push(warm);
    }
    // Gyre diffusion acts through the ocean's share of the circle, per area of ocean: it cancels.
    let gyre = convergence(&setting, &water, |_| p.gyre_diffusivity_w_m2_k);
    for (r, g) in residual[2].iter_mut().zip(gyre) {
        *r += g;
    }
    let frozen = held.iter().filter(|e| **e < 0.0).count();
    (residual.map(largest), frozen)
}

#[test]
fn analytic_state_at_rest_satisfies_the_equations_without_linearisation() {
    let present = at_rest();
    let mut cold = present.clone();
    cold.longwave.offset_w_m2 += 8.0;
    let mut warm = present.clone();
    warm.longwave.offset_w_m2 -= 25.0;
    for (name, p, ice) in [
        ("warm", warm, 0),
        ("present", present, 1),
        ("cold", cold, 2),
    ] {
        let (residual, frozen) = imbalance(&p);
        assert!(
            largest(residual) < 1e-9,
            "{name}: {residual:?} W m-2 in air, land, ocean"
        );
        assert!(frozen >= ice, "{name}: sea ice in {frozen} bands");
    }
}
