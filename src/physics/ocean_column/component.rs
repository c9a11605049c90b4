//! The column as a [`Component`]: one seasonal year, its heat account, its record and its state.
//!
//! Account (J per seasonal year): stored = rho c int Ac T dz / `slow_years`, or the reservoir of a
//! frozen column; flows are the heat of the sinking water and the heat given to the mixed layers.
//! Nothing is computed here that is not described in the module above.

use super::params::Params;
use super::{Books, HEAT_CAPACITY, NAME, OceanColumn, Rates, variables};
use crate::forcing::YearForcing;
use crate::numerics::sum::CompensatedSum;
use crate::physics::budget::{Account, Flow, Quantity};
use crate::physics::exchange::Exchange;
use crate::physics::{Build, Component, PhysicsError, RangeError, Setting};
use crate::series::Variable;

impl Build for OceanColumn {
    type Params = Params;

    fn check(params: &Params) -> Result<(), Vec<RangeError>> {
        params.check()
    }

    fn build(
        params: &Params,
        setting: &Setting,
        exchange: &mut Exchange,
    ) -> Result<Self, Vec<RangeError>> {
        let column = Self::new(params, &setting.surface)?;
        column.initial_exchange(exchange);
        Ok(column)
    }
}

impl Component for OceanColumn {
    fn name(&self) -> &'static str {
        NAME
    }

    fn advance(
        &mut self,
        forcing: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        let years = forcing.slow_years;
        if !(years > 0.0 && years.is_finite()) {
            return Err(PhysicsError::NotFinite {
                component: NAME,
                variable: "years advanced in a seasonal year",
                place: "forcing".to_owned(),
            });
        }
        self.books.slow_years = years;
        self.books.sinking_c = exchange.deep_sinking_temperature_c;
        let surface = &exchange.mixed_layer_temperature_c;
        self.books.low_latitude_c = self.patterns.exchange_mean(surface);
        let before = self.rates;
        if !self.frozen() {
            let (top, source) = self.integrate(years, exchange);
            self.give_heat(top, source, exchange);
            self.update_rates(exchange);
        } else if !self.told {
            let source = self.source_temperature(&self.temperature);
            self.give_heat(self.temperature[0], source, exchange);
        }
        self.books.rates = before;
        self.book(exchange);
        self.check_finite()?;
        self.initial_exchange(exchange);
        Ok(())
    }

    fn begin_run(&mut self) {
        self.running = true;
    }

    fn conserves(&self) -> &'static [Quantity] {
        &[Quantity::Energy]
    }

    fn accounts(&self) -> Vec<Account> {
        let stored = if self.frozen() {
            self.books.reservoir_j
        } else {
            HEAT_CAPACITY * self.column.content(&self.temperature) / self.books.slow_years
        };
        let flow = |name, amount| Flow {
            name,
            amount: CompensatedSum::new(amount),
        };
        vec![Account {
            component: NAME,
            quantity: Quantity::Energy,
            stored: CompensatedSum::new(stored),
            from_outside: Vec::new(),
            from_components: vec![
                flow("sinking water", self.books.received_j),
                flow("given to the mixed layer", -self.books.given_j),
            ],
        }]
    }

    fn variables(&self) -> Vec<Variable> {
        variables::declared()
    }

    fn record(&self, values: &mut Vec<f64>) {
        let t = self.thermocline();
        values.extend_from_slice(&self.temperature);
        values.extend([
            t.isotherm_20c_m,
            t.relative_isotherm_m,
            t.pycnocline_m,
            t.half_depth_m,
            t.warm_water_heat_j_m2,
            self.books.rates.deep,
            self.books.rates.subtropical,
            self.books.rates.southern,
            self.books.rates.deep + self.books.rates.subtropical,
            self.books.sinking_c,
            self.books.low_latitude_c,
        ]);
    }

    fn save(&self) -> Vec<f64> {
        let (r, b) = (&self.rates, &self.books);
        let numbers = [
            r.deep,
            r.subtropical,
            r.southern,
            f64::from(u8::from(self.told)),
            f64::from(u8::from(self.running)),
            b.slow_years,
            b.reservoir_j,
            b.received_j,
            b.given_j,
            b.sinking_c,
            b.low_latitude_c,
        ];
        let remainder = self.column.remainder();
        [&numbers[..], &self.temperature, remainder, &self.heat_w].concat()
    }

    fn weights(&self) -> Vec<f64> {
        let (levels, bands) = (self.temperature.len(), self.heat_w.len());
        let mut weights = vec![0.0; 11 + 2 * levels + bands];
        // One kelvin for 1e6 m3/s of sinking; deep sinking is slow, the other rates follow.
        weights[0] = 1e-6;
        weights[11..11 + levels].fill(1.0);
        weights
    }

    fn restore(&mut self, state: &[f64]) -> Result<(), PhysicsError> {
        let (levels, bands) = (self.temperature.len(), self.heat_w.len());
        let fault = PhysicsError::RestartLength {
            component: NAME,
            found: state.len(),
            needed: 11 + 2 * levels + bands,
        };
        let Some((&[deep, subtropical, southern, told, running, rest @ ..], profile)) =
            state.split_first_chunk::<11>()
        else {
            return Err(fault);
        };
        if profile.len() != 2 * levels + bands {
            return Err(fault);
        }
        let [
            slow_years,
            reservoir_j,
            received_j,
            given_j,
            sinking_c,
            low_latitude_c,
        ] = rest;
        self.rates = Rates {
            deep,
            subtropical,
            southern,
        };
        self.told = told > 0.5;
        self.running = running > 0.5;
        self.books = Books {
            slow_years,
            reservoir_j,
            received_j,
            given_j,
            sinking_c,
            low_latitude_c,
            rates: self.rates,
        };
        self.temperature.copy_from_slice(&profile[..levels]);
        self.column.set_remainder(&profile[levels..2 * levels]);
        self.heat_w.copy_from_slice(&profile[2 * levels..]);
        Ok(())
    }
}
