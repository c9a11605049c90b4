//! A run of a second, into a file.

use orbicline::config::run::Experiment;
use orbicline::experiment::single::{self, Destination, Progress};
use orbicline::model::clock::Plan;
use orbicline::output::Overwrite;
use std::path::{Path, PathBuf};

/// 140 years in 70 records: more than the 64 of a segment, with little spin-up.
pub(crate) const EDITS: [&str; 5] = [
    "time.start_kyr=10.14",
    "time.end_kyr=10.0",
    "time.record_every_yr=2",
    "time.spin_up.seasonal_yr=5",
    "time.spin_up.settling_yr=5",
];

struct Nobody;

impl Progress for Nobody {
    fn begin(&mut self, _: &Plan) {}
    fn passed(&mut self, _: f64) {}
    fn completing(&mut self) {}
}

/// The file of a run.
pub(crate) fn run(experiment: &Experiment, path: &Path, threads: usize) -> PathBuf {
    let destination = Destination {
        path: path.to_owned(),
        overwrite: Overwrite::Refuse,
        threads,
    };
    let words = ["orbicline", "run"].map(str::to_owned);
    single::run(experiment, &destination, &words, &mut Nobody).expect("a run")
}
