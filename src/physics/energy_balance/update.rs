//! Completes a step: the increments of land and ocean follow from the air's, and every reservoir
//! takes exactly the linearised fluxes that its neighbours gave.
//!
//! New level = base + (gamma/C) x (sum of fluxes at the new time), so that heat leaves one
//! reservoir and enters the other with the same bits.

use super::coefficients::Coefficients;
use super::means::Means;
use super::state::State;
use super::surfaces::Work;
use crate::numerics::lanes::Lanes;
use crate::units::SEA_ICE_LATENT_HEAT_J_M3;

/// Fluxes of one row at the new time, W m-2.
struct Settled {
    to_air: Lanes,
    emitted: Lanes,
}

/// Advances all levels by one step and adds the step's fluxes to the year's sums.
#[inline(always)]
pub(super) fn advance(
    c: &Coefficients,
    s: &mut State,
    w: &Work,
    means: &mut Means,
    greenhouse: f64,
) {
    let greenhouse = if c.air_emission_slope > 0.0 {
        greenhouse
    } else {
        0.0
    };
    for r in 0..w.air.rows() {
        let land = settle_land(c, s, w, means, r);
        let ocean = settle_ocean(c, s, w, means, r);
        let air = w.air.at(r) + w.air_increment.at(r);
        let air_emission = c.air_emission_offset.at(r) + air * c.air_emission_slope - greenhouse;
        let (land_share, ocean_share) = (c.land.at(r), c.ocean.at(r));
        let input = w.air_absorbed.at(r) + land_share * land.to_air + ocean_share * ocean.to_air
            - air_emission;
        let new = if c.massless_air() {
            air
        } else {
            w.air_base.at(r) + (input + w.air_convergence.at(r)) * (c.gamma_s / c.air_capacity)
        };
        s.air.push(r, new);
        means.air_input.add(r, input);
        means.absorbed_air.add(r, w.air_absorbed.at(r));
        means.emitted.add(
            r,
            air_emission + land_share * land.emitted + ocean_share * ocean.emitted,
        );
        means.node.air.set(r, new);
    }
}

#[inline(always)]
fn settle_land(c: &Coefficients, s: &mut State, w: &Work, means: &mut Means, r: usize) -> Settled {
    let air = w.air_increment.at(r);
    let step = (w.land_residual.at(r) + w.land_flux_air.at(r) * air) / w.land_newton.at(r);
    let to_air = w.land_flux.at(r) + w.land_flux_slope.at(r) * step - w.land_flux_air.at(r) * air;
    let emitted = w.land_emission.at(r) + step * c.surface_emission_slope;
    let absorbed = w.land_absorbed.at(r) + w.land_absorbed_slope.at(r) * step;
    let new = w.land_base.at(r) + (absorbed - to_air - emitted) * (c.gamma_s / c.land_capacity);
    s.land.push(r, new);
    means.absorbed_land.add(r, c.land.at(r) * absorbed);
    means.node.land.set(r, new);
    means.node.snow.set(r, w.snow.at(r));
    Settled { to_air, emitted }
}

#[inline(always)]
fn settle_ocean(c: &Coefficients, s: &mut State, w: &Work, means: &mut Means, r: usize) -> Settled {
    let zero = Lanes::splat(0.0);
    let air = w.air_increment.at(r);
    let through = w.ocean_flux_air.at(r) + w.ocean_emission_air.at(r);
    let step = (w.ocean_residual.at(r) - through * air) / w.ocean_newton.at(r);
    let to_air =
        w.ocean_flux.at(r) + w.ocean_flux_enthalpy.at(r) * step + w.ocean_flux_air.at(r) * air;
    let emitted = w.ocean_emission.at(r)
        + w.ocean_emission_enthalpy.at(r) * step
        + w.ocean_emission_air.at(r) * air;
    let absorbed = w.ocean_absorbed.at(r) + w.ocean_absorbed_enthalpy.at(r) * step;
    let stored = w.sub_flux.at(r) + w.sub_flux_enthalpy.at(r) * step;
    let gain = absorbed - to_air - emitted;
    let stepped = w.ocean_base.at(r) + (gain - stored + w.ocean_transport.at(r)) * c.gamma_s;
    // Where there is no ocean nothing would limit the ice: such a band keeps its state.
    let exists = c.has_ocean.at(r).at_least(Lanes::splat(0.5));
    let enthalpy = exists.select(stepped, s.enthalpy.now.at(r));
    s.enthalpy.push(r, enthalpy);
    let sub = w.sub_base.at(r) + stored * (c.gamma_s / c.sub_capacity);
    s.sub.push(r, exists.select(sub, s.sub.now.at(r)));
    s.ice_surface_before.set(r, s.ice_surface.at(r));
    s.ice_surface.set(r, w.ice_surface.at(r));

    means.absorbed_ocean.add(r, c.ocean.at(r) * absorbed);
    means.ocean_gain.add(r, gain);
    means.gross_loss.add(r, (-gain).max(zero));
    let water =
        enthalpy.max(zero) * c.per_water_capacity.at(r) + crate::units::SEA_WATER_FREEZING_C;
    let cover = w.ice_cover.at(r);
    means.node.water.set(r, water);
    means
        .node
        .ocean_surface
        .set(r, water + (w.ice_surface.at(r) - water) * cover);
    means.node.ice_cover.set(r, cover);
    means
        .node
        .ice_thickness
        .set(r, (-enthalpy).max(zero) * (1.0 / SEA_ICE_LATENT_HEAT_J_M3));
    Settled { to_air, emitted }
}
