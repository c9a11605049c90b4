//! One transient run from a configuration into a file.
//!
//! A run can be stopped or killed at any moment and goes on from its last segment with the same
//! numbers, bit for bit: the state in a segment is all that the model carries from record to
//! record, and forcing depends on age only.

use super::background::{Delivery, Left, Sink};
use super::contents::{self, History};
use super::estimate::{Estimate, EstimateError, Task};
use super::follow::{Event, Follower};
use super::resume::{self, ResumeError, Start};
use crate::config::ConfigError;
use crate::config::run::{BuildError, Built, Experiment};
use crate::model::clock::{Plan, SpinUp};
use crate::model::observer::{Observer, Restart};
use crate::model::{Model, RunError};
use crate::output::writer::RunWriter;
use crate::output::{Claim, OutputError, Overwrite};
use crate::series::Record;
use std::ops::ControlFlow;
use std::path::{Path, PathBuf};

/// A run that failed.
#[derive(Debug, thiserror::Error)]
pub enum SingleError {
    /// The configuration cannot be read.
    #[error(transparent)]
    Config(#[from] ConfigError),
    /// The configuration makes no model.
    #[error(transparent)]
    Build(#[from] BuildError),
    /// The file could not be written.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// What is there cannot be gone on with.
    #[error(transparent)]
    Resume(#[from] ResumeError),
    /// The model could not go on.
    #[error("{cause}; {kept}")]
    Run {
        /// Why.
        cause: String,
        /// What is kept.
        kept: Kept,
    },
}

/// How a run begins.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Begin {
    /// At its start.
    Anew,
    /// After the last segment of an unfinished run; at its start when there is none.
    GoOn,
}

/// Where and how a run is written.
#[derive(Clone, Debug)]
pub struct Destination {
    /// The file.
    pub path: PathBuf,
    /// What to do when it exists.
    pub overwrite: Overwrite,
    /// Whether to go on.
    pub begin: Begin,
    /// Threads that may be used; results do not depend on it.
    pub threads: usize,
}

/// How a run ended.
#[derive(Clone, Debug, PartialEq)]
pub enum Outcome {
    /// The file is complete.
    Complete(PathBuf),
    /// It was complete before.
    Already(PathBuf),
    /// The run was asked to stop; it can go on.
    Stopped(Kept),
}

/// What is on disk of a run that is not complete.
#[derive(Clone, Debug, PartialEq)]
pub struct Kept {
    /// The file that is to be.
    pub path: PathBuf,
    /// Records in segments beside it.
    pub records: u64,
    /// Records of the whole run.
    pub of: u64,
    /// Age to which they reach, kyr before 1950; none without records.
    pub age_kyr: Option<f64>,
}

impl std::fmt::Display for Kept {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let (records, of, path) = (self.records, self.of, self.path.display());
        match self.age_kyr {
            Some(age) => write!(
                f,
                "{records} of {of} records, to {age:.3} kyr before 1950, are kept in segments beside {path}"
            ),
            None => write!(f, "nothing of {path} is kept yet"),
        }
    }
}

/// Runs an experiment.
///
/// # Errors
/// When the configuration, the model or the file fail; complete records stay on disk in segments.
pub fn run(
    experiment: &Experiment,
    destination: &Destination,
    arguments: &[String],
    follower: &mut dyn Follower,
) -> Result<Outcome, SingleError> {
    let Built {
        mut model,
        plan,
        setting,
    } = experiment.build()?;
    let identity = experiment.identity()?;
    let claim = Claim::take(&destination.path)?;
    let start = match destination.begin {
        Begin::Anew => Start::Anew,
        Begin::GoOn => {
            claim.discard_unsealed()?;
            resume::find(&claim, &identity, &plan, destination.overwrite)?
        }
    };
    let earlier = match &start {
        Start::Complete => {
            claim.discard()?;
            return Ok(Outcome::Already(destination.path.clone()));
        }
        Start::GoOn { history } => history.clone(),
        Start::Anew => String::new(),
    };
    let command = arguments;
    let history = History { earlier, command };
    let schema = contents::schema(experiment, &model, &setting, &history)?;
    let overwrite = destination.overwrite;
    let writer = match start {
        Start::GoOn { .. } => RunWriter::go_on(claim, schema.clone(), overwrite)?,
        Start::Anew | Start::Complete => RunWriter::begin(claim, schema.clone(), overwrite)?,
    };
    follower.told(&Event::Begins {
        plan: plan.clone(),
        configuration_sha256: identity.sha256(),
    });
    let task = Task {
        experiment,
        plan: &plan,
        schema: &schema,
        output: &destination.path,
        done: writer.records() as u64,
        threads: destination.threads,
    };
    follower.told(&expected_cost(&task));
    carry_out(&mut model, writer, &task, destination, follower)
}

fn expected_cost(task: &Task<'_>) -> Event {
    match task.estimate() {
        Ok(estimate) => Event::Estimated(estimate),
        Err(error) => Event::NotEstimated {
            reason: error.to_string(),
        },
    }
}

/// Runs what is left of a task and completes the file, or keeps what is there.
fn carry_out(
    model: &mut Model,
    writer: RunWriter,
    task: &Task<'_>,
    destination: &Destination,
    follower: &mut dyn Follower,
) -> Result<Outcome, SingleError> {
    let (plan, done) = (task.plan, task.done);
    let from = Restart(writer.restart().to_vec());
    let mut watch = Watch {
        saved: writer.segments(),
        sink: Sink::new(writer, destination.threads),
        follower,
    };
    let outcome = if let Some(age_kyr) = age_after(plan, done) {
        let records = done;
        watch.follower.told(&Event::GoesOn { records, age_kyr });
        let restored = model.restore(&from);
        let years = plan.years_of_records(done);
        restored.and_then(|()| model.run_from(plan, years, &mut watch))
    } else {
        if destination.begin == Begin::GoOn {
            watch.follower.told(&Event::NothingToGoOnWith);
        }
        let spin_up = task.experiment.run.time.spin_up;
        from_the_start(model, plan, spin_up, &mut watch)
    };
    watch.end(outcome, plan, &destination.path)
}

/// The cost of a run, measured without running or writing it.
///
/// # Errors
/// When the configuration makes no model or the trial fails.
pub fn estimate(
    experiment: &Experiment,
    destination: &Destination,
    arguments: &[String],
) -> Result<(Plan, Result<Estimate, EstimateError>), SingleError> {
    let built = experiment.build()?;
    let history = History {
        earlier: String::new(),
        command: arguments,
    };
    let schema = contents::schema(experiment, &built.model, &built.setting, &history)?;
    let task = Task {
        experiment,
        plan: &built.plan,
        schema: &schema,
        output: &destination.path,
        done: 0,
        threads: destination.threads,
    };
    let estimate = task.estimate();
    Ok((built.plan, estimate))
}

fn from_the_start(
    model: &mut Model,
    plan: &Plan,
    spin_up: SpinUp,
    watch: &mut Watch<'_>,
) -> Result<(), RunError<Stopped>> {
    model.spin_up(plan.start_kyr(), spin_up, watch)?;
    let years = spin_up.years();
    watch.follower.told(&Event::SpunUp { years });
    model.run(plan, watch)
}

/// Age after so many records, kyr before 1950.
fn age_after(plan: &Plan, records: u64) -> Option<f64> {
    let last = plan.years_of_records(records).checked_sub(1)?;
    Some(plan.record_bounds_kyr(last)[1])
}

/// Why the observer stopped a run.
#[derive(Debug, thiserror::Error)]
enum Stopped {
    #[error(transparent)]
    Writer(OutputError),
    #[error("the writer stopped")]
    WriterGone,
    #[error("asked to stop")]
    Asked,
}

/// Passes records to the file and years to whoever follows.
struct Watch<'a> {
    sink: Sink,
    saved: usize,
    follower: &'a mut dyn Follower,
}

