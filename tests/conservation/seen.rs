//! What a model lets others see of the year just run.

#[path = "../support/sizes.rs"]
mod sizes;

use orbicline::config::run::Experiment;
use orbicline::model::Model;
use orbicline::numerics::sum::CompensatedSum;
use orbicline::units::YEAR_SECONDS;
use sizes::size;

/// Heat that the column gave this year and the mixed layer receives next year, J.
pub(crate) fn in_transit(model: &Model) -> CompensatedSum {
    let mut sum = CompensatedSum::default();
    for watt in &model.exchange().column_heat_w {
        sum.add_product(*watt, YEAR_SECONDS);
    }
    sum
}

/// Values of the year just run.
pub(crate) fn values(model: &Model, experiment: &Experiment, name: &str) -> Vec<f64> {
    for component in model.components() {
        let mut record = Vec::new();
        component.record(&mut record);
        let mut start = 0;
        for variable in component.variables() {
            let end = start + size(&variable, experiment);
            if variable.name == name {
                return record[start..end].to_vec();
            }
            start = end;
        }
    }
    panic!("no component has the variable {name}")
}
