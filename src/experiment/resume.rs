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
use crate::output::schema::AGE;
use crate::output::{Claim, OutputError};
use std::path::{Path, PathBuf};

/// Attributes that identify a run, in the order of [`Identity`]'s fields.
const ATTRIBUTES: [&str; 3] = ["orbicline_version", "orbicline_commit", "configuration"];
/// Attribute with the hashes of the data files; not there when there is none.
pub(super) const DATA: &str = "data_sha256";

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

/// Looks at what is there.
///
/// # Errors
/// When what is there belongs to another run or cannot be read.
pub fn find(claim: &Claim, identity: &Identity, plan: &Plan) -> Result<Start, ResumeError> {
    let unfinished = claim.last_segment()?;
    if claim.exists() {
        let path = claim.path();
        let complete = RunFile::open(path).and_then(|file| is_complete(&file, identity, plan));
        match (complete, &unfinished) {
            (Ok(true), _) => return Ok(Start::Complete),
            // What is there is older than the unfinished run, which may or may not replace it.
            (_, Some(_)) => {}
            (Ok(false), None) => return Err(not_this(path, identity)?),
            (Err(source), None) => {
                let path = path.to_owned();
                return Err(ResumeError::Foreign { path, source });
            }
        }
    }
    let Some(segment) = unfinished else {
        return Ok(Start::Anew);
    };
    let changes = stored(&segment)?.changes(identity);
    if changes.is_empty() {
        let history = segment.global("history")?;
        return Ok(Start::GoOn { history });
    }
    let path = claim.path().to_owned();
    Err(ResumeError::OtherRun { path, changes })
}

/// Why a readable file is not the complete file of the run.
fn not_this(path: &Path, identity: &Identity) -> Result<ResumeError, OutputError> {
    let file = RunFile::open(path)?;
    let (changes, path) = (stored(&file)?.changes(identity), path.to_owned());
    if !changes.is_empty() {
        return Ok(ResumeError::OtherRun { path, changes });
    }
    let source = OutputError::Shape {
        path: path.clone(),
        variable: AGE.to_owned(),
        shape: file.array(AGE)?.shape().to_vec(),
        needed: "every record of the run",
    };
    Ok(ResumeError::Foreign { path, source })
}

fn is_complete(file: &RunFile, identity: &Identity, plan: &Plan) -> Result<bool, OutputError> {
    let same = stored(file)?.changes(identity).is_empty();
    Ok(same && file.array(AGE)?.len() as u64 == plan.records())
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
