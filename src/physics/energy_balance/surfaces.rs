//! Fluxes of land, open water and ice at the extrapolated state, with their slopes.
//!
//! For the third-order formula with one Newton step from the extrapolated state y*, every flux
//! is written F* + F_T dT. Land and ocean are then eliminated band by band, so that one
//! tridiagonal system for the air remains:
//!   land   dT_l = (R_l + F_a dT_a)/(C_l/gamma + F_s + B_s - S_l'),
//!   ocean  dE   = (R_o - X_a dT_a)/(1/gamma + X_E - S_E + lambda'/C_w),
//! R being the residual of the equation at y*. The slope of the snow albedo is kept (implicit), in
//! the land's sunlight and in the air's: extrapolating it doubles the largest error, which sits on
//! melting land. The snow itself is taken at a first guess of the new land temperature (`snow`).
//!
//! Sea ice by enthalpy (Wagner & Eisenman 2015) with a zero-layer surface temperature (Semtner
//! 1976): the branch follows the sign of E*, and E may cross zero freely. Ice surface
//! temperature takes one Newton step from its own extrapolation and is held at 0 degC while it
//! melts. Fluxes in W m-2 per area of the surface they belong to, positive upward out of it.

use super::coefficients::{BandRow, Coefficients, LEAST_ICE_M, LEAST_NEWTON_SHARE};
use super::snow::{self, Balance};
use super::state::{State, StateRow};
use super::work::{Work, WorkRow};
use crate::numerics::lanes::{Lanes, WIDTH};
use crate::physics::saturation::{Saturation, saturation};
use crate::units::{CELSIUS_ZERO_K, SEA_ICE_LATENT_HEAT_J_M3, SEA_WATER_FREEZING_C};

/// Sunlight of one step: insolation and zenith cosine of all bands.
#[derive(Clone, Copy)]
pub(super) struct Sunlight<'a> {
    pub insolation: &'a [f64],
    pub zenith: &'a [f64],
}

/// What land and ocean of a row see above them.
#[derive(Clone, Copy)]
struct Above {
    air: Lanes,
    humidity: Saturation,
    insolation: Lanes,
    /// Sunlight that reaches the surface before reflection.
    light: Lanes,
    water_albedo: Lanes,
    /// Forcing of carbon dioxide that acts on the surface's own emission.
    greenhouse: f64,
}

/// Bulk flux `R0 (T/288)^4 + c_s (T_s - T_a) + b c_L (q_s - r_a q_a)` and slopes.
struct Bulk {
    flux: Lanes,
    slope: Lanes,
    slope_air: Lanes,
}

#[inline(always)]
fn bulk(c: &Coefficients, surface: Lanes, lifted: Lanes, wetness: f64, above: &Above) -> Bulk {
    let kelvin = surface + CELSIUS_ZERO_K;
    let cubed = kelvin * kelvin * kelvin * c.radiative;
    let q = saturation(lifted);
    let q_air = above.humidity;
    let latent = wetness * c.latent;
    Bulk {
        flux: cubed * kelvin
            + (lifted - above.air) * c.sensible
            + (q.humidity - q_air.humidity * c.air_humidity) * latent,
        slope: cubed * 4.0 + c.sensible + q.slope * latent,
        slope_air: q_air.slope * (latent * c.air_humidity) + c.sensible,
    }
}

/// Extrapolates the state and evaluates all surface fluxes of row after row.
#[inline(always)]
pub(super) fn evaluate(
    c: &Coefficients,
    s: &State,
    w: &mut Work,
    sun: Sunlight<'_>,
    greenhouse: f64,
) {
    let light = sun
        .insolation
        .chunks_exact(WIDTH)
        .zip(sun.zenith.chunks_exact(WIDTH));
    let greenhouse = if c.surface_emission_slope > 0.0 {
        greenhouse
    } else {
        0.0
    };
    let rows = w.rows.iter_mut().zip(w.water_temperature.rows_mut());
    for (((w, water), (b, s)), (insolation, zenith)) in
        rows.zip(c.rows.iter().zip(&s.rows)).zip(light)
    {
        let insolation = Lanes::load(insolation, 0);
        let lowness = Lanes::splat(0.65) - Lanes::load(zenith, 0);
        let air = s.air.extrapolated();
        let above = Above {
            air,
            humidity: saturation(air),
            insolation,
            light: insolation * (1.0 - c.air_share),
            water_albedo: b.water_albedo + lowness * c.water_zenith,
            greenhouse,
        };
        w.air = air;
        w.air_humidity = above.humidity.humidity;
        w.air_humidity_slope = above.humidity.slope;
        w.air_lead = s.air.lead();
        let started = land(c, b, s, w, &above);
        let ocean = ocean(c, b, s, w, &above);
        let land = light_of_land(c, s, w, &above, &started);
        w.air_absorbed = b.land * land + b.ocean * (above.insolation * ocean * c.air_share);
        *water = w.water_temperature.0;
    }
}

