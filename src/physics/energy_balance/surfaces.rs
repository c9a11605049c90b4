//! Fluxes of land, open water and ice at the extrapolated state, with their slopes.
//!
//! For the third-order formula with one Newton step from the extrapolated state y*, every flux
//! is written F* + F_T dT. Land and ocean are then eliminated band by band, so that one
//! tridiagonal system for the air remains:
//!   land   dT_l = (R_l + F_a dT_a)/(C_l/gamma + F_s + B_s - S_l'),
//!   ocean  dE   = (R_o - X_a dT_a)/(1/gamma + X_E - S_E + lambda'/C_w),
//! R being the residual of the equation at y*. The slope of the snow albedo is kept (implicit):
//! extrapolating it doubles the largest error, which sits on melting land.
//!
//! Sea ice by enthalpy (Wagner & Eisenman 2015) with a zero-layer surface temperature (Semtner
//! 1976): the branch follows the sign of E*, and E may cross zero freely. Ice surface
//! temperature takes one Newton step from its own extrapolation and is held at 0 degC while it
//! melts. Fluxes in W m-2 per area of the surface they belong to, positive upward out of it.

use super::coefficients::{Coefficients, LEAST_ICE_M, LEAST_LAND_SLOPE};
use super::state::State;
use crate::numerics::lanes::{Lanes, Rows};
use crate::physics::saturation::{Saturation, saturation};
use crate::units::{CELSIUS_ZERO_K, SEA_ICE_LATENT_HEAT_J_M3, SEA_WATER_FREEZING_C};

