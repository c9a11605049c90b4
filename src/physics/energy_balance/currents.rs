//! Heat carried by ocean currents in the mixed layer.
//!
//! Three exchanges, all pairwise, so that no heat is made or lost:
//! - gyres: diffusion 2 pi R^2 D_o min(f_o) (1 - x^2) dT_o/dx;
//! - overturning: upwelling u_i and sinking q_i per band give the northward flow psi at the
//!   edges, psi_{j+1} = psi_j + u_j - q_j, which carries the temperature of the band it comes
//!   from (upwind); sinking water takes rho c q_i T_o,i down into the column;
//! - the column gives each band the heat it was told at the end of last year.
//!
//! Sinking follows each hemisphere's winter by itself: the deep rate is spread with weights
//! A f_o window (1 - ice cover) L exp(-(T_o - T_f)/T_c), the shallow subtropical rate with
//! A f_o window L, L = (loss + sqrt(loss^2 + loss_0^2))/2 being the smooth positive part of the
//! ocean's heat loss. After a Walin (1982) view of water transformed by heat loss; the window and
//! the exponential are choices of this model.
//!
//! Numerics: all evaluated at the extrapolated state; gyre diffusion is corrected implicitly with
//! a constant matrix, (C A/gamma - L) delta = open-water residual, where they are stiff enough to
//! need it (fine grids); the order is kept because delta is of the size of the extrapolation
//! error.

use super::coefficients::Coefficients;
use super::work::Work;
use crate::numerics::lanes::Lanes;
use crate::numerics::tridiagonal::Factored;
use crate::units::{SEA_WATER_FREEZING_C, SEA_WATER_HEAT_CAPACITY_J_M3_K};

/// What the column told for this year.
#[derive(Clone, Copy)]
pub(super) struct ColumnSide<'a> {
    /// Heat given to each band, W.
    pub heat_w: &'a [f64],
    /// Upwelling into each band, m3 s-1.
    pub upwelling_m3_s: &'a [f64],
    pub deep_sinking_m3_s: f64,
    pub subtropical_sinking_m3_s: f64,
}

/// Smallest open-water share in the sinking weights: an ocean frozen from pole to pole still
/// sinks what it was told to, through its leads.
const LEAST_OPEN: f64 = 1.0e-9;

/// Adds the heat brought by currents to the ocean's residual and leaves the total flux through
/// the edges in `edge_flux_w` (W, northward, `bands + 1` values). Returns the temperature sum of
/// the deep sinking, m3 s-1 degC.
#[inline(always)]
pub(super) fn transport(
    c: &Coefficients,
    w: &mut Work,
    column: ColumnSide<'_>,
    edge_flux_w: &mut [f64],
) -> f64 {
    let deep_heat = sinking_rates(c, w, column);
    advect(c, w, column, edge_flux_w);
    let rows = w.rows.iter_mut().zip(&c.rows);
    for ((row, b), brought) in rows.zip(w.brought.rows_mut()) {
        let gained = Lanes(*brought) * b.per_ocean_area;
        *brought = gained.0;
        row.ocean_residual += gained;
    }
    if let Some(factors) = &c.gyre_factors {
        correct_gyres(c, factors, w, edge_flux_w);
    }
    deep_heat
}

