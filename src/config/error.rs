//! What can be wrong with an experiment file, with the place and what to do about it.
//!
//! Rule: a message names the file and line (or the command line), the key, and the way out.

use super::fault::BuildError;
use std::fmt;
use std::path::PathBuf;

/// Where a key was written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Place {
    /// In a file.
    File {
        /// The file, as it was named.
        file: PathBuf,
        /// Line, counted from one.
        line: usize,
    },
    /// In an edit given with the run.
    CommandLine {
        /// The edit, such as `time.years=500`.
        assignment: String,
    },
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::File { file, line } => write!(f, "{}:{line}", file.display()),
            Self::CommandLine { assignment } => write!(f, "--set {assignment}"),
        }
    }
}

/// An experiment that cannot be read.
#[derive(Debug, thiserror::Error)]
pub enum ConfigError {
    /// A file is missing or unreadable.
    #[error("{}: cannot be read: {source}{}", file.display(), wanted_at(wanted_by.as_ref()))]
    Read {
        /// The file.
        file: PathBuf,
        /// The `extends` that asked for it, unless it was named by the user.
        wanted_by: Option<Place>,
        /// What the system said.
        source: std::io::Error,
    },
    /// A file is not text.
    #[error("{}: byte {byte} is not UTF-8; save the file as UTF-8 text", file.display())]
    NotText {
        /// The file.
        file: PathBuf,
        /// First wrong byte, counted from zero.
        byte: usize,
    },
    /// A file is not TOML.
    #[error("{place}: not valid TOML: {message}")]
    Syntax {
        /// Where.
        place: Place,
        /// What the parser expected.
        message: String,
    },
    /// `extends` is not the name of a file.
    #[error(
        "{place}: `extends` must be a text naming a file, such as \"reference.toml\", not {found}"
    )]
    ExtendsKind {
        /// Where.
        place: Place,
        /// The type found.
        found: &'static str,
    },
    /// Files extend one another in a ring.
    #[error("circular `extends`: {}; remove one of them", chain_text(chain))]
    CircularExtends {
        /// The files in the order they were asked for; the last is one of the earlier.
        chain: Vec<PathBuf>,
    },
    /// An edit without `=` or without a key.
    #[error("--set {assignment}: expected `key.path=value`, such as `--set time.end_kyr=100`")]
    SetForm {
        /// The edit.
        assignment: String,
    },
    /// An edit of a key that is not there.
    #[error(
        "--set {assignment}: no key `{key}` in the experiment{}; an edit changes a key that is there, \
         a new table is written in a file",
        suggestion(nearest.as_deref())
    )]
    SetUnknown {
        /// The edit.
        assignment: String,
        /// The key path asked for.
        key: String,
        /// The nearest key path that exists.
        nearest: Option<String>,
    },
    /// A key or a choice that the program does not know.
    #[error("{0}")]
    Unknown(Box<Unknown>),
    /// Keys of one table are missing.
    #[error(
        "{place}: missing {} in {}; {}",
        counted(keys),
        table_name(table),
        way_out(keys)
    )]
    Missing {
        /// Where the table begins.
        place: Place,
        /// The keys, at least one.
        keys: Vec<String>,
        /// Key path of the table; empty at the top.
        table: String,
    },
    /// An edit changed the `kind` of a table and left the keys of the kind before.
    #[error("{0}")]
    KindAlone(Box<KindAlone>),
    /// A value of the wrong type or form.
    #[error("{place}: `{key}`: {message}")]
    Value {
        /// Where.
        place: Place,
        /// Key path.
        key: String,
        /// What was found and what was expected.
        message: String,
    },
    /// More than one thing is wrong.
    #[error("{}", lines(faults))]
    Several {
        /// Each of them, at least two.
        faults: Vec<ConfigError>,
    },
    /// Besides what cannot be read, values are out of range.
    #[error("{fault}\n{ranges}")]
    AndRanges {
        /// What cannot be read.
        fault: Box<ConfigError>,
        /// What is wrong with the rest.
        ranges: BuildError,
    },
    /// The merged experiment cannot be written as TOML.
    #[error("the merged experiment cannot be written as TOML: {message}")]
    Write {
        /// What the writer said.
        message: String,
    },
}

impl ConfigError {
    /// One error for several; what is wrong in the same way in one table is said once.
    pub(super) fn several(first: Self, others: Vec<Self>) -> Self {
        let mut told = vec![first];
        for fault in others {
            if !told.iter_mut().any(|earlier| earlier.takes_in(&fault)) {
                told.push(fault);
            }
        }
        if told.len() > 1 {
            return Self::Several { faults: told };
        }
        told.remove(0)
    }