macro_rules! work_fields {
    ($($(#[$doc:meta])* $field:ident),* $(,)?) => {
        /// Values of one step, one per band; see the fields.
        #[derive(Clone, Debug)]
        pub(super) struct Work { $($(#[$doc])* pub $field: Rows),* }
        impl Work {
            pub(super) fn new(bands: usize) -> Self {
                Self { $($field: Rows::new(bands, 0.0)),* }
            }
        }
    };
}

work_fields! {
    /// Extrapolated air temperature and the slope of humidity there.
    air, air_humidity_slope, air_humidity,
    /// Storage residual of the air, C (T* - base)/gamma, and sunlight it absorbs.
    air_base, air_absorbed,
    /// Land: flux to air F*, slopes F_s and F_a, emission to space, absorbed S* and S'.
    land_flux, land_flux_slope, land_flux_air, land_emission, land_absorbed, land_absorbed_slope,
    /// Land: residual, Newton slope, base level.
    land_residual, land_newton, land_base,
    /// Snow cover of the land.
    snow,
    /// Ocean: flux to air X*, dX/dE, dX/dT_a.
    ocean_flux, ocean_flux_enthalpy, ocean_flux_air,
    /// Ocean: emission to space and slopes.
    ocean_emission, ocean_emission_enthalpy, ocean_emission_air,
    /// Ocean: absorbed sunlight and slope.
    ocean_absorbed, ocean_absorbed_enthalpy,
    /// Flux into the seasonal thermocline and slope, its base level.
    sub_flux, sub_flux_enthalpy, sub_base,
    /// Ocean: residual, Newton slope, base level.
    ocean_residual, ocean_newton, ocean_base,
    /// One where the water is open, zero where there is ice.
    open_water,
    /// Mixed-layer temperature, ice cover, ice surface temperature.
    water_temperature, ice_cover, ice_surface,
    /// Heat brought by ocean currents, W per m2 of ocean.
    ocean_transport,
    /// Sinking: weights, then rates (m3 s-1), of deep water and of all.
    deep_sinking, sinking,
    /// Solution of the air system, and convergence of the air's transport.
    air_increment, air_convergence,
    /// Diagonals and right-hand side of the air system.
    lower, diagonal, upper, scratch, correction,
    /// Moist static energy over c_p and its slope.
    static_energy, static_energy_slope,
}

/// Sunlight of one step: insolation and zenith cosine of all bands.
#[derive(Clone, Copy)]
pub(super) struct Sunlight<'a> {
    pub insolation: &'a [f64],
    pub zenith: &'a [f64],
}

/// Bulk flux `R0 (T/288)^4 + c_s (T_s - T_a) + b c_L (q_s - r_a q_a)` and slopes.
struct Bulk {
    flux: Lanes,
    slope: Lanes,
    slope_air: Lanes,
}

#[inline(always)]
fn bulk(
    c: &Coefficients,
    surface: Lanes,
    lifted: Lanes,
    wetness: f64,
    air: Lanes,
    q_air: Saturation,
) -> Bulk {
    let kelvin = surface + CELSIUS_ZERO_K;
    let cubed = kelvin * kelvin * kelvin * c.radiative;
    let q = saturation(lifted);
    let latent = wetness * c.latent;
    Bulk {
        flux: cubed * kelvin
            + (lifted - air) * c.sensible
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
    for r in 0..w.air.rows() {
        let air = s.air.extrapolated(r);
        let q_air = saturation(air);
        w.air.set(r, air);
        w.air_humidity.set(r, q_air.humidity);
        w.air_humidity_slope.set(r, q_air.slope);
        w.air_base.set(r, s.air.base(r));
        let insolation = Lanes::load(sun.insolation, 4 * r);
        let tilt = Lanes::splat(0.65) - Lanes::load(sun.zenith, 4 * r);
        let water_albedo = c.water_albedo.at(r) + tilt * c.water_zenith;
        let land = land(
            c,
            s,
            w,
            r,
            (air, q_air),
            (insolation, water_albedo),
            greenhouse,
        );
        let ocean = ocean(
            c,
            s,
            w,
            r,
            (air, q_air),
            (insolation, water_albedo),
            greenhouse,
        );
        let absorbed = c.land.at(r) * land + c.ocean.at(r) * ocean;
        w.air_absorbed.set(r, insolation * absorbed * c.air_share);
    }
}

/// Land of one row; returns its absorptance.
#[inline(always)]
fn land(
    c: &Coefficients,
    s: &State,
    w: &mut Work,
    r: usize,
    (air, q_air): (Lanes, Saturation),
    (insolation, water_albedo): (Lanes, Lanes),
    greenhouse: f64,
) -> Lanes {
    let temperature = s.land.extrapolated(r);
    let base = s.land.base(r);
    let warmth = (temperature - c.snow_temperature) * c.snow_steepness;
    let snow = Lanes::splat(1.0) / (warmth.exp() + 1.0);
    let sheet = c.sheet.at(r);
    let bare = water_albedo + c.land_excess;
    let brightening = (c.snow_albedo.at(r) - bare) * (Lanes::splat(1.0) - sheet);
    let albedo = bare * (Lanes::splat(1.0) - sheet) + brightening * snow + sheet * c.sheet_albedo;
    let absorptance = Lanes::splat(1.0) - albedo;
    let light = insolation * (1.0 - c.air_share);
    let absorbed = light * absorptance;
    let absorbed_slope = light * brightening * snow * (Lanes::splat(1.0) - snow) * c.snow_steepness;

    let f = bulk(
        c,
        temperature,
        temperature + c.elevation_k.at(r),
        c.land_wetness,
        air,
        q_air,
    );
    let emission = temperature * c.surface_emission_slope
        + (c.surface_emission_offset - greenhouse * surface_share(c));
    let storage = c.land_capacity / c.gamma_s;
    let newton = (f.slope + (storage + c.surface_emission_slope) - absorbed_slope)
        .max(Lanes::splat(storage * LEAST_LAND_SLOPE));
    w.land_residual.set(
        r,
        absorbed - f.flux - emission - (temperature - base) * storage,
    );
    w.land_newton.set(r, newton);
    w.land_base.set(r, base);
    w.land_flux.set(r, f.flux);
    w.land_flux_slope.set(r, f.slope);
    w.land_flux_air.set(r, f.slope_air);
    w.land_emission.set(r, emission);
    w.land_absorbed.set(r, absorbed);
    w.land_absorbed_slope.set(r, absorbed_slope);
    w.snow.set(r, snow);
    absorptance
}

/// Share of the greenhouse forcing that acts on surface emission: one or zero.
#[inline(always)]
fn surface_share(c: &Coefficients) -> f64 {
    if c.surface_emission_slope > 0.0 {
        1.0
    } else {
        0.0
    }
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
fn ocean(
    c: &Coefficients,
    s: &State,
    w: &mut Work,
    r: usize,
    (air, q_air): (Lanes, Saturation),
    (insolation, water_albedo): (Lanes, Lanes),
    greenhouse: f64,
) -> Lanes {
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let enthalpy = s.enthalpy.extrapolated(r);
    let open = enthalpy.at_least(zero);
    let per_capacity = c.per_water_capacity.at(r);
    let water = enthalpy.max(zero) * per_capacity + SEA_WATER_FREEZING_C;
    let extrapolated_ice = (s.ice_surface.at(r) * 2.0 - s.ice_surface_before.at(r)).min(zero);
    let skin = open.select(water, extrapolated_ice);
    let f = bulk(c, skin, skin, 1.0, air, q_air);
    let light = insolation * (1.0 - c.air_share);
    let emit = |t: Lanes| {
        t * c.surface_emission_slope + (c.surface_emission_offset - greenhouse * surface_share(c))
    };
    let ice_albedo = c.ice_albedo.at(r);
    let ice_light = light * (one - ice_albedo);
    let ice = ice(c, enthalpy, skin, &f, ice_light - emit(skin));
    let cover = open.select(zero, ice.cover);
    let cover_enthalpy = open.select(zero, ice.cover_enthalpy);
    let clear = one - cover;

    let freezing = Lanes::splat(c.freezing_flux + c.sensible * SEA_WATER_FREEZING_C)
        - air * c.sensible
        - q_air.humidity * (c.latent * c.air_humidity);
    let water_flux = open.select(f.flux, freezing);
    let flux = clear * water_flux + cover * ice.flux;
    let flux_enthalpy = open.select(
        f.slope * per_capacity,
        cover_enthalpy * (ice.flux - water_flux) + cover * f.slope * ice.surface_enthalpy,
    );
    let flux_air = open.select(
        -f.slope_air,
        cover * f.slope * ice.surface_air - f.slope_air,
    );
    let (water_emission, ice_emission) = (emit(water), emit(ice.surface));
    let slope = Lanes::splat(c.surface_emission_slope);
    let emission_enthalpy = open.select(
        slope * per_capacity,
        cover_enthalpy * (ice_emission - water_emission) + cover * slope * ice.surface_enthalpy,
    );
    let absorptance = clear * (one - water_albedo) + cover * (one - ice_albedo);
    w.ocean_flux.set(r, flux);
    w.ocean_flux_enthalpy.set(r, flux_enthalpy);
    w.ocean_flux_air.set(r, flux_air);
    w.ocean_emission
        .set(r, clear * water_emission + cover * ice_emission);
    w.ocean_emission_enthalpy.set(r, emission_enthalpy);
    w.ocean_emission_air
        .set(r, open.select(zero, cover * slope * ice.surface_air));
    w.ocean_absorbed.set(r, light * absorptance);
    w.ocean_absorbed_enthalpy
        .set(r, cover_enthalpy * light * (water_albedo - ice_albedo));
    w.open_water.set(r, open.select(one, zero));
    w.water_temperature.set(r, water);
    w.ice_cover.set(r, cover);
    w.ice_surface.set(
        r,
        open.select(Lanes::splat(SEA_WATER_FREEZING_C), ice.surface),
    );
    w.ocean_base.set(r, s.enthalpy.base(r));
    store_sub_layer(c, s, w, r, open.select(per_capacity, zero));
    close_ocean(c, w, r, enthalpy);
    absorptance
}

/// Ice cover, conductance and surface temperature (one Newton step).
#[inline(always)]
fn ice(c: &Coefficients, enthalpy: Lanes, skin: Lanes, f: &Bulk, gain: Lanes) -> Ice {
    let (zero, one) = (Lanes::splat(0.0), Lanes::splat(1.0));
    let thickness = (-enthalpy).max(zero) * (1.0 / SEA_ICE_LATENT_HEAT_J_M3);
    let held = thickness.max(Lanes::splat(LEAST_ICE_M));
    let remaining = (held * (-1.0 / c.cover_thickness)).exp();
    let cover = one - remaining;
    let cover_enthalpy = remaining * (-1.0 / (SEA_ICE_LATENT_HEAT_J_M3 * c.cover_thickness));
    let per_held = one / held;
    let conductance = cover * per_held * c.conductivity;
    let conductance_enthalpy = (conductance * (1.0 / SEA_ICE_LATENT_HEAT_J_M3)
        + cover_enthalpy * c.conductivity)
        * per_held;
    let slope = conductance + f.slope + c.surface_emission_slope;
    let per_slope = one / slope;
    let lift = Lanes::splat(SEA_WATER_FREEZING_C);
    let stepped = skin + (gain - f.flux + conductance * (lift - skin)) * per_slope;
    let melting = stepped.at_least(zero);
    let surface = melting.select(zero, stepped);
    Ice {
        cover,
        cover_enthalpy,
        surface,
        surface_enthalpy: melting.select(zero, conductance_enthalpy * (lift - surface) * per_slope),
        surface_air: melting.select(zero, f.slope_air * per_slope),
        flux: f.flux + f.slope * (surface - skin),
    }
}

/// Flux into the seasonal thermocline, lambda' (`T_o` - base), implicit in both.
#[inline(always)]
fn store_sub_layer(c: &Coefficients, s: &State, w: &mut Work, r: usize, water_slope: Lanes) {
    let base = s.sub.base(r);
    w.sub_base.set(r, base);
    w.sub_flux
        .set(r, (w.water_temperature.at(r) - base) * c.sub_exchange);
    w.sub_flux_enthalpy.set(r, water_slope * c.sub_exchange);
}

/// Residual (still without the ocean's transport) and Newton slope of the ocean.
#[inline(always)]
fn close_ocean(c: &Coefficients, w: &mut Work, r: usize, enthalpy: Lanes) {
    let storage = 1.0 / c.gamma_s;
    w.ocean_residual.set(
        r,
        w.ocean_absorbed.at(r)
            - w.ocean_flux.at(r)
            - w.ocean_emission.at(r)
            - w.sub_flux.at(r)
            - (enthalpy - w.ocean_base.at(r)) * storage,
    );
    let newton = w.ocean_flux_enthalpy.at(r) + w.ocean_emission_enthalpy.at(r)
        - w.ocean_absorbed_enthalpy.at(r)
        + w.sub_flux_enthalpy.at(r)
        + storage;
    w.ocean_newton
        .set(r, newton.max(Lanes::splat(0.25 * storage)));
}
