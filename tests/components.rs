//! What every component must keep, checked for all in the list of components.
//!
//! Every check is also run on components with a planted fault, to show that it would catch it.

#[path = "support/accounts.rs"]
mod accounts;
#[path = "support/balance.rs"]
mod balance;
#[path = "components/checks.rs"]
mod checks;
#[path = "support/forced.rs"]
mod forced;
#[path = "support/reference.rs"]
mod reference;
#[path = "components/spoiled.rs"]
mod spoiled;

use accounts::accounts;
use checks::{books, metadata, restores, shapes, stores, weights};
use orbicline::config::run::{Built, Experiment};
use orbicline::model::Model;
use orbicline::physics::Component;
use orbicline::physics::exchange::Exchange;
use spoiled::{Fault, Spoiled};
use std::convert::Infallible;

/// Years between which the orbit moves on by this much, kyr.
const BETWEEN_KYR: f64 = 0.5;

/// A model and the components as they are before the first year, all with the same fault.
fn model(experiment: &Experiment, fault: Fault) -> (Model, Vec<Box<dyn Component>>) {
    let Built { model, setting, .. } = experiment.build().expect("a model");
    if fault == Fault::None {
        return (model, fresh(experiment, fault));
    }
    let drive = forced::drive(experiment, &setting);
    let mut exchange = Exchange::new(setting.surface.bands.len());
    let built = experiment.run.physics.build(&setting, &mut exchange);
    let components = Spoiled::all(built.expect("all components"), fault);
    (
        Model::new(components, exchange, drive),
        fresh(experiment, fault),
    )
}

fn fresh(experiment: &Experiment, fault: Fault) -> Vec<Box<dyn Component>> {
    let setting = experiment.build().expect("a model").setting;
    let mut exchange = Exchange::new(setting.surface.bands.len());
    let built = experiment.run.physics.build(&setting, &mut exchange);
    Spoiled::all(built.expect("all components"), fault)
}

fn year(model: &mut Model, number: u32, slow_years: f64) {
    let age_kyr = 100.0 - BETWEEN_KYR * f64::from(number);
    let outcome = model.held_year::<Infallible>(age_kyr, slow_years);
    outcome.expect("a year without fault");
}

/// All messages of all checks, after some years.
fn messages(experiment: &Experiment, fault: Fault, slow_years: f64) -> Vec<String> {
    let (mut model, fresh) = model(experiment, fault);
    year(&mut model, 0, slow_years);
    let mut found = Vec::new();
    let mut before = accounts(&model);
    for number in 1..=6 {
        year(&mut model, number, slow_years);
        let now = accounts(&model);
        found.extend(stores(&before, &now));
        before = now;
    }
    found.extend(books(model.components()));
    found.extend(shapes(model.components(), experiment));
    found.extend(weights(model.components()));
    found.extend(metadata(model.drive().sources(), model.components()));
    found.extend(restores(model.components(), fresh));
    found
}

#[test]
fn every_component_of_the_list_is_there() {
    let experiment = reference::experiment(&[]);
    let built = experiment.build().expect("a model");
    let names: Vec<_> = built.model.components().iter().map(|c| c.name()).collect();
    let tables = &experiment.tree.resolved_toml().expect("a tree");
    let tables: toml::Table = tables.parse().expect("TOML");
    let physics = tables["physics"].as_table().expect("a table");
    assert_eq!(names.len(), physics.len(), "{names:?}");
    for name in names {
        assert!(physics.contains_key(name), "{name} has no table");
    }
}

#[test]
fn conserves_every_component_keeps_books_shapes_metadata_and_state() {
    for edits in [
        &[][..],
        &["grid.bands=72", "calendar.months=fixed_angle"],
        &["physics.ocean_column.evolution=frozen"],
    ] {
        let experiment = reference::experiment(edits);
        for slow_years in [1.0, 20.0] {
            let found = messages(&experiment, Fault::None, slow_years);
            assert!(
                found.is_empty(),
                "{edits:?}, M = {slow_years}:\n{}",
                found.join("\n")
            );
        }
    }
}

#[test]
fn every_planted_fault_is_caught_by_its_own_check() {
    let experiment = reference::experiment(&[]);
    for fault in Fault::PLANTED {
        let found = messages(&experiment, fault, 1.0);
        let fragment = fault.message();
        let caught = found.iter().filter(|m| m.contains(fragment)).count();
        assert!(
            caught > 0,
            "{fault:?} should give `{fragment}`:\n{}",
            found.join("\n")
        );
        let other = found.iter().find(|m| !m.contains(fragment));
        assert!(other.is_none(), "{fault:?} also gives {other:?}");
    }
}