impl Watch<'_> {
    /// Completes the file, or keeps what is there.
    fn end(
        self,
        outcome: Result<(), RunError<Stopped>>,
        plan: &Plan,
        path: &Path,
    ) -> Result<Outcome, SingleError> {
        let Self { sink, follower, .. } = self;
        if outcome.is_ok() {
            follower.told(&Event::Completing);
            let Left::File(path) = sink.finish()? else {
                let path = path.to_owned();
                return Err(OutputError::Empty { path }.into());
            };
            follower.told(&Event::Completed { path: path.clone() });
            return Ok(Outcome::Complete(path));
        }
        // The writer's own error, if it has one, is the cause and not the consequence.
        let records = match sink.keep()? {
            Left::Records(records) => records as u64,
            Left::File(_) => plan.records(),
        };
        let kept = Kept {
            path: path.to_owned(),
            records,
            of: plan.records(),
            age_kyr: age_after(plan, records),
        };
        match outcome {
            Err(RunError::Observer(Stopped::Asked)) => Ok(Outcome::Stopped(kept)),
            Err(RunError::Observer(Stopped::Writer(error))) => Err(error.into()),
            Err(error) => Err(SingleError::Run {
                cause: error.to_string(),
                kept,
            }),
            Ok(()) => Ok(Outcome::Complete(path.to_owned())),
        }
    }
}

impl Observer for Watch<'_> {
    type Error = Stopped;

    fn record(&mut self, record: &Record, restart: &dyn Fn() -> Restart) -> Result<(), Stopped> {
        let delivery = self.sink.push(record, restart());
        let segments = self.sink.segments();
        if segments > self.saved {
            self.saved = segments;
            self.follower.told(&Event::Saved { segments });
        }
        match delivery.map_err(Stopped::Writer)? {
            Delivery::Taken => Ok(()),
            Delivery::WriterGone => Err(Stopped::WriterGone),
        }
    }

    fn spun_up(&mut self, years: u32, of: u32) -> Result<(), Stopped> {
        asked(self.follower.spun_up(years, of))
    }

    fn passed(&mut self, years: f64) -> Result<(), Stopped> {
        asked(self.follower.passed(years))
    }
}

fn asked(wish: ControlFlow<()>) -> Result<(), Stopped> {
    match wish {
        ControlFlow::Continue(()) => Ok(()),
        ControlFlow::Break(()) => Err(Stopped::Asked),
    }
}

/// The name a run gets when none is given: the configuration's own, in the folder `out`.
pub fn default_output(configuration: &Path) -> PathBuf {
    // Not as an extension: the name may hold a dot that is no extension, such as 0.5.
    let mut name = configuration.file_stem().unwrap_or_default().to_owned();
    name.push(".nc");
    Path::new("out").join(name)
}
