//! Seasonal energy balance of the air, the land and the ocean's mixed layer with sea ice, in
//! latitude bands.
//!
//! What: per band three reservoirs, air `T_a`, land `T_l`, ocean enthalpy E, and a layer under
//! the mixed layer that stores heat over the season:
//!   C_a dT_a/dt = chi S_abs - (A + B T_a - G) + f F_l + (1 - f) F_o + convergence of transport,
//!   C_l dT_l/dt = (1 - chi) S (1 - albedo) - F_l,
//!   dE/dt = (1 - chi) S (1 - albedo) - F_o - lambda (T_o - T_sub) + currents,
//! (North & Coakley 1979 for two surfaces; Flannery 1984, Hwang & Frierson 2010 for the transport
//! of moist static energy; Wagner & Eisenman 2015 for the enthalpy method.) With parts switched
//! off or exchanged the same code is the one-surface model of North 1975, a two-surface linear
//! model, or Budyko's relaxation to the mean; the closed forms of those test this kernel.
//!
//! Units: SI, temperatures in degC, northward fluxes in W.
//!
//! Numerics: backward differences of third order, one Newton step from the extrapolated state,
//! one tridiagonal solve a step (`surfaces`, `currents`, `air`, `update` in this order);
//! insolation is exact at the end of each step. Heat closes to round-off (`state`).
//! Nothing here knows of other components: the ocean column is met in
//! [`crate::physics::exchange`] only.

mod air;
mod coefficients;
mod currents;
mod ice_line;
mod means;
pub mod params;
mod report;
mod snow;
mod start;
mod state;
mod surfaces;
mod update;
mod variables;
mod work;

use super::budget::{Account, Quantity};
use super::exchange::{Exchange, Surface};
use super::{Build, Component, PhysicsError, RangeError, Setting};
use crate::forcing::YearForcing;
use crate::numerics::dispatch::{self, Kernel};
use crate::series::Variable;
use air::Transport;
use coefficients::Coefficients;
use currents::ColumnSide;
use ice_line::IceLine;
use means::{EdgeFluxes, FIELDS, Means};
use params::Params;
use report::Report;
use state::State;
use surfaces::Sunlight;
use work::Work;

/// The component; see the module.
#[derive(Clone, Debug)]
pub struct EnergyBalance {
    surface: Surface,
    coefficients: Coefficients,
    transport: Transport,
    ice_line: Option<IceLine>,
    state: State,
    work: Work,
    edges: EdgeFluxes,
    means: Means,
    report: Report,
    /// Whether the first year, which begins far from balance, is over.
    started: bool,
}

impl EnergyBalance {
    /// Builds the component with a smooth start state.
    ///
    /// # Errors
    /// All parameters out of range.
    pub fn new(p: &Params, setting: &Setting) -> Result<Self, Vec<RangeError>> {
        p.check()?;
        let surface = &setting.surface;
        let n = surface.bands.len();
        let coefficients = Coefficients::new(p, setting);
        let state = State::new(&coefficients, &surface.bands.mean_sine(), p.start);
        Ok(Self {
            transport: Transport::new(&p.transport, &surface.bands),
            ice_line: IceLine::new(&p.albedo, &surface.bands),
            work: Work::new(n),
            edges: EdgeFluxes::new(n),
            report: Report::new(p, surface, &coefficients),
            means: Means::new(&state.rows),
            surface: surface.clone(),
            coefficients,
            state,
            started: false,
        })
    }

    /// Air temperature at sea level at the end of the last step, degC, `[band]`.
    pub fn air_temperature_c(&self) -> Vec<f64> {
        self.state.field(|row| &row.air)
    }

    /// Land surface temperature at the end of the last step, degC, `[band]`.
    pub fn land_temperature_c(&self) -> Vec<f64> {
        self.state.field(|row| &row.land)
    }

    /// Enthalpy of mixed layer and sea ice, J per m2 of ocean, `[band]`.
    pub fn ocean_enthalpy_j_m2(&self) -> Vec<f64> {
        self.state.field(|row| &row.enthalpy)
    }

    /// Replaces the air temperature (degC, `[band]`) by a state at rest, for experiments on
    /// stability.
    pub fn set_air_temperature_c(&mut self, air_c: &[f64]) {
        self.state.rest_air(air_c);
        self.started = false;
    }

    /// sin(latitude) of the ice edge in the southern and northern hemisphere, for an ice-line
    /// albedo; `None` otherwise.
    pub fn ice_edge_sine(&self) -> Option<[f64; 2]> {
        self.ice_line
            .as_ref()
            .map(|line| line.edges(&self.air_temperature_c()))
    }

    /// Heat held by air, land and ocean layers, J, in the combination the formula conserves.
    pub fn heat_j(&self) -> f64 {
        self.state.heat_j(&self.coefficients).value()
    }
}

/// Temperatures at which a result is believed, degC; beyond, the run is refused. Chosen here, wider
/// than every balanced climate this model was run to (a frozen planet to 10 000 ppm).
const MEANINGFUL_C: [f64; 2] = [-150.0, 100.0];

