//! Meridional transport of the air and the one linear system of a time step.
//!
//! Air, with land and ocean eliminated:
//!   b a - div = r,  a = T_a(new) - T_a*,
//! where div is the convergence of the transport at the new time. For diffusion of moist static
//! energy m = T + (Lv/cp) r q*(T), linearised as m* + m' a, this is tridiagonal in a; for
//! relaxation to the mean, div = gamma (mean T - T), it is diagonal plus a rank-one part that is
//! summed exactly. The convergence is then recomputed from the solved field in flux form, so an
//! inexact solve cannot leak heat.
//! Diffusion of moist static energy: Flannery 1984; Hwang & Frierson 2010. Relaxation: Budyko
//! 1969.

use super::coefficients::Coefficients;
use super::params;
use super::surfaces::Work;
use crate::grid::latitude::LatitudeBands;
use crate::numerics::lanes::Lanes;
use crate::numerics::tridiagonal;
use crate::units::{EARTH_RADIUS_M, LATENT_OVER_SPECIFIC_HEAT_K};
use std::f64::consts::PI;

/// Transport ready for stepping.
#[derive(Clone, Debug)]
pub(super) enum Transport {
    /// Diffusion with one conductance per edge (W K-1) and the moisture factor (Lv/cp) r (K).
    Diffusion {
        conductance_w_k: Vec<f64>,
        moisture_k: f64,
    },
    /// Relaxation to the global mean, W m-2 K-1.
    MeanRelaxation { rate_w_m2_k: f64 },
}

impl Transport {
    pub(super) fn new(p: &params::Transport, bands: &LatitudeBands) -> Self {
        match *p {
            params::Transport::Diffusion {
                diffusivity_w_m2_k,
                second_legendre_share,
                relative_humidity,
            } => {
                let circle = 2.0 * PI * EARTH_RADIUS_M * EARTH_RADIUS_M * diffusivity_w_m2_k;
                let conductance_w_k = bands
                    .gradient_weight()
                    .iter()
                    .zip(bands.edge_sine())
                    .map(|(w, x)| circle * w * (1.0 + second_legendre_share * (1.5 * x * x - 0.5)))
                    .collect();
                let moisture_k = LATENT_OVER_SPECIFIC_HEAT_K * relative_humidity;
                Self::Diffusion {
                    conductance_w_k,
                    moisture_k,
                }
            }
            params::Transport::MeanRelaxation { rate_w_m2_k } => {
                Self::MeanRelaxation { rate_w_m2_k }
            }
        }
    }

    /// Solves for the increment of the air and leaves increment and convergence in `w`, the
    /// northward flux through the edges in `edge_flux_w` (W, `bands + 1`).
    #[inline(always)]
    pub(super) fn solve(&self, c: &Coefficients, w: &mut Work, edge_flux_w: &mut [f64]) {
        match self {
            Self::Diffusion {
                conductance_w_k,
                moisture_k,
            } => {
                diffuse(c, w, conductance_w_k, *moisture_k, edge_flux_w);
            }
            Self::MeanRelaxation { rate_w_m2_k } => relax(c, w, *rate_w_m2_k, edge_flux_w),
        }
    }
}

/// Local part of the air's equation: `diagonal` becomes b, `air_increment` becomes r (W m-2).
#[inline(always)]
pub(super) fn assemble(c: &Coefficients, w: &mut Work, greenhouse: f64) {
    let storage = c.air_capacity / c.gamma_s;
    let greenhouse = if c.air_emission_slope > 0.0 {
        greenhouse
    } else {
        0.0
    };
    for r in 0..w.air.rows() {
        let (land, ocean) = (c.land.at(r), c.ocean.at(r));
        let per_land = land / w.land_newton.at(r);
        let per_ocean = ocean / w.ocean_newton.at(r);
        let air = w.air.at(r);
        let (slope, slope_air) = (w.land_flux_slope.at(r), w.land_flux_air.at(r));
        let (by_enthalpy, by_air) = (w.ocean_flux_enthalpy.at(r), w.ocean_flux_air.at(r));
        let emission = c.air_emission_offset.at(r) + air * c.air_emission_slope - greenhouse;
        let local = w.air_absorbed.at(r) - emission - (air - w.air_base.at(r)) * storage;
        w.air_increment.set(
            r,
            local
                + land * w.land_flux.at(r)
                + ocean * w.ocean_flux.at(r)
                + per_land * slope * w.land_residual.at(r)
                + per_ocean * by_enthalpy * w.ocean_residual.at(r),
        );
        let through_ocean = by_air + w.ocean_emission_air.at(r);
        w.diagonal.set(
            r,
            land * slope_air - per_land * slope * slope_air - ocean * by_air
                + per_ocean * by_enthalpy * through_ocean
                + (storage + c.air_emission_slope),
        );
    }
}

