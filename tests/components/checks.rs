//! The checks; each gives a message for everything wrong.

use super::accounts::flows;
use super::balance::imbalance;
use orbicline::config::run::Experiment;
use orbicline::forcing::drive::Sources;
use orbicline::model::records::model_variables;
use orbicline::physics::Component;
use orbicline::physics::budget::Account;
use std::collections::BTreeSet;

#[path = "../support/sizes.rs"]
mod sizes;

/// Largest change of a store that no flow explains, over all that flowed; and over the store
/// itself, whose content of 1e25 J is known to one rounding only.
const OF_FLOWS: f64 = 1e-15;
const OF_STORE: f64 = 2.0 * f64::EPSILON;

/// Accounts are exactly those of the quantities a component says it conserves.
pub(crate) fn books(components: &[Box<dyn Component>]) -> Vec<String> {
    let mut found = Vec::new();
    for c in components {
        let accounts = c.accounts();
        let booked: Vec<_> = accounts.iter().map(|a| a.quantity).collect();
        if booked != c.conserves() {
            let declared = c.conserves();
            found.push(format!(
                "{}: books {booked:?}, conserves {declared:?}",
                c.name()
            ));
        }
        let foreign = accounts.iter().find(|a| a.component != c.name());
        found.extend(foreign.map(|a| format!("{}: account of {}", c.name(), a.component)));
    }
    found
}

/// What is stored changes by the flows.
pub(crate) fn stores(before: &[Account], now: &[Account]) -> Vec<String> {
    let mut found = Vec::new();
    for (old, new) in before.iter().zip(now) {
        let left = imbalance(&[old, new], None).abs();
        let moved: f64 = flows(new).map(|f| f.amount.value().abs()).sum();
        let allowed = OF_FLOWS + OF_STORE * new.stored.value().abs() / moved;
        // Written so that NaN is a fault.
        if !matches!(left.partial_cmp(&allowed), Some(std::cmp::Ordering::Less)) {
            let name = new.component;
            found.push(format!(
                "{name}: the store changes by {left:e} of the flows more"
            ));
        }
    }
    found
}

/// Records are as long as the axes of the variables say.
pub(crate) fn shapes(components: &[Box<dyn Component>], experiment: &Experiment) -> Vec<String> {
    let mut found = Vec::new();
    for c in components {
        let mut record = Vec::new();
        c.record(&mut record);
        let needed: usize = c
            .variables()
            .iter()
            .map(|v| sizes::size(v, experiment))
            .sum();
        if record.len() != needed {
            let length = record.len();
            found.push(format!(
                "{}: records {length} values, declares {needed}",
                c.name()
            ));
        }
    }
    found
}

/// Every saved number has a weight, and none is negative.
pub(crate) fn weights(components: &[Box<dyn Component>]) -> Vec<String> {
    let mut found = Vec::new();
    for c in components {
        let (weights, numbers) = (c.weights(), c.save().len());
        if weights.len() != numbers || weights.iter().any(|w| *w < 0.0) {
            let count = weights.len();
            found.push(format!("{}: {count} weights for {numbers}", c.name()));
        }
    }
    found
}

/// Names are unique over the whole file; units and words are there.
pub(crate) fn metadata(sources: &Sources, components: &[Box<dyn Component>]) -> Vec<String> {
    let mut found = Vec::new();
    let mut names = BTreeSet::new();
    let mut all = model_variables(sources);
    all.extend(components.iter().flat_map(|c| c.variables()));
    for v in all {
        if !names.insert(v.name) {
            found.push(format!("{}: the name is taken", v.name));
        }
        if v.units.is_empty() {
            found.push(format!("{}: no units", v.name));
        }
        if v.long_name.is_empty() {
            found.push(format!("{}: no long name", v.name));
        }
    }
    found
}

/// A saved state goes into a new component and comes out as it went in; others are refused.
pub(crate) fn restores(
    components: &[Box<dyn Component>],
    fresh: Vec<Box<dyn Component>>,
) -> Vec<String> {
    let mut found = Vec::new();
    for (old, mut new) in components.iter().zip(fresh) {
        let name = old.name();
        let state = old.save();
        let longer = [&state[..], &[0.0]].concat();
        let shorter = &state[..state.len().saturating_sub(1)];
        let fits = shorter.len() == state.len();
        if new.restore(&longer).is_ok() || (!fits && new.restore(shorter).is_ok()) {
            found.push(format!("{name}: takes a state of another size"));
        }
        if new.restore(&state).is_err() {
            found.push(format!("{name}: refuses its own state"));
        }
        let bits = |values: &[f64]| values.iter().map(|v| v.to_bits()).collect::<Vec<_>>();
        if bits(&new.save()) != bits(&state) {
            found.push(format!("{name}: the state comes out changed"));
        }
    }
    found
}
