//! What a run will cost, from a short measured stretch of it: time, disk and memory.
//!
//! A second model of the same configuration runs for a fraction of a second from its start state;
//! then up to 64 records, as far apart in age as those of the run, are written into memory. Time
//! is what the clock shows on this machine with whatever else it does; it is a guide, and nothing
//! in the results depends on it.

use crate::config::run::{BuildError, Built, Experiment};
use crate::model::clock::{Plan, PlanError, TimeSpec};
use crate::model::observer::{Observer, Restart};
use crate::model::{Model, RunError};
use crate::output::OutputError;
use crate::output::schema::Schema;
use crate::output::size::MeasuredSize;
use crate::series::Record;
use std::fmt;
use std::path::Path;
use std::time::{Duration, Instant};

/// Longest time for each of the two stretches (tuned here: long enough for some hundred years at
/// the default resolution, short enough not to be noticed).
const STRETCH: Duration = Duration::from_millis(80);
/// Most years of a stretch, should the clock stand still.
const MOST_YEARS: u64 = 100_000;
/// Years before the measured ones, while the processor wakes up.
const WARMING: u32 = 4;
/// Merging reads what writing wrote and writes it again (tuned here).
const MERGING: f64 = 1.3;

/// Copies of 64 records that are in memory together while a segment is written or merged, beside
/// those of the trial (tuned here: 35 MB told, 32.5 MB needed at 36 bands).
const COPIES: f64 = 5.0;

/// Expected cost of a run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// Years of the run computed in a second.
    pub years_per_s: f64,
    /// Time from now to the complete file.
    pub time: Duration,
    /// Size of the file, bytes.
    pub file_bytes: f64,
    /// Disk space needed while the file is completed, bytes.
    pub disk_bytes: f64,
    /// Memory, bytes, where the system tells it.
    pub memory_bytes: Option<f64>,
    /// Free disk space where the file will lie, bytes, where the system tells it.
    pub free_bytes: Option<f64>,
}

/// Why there is no estimate.
#[derive(Debug, thiserror::Error)]
pub enum EstimateError {
    /// The configuration makes no model.
    #[error(transparent)]
    Build(#[from] BuildError),
    /// The trial failed.
    #[error("the trial failed: {0}")]
    Run(String),
    /// The trial records cannot be written.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// The trial's times do not fit.
    #[error("the trial's times do not fit: {0}")]
    Plan(PlanError),
    /// The stretch ended before one year.
    #[error("no year was completed")]
    NoYear,
}

/// What is to be estimated.
#[derive(Clone, Copy, Debug)]
pub struct Task<'a> {
    /// The experiment.
    pub experiment: &'a Experiment,
    /// Its years.
    pub plan: &'a Plan,
    /// The table of its file.
    pub schema: &'a Schema,
    /// The file.
    pub output: &'a Path,
    /// Records that are there already.
    pub done: u64,
    /// Threads that may be used.
    pub threads: usize,
}

impl Task<'_> {
    /// Measures a short stretch and extends it to the whole run.
    ///
    /// # Errors
    /// When the trial fails.
    pub fn estimate(&self) -> Result<Estimate, EstimateError> {
        let Built { mut model, .. } = self.experiment.build()?;
        let years_per_s = self.rate(&mut model)?;
        let size = MeasuredSize::of(self.schema, &self.sample(&mut model)?)?;
        let (plan, records) = (self.plan, self.plan.records());
        let spin_up = f64::from(self.experiment.run.time.spin_up.years());
        let done = plan.years_of_records(self.done);
        let seasonal =
            (plan.seasonal_years() - done) as f64 + if done == 0 { spin_up } else { 0.0 };
        let computing = seasonal * plan.slow_years() / years_per_s;
        let writing = match self.threads {
            1 => size.writing(records - self.done),
            _ => Duration::ZERO,
        };
        let folder = self.output.ancestors().skip(1).find(|f| f.is_dir());
        Ok(Estimate {
            years_per_s,
            time: Duration::try_from_secs_f64(computing).unwrap_or(Duration::MAX)
                + writing
                + size.writing(records).mul_f64(MERGING),
            file_bytes: size.file_bytes(records),
            disk_bytes: size.file_bytes(records) + size.segment_bytes(records),
            memory_bytes: memory_stats::memory_stats()
                .map(|m| m.physical_mem as f64 + COPIES * size.chunk_memory_bytes()),
            free_bytes: fs4::available_space(folder.unwrap_or(Path::new(".")))
                .ok()
                .map(|b| b as f64),
        })
    }

    /// Years of the run per second.
    fn rate(&self, model: &mut Model) -> Result<f64, EstimateError> {
        let age_kyr = self.plan.start_kyr();
        for _ in 0..WARMING {
            let year = model.held_year::<std::convert::Infallible>(age_kyr, 1.0);
            year.map_err(|e| EstimateError::Run(e.to_string()))?;
        }
        let mut stretch = Stretch::new();
        finished(model.run(self.plan, &mut stretch))?;
        if stretch.years == 0 {
            return Err(EstimateError::NoYear);
        }
        Ok(stretch.years as f64 * self.plan.slow_years() / stretch.last.as_secs_f64())
    }

    /// Records as far apart as those of the run.
    fn sample(&self, model: &mut Model) -> Result<Vec<Record>, EstimateError> {
        let run = &self.experiment.run.time;
        // A state far from balance changes more from record to record than the run will.
        let mut stretch = Stretch::new();
        finished(model.spin_up(run.start_kyr, run.spin_up, &mut stretch))?;
        let apart = run
            .record_every_yr
            .min(crate::model::clock::LARGEST_PACE_YR);
        let count = self.plan.records().min(64);
        let spec = TimeSpec {
            end_kyr: run.start_kyr - count as f64 * f64::from(apart) / 1000.0,
            record_every_yr: apart,
            slow_years_per_seasonal_year: apart,
            ..run.clone()
        };
        let plan = Plan::new(&spec).map_err(|mut all| EstimateError::Plan(all.remove(0)))?;
        let mut stretch = Stretch::new();
        finished(model.run(&plan, &mut stretch))?;
        Ok(stretch.records)
    }
}