#[inline(always)]
fn diffuse(c: &Coefficients, w: &mut Work, conductance: &[f64], moisture_k: f64, edge: &mut [f64]) {
    let n = c.bands;
    for r in 0..w.air.rows() {
        let energy = w.air.at(r) + w.air_humidity.at(r) * moisture_k;
        w.static_energy.set(r, energy);
        w.static_energy_slope
            .set(r, w.air_humidity_slope.at(r) * moisture_k + 1.0);
    }
    let conductance = &conductance[..=n];
    edge_fluxes(conductance, w.static_energy.flat(), edge);
    system(c, w, conductance, edge);
    tridiagonal::solve(
        w.lower.flat(),
        w.diagonal.flat(),
        w.upper.flat(),
        w.air_increment.flat_mut(),
        w.scratch.flat_mut(),
    );
    for r in 0..w.air.rows() {
        let moved = w.static_energy_slope.at(r) * w.air_increment.at(r);
        w.static_energy.add(r, moved);
    }
    edge_fluxes(conductance, w.static_energy.flat(), edge);
    let convergence = &mut w.air_convergence.flat_mut()[..n];
    let area = &c.area_m2.flat()[..n];
    for i in 0..n {
        convergence[i] = (edge[i] - edge[i + 1]) / area[i];
    }
}

/// Turns b and r into the tridiagonal system, W K-1 and W.
#[inline(always)]
fn system(c: &Coefficients, w: &mut Work, conductance: &[f64], edge: &[f64]) {
    let n = c.bands;
    let slope = &w.static_energy_slope.flat()[..n];
    let area = &c.area_m2.flat()[..n];
    let (lower, upper) = (&mut w.lower.flat_mut()[..n], &mut w.upper.flat_mut()[..n]);
    let (diagonal, rhs) = (
        &mut w.diagonal.flat_mut()[..n],
        &mut w.air_increment.flat_mut()[..n],
    );
    for i in 0..n {
        diagonal[i] = diagonal[i] * area[i] + (conductance[i] + conductance[i + 1]) * slope[i];
        rhs[i] = rhs[i] * area[i] + edge[i] - edge[i + 1];
    }
    for i in 1..n {
        lower[i] = -conductance[i] * slope[i - 1];
        upper[i - 1] = -conductance[i] * slope[i];
    }
}

#[inline(always)]
fn edge_fluxes(conductance: &[f64], energy: &[f64], edge: &mut [f64]) {
    let n = energy.len();
    let (conductance, edge) = (&conductance[..=n], &mut edge[..=n]);
    edge[0] = 0.0;
    edge[n] = 0.0;
    for j in 1..n {
        edge[j] = -conductance[j] * (energy[j] - energy[j - 1]);
    }
}

#[inline(always)]
fn relax(c: &Coefficients, w: &mut Work, rate: f64, edge: &mut [f64]) {
    let n = c.bands;
    let area = &c.area_m2.flat()[..n];
    let total: f64 = area.iter().sum();
    let mean = |field: &[f64]| area.iter().zip(field).map(|(a, v)| a * v).sum::<f64>() / total;
    let mean_now = mean(w.air.flat());
    for r in 0..w.air.rows() {
        let per = Lanes::splat(1.0) / (w.diagonal.at(r) + rate);
        let local = w.air_increment.at(r) + (Lanes::splat(mean_now) - w.air.at(r)) * rate;
        w.air_increment.set(r, local * per);
        w.scratch.set(r, per);
    }
    let mean_increment = mean(w.air_increment.flat()) / (1.0 - rate * mean(w.scratch.flat()));
    for r in 0..w.air.rows() {
        let share = w.scratch.at(r) * (rate * mean_increment);
        w.air_increment.add(r, share);
        w.static_energy.set(r, w.air.at(r) + w.air_increment.at(r));
    }
    let mean_new = mean(w.static_energy.flat());
    let convergence = &mut w.air_convergence.flat_mut()[..n];
    edge[0] = 0.0;
    for i in 0..n {
        convergence[i] = rate * (mean_new - w.static_energy.flat()[i]);
        edge[i + 1] = edge[i] - convergence[i] * area[i];
    }
    edge[n] = 0.0;
}