impl EnergyBalance {
    /// Refuses a year whose state is broken, without meaning, or reached by steps too long for it; the
    /// first year, from a start state far from balance, need only stay finite.
    fn check_year(&self) -> Result<(), PhysicsError> {
        let component = self.name();
        let place = |band: usize| {
            format!(
                "the band at {} degrees north",
                self.surface.bands.centre_deg()[band]
            )
        };
        // Within a year all bands break; the one that was farthest from 0 degC began.
        let reach = |band: usize| {
            let ends = [
                self.means.sum(band, |row| row.coldest),
                self.means.sum(band, |row| row.warmest),
            ];
            ends[0].abs().max(ends[1].abs())
        };
        let nearer = |a: &(_, usize), b: &(_, usize)| reach(b.1).total_cmp(&reach(a.1));
        if let Some((variable, band)) = self.state.broken().min_by(nearer) {
            return Err(PhysicsError::NotFinite {
                component,
                variable,
                place: place(band),
            });
        }
        if !self.started {
            return Ok(());
        }
        let [low, high] = MEANINGFUL_C;
        for band in 0..self.coefficients.bands {
            let [cold, warm] = [
                self.means.sum(band, |row| row.coldest),
                self.means.sum(band, |row| row.warmest),
            ];
            for value in [cold, warm] {
                if !(low..=high).contains(&value) {
                    let (variable, place) = ("temperature", place(band));
                    return Err(PhysicsError::OutOfBounds {
                        component,
                        variable,
                        value,
                        low,
                        high,
                        place,
                    });
                }
            }
            if self.means.sum(band, |row| row.strained) > 0.0 {
                return Err(PhysicsError::StepTooLong {
                    component,
                    steps: self.coefficients.steps,
                    place: place(band),
                });
            }
        }
        Ok(())
    }
}

impl Build for EnergyBalance {
    type Params = Params;

    fn check(params: &Params) -> Result<(), Vec<RangeError>> {
        params.check()
    }

    fn build(
        params: &Params,
        setting: &Setting,
        _: &mut Exchange,
    ) -> Result<Self, Vec<RangeError>> {
        Self::new(params, setting)
    }
}

/// One seasonal year, run with the widest vectors the processor has.
struct Year<'a> {
    model: &'a mut EnergyBalance,
    insolation: &'a [f64],
    zenith: &'a [f64],
    greenhouse: f64,
    column: ColumnSide<'a>,
}

impl Kernel for Year<'_> {
    type Output = ();

    #[inline(always)]
    fn run(self) {
        let EnergyBalance {
            coefficients: c,
            transport,
            ice_line,
            state,
            work,
            edges,
            means,
            ..
        } = self.model;
        let n = c.bands;
        means.begin_year(c);
        for k in 0..c.steps {
            let sun = Sunlight {
                insolation: &self.insolation[k * n..(k + 1) * n],
                zenith: &self.zenith[k * n..(k + 1) * n],
            };
            if let Some(line) = ice_line {
                let ahead: Vec<f64> = state
                    .rows
                    .iter()
                    .flat_map(|row| row.air.extrapolated().0)
                    .collect();
                line.renew(&ahead, c);
            }
            surfaces::evaluate(c, state, work, sun, self.greenhouse);
            edges.deep_heat = currents::transport(c, work, self.column, &mut edges.ocean_w);
            air::assemble(c, work, self.greenhouse);
            transport.solve(c, work, &mut edges.air_w);
            update::advance(c, state, work, means, sun.insolation, self.greenhouse);
            means.count_step(c, work, k, edges);
            means.count_node(c, k + 1);
        }
    }
}

impl Component for EnergyBalance {
    fn name(&self) -> &'static str {
        "energy_balance"
    }

    fn advance(
        &mut self,
        forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        self.coefficients.months.set_bounds(&forcing.month_bounds);
        let column = ColumnSide {
            heat_w: &exchange.column_heat_w,
            upwelling_m3_s: &exchange.upwelling_m3_s,
            deep_sinking_m3_s: exchange.deep_sinking_m3_s,
            subtropical_sinking_m3_s: exchange.subtropical_sinking_m3_s,
        };
        dispatch::widest(Year {
            model: self,
            insolation: forcing.insolation_w_m2,
            zenith: forcing.zenith_cosine,
            greenhouse: forcing.greenhouse_w_m2,
            column,
        });
        self.check_year()?;
        self.started = true;
        self.report
            .close_year(&self.coefficients, &self.means, &self.state, exchange);
        Ok(())
    }

    fn conserves(&self) -> &'static [Quantity] {
        &[Quantity::Energy]
    }

    fn accounts(&self) -> Vec<Account> {
        vec![self.report.account.clone()]
    }

    fn variables(&self) -> Vec<Variable> {
        variables::variables()
    }

    fn record(&self, values: &mut Vec<f64>) {
        self.report.record(values);
    }

    fn save(&self) -> Vec<f64> {
        let n = self.coefficients.bands;
        let mut values = Vec::with_capacity(State::len(n) + FIELDS * n);
        self.state.save(&mut values);
        self.means.save(&mut values);
        values
    }

    fn weights(&self) -> Vec<f64> {
        let mut weights = State::weights(&self.coefficients);
        weights.resize(weights.len() + FIELDS * self.coefficients.bands, 0.0);
        weights
    }

    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError> {
        let n = self.coefficients.bands;
        let needed = State::len(n) + FIELDS * n;
        if state.len() != needed {
            let found = state.len();
            return Err(PhysicsError::RestartLength {
                component: self.name(),
                found,
                needed,
            });
        }
        self.state.restore(state);
        self.means.restore(&state[State::len(n)..]);
        self.started = true;
        Ok(())
    }
}