/// Emission of a surface to space, where surfaces radiate.
#[inline(always)]
fn emission(c: &Coefficients, above: &Above, temperature: Lanes) -> Lanes {
    temperature * c.surface_emission_slope + (c.surface_emission_offset - above.greenhouse)
}

/// Land of one row up to the snow.
#[inline(always)]
fn land(c: &Coefficients, b: &BandRow, s: &StateRow, w: &mut WorkRow, above: &Above) -> Balance {
    let temperature = s.land.extrapolated();
    let f = bulk(
        c,
        temperature,
        temperature + b.elevation_k,
        c.land_wetness,
        above,
    );
    let emitted = emission(c, above, temperature);
    let storage = c.land_capacity / c.gamma_s;
    w.land_flux = f.flux;
    w.land_flux_slope = f.slope;
    w.land_flux_air = f.slope_air;
    w.land_emission = emitted;
    let (bare, brightening) = snow::ground(c, b, above.water_albedo);
    let balance = Balance {
        bare,
        brightening,
        light: above.light,
        given: f.flux + emitted + s.land.lead() * storage,
        stiffness: f.slope + (storage + c.surface_emission_slope),
        least: Lanes::splat(storage * LEAST_NEWTON_SHARE),
    };
    w.land_guess = s.snow.guess(c, &s.land, temperature, &balance);
    balance
}

/// Snow and sunlight of the land of one row; returns the sunlight that the air above it absorbs.
///
/// Snow is taken at a first guess of the new temperature, the step the land would take under the
/// extrapolated air: melting snow changes too much within a step for the extrapolation. Called
/// after the ocean, whose arithmetic fills the wait for the guess.
#[inline(always)]
fn light_of_land(
    c: &Coefficients,
    s: &StateRow,
    w: &mut WorkRow,
    above: &Above,
    balance: &Balance,
) -> Lanes {
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let guess = w.land_guess;
    let snow = s.snow.step(c, &s.land, s.land.extrapolated() + guess);
    let dimmed = above.light * balance.brightening;
    let slope = -(dimmed * snow.slope);
    let absorbed = above.light * balance.bare - dimmed * snow.cover - slope * guess;
    // All that the column absorbs over the step, less what the land takes.
    let dimmed = above.insolation * balance.brightening;
    let all_slope = -(dimmed * snow.summed_slope);
    let all = above.insolation * balance.bare - dimmed * snow.summed - all_slope * guess;
    let newton = balance.stiffness - slope;
    let limited = newton.at_least(balance.least).select(zero, one);
    w.strained = w.strained.max(limited);
    w.land_residual = absorbed - balance.given;
    w.land_per_newton = one / newton.max(balance.least);
    w.land_absorbed = absorbed;
    w.land_absorbed_slope = slope;
    w.air_absorbed_land = all_slope - slope;
    w.snow = snow.cover;
    w.snow_slope = snow.slope;
    w.snow_mean = snow.mean;
    w.snow_mean_slope = snow.mean_slope;
    all - absorbed
}

/// What the ice of a row contributes.
struct Ice {
    cover: Lanes,
    cover_enthalpy: Lanes,
    surface: Lanes,
    surface_enthalpy: Lanes,
    surface_air: Lanes,
    flux: Lanes,
}