#[inline(always)]
fn sinking_rates(c: &Coefficients, w: &mut Work, column: ColumnSide<'_>) -> f64 {
    let (mut deep_sum, mut shallow_sum) = (Lanes::splat(0.0), Lanes::splat(0.0));
    for ((row, b), sinking) in w.rows.iter_mut().zip(&c.rows).zip(w.sinking.rows_mut()) {
        let loss = row.ocean_flux + row.ocean_emission - row.ocean_absorbed;
        let positive = (loss + (loss * loss + c.loss_smoothing_squared).sqrt()) * 0.5;
        let above_freezing = row.water_temperature - SEA_WATER_FREEZING_C;
        let cold = (above_freezing * -c.per_convection_temperature).exp();
        let open = (Lanes::splat(1.0) - row.ice_cover).max(Lanes::splat(LEAST_OPEN));
        row.deep_sinking = b.deep_window * open * positive * cold;
        let shallow = b.subtropical_window * positive;
        deep_sum += row.deep_sinking;
        shallow_sum += shallow;
        *sinking = shallow.0;
    }
    let deep_scale = per(column.deep_sinking_m3_s, deep_sum.sum());
    let shallow_scale = per(column.subtropical_sinking_m3_s, shallow_sum.sum());
    let mut deep_heat = Lanes::splat(0.0);
    for (row, sinking) in w.rows.iter_mut().zip(w.sinking.rows_mut()) {
        row.deep_sinking = row.deep_sinking * deep_scale;
        deep_heat += row.deep_sinking * row.water_temperature;
        *sinking = (row.deep_sinking + Lanes(*sinking) * shallow_scale).0;
    }
    deep_heat.sum()
}

#[inline(always)]
fn per(rate: f64, weight: f64) -> f64 {
    if weight > 0.0 { rate / weight } else { 0.0 }
}

/// Gyre and overturning fluxes through the edges, W, and their convergence with sinking and the
/// column's heat, W per band.
#[inline(always)]
fn advect(c: &Coefficients, w: &mut Work, column: ColumnSide<'_>, edge_flux_w: &mut [f64]) {
    let n = c.bands;
    let temperature = &w.water_temperature.flat()[..n];
    let sinking = &w.sinking.flat()[..n];
    let (upwelling, heat) = (&column.upwelling_m3_s[..n], &column.heat_w[..n]);
    let conductance = &c.gyre_conductance[..=n];
    let brought = &mut w.brought.flat_mut()[..n];
    let edge = &mut edge_flux_w[..=n];
    let mut flow = 0.0;
    edge[0] = 0.0;
    edge[n] = 0.0;
    for j in 1..n {
        flow += upwelling[j - 1] - sinking[j - 1];
        let carried = if flow > 0.0 {
            temperature[j - 1]
        } else {
            temperature[j]
        };
        edge[j] = SEA_WATER_HEAT_CAPACITY_J_M3_K * (flow * carried)
            - conductance[j] * (temperature[j] - temperature[j - 1]);
    }
    for i in 0..n {
        brought[i] = edge[i] - edge[i + 1] + heat[i]
            - SEA_WATER_HEAT_CAPACITY_J_M3_K * (sinking[i] * temperature[i]);
    }
}

/// Solves for the correction and adds its fluxes; `correction` ends as heat gained, W m-2.
#[inline(always)]
fn correct_gyres(c: &Coefficients, factors: &Factored, w: &mut Work, edge_flux_w: &mut [f64]) {
    for ((row, b), correction) in w.rows.iter().zip(&c.rows).zip(w.correction.rows_mut()) {
        *correction = (row.open_water * b.ocean_area_m2 * row.ocean_residual).0;
    }
    factors.solve(w.correction.flat_mut());
    let n = c.bands;
    let delta = &mut w.correction.flat_mut()[..n];
    let conductance = &c.gyre_conductance[..=n];
    let area = &c.per_ocean_area[..n];
    let edge = &mut edge_flux_w[..=n];
    let mut below = 0.0;
    for i in 0..n {
        let above = if i + 1 < n {
            -conductance[i + 1] * (delta[i + 1] - delta[i])
        } else {
            0.0
        };
        delta[i] = (below - above) * area[i];
        edge[i + 1] += above;
        below = above;
    }
    let fields = w.brought.rows_mut().zip(w.correction.rows());
    for (row, (brought, gained)) in w.rows.iter_mut().zip(fields) {
        row.ocean_residual += gained;
        *brought = (Lanes(*brought) + gained).0;
    }
}