    /// Whether this error now says what `other` says about the same table.
    fn takes_in(&mut self, other: &Self) -> bool {
        let same = match (&*self, other) {
            (Self::Missing { table, .. }, Self::Missing { table: other, .. }) => table == other,
            (Self::KindAlone(alone), Self::KindAlone(other)) => alone.table == other.table,
            _ => false,
        };
        match (self, other) {
            (Self::Missing { keys, .. }, Self::Missing { keys: others, .. }) if same => {
                add(keys, others);
            }
            (Self::KindAlone(alone), Self::KindAlone(other)) if same => {
                add(&mut alone.keys, &other.keys);
            }
            _ => {}
        }
        same
    }
}

/// Adds what is not there yet.
fn add(keys: &mut Vec<String>, others: &[String]) {
    for key in others {
        if !keys.contains(key) {
            keys.push(key.clone());
        }
    }
}

/// A `kind` changed without the keys that belong to it.
#[derive(Debug, thiserror::Error)]
#[error(
    "{place}: `{table}.kind` cannot change alone, since each kind has its own keys; give the whole \
     table, such as --set '{table}={{kind=\"{kind}\"{}}}'",
    blanks(keys)
)]
pub struct KindAlone {
    /// The edit.
    pub place: Place,
    /// Key path of the table.
    pub table: String,
    /// The kind asked for.
    pub kind: String,
    /// Keys that it needs.
    pub keys: Vec<String>,
    /// The key that is missing, or of the kind before.
    pub fault: String,
}

/// A key or a choice that the program does not know.
#[derive(Debug, thiserror::Error)]
#[error(
    "{place}: unknown {what} `{name}` in {}{}; {allowed}",
    table_name(table),
    suggestion(nearest.as_deref())
)]
pub struct Unknown {
    /// Where.
    pub place: Place,
    /// `key` or `choice`.
    pub what: &'static str,
    /// The key or choice found.
    pub name: String,
    /// Key path of the table it stands in; empty at the top.
    pub table: String,
    /// The nearest one known.
    pub nearest: Option<String>,
    /// All that are known, in words.
    pub allowed: String,
}

fn wanted_at(place: Option<&Place>) -> String {
    place.map_or_else(
        || "; check the name".to_owned(),
        |place| format!("; `extends` at {place} asks for it, relative to that file"),
    )
}

fn chain_text(chain: &[PathBuf]) -> String {
    let names: Vec<_> = chain.iter().map(|f| f.display().to_string()).collect();
    names.join(" -> ")
}

fn lines(faults: &[ConfigError]) -> String {
    let lines: Vec<_> = faults.iter().map(ToString::to_string).collect();
    lines.join("\n")
}

/// "key `a`" or "keys `a`, `b`".
fn counted(keys: &[String]) -> String {
    let names: Vec<_> = keys.iter().map(|key| format!("`{key}`")).collect();
    let noun = if keys.len() == 1 { "key" } else { "keys" };
    format!("{noun} {}", names.join(", "))
}

fn way_out(keys: &[String]) -> String {
    let it = if keys.len() == 1 { "it" } else { "them" };
    format!("add {it}, or `extends` a file that has {it}")
}

/// Places for the values of keys in an inline table.
fn blanks(keys: &[String]) -> String {
    let blanks: Vec<_> = keys.iter().map(|key| format!(", {key}=...")).collect();
    blanks.concat()
}

fn suggestion(nearest: Option<&str>) -> String {
    nearest.map_or_else(String::new, |name| format!(" (did you mean `{name}`?)"))
}

fn table_name(path: &str) -> String {
    if path.is_empty() {
        "the top level".to_owned()
    } else {
        format!("`{path}`")
    }
}

/// The candidate most like `name`, if any is like it at all.
pub(super) fn nearest<'a>(
    name: &str,
    candidates: impl IntoIterator<Item = &'a str>,
) -> Option<String> {
    const LIKE: f64 = 0.75;
    let mut best: Option<(f64, &str)> = None;
    for candidate in candidates {
        let likeness = strsim::jaro_winkler(name, candidate);
        if likeness >= LIKE && best.is_none_or(|(other, _)| likeness > other) {
            best = Some((likeness, candidate));
        }
    }
    best.map(|(_, candidate)| candidate.to_owned())
}