/// Ocean of one row; returns its absorptance.
#[inline(always)]
fn ocean(c: &Coefficients, b: &BandRow, s: &StateRow, w: &mut WorkRow, above: &Above) -> Lanes {
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let enthalpy = s.enthalpy.extrapolated();
    let open = enthalpy.at_least(zero);
    let water = enthalpy.max(zero) * b.per_water_capacity + SEA_WATER_FREEZING_C;
    let skin = open.select(
        water,
        (s.ice_surface * 2.0 - s.ice_surface_before).min(zero),
    );
    let f = bulk(c, skin, skin, 1.0, above);
    let gain = above.light * (one - b.ice_albedo) - emission(c, above, skin);
    let ice = ice(c, enthalpy, skin, &f, gain);
    let cover = open.select(zero, ice.cover);
    let cover_enthalpy = open.select(zero, ice.cover_enthalpy);
    let clear = one - cover;

    let freezing = Lanes::splat(c.freezing_flux + c.sensible * SEA_WATER_FREEZING_C)
        - above.air * c.sensible
        - above.humidity.humidity * (c.latent * c.air_humidity);
    let water_flux = open.select(f.flux, freezing);
    w.ocean_flux = clear * water_flux + cover * ice.flux;
    w.ocean_flux_enthalpy = open.select(
        f.slope * b.per_water_capacity,
        cover_enthalpy * (ice.flux - water_flux) + cover * f.slope * ice.surface_enthalpy,
    );
    w.ocean_flux_air = open.select(
        -f.slope_air,
        cover * f.slope * ice.surface_air - f.slope_air,
    );
    let (from_water, from_ice) = (emission(c, above, water), emission(c, above, ice.surface));
    let slope = Lanes::splat(c.surface_emission_slope);
    w.ocean_emission = clear * from_water + cover * from_ice;
    w.ocean_emission_enthalpy = open.select(
        slope * b.per_water_capacity,
        cover_enthalpy * (from_ice - from_water) + cover * slope * ice.surface_enthalpy,
    );
    w.ocean_emission_air = open.select(zero, cover * slope * ice.surface_air);
    let absorptance = clear * (one - above.water_albedo) + cover * (one - b.ice_albedo);
    w.ocean_absorbed = above.light * absorptance;
    w.ocean_absorbed_enthalpy = cover_enthalpy * above.light * (above.water_albedo - b.ice_albedo);
    w.open_water = open.select(one, zero);
    w.water_temperature = water;
    w.ice_cover = cover;
    w.ice_surface = open.select(Lanes::splat(SEA_WATER_FREEZING_C), ice.surface);
    w.sub_flux = (water - (s.sub.now + s.sub.momentum())) * c.sub_exchange;
    w.sub_flux_enthalpy = open.select(b.per_water_capacity, zero) * c.sub_exchange;
    close_ocean(c, s, w);
    absorptance
}

/// Ice cover, conductance and surface temperature (one Newton step).
#[inline(always)]
fn ice(c: &Coefficients, enthalpy: Lanes, skin: Lanes, f: &Bulk, gain: Lanes) -> Ice {
    const PER_LATENT: f64 = 1.0 / SEA_ICE_LATENT_HEAT_J_M3;
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let thickness = ((-enthalpy).max(zero) * PER_LATENT).max(Lanes::splat(LEAST_ICE_M));
    let remaining = (thickness * (-1.0 / c.cover_thickness)).exp();
    let cover = one - remaining;
    let cover_enthalpy = remaining * (-PER_LATENT / c.cover_thickness);
    let per_thickness = one / thickness;
    let conductance = cover * per_thickness * c.conductivity;
    let conductance_enthalpy =
        (conductance * PER_LATENT + cover_enthalpy * c.conductivity) * per_thickness;
    let per_slope = one / (conductance + f.slope + c.surface_emission_slope);
    let freezing = Lanes::splat(SEA_WATER_FREEZING_C);
    let stepped = skin + (gain - f.flux + conductance * (freezing - skin)) * per_slope;
    let melting = stepped.at_least(zero);
    let surface = melting.select(zero, stepped);
    let by_enthalpy = conductance_enthalpy * (freezing - surface) * per_slope;
    Ice {
        cover,
        cover_enthalpy,
        surface,
        surface_enthalpy: melting.select(zero, by_enthalpy),
        surface_air: melting.select(zero, f.slope_air * per_slope),
        flux: f.flux + f.slope * (surface - skin),
    }
}

/// Residual (still without the ocean's transport) and Newton slope of the ocean.
#[inline(always)]
fn close_ocean(c: &Coefficients, s: &StateRow, w: &mut WorkRow) {
    let storage = 1.0 / c.gamma_s;
    w.ocean_residual = w.ocean_absorbed
        - w.ocean_flux
        - w.ocean_emission
        - w.sub_flux
        - s.enthalpy.lead() * storage;
    let newton = w.ocean_flux_enthalpy + w.ocean_emission_enthalpy - w.ocean_absorbed_enthalpy
        + w.sub_flux_enthalpy
        + storage;
    let least = Lanes::splat(LEAST_NEWTON_SHARE * storage);
    let limited = newton
        .at_least(least)
        .select(Lanes::splat(0.0), Lanes::splat(1.0));
    w.strained = limited;
    w.ocean_per_newton = Lanes::splat(1.0) / newton.max(least);
}
