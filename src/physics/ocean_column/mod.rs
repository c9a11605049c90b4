//! Component `ocean_column`: temperature with depth in the low-latitude ocean, and the water that passes
//! through it.
//!
//! Ac dT/dt = -d(W T)/dz + d(Ac kappa dT/dz) + I(z) `T_in` - O(z) T; Ac is the ocean area equatorward of a
//! limit, W (m3 s-1, upward) the sum of I - O below. Water that sank in the year enters at its
//! neutral level ([`insertion`]); it leaves through the top, spread over the low latitudes and the
//! equator, and at the depth `z_so` straight to the Southern Ocean ([`patterns`]). The top exchanges
//! water with the mixed layers at the velocity `w_ex`. Heat given to the mixed layer of band i:
//!
//! `H_i` = rho c [((q - `q_so`) `U_low,i` + `q_stc` `U_eq,i`) `T_1` + `q_so` `U_so,i` T(`z_so`) - `w_ex` `A_i` `l_i` (`To_i` - `T_1`)].
//!
//! Units: m, s, degC, m3 s-1, W. Heat is counted from 0 degC.
//!
//! Numerics: the column advances `slow_years` years each seasonal year in equal steps (backward
//! Euler, [`mixing`]) with the sinking water and the mixed-layer temperature of that year, held;
//! neutral levels are found anew at each step. Water that leaves is the water that sank, in the
//! proportions told for the year. `H_i` is the mean over the steps and is handed over in the *next*
//! year, so that the change of content over `slow_years` equals heat received minus heat given,
//! to rounding. Coupling by annual means keeps the response to precession true at any `slow_years`.
//!
//! Sources: Munk 1966 (the balance), Baines & Turner 1969 (insertion), Bryan & Lewis 1979 (kappa),
//! Gnanadesikan 1999 and Bryan 1987 (rates, [`closure`]); the combination is made here.

pub mod closure;
mod component;
pub mod insertion;
pub mod mixing;
pub mod params;
pub mod patterns;
pub mod thermocline;
mod variables;

#[cfg(test)]
mod kernel_tests;
#[cfg(test)]
mod tests;

pub use params::Params;

use crate::grid::column::ColumnLevels;
use crate::numerics::sum::compensated;
use crate::physics::exchange::{Exchange, Surface};
use crate::physics::{PhysicsError, RangeError};
use crate::units::{SEA_WATER_HEAT_CAPACITY_J_M3_K as HEAT_CAPACITY, YEAR_SECONDS};
use insertion::{NeutralLevels, Parcel};
use mixing::{Column, Sources};
use params::Evolution;
use patterns::Patterns;
use thermocline::Thermocline;

const NAME: &str = "ocean_column";

/// Flows of water, m3 s-1, held for one seasonal year.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Rates {
    deep: f64,
    subtropical: f64,
    southern: f64,
}

/// Books of the last year.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Books {
    slow_years: f64,
    /// Heat held by a frozen column, J.
    reservoir_j: f64,
    received_j: f64,
    given_j: f64,
    sinking_c: f64,
    low_latitude_c: f64,
    /// Rates that acted in the year.
    rates: Rates,
}

/// The low-latitude ocean column.
#[derive(Clone, Debug)]
pub struct OceanColumn {
    params: Params,
    levels: ColumnLevels,
    patterns: Patterns,
    column: Column,
    neutral: NeutralLevels,
    parcels: Vec<Parcel>,
    sources: Sources,
    /// Level above the southern source, and the weight of the one below it.
    source: (usize, f64),
    temperature: Vec<f64>,
    rates: Rates,
    heat_w: Vec<f64>,
    /// Whether `heat_w` has been computed.
    told: bool,
    /// Whether the spin-up is over.
    running: bool,
    books: Books,
}

