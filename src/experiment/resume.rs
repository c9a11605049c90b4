//! Decides whether an output is complete, goes on, or begins anew.
//!
//! Rule: only a run with the same merged configuration, the same data and the same program goes
//! on; anything else is refused with every difference named. Where a run was killed does not
//! matter: while it wrote a segment, merged (segments are whole), or deleted the segments after
//! the file had taken its name (the file is complete).

use crate::config::Identity;
use crate::config::identity::Change;
use crate::model::clock::Plan;
use crate::output::reader::RunFile;
use crate::output::schema::AGE_BOUNDS;
use crate::output::{Claim, OutputError, Overwrite, RECORDS_PER_SEGMENT};
use std::path::{Path, PathBuf};

/// Attributes that identify a run, in the order of [`Identity`]'s fields.
const ATTRIBUTES: [&str; 3] = ["orbicline_version", "orbicline_commit", "configuration"];
/// Attribute with the hashes of the data files; not there when there is none.
pub(super) const DATA: &str = "data_sha256";

/// Ages this close are the same, kyr: far below a day.
const SAME_KYR: f64 = 1e-9;

/// What is to be done.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Start {
    /// Begin anew.
    Anew,
    /// Go on after what the segments hold.
    GoOn {
        /// The commands that made it so far.
        history: String,
    },
    /// Nothing: the file is complete.
    Complete,
}

/// A run that cannot go on.
#[derive(Debug, thiserror::Error)]
pub enum ResumeError {
    /// It was made by another experiment or program.
    #[error(
        "{} cannot go on: it belongs to another run.\n{}\nRun it as it was, choose another output, \
         or begin anew without --resume (--overwrite)",
        path.display(),
        lines(changes)
    )]
    OtherRun {
        /// The file or segment.
        path: PathBuf,
        /// In what it differs.
        changes: Vec<Change>,
    },
    /// A segment or file does not hold the records that belong there.
    #[error(
        "{} does not hold the records of this run that belong there: bring the right file back; or \
         delete it and those after it, and say --resume again; or begin anew (--overwrite)",
        path.display()
    )]
    Misplaced {
        /// The file.
        path: PathBuf,
    },
    /// The file is there, complete or not, but is no run of this program.
    #[error("{} is there but is no run that can go on: {source}", path.display())]
    Foreign {
        /// The file.
        path: PathBuf,
        /// Why.
        source: OutputError,
    },
    /// Files cannot be read.
    #[error(transparent)]
    Output(#[from] OutputError),
}

fn lines(changes: &[Change]) -> String {
    let lines: Vec<_> = changes.iter().map(|c| format!("  {c}")).collect();
    lines.join("\n")
}

/// Looks at what is there; every segment is checked before anything is computed.
///
/// With [`Overwrite::Replace`] an output of another run is no obstacle.
///
/// # Errors
/// When what is there belongs to another run or cannot be read.
pub fn find(
    claim: &Claim,
    identity: &Identity,
    plan: &Plan,
    overwrite: Overwrite,
) -> Result<Start, ResumeError> {
    let path = claim.path();
    if claim.exists() {
        let file = RunFile::open(path);
        let complete = file.and_then(|file| Ok((is_complete(&file, plan)?, stored(&file)?)));
        let replaced = overwrite == Overwrite::Replace || claim.holds_segments()?;
        match complete {
            Ok((true, made)) if made.changes(identity).is_empty() => return Ok(Start::Complete),
            // What is there is older than the unfinished run, which may or may not replace it.
            _ if replaced => {}
            Ok((_, made)) => return Err(not_this(path, &made, identity)),
            Err(source) => {
                let path = path.to_owned();
                return Err(ResumeError::Foreign { path, source });
            }
        }
    }
    let (mut history, mut done) = (None, 0);
    let segments = claim.segments()?;
    for (number, segment) in segments.iter().enumerate() {
        let file = claim.open_segment(segment)?;
        let changes = stored(&file)?.changes(identity);
        if !changes.is_empty() {
            let path = segment.clone();
            return Err(ResumeError::OtherRun { path, changes });
        }
        let records = fit(&file, plan, done)?;
        let fits = match records {
            Fit::Records(count) => number + 1 == segments.len() || count == RECORDS_PER_SEGMENT,
            Fit::Not => false,
        };
        if !fits {
            let path = segment.clone();
            return Err(ResumeError::Misplaced { path });
        }
        if let Fit::Records(count) = records {
            done += count;
        }
        history = Some(file.global("history")?);
    }
    Ok(history.map_or(Start::Anew, |history| Start::GoOn { history }))
}

/// Whether the records of a file are those of the plan from some number on.
enum Fit {
    /// So many of them.
    Records(u64),
    /// No.
    Not,
}

fn fit(file: &RunFile, plan: &Plan, done: u64) -> Result<Fit, OutputError> {
    let bounds = file.array(AGE_BOUNDS)?;
    let records = bounds.len() as u64 / 2;
    if records == 0 || done + records > plan.records() {
        return Ok(Fit::Not);
    }
    let planned = (done..done + records)
        .flat_map(|record| plan.record_bounds_kyr(plan.years_of_records(record + 1) - 1));
    let same = bounds
        .iter()
        .zip(planned)
        .all(|(is, should)| (is - should).abs() < SAME_KYR);
    Ok(if same {
        Fit::Records(records)
    } else {
        Fit::Not
    })
}

/// Why a readable file is not the complete file of the run.
fn not_this(path: &Path, made: &Identity, identity: &Identity) -> ResumeError {
    let (changes, path) = (made.changes(identity), path.to_owned());
    if changes.is_empty() {
        ResumeError::Misplaced { path }
    } else {
        ResumeError::OtherRun { path, changes }
    }
}

fn is_complete(file: &RunFile, plan: &Plan) -> Result<bool, OutputError> {
    Ok(match fit(file, plan, 0)? {
        Fit::Records(count) => count == plan.records(),
        Fit::Not => false,
    })
}

/// The identity of the run that made a file.
///
/// # Errors
/// When the file lacks it.
pub fn stored(file: &RunFile) -> Result<Identity, OutputError> {
    let [version, commit, configuration] = ATTRIBUTES.map(|name| file.global(name));
    let data = match file.global(DATA) {
        Err(OutputError::NoAttribute { .. }) => String::new(),
        other => other?,
    };
    Ok(Identity {
        version: version?,
        commit: commit?,
        configuration: configuration?,
        data,
    })
}
