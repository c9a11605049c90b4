//! Completes a step: the increments of land and ocean follow from the air's, and every reservoir
//! takes exactly the linearised fluxes that its neighbours gave.
//!
//! Increment = (7 d0 - 2 d1)/11 + (gamma/C) x (sum of fluxes at the new time): heat leaves one
//! reservoir and enters the other with the same bits.

use super::coefficients::{BandRow, Coefficients};
use super::means::{Field, MeanRow, Means};
use super::state::{State, StateRow};
use super::work::{Work, WorkRow};
use crate::numerics::lanes::{Lanes, WIDTH};
use crate::units::{SEA_ICE_LATENT_HEAT_J_M3, SEA_WATER_FREEZING_C};

/// Fluxes of one row at the new time, W m-2.
struct Settled {
    to_air: Lanes,
    /// Sunlight the air absorbs beyond that at the extrapolated state.
    air_absorbed: Lanes,
    emitted: Lanes,
}

/// Advances all levels by one step and adds the step's fluxes to the year's sums.
#[inline(always)]
pub(super) fn advance(
    c: &Coefficients,
    s: &mut State,
    w: &Work,
    means: &mut Means,
    insolation: &[f64],
    greenhouse: f64,
) {
    let greenhouse = if c.air_emission_slope > 0.0 {
        greenhouse
    } else {
        0.0
    };
    let solved = w
        .air_increment
        .rows()
        .zip(w.air_convergence.rows())
        .zip(w.brought.rows());
    let light = insolation.chunks_exact(WIDTH);
    let rows = w
        .rows
        .iter()
        .zip(&c.rows)
        .zip(s.rows.iter_mut().zip(&mut means.rows));
    for ((((row, b), (s, m)), ((step, convergence), brought)), light) in rows.zip(solved).zip(light)
    {
        let land = settle_land(c, b, s, row, m, step);
        let ocean = settle_ocean(c, b, s, row, m, step, brought);
        let air = row.air + step;
        let air_emission = b.air_emission_offset + air * c.air_emission_slope - greenhouse;
        let absorbed = row.air_absorbed + b.land * land.air_absorbed;
        let input = absorbed + b.land * land.to_air + b.ocean * ocean.to_air - air_emission;
        let increment = if c.massless_air() {
            air - s.air.now
        } else {
            s.air.momentum() + (input + convergence) * (c.gamma_s / c.air_capacity)
        };
        let air = s.air.push(increment);
        m.coldest = m.coldest.min(air).min(s.land.now);
        m.warmest = m.warmest.max(air).max(s.land.now);
        m.strained = m.strained.max(row.strained);
        m.set(Field::Air, air);
        m.set(Field::Insolation, Lanes::load(light, 0));
        m.air_input += input;
        m.absorbed_air.add(absorbed);
        m.emitted
            .add(air_emission + b.land * land.emitted + b.ocean * ocean.emitted);
    }
}

#[inline(always)]
fn settle_land(
    c: &Coefficients,
    b: &BandRow,
    s: &mut StateRow,
    w: &WorkRow,
    m: &mut MeanRow,
    air: Lanes,
) -> Settled {
    let step = (w.land_residual + w.land_flux_air * air) * w.land_per_newton;
    let to_air = w.land_flux + w.land_flux_slope * step - w.land_flux_air * air;
    let emitted = w.land_emission + step * c.surface_emission_slope;
    let absorbed = w.land_absorbed + w.land_absorbed_slope * step;
    let net = absorbed - to_air - emitted;
    let increment = s.land.momentum() + net * (c.gamma_s / c.land_capacity);
    m.set(Field::Land, s.land.push(increment));
    m.set(Field::Snow, w.snow);
    m.absorbed_land.add(b.land * absorbed);
    let beyond = step - w.land_guess;
    s.snow.push(
        w.snow + w.snow_slope * beyond,
        w.snow_mean + w.snow_mean_slope * beyond,
    );
    Settled {
        to_air,
        air_absorbed: w.air_absorbed_land * step,
        emitted,
    }
}

#[inline(always)]
fn settle_ocean(
    c: &Coefficients,
    b: &BandRow,
    s: &mut StateRow,
    w: &WorkRow,
    m: &mut MeanRow,
    air: Lanes,
    brought: Lanes,
) -> Settled {
    let zero = Lanes::splat(0.0);
    let through = w.ocean_flux_air + w.ocean_emission_air;
    let step = (w.ocean_residual - through * air) * w.ocean_per_newton;
    let to_air = w.ocean_flux + w.ocean_flux_enthalpy * step + w.ocean_flux_air * air;
    let emitted = w.ocean_emission + w.ocean_emission_enthalpy * step + w.ocean_emission_air * air;
    let absorbed = w.ocean_absorbed + w.ocean_absorbed_enthalpy * step;
    let stored = w.sub_flux + w.sub_flux_enthalpy * step;
    let gain = absorbed - to_air - emitted;
    // Where there is no ocean nothing would limit the ice: such a band keeps its state.
    let net = gain - stored + brought;
    let enthalpy = s
        .enthalpy
        .push((s.enthalpy.momentum() + net * c.gamma_s) * b.has_ocean);
    let sub = s.sub.momentum() + stored * (c.gamma_s / c.sub_capacity);
    s.sub.push(sub * b.has_ocean);
    s.ice_surface_before = s.ice_surface;
    s.ice_surface = w.ice_surface;

    m.absorbed_ocean.add(b.ocean * absorbed);
    m.ocean_gain += gain;
    m.gross_loss += (-gain).max(zero);
    let water = enthalpy.max(zero) * b.per_water_capacity + SEA_WATER_FREEZING_C;
    m.set(Field::Water, water);
    m.set(
        Field::OceanSurface,
        water + (w.ice_surface - water) * w.ice_cover,
    );
    m.set(Field::IceCover, w.ice_cover);
    m.set(
        Field::IceThickness,
        (-enthalpy).max(zero) * (1.0 / SEA_ICE_LATENT_HEAT_J_M3),
    );
    Settled {
        to_air,
        air_absorbed: zero,
        emitted,
    }
}