impl OceanColumn {
    /// Builds the column at rest in its initial profile, sinking at the reference rate.
    ///
    /// # Errors
    /// All parameters out of range, or windows without ocean.
    pub fn new(params: &Params, surface: &Surface) -> Result<Self, Vec<RangeError>> {
        params.check()?;
        let patterns = Patterns::new(params, surface)?;
        let grid = &params.levels;
        let levels = ColumnLevels::new(grid.count, grid.depth_m, grid.first_m).map_err(|_| {
            vec![RangeError {
                key: "levels.first_m".to_owned(),
                value: grid.first_m,
                limit: "must allow that many levels in that depth",
            }]
        })?;
        let mix = &params.mixing;
        let kappa = |z: f64| mixing::diffusivity(mix, z);
        let area = patterns.column_area_m2;
        let column = Column::new(&levels, area, mix.advection, kappa, mix.convective_m2_s);
        let start = &params.initial;
        let profile = |z: &f64| {
            start.bottom_c + (start.surface_c - start.bottom_c) * (-z / start.scale_m).exp()
        };
        let temperature: Vec<f64> = levels.middle_m().iter().map(profile).collect();
        let deep = params.sinking.reference_m3_s;
        let depth = thermocline::bounded_pycnocline_scale(&levels, &temperature);
        let rates = Rates {
            deep,
            subtropical: params.sinking.subtropical_m3_s,
            southern: closure::southern(&params.upwelling, depth, deep),
        };
        Ok(Self {
            rates,
            source: source_level(&levels, params.upwelling.southern_source_m),
            neutral: NeutralLevels::new(levels.len()),
            parcels: Vec::new(),
            sources: Sources::none(levels.len()),
            heat_w: vec![0.0; surface.bands.len()],
            told: false,
            running: false,
            books: Books {
                slow_years: 1.0,
                reservoir_j: 0.0,
                received_j: 0.0,
                given_j: 0.0,
                sinking_c: f64::NAN,
                low_latitude_c: f64::NAN,
                rates,
            },
            params: params.clone(),
            levels,
            patterns,
            column,
            temperature,
        })
    }

    /// Tells the others what they need in the first year: rates and upwelling of the present state, and
    /// the heat last computed (none at the start of a run).
    pub fn initial_exchange(&self, exchange: &mut Exchange) {
        let (p, r) = (&self.patterns, &self.rates);
        exchange.column_heat_w.clone_from(&self.heat_w);
        exchange.upwelling_m3_s = (0..self.heat_w.len())
            .map(|i| {
                (r.deep - r.southern) * p.broad[i]
                    + r.subtropical * p.equatorial[i]
                    + r.southern * p.southern[i]
            })
            .collect();
        exchange.deep_sinking_m3_s = r.deep;
        exchange.subtropical_sinking_m3_s = r.subtropical;
        exchange.column_area_share.clone_from(&p.area_share);
        exchange.column_depth_m = self.levels.middle_m().to_vec();
        exchange.column_temperature_c.clone_from(&self.temperature);
    }

    /// The levels.
    pub fn levels(&self) -> &ColumnLevels {
        &self.levels
    }

    /// Temperature of the levels, degC.
    pub fn temperature_c(&self) -> &[f64] {
        &self.temperature
    }

    /// Depths of the thermocline in the present profile.
    pub fn thermocline(&self) -> Thermocline {
        Thermocline::of(&self.levels, &self.temperature)
    }

    /// Whether the column holds what it tells: only after the spin-up, so that a frozen column is a
    /// balanced one.
    fn frozen(&self) -> bool {
        self.running && self.params.evolution == Evolution::Frozen
    }

    /// Flows out of the column this year, m3 s-1: through the top and to the Southern Ocean.
    fn outflows(&self, exchange: &Exchange) -> (f64, f64) {
        let water = compensated(exchange.sinking_volume_m3.iter().copied()) / YEAR_SECONDS;
        let southern = water * self.rates.southern / (self.rates.deep + self.rates.subtropical);
        (water - southern, southern)
    }

    /// Southern source temperature in a profile.
    fn source_temperature(&self, profile: &[f64]) -> f64 {
        let (k, below) = self.source;
        (1.0 - below) * profile[k] + below * profile[k + 1]
    }