/// A stretch that was ended by the clock is as good as one that ran to its end.
fn finished(outcome: Result<(), RunError<Enough>>) -> Result<(), EstimateError> {
    match outcome {
        Ok(()) | Err(RunError::Observer(Enough)) => Ok(()),
        Err(error) => Err(EstimateError::Run(error.to_string())),
    }
}

/// Counts years and keeps records until the time is up.
struct Stretch {
    started: Instant,
    last: Duration,
    years: u64,
    records: Vec<Record>,
}

/// The time is up.
#[derive(Debug, thiserror::Error)]
#[error("measured long enough")]
struct Enough;

impl Stretch {
    fn new() -> Self {
        Self {
            started: Instant::now(),
            last: Duration::ZERO,
            years: 0,
            records: Vec::new(),
        }
    }
}

impl Observer for Stretch {
    type Error = Enough;

    fn record(&mut self, record: &Record, _: &dyn Fn() -> Restart) -> Result<(), Enough> {
        self.records.push(record.clone());
        Ok(())
    }

    fn spun_up(&mut self, years: u32, _of: u32) -> Result<(), Enough> {
        self.passed(f64::from(years))
    }

    fn passed(&mut self, _years: f64) -> Result<(), Enough> {
        self.years += 1;
        self.last = self.started.elapsed();
        if self.last < STRETCH && self.years < MOST_YEARS {
            Ok(())
        } else {
            Err(Enough)
        }
    }
}

impl Estimate {
    /// Whether the disk has too little room, as far as is known.
    pub fn exceeds_disk(&self) -> bool {
        self.free_bytes.is_some_and(|free| free < self.disk_bytes)
    }
}

impl fmt::Display for Estimate {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mb = |bytes: f64| format!("{:.*} MB", usize::from(bytes < 1e7), bytes / 1e6);
        write!(
            f,
            "estimate: about {} at {:.0} years of orbit/s as busy as the machine is now, file {} \
             ({} of disk while it is completed)",
            duration(self.time),
            self.years_per_s,
            mb(self.file_bytes),
            mb(self.disk_bytes)
        )?;
        if let Some(bytes) = self.memory_bytes {
            write!(f, ", memory {}", mb(bytes))?;
        }
        match self.free_bytes {
            Some(free) if self.exceeds_disk() => {
                write!(f, "; only {} of disk are free", mb(free))
            }
            _ => Ok(()),
        }
    }
}

/// A time in the two largest units.
fn duration(time: Duration) -> String {
    let s = time.as_secs();
    match s {
        0 => "a second".to_owned(),
        1..60 => format!("{s} s"),
        60..3600 => format!("{} min {} s", s / 60, s % 60),
        3600..86_400 => format!("{} h {} min", s / 3600, s / 60 % 60),
        _ => format!("{} d {} h", s / 86_400, s / 3600 % 24),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_told_in_two_units() {
        let told = |s| duration(Duration::from_secs(s));
        assert_eq!(told(0), "a second");
        assert_eq!([told(59), told(61)], ["59 s", "1 min 1 s"]);
        assert_eq!([told(3660), told(90_000)], ["1 h 1 min", "1 d 1 h"]);
    }
}
