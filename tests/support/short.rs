//! A run of a second, into a file.

use orbicline::config::run::Experiment;
use orbicline::experiment::follow::{Event, Follower};
use orbicline::experiment::single::{self, Begin, Destination, Outcome};
use orbicline::output::Overwrite;
use std::ops::ControlFlow;
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

impl Follower for Nobody {
    fn told(&mut self, _: &Event) {}

    fn spun_up(&mut self, _: u32, _: u32) -> ControlFlow<()> {
        ControlFlow::Continue(())
    }

    fn passed(&mut self, _: f64) -> ControlFlow<()> {
        ControlFlow::Continue(())
    }
}

/// The file of a run.
pub(crate) fn run(experiment: &Experiment, path: &Path, threads: usize) -> PathBuf {
    let destination = Destination {
        path: path.to_owned(),
        overwrite: Overwrite::Refuse,
        begin: Begin::Anew,
        threads,
    };
    let words = ["orbicline", "run"].map(str::to_owned);
    match single::run(experiment, &destination, &words, &mut Nobody).expect("a run") {
        Outcome::Complete(path) => path,
        other => panic!("{other:?}"),
    }
}
