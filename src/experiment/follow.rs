//! What a run tells whoever follows it, and how it is asked to stop.

use super::estimate::Estimate;
use crate::model::clock::Plan;
use std::fmt;
use std::ops::ControlFlow;
use std::path::PathBuf;

/// Something worth telling.
#[derive(Clone, Debug)]
pub enum Event {
    /// The configuration is sound and the output taken.
    Begins {
        /// What will be run.
        plan: Plan,
        /// SHA-256 of configuration and data.
        configuration_sha256: String,
    },
    /// What it will cost.
    Estimated(Estimate),
    /// The trial for the estimate failed; the run itself tells why, if it fails as well.
    NotEstimated {
        /// Why.
        reason: String,
    },
    /// An unfinished run goes on.
    GoesOn {
        /// Records that are there.
        records: u64,
        /// Age at which it goes on, kyr before 1950.
        age_kyr: f64,
    },
    /// There is nothing to go on with.
    NothingToGoOnWith,
    /// The spin-up is over.
    SpunUp {
        /// Its seasonal years.
        years: u32,
    },
    /// So many segments are on disk.
    Saved {
        /// Their number.
        segments: usize,
    },
    /// All years are done; the file is being completed.
    Completing,
    /// The file is complete.
    Completed {
        /// The file.
        path: PathBuf,
    },
}

impl fmt::Display for Event {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Begins {
                plan,
                configuration_sha256,
            } => write!(
                f,
                "{plan}; SHA-256 of configuration and data {configuration_sha256}"
            ),
            Self::Estimated(estimate) => write!(f, "{estimate}"),
            Self::NotEstimated { reason } => write!(f, "the cost cannot be estimated: {reason}"),
            Self::GoesOn { records, age_kyr } => write!(
                f,
                "goes on after {records} records, at {age_kyr:.3} kyr before 1950"
            ),
            Self::NothingToGoOnWith => {
                write!(f, "there is no unfinished run to go on with; begins anew")
            }
            Self::SpunUp { years } => write!(f, "spin-up of {years} seasonal years done"),
            Self::Saved { segments } => write!(f, "segments saved: {segments}"),
            Self::Completing => write!(f, "all years done; merging the segments"),
            Self::Completed { path } => write!(f, "complete: {}", path.display()),
        }
    }
}

/// Who follows a run.
pub trait Follower {
    /// Something happened.
    fn told(&mut self, event: &Event);

    /// So many of all seasonal years of the spin-up are done. `Break` stops the run.
    fn spun_up(&mut self, years: u32, of: u32) -> ControlFlow<()>;

    /// So many years of the run have passed. `Break` stops it in a way that it can go on.
    fn passed(&mut self, years: f64) -> ControlFlow<()>;
}
