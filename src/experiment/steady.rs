//! The repeating seasonal cycle of an experiment at its first age, as a file of one record.
//!
//! The search is [`crate::model::steady`]; the record is the year after it, with nothing
//! accelerated, so that what is written is a year of the model and not of the search.

use super::contents::{self, History};
use super::follow::Follower;
use crate::config::ConfigError;
use crate::config::run::{BuildError, Built, Experiment};
use crate::model::clock::{Plan, PlanError, TimeSpec};
use crate::model::observer::{Observer, Restart};
use crate::model::steady::{Search, Steady};
use crate::output::writer::RunWriter;
use crate::output::{Claim, OutputError, Overwrite, Schema};
use crate::series::Record;
use std::ops::ControlFlow;
use std::path::{Path, PathBuf};

/// From where the search begins.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Start {
    /// Where the configuration says.
    Configured,
    /// From a frozen planet.
    Cold,
    /// From a planet without ice.
    Warm,
}

/// Keys of a start, and their values; chosen here to lie beyond the threshold on either side.
const COLD: [(&str, f64); 5] = [
    ("physics.energy_balance.start.equator_c", -25.0),
    ("physics.energy_balance.start.fall_k", 40.0),
    ("physics.energy_balance.start.sea_ice_m", 5.0),
    ("physics.ocean_column.initial.surface_c", -1.8),
    ("physics.ocean_column.initial.bottom_c", -1.8),
];
const WARM: [(&str, f64); 5] = [
    ("physics.energy_balance.start.equator_c", 35.0),
    ("physics.energy_balance.start.fall_k", 20.0),
    ("physics.energy_balance.start.sea_ice_m", 0.0),
    ("physics.ocean_column.initial.surface_c", 32.0),
    ("physics.ocean_column.initial.bottom_c", 12.0),
];

impl Start {
    /// The edits of a configuration that make it.
    pub fn edits(self) -> Vec<String> {
        let keys: &[(&str, f64)] = match self {
            Self::Configured => &[],
            Self::Cold => &COLD,
            Self::Warm => &WARM,
        };
        keys.iter()
            .map(|(key, value)| format!("{key}={value:?}"))
            .collect()
    }
}

/// A search that failed.
#[derive(Debug, thiserror::Error)]
pub enum SteadyError {
    /// The configuration cannot be read.
    #[error(transparent)]
    Config(#[from] ConfigError),
    /// The configuration makes no model.
    #[error(transparent)]
    Build(#[from] BuildError),
    /// The file could not be written.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// The record does not fit the age.
    #[error(transparent)]
    Plan(#[from] PlanError),
    /// The search or the year after it failed.
    #[error("{0}")]
    Run(String),
    /// The user asked to stop.
    #[error("stopped; nothing is written")]
    Stopped,
}

/// A cycle that was found, with the record of its year.
#[derive(Clone, Debug)]
pub struct Cycle {
    /// How it was found.
    pub steady: Steady,
    /// The single numbers of the year: name in the file, value, units.
    pub figures: Vec<(&'static str, f64, &'static str)>,
    /// The file, when one was asked for.
    pub file: Option<PathBuf>,
}

/// Where the cycle is written.
#[derive(Clone, Copy, Debug)]
pub struct Target<'a> {
    /// The file.
    pub path: &'a Path,
    /// What to do when it exists.
    pub overwrite: Overwrite,
}

/// Finds the cycle and writes it.
///
/// # Errors
/// When the configuration, the search or the file fail.
pub fn steady(
    experiment: &Experiment,
    search: Search,
    target: Option<Target<'_>>,
    arguments: &[String],
    follower: &mut dyn Follower,
) -> Result<Cycle, SteadyError> {
    let Built {
        mut model, setting, ..
    } = experiment.build()?;
    let claim = target.map(|t| Claim::take(t.path)).transpose()?;
    let time = &experiment.run.time;
    let told = |e: &dyn std::fmt::Display| SteadyError::Run(e.to_string());
    let mut watch = Watch {
        follower,
        stopped: false,
        last: None,
    };
    let found = model.steady(time.start_kyr, search, &mut watch);
    if watch.stopped {
        return Err(SteadyError::Stopped);
    }
    let steady = found.map_err(|e| told(&e))?;
    let plan = year_of(time)?;
    model.run(&plan, &mut watch).map_err(|e| told(&e))?;
    let Some((record, restart)) = watch.last else {
        return Err(told(&"the year after the search made no record"));
    };
    let history = History {
        earlier: String::new(),
        command: arguments,
    };
    let mut schema = contents::schema(experiment, &model, &setting, &history)?;
    let words = format!(
        "repeating seasonal cycle found in {} years; estimated error {:.1e} K",
        steady.years, steady.error_k
    );
    schema.global.push(("steady_state".to_owned(), words));
    let figures = single_numbers(&schema, &record);
    let mut file = None;
    if let (Some(claim), Some(target)) = (claim, target) {
        let mut writer = RunWriter::begin(claim, schema, target.overwrite)?;
        writer.push(&record, &restart.0)?;
        file = Some(writer.finish()?);
    }
    Ok(Cycle {
        steady,
        figures,
        file,
    })
}

/// The variables of a record that have no axis.
fn single_numbers(schema: &Schema, record: &Record) -> Vec<(&'static str, f64, &'static str)> {
    let mut rest = record.values.as_slice();
    let mut found = Vec::new();
    for variable in &schema.variables {
        let (own, others) = rest.split_at(rest.len().min(schema.size(variable)));
        if let (true, [value]) = (variable.axes.is_empty(), own) {
            found.push((variable.name, *value, variable.units));
        }
        rest = others;
    }
    found
}

/// The plan of one record of one year at the first age of an experiment.
fn year_of(time: &TimeSpec) -> Result<Plan, PlanError> {
    let spec = TimeSpec {
        start_kyr: time.start_kyr,
        end_kyr: time.start_kyr - 0.001,
        record_every_yr: 1,
        slow_years_per_seasonal_year: 1,
        ..time.clone()
    };
    Plan::new(&spec).map_err(|mut all| all.remove(0))
}

/// Tells the follower of years, and keeps the last record.
struct Watch<'a> {
    follower: &'a mut dyn Follower,
    stopped: bool,
    last: Option<(Record, Restart)>,
}

/// The user asked to stop.
#[derive(Debug, thiserror::Error)]
#[error("asked to stop")]
struct Asked;

impl Observer for Watch<'_> {
    type Error = Asked;

    fn record(&mut self, record: &Record, restart: &dyn Fn() -> Restart) -> Result<(), Asked> {
        self.last = Some((record.clone(), restart()));
        Ok(())
    }

    fn spun_up(&mut self, years: u32, of: u32) -> Result<(), Asked> {
        match self.follower.spun_up(years, of) {
            ControlFlow::Continue(()) => Ok(()),
            ControlFlow::Break(()) => {
                self.stopped = true;
                Err(Asked)
            }
        }
    }
}
