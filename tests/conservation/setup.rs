//! The coupled model at a step change of the orbit.

#[path = "../support/forced.rs"]
mod forced;
#[path = "../support/reference.rs"]
pub(crate) mod reference;

use orbicline::config::run::{Built, Experiment};
use orbicline::forcing::YearForcing;
use orbicline::model::Model;
use orbicline::model::observer::Nobody;
use orbicline::physics::budget::{Account, Quantity};
use orbicline::physics::exchange::Exchange;
use orbicline::physics::{Component, PhysicsError};
use orbicline::series::Variable;
use std::convert::Infallible;

/// An elliptic orbit of that obliquity, and edits.
fn experiment(obliquity_deg: f64, edits: &[&str]) -> Experiment {
    let obliquity =
        format!("orbit.obliquity={{ kind = \"constant\", obliquity_deg = {obliquity_deg} }}");
    let mut all = vec![
        obliquity.as_str(),
        "orbit.eccentricity={ kind = \"constant\", eccentricity = 0.05 }",
        "orbit.perihelion={ kind = \"constant_heliocentric\", heliocentric_deg = 90.0 }",
    ];
    all.extend(edits);
    reference::experiment(&all)
}

/// Seasonal years at the present age.
pub(crate) fn run(model: &mut Model, slow_years: f64, seasonal_years: u32) {
    for _ in 0..seasonal_years {
        let outcome = model.held_year::<Infallible>(0.0, slow_years);
        outcome.expect("a year without fault");
    }
}

/// A model of these edits in balance with obliquity 22, now under 24.5, its ledger open.
pub(crate) fn stepped(edits: &[&str]) -> Model {
    // The column comes to balance in either case; a frozen one is frozen in that state.
    let whole: Vec<&str> = edits
        .iter()
        .copied()
        .filter(|e| !e.ends_with("frozen"))
        .collect();
    let old = experiment(22.0, &whole);
    let mut before = old.build().expect("a model").model;
    let spun = before.spin_up(0.0, old.run.time.spin_up, &mut Nobody);
    spun.expect("a spin-up without fault");
    let mut model = experiment(24.5, edits).build().expect("a model").model;
    let restored = model.restore::<Infallible>(&before.restart());
    restored.expect("the same shape");
    model.open_ledger();
    model
}

/// Gives heat to the mixed layer that nobody books.
struct Stove(f64);

impl Component for Stove {
    fn name(&self) -> &'static str {
        "stove"
    }

    fn advance(
        &mut self,
        _: &YearForcing<'_>,
        exchange: &mut Exchange,
    ) -> Result<(), PhysicsError> {
        let share = self.0;
        let areas = exchange.column_area_share.clone();
        let heats = exchange.column_heat_w.iter_mut();
        heats
            .zip(areas)
            .for_each(|(heat, area)| *heat += share * area);
        Ok(())
    }

    fn conserves(&self) -> &'static [Quantity] {
        &[]
    }

    fn accounts(&self) -> Vec<Account> {
        Vec::new()
    }

    fn variables(&self) -> Vec<Variable> {
        Vec::new()
    }

    fn record(&self, _: &mut Vec<f64>) {}

    fn weights(&self) -> Vec<f64> {
        Vec::new()
    }

    fn save(&self) -> Vec<f64> {
        Vec::new()
    }

    fn restore(&mut self, _: &[f64]) -> Result<(), PhysicsError> {
        Ok(())
    }
}

/// A model from its start state with a stove of that power (W) behind the column.
pub(crate) fn with_stove(power_w: f64) -> Model {
    let experiment = experiment(24.5, &[]);
    let Built { setting, .. } = experiment.build().expect("a model");
    let mut exchange = Exchange::new(setting.surface.bands.len());
    let built = experiment.run.physics.build(&setting, &mut exchange);
    let mut components = built.expect("all components");
    components.push(Box::new(Stove(power_w)));
    Model::new(components, exchange, forced::drive(&experiment, &setting))
}