    /// Steps the column through the year; means over the steps of the top temperature and of the
    /// southern source's.
    fn integrate(&mut self, slow_years: f64, exchange: &Exchange) -> (f64, f64) {
        let (top, southern) = self.outflows(exchange);
        let (k, below) = self.source;
        self.sources.outflow.fill(0.0);
        self.sources.outflow[0] = top;
        self.sources.outflow[k] += (1.0 - below) * southern;
        self.sources.outflow[k + 1] += below * southern;
        let velocity = self.params.surface_exchange.velocity_m_s;
        let areas = self.patterns.exchange_area_m2.iter();
        let surface = areas.zip(&exchange.mixed_layer_temperature_c);
        self.sources.surface.clear();
        self.sources.surface.extend(
            surface
                .filter(|(area, _)| **area > 0.0)
                .map(|(area, t)| (velocity * area, *t)),
        );
        let steps = (slow_years / self.params.longest_substep_yr)
            .ceil()
            .max(1.0);
        let dt = slow_years * YEAR_SECONDS / steps;
        insertion::gather(
            &mut self.parcels,
            &exchange.sinking_volume_m3,
            &exchange.sinking_heat_m3_c,
            1.0 / YEAR_SECONDS,
        );
        let (mut sum_top, mut sum_source, mut step) = (0.0, 0.0, 0.0);
        while step < steps {
            insertion::insert(
                &mut self.neutral,
                &self.temperature,
                &self.parcels,
                [&mut self.sources.inflow, &mut self.sources.inflow_heat],
            );
            let implicit = self.column.step(&mut self.temperature, &self.sources, dt);
            sum_top += implicit[0];
            sum_source += (1.0 - below) * implicit[k] + below * implicit[k + 1];
            step += 1.0;
        }
        (sum_top / steps, sum_source / steps)
    }

    /// Heat given to each band for these temperatures of the top and of the southern source.
    fn give_heat(&mut self, top_c: f64, source_c: f64, exchange: &Exchange) {
        let (top, southern) = self.outflows(exchange);
        let r = self.rates;
        let through_top = r.deep - r.southern + r.subtropical;
        let broad = top * (r.deep - r.southern) / through_top;
        let equatorial = top * r.subtropical / through_top;
        let velocity = self.params.surface_exchange.velocity_m_s;
        let p = &self.patterns;
        for (i, heat) in self.heat_w.iter_mut().enumerate() {
            let upward = (broad * p.broad[i] + equatorial * p.equatorial[i]) * top_c
                + southern * p.southern[i] * source_c;
            let area = p.exchange_area_m2[i];
            let exchanged = if area > 0.0 {
                velocity * area * (exchange.mixed_layer_temperature_c[i] - top_c)
            } else {
                0.0
            };
            *heat = HEAT_CAPACITY * (upward - exchanged);
        }
        self.told = true;
    }

    /// Moves the sinking rates towards the closure's.
    fn update_rates(&mut self, exchange: &Exchange) {
        let depth = thermocline::bounded_pycnocline_scale(&self.levels, &self.temperature);
        let drivers = closure::Drivers {
            gross_loss_w: exchange.gross_sinking_loss_w.iter().sum(),
            net_loss_w: exchange.net_sinking_loss_w.iter().sum(),
            contrast_k: self.books.low_latitude_c - self.books.sinking_c,
            depth_m: depth,
        };
        let sinking = &self.params.sinking;
        if self.books.sinking_c.is_finite() {
            let target = closure::target(sinking, &drivers);
            self.rates.deep = closure::relaxed(sinking, self.rates.deep, target);
        }
        self.rates.southern = closure::southern(&self.params.upwelling, depth, self.rates.deep);
    }

    fn book(&mut self, exchange: &Exchange) {
        let received = exchange.sinking_heat_m3_c.iter().copied();
        self.books.received_j = HEAT_CAPACITY * compensated(received);
        self.books.given_j = YEAR_SECONDS * compensated(self.heat_w.iter().copied());
        if self.frozen() {
            self.books.reservoir_j += self.books.received_j - self.books.given_j;
        }
    }

    fn check_finite(&self) -> Result<(), PhysicsError> {
        let fault = |variable, place| {
            Err(PhysicsError::NotFinite {
                component: NAME,
                variable,
                place,
            })
        };
        if let Some(k) = self.temperature.iter().position(|t| !t.is_finite()) {
            return fault("column temperature", format!("level {k} from the top"));
        }
        if let Some(i) = self.heat_w.iter().position(|h| !h.is_finite()) {
            return fault("heat given to the mixed layer", format!("band {i}"));
        }
        if !(self.rates.deep.is_finite() && self.rates.southern.is_finite()) {
            return fault("sinking rate", "high latitudes".to_owned());
        }
        Ok(())
    }
}

/// Level above `depth_m` and the weight of the level below it.
fn source_level(levels: &ColumnLevels, depth_m: f64) -> (usize, f64) {
    let z = levels.middle_m();
    let k = z.partition_point(|m| *m <= depth_m).clamp(1, z.len() - 1) - 1;
    let below = (depth_m - z[k]) / (z[k + 1] - z[k]);
    (k, below.clamp(0.0, 1.0))
}
