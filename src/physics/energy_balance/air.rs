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
use super::work::Work;
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
    let system = w.air_increment.rows_mut().zip(w.diagonal.rows_mut());
    for ((row, b), (rhs, diagonal)) in w.rows.iter().zip(&c.rows).zip(system) {
        let per_land = b.land * row.land_per_newton;
        let per_ocean = b.ocean * row.ocean_per_newton;
        let (slope, slope_air) = (
            row.land_flux_slope + row.air_absorbed_land,
            row.land_flux_air,
        );
        let (by_enthalpy, by_air) = (row.ocean_flux_enthalpy, row.ocean_flux_air);
        let emission = b.air_emission_offset + row.air * c.air_emission_slope - greenhouse;
        let local = row.air_absorbed - emission - row.air_lead * storage;
        *rhs = (local
            + b.land * row.land_flux
            + b.ocean * row.ocean_flux
            + per_land * slope * row.land_residual
            + per_ocean * by_enthalpy * row.ocean_residual)
            .0;
        let through_ocean = by_air + row.ocean_emission_air;
        *diagonal = (b.land * slope_air - per_land * slope * slope_air - b.ocean * by_air
            + per_ocean * by_enthalpy * through_ocean
            + (storage + c.air_emission_slope))
            .0;
    }
}

#[inline(always)]
fn diffuse(c: &Coefficients, w: &mut Work, conductance: &[f64], moisture_k: f64, edge: &mut [f64]) {
    let n = c.bands;
    let fields = w
        .static_energy
        .rows_mut()
        .zip(w.static_energy_slope.rows_mut());
    for (row, (energy, slope)) in w.rows.iter().zip(fields) {
        *energy = (row.air + row.air_humidity * moisture_k).0;
        *slope = (row.air_humidity_slope * moisture_k + 1.0).0;
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
    let moved = w.static_energy_slope.rows().zip(w.air_increment.rows());
    for (energy, (slope, increment)) in w.static_energy.rows_mut().zip(moved) {
        *energy = (Lanes(*energy) + slope * increment).0;
    }
    edge_fluxes(conductance, w.static_energy.flat(), edge);
    let convergence = &mut w.air_convergence.flat_mut()[..n];
    let (area, edge) = (&c.area_m2[..n], &edge[..=n]);
    for i in 0..n {
        convergence[i] = (edge[i] - edge[i + 1]) / area[i];
    }
}

/// Turns b and r into the tridiagonal system, W K-1 and W.
#[inline(always)]
fn system(c: &Coefficients, w: &mut Work, conductance: &[f64], edge: &[f64]) {
    let n = c.bands;
    let slope = &w.static_energy_slope.flat()[..n];
    let (area, edge) = (&c.area_m2[..n], &edge[..=n]);
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
    let area = &c.area_m2[..n];
    let total: f64 = area.iter().sum();
    let mean = |field: &[f64]| area.iter().zip(field).map(|(a, v)| a * v).sum::<f64>() / total;
    for (row, air) in w.rows.iter().zip(w.static_energy.rows_mut()) {
        *air = row.air.0;
    }
    let mean_now = mean(w.static_energy.flat());
    for (row, increment) in w.rows.iter().zip(w.air_increment.rows_mut()) {
        *increment = (Lanes(*increment) + (Lanes::splat(mean_now) - row.air) * rate).0;
    }
    let (increment, diagonal) = (
        &mut w.air_increment.flat_mut()[..n],
        &w.diagonal.flat()[..n],
    );
    let per = &mut w.scratch.flat_mut()[..n];
    for i in 0..n {
        per[i] = 1.0 / (diagonal[i] + rate);
        increment[i] *= per[i];
    }
    let mean_increment = mean(increment) / (1.0 - rate * mean(per));
    let air = &mut w.static_energy.flat_mut()[..n];
    for i in 0..n {
        increment[i] += rate * mean_increment * per[i];
        air[i] += increment[i];
    }
    let mean_new = mean(air);
    let convergence = &mut w.air_convergence.flat_mut()[..n];
    edge[0] = 0.0;
    for i in 0..n {
        convergence[i] = rate * (mean_new - air[i]);
        edge[i + 1] = edge[i] - convergence[i] * area[i];
    }
    edge[n] = 0.0;
}
