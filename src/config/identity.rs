//! What two runs must have in common to give the same numbers: configuration, data read, and the
//! version of the program.
//!
//! Rule: the names and places of the configuration files do not count, only the merged keys; of a
//! data file its content counts. Where and by how many threads a run is made does not count.

use super::difference::{Difference, differences};
use super::provenance::{COMMIT, InputFile, VERSION};
use std::fmt;

/// Identity of a run.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Identity {
    /// Version of the program.
    pub version: String,
    /// Commit it was built from.
    pub commit: String,
    /// The merged configuration, TOML.
    pub configuration: String,
    /// SHA-256 of the data files, one to a line.
    pub data: String,
}

/// One thing in which two runs differ.
#[derive(Clone, Debug, PartialEq)]
pub enum Change {
    /// Version or commit of the program.
    Program {
        /// Of the first.
        was: String,
        /// Of the second.
        is: String,
    },
    /// A key of the configuration.
    Key(Difference),
    /// The content of a data file.
    Data {
        /// Hashes of the first.
        was: String,
        /// Hashes of the second.
        is: String,
    },
    /// A configuration that is not TOML.
    Unreadable(String),
}

impl fmt::Display for Change {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let text = |value: &Option<String>| value.clone().unwrap_or_else(|| "not there".to_owned());
        match self {
            Self::Program { was, is } => write!(f, "the program was {was}, is now {is}"),
            Self::Key(d) => {
                write!(
                    f,
                    "{} was {}, is now {}",
                    d.key,
                    text(&d.first),
                    text(&d.second)
                )
            }
            Self::Data { was, is } => {
                write!(f, "the data had SHA-256 {was}, have now {is}")
            }
            Self::Unreadable(message) => write!(f, "a configuration is not TOML: {message}"),
        }
    }
}

impl Identity {
    /// Of a run made now by this program.
    pub fn new(configuration: String, data: &[InputFile]) -> Self {
        let hashes: Vec<_> = data.iter().map(|file| file.sha256.as_str()).collect();
        Self {
            version: VERSION.to_owned(),
            commit: COMMIT.to_owned(),
            configuration,
            data: hashes.join("\n"),
        }
    }

    /// SHA-256 of configuration and data, in hexadecimal.
    pub fn sha256(&self) -> String {
        InputFile::new(
            "".as_ref(),
            format!("{}\n{}\n", self.configuration, self.data).as_bytes(),
        )
        .sha256
    }

    /// In what a later run differs from this one; empty when it must give the same numbers.
    pub fn changes(&self, later: &Self) -> Vec<Change> {
        let mut found = Vec::new();
        let program = |i: &Self| format!("{} ({})", i.version, i.commit);
        let (was, is) = (program(self), program(later));
        if was != is {
            found.push(Change::Program { was, is });
        }
        match differences(&self.configuration, &later.configuration) {
            Ok(keys) => found.extend(keys.into_iter().map(Change::Key)),
            Err(error) => found.push(Change::Unreadable(error.message().to_owned())),
        }
        if self.data != later.data {
            let shown = |data: &str| {
                if data.is_empty() {
                    "none".to_owned()
                } else {
                    data.replace('\n', " ")
                }
            };
            found.push(Change::Data {
                was: shown(&self.data),
                is: shown(&later.data),
            });
        }
        found
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn program_keys_and_data_are_told_apart() {
        let data = [InputFile::new("a.csv".as_ref(), b"1")];
        let first = Identity::new("a = 1\n".to_owned(), &data);
        let moved = [InputFile::new("elsewhere.csv".as_ref(), b"1")];
        let same = Identity::new("a = 1\n".to_owned(), &moved);
        assert!(first.changes(&same).is_empty());
        assert_eq!(first.sha256(), same.sha256());
        let mut other = Identity::new("a = 2\n".to_owned(), &[]);
        other.version = "0.0.0".to_owned();
        assert_ne!(first.sha256(), other.sha256());
        let text: Vec<_> = first
            .changes(&other)
            .iter()
            .map(ToString::to_string)
            .collect();
        assert_eq!(text.len(), 3, "{text:?}");
        assert!(text[0].contains("is now 0.0.0") && text[2].ends_with("have now none"));
        assert_eq!(text[1], "a was 1, is now 2");
    }
}
