//! Finds everything wrong with a tree at once, though the reader stops at the first fault.
//!
//! Method: each fault is put right in a copy, which then is read again. An unknown key is taken
//! out; in the place of a missing key or a value of the wrong type stands a value that the reader
//! accepts; an unknown choice becomes a known one. What is wrong within such a stand-in is not
//! told. The copy is thrown away: a tree with a fault is never run.

use super::error::ConfigError;
use super::origin::{Origins, is_within, join, parent};
use super::read::KIND;
use super::{set, typed};
use serde::de::DeserializeOwned;
use toml::{Table, Value};

/// Most faults that are put right, stand-ins' own included; nobody reads more.
const MOST_FAULTS: usize = 100;

/// A number and a word that stand for what cannot be read. Nobody writes them, so a message that
/// quotes one is about the stand-in.
const NUMBER: i64 = 7_351_907;
const WORD: &str = "stand-in 7351907";

/// What a tree with faults comes to.
pub(super) struct Faulty<T> {
    /// All that is wrong.
    pub(super) fault: ConfigError,
    /// The tree with every fault put right, where that is possible; only to look at.
    pub(super) repaired: Option<T>,
    /// Key paths of what is not the user's in it.
    pub(super) stand_ins: Vec<String>,
}

/// Reads the whole tree as `T`, or tells all that is wrong.
pub(super) fn read<T: DeserializeOwned>(table: &Table, origins: &Origins) -> Result<T, Faulty<T>> {
    typed::read(table, origins).map_err(|first| all(table, origins, first))
}

fn all<T: DeserializeOwned>(table: &Table, origins: &Origins, first: ConfigError) -> Faulty<T> {
    let mut copy = Copy {
        table: table.clone(),
        origins,
        stand_ins: Vec::new(),
    };
    let mut found = Vec::new();
    let mut next = copy.repair::<T>(&first);
    for _ in 0..MOST_FAULTS {
        let Some(fault) = next else { break };
        let told = !copy.is_stand_in(&subject(&fault)) && !fault.to_string().contains(WORD);
        next = copy.repair::<T>(&fault);
        if told {
            found.push(fault);
        }
    }
    Faulty {
        fault: ConfigError::several(first, found),
        repaired: typed::read(&copy.table, origins).ok(),
        stand_ins: copy.stand_ins,
    }
}

/// Whether what is wrong with `key` may come from a stand-in: one of the same table.
pub(super) fn is_doubtful(key: &str, stand_ins: &[String]) -> bool {
    stand_ins.iter().any(|path| {
        let table = parent(path).filter(|table| !table.is_empty());
        is_within(key, table.unwrap_or(path))
    })
}

/// A tree in which faults are put right.
struct Copy<'a> {
    table: Table,
    origins: &'a Origins,
    /// Key paths of what is not the user's.
    stand_ins: Vec<String>,
}

impl Copy<'_> {
    fn is_stand_in(&self, path: &str) -> bool {
        self.stand_ins.iter().any(|above| is_within(path, above))
    }

    /// Puts a fault right and returns the next one; `None` when there is none, or when this one
    /// cannot be put right.
    fn repair<T: DeserializeOwned>(&mut self, fault: &ConfigError) -> Option<ConfigError> {
        let path = subject(fault);
        // A list is put right as a whole.
        let path = path.split('[').next().unwrap_or(&path).to_owned();
        match fault {
            ConfigError::Unknown(unknown) if unknown.what == "key" => {
                self.remove(&path)?;
                self.next::<T>()
            }
            ConfigError::Unknown(unknown) => {
                let choice = unknown.nearest.as_deref();
                let choice = choice.or_else(|| typed::names_in(&unknown.allowed).next())?;
                self.put(&path, Value::String(choice.to_owned()))?;
                // The keys beside a `kind` are those of the kind that was meant.
                let whole = parent(&path).filter(|_| path.ends_with(KIND));
                self.stand_ins.push(whole.unwrap_or(&path).to_owned());
                self.next::<T>()
            }
            ConfigError::KindAlone(_) if self.remove(&path).is_some() => self.next::<T>(),
            _ => self.stand_in::<T>(&path),
        }
    }

    /// Puts the first value that the reader accepts at `path`; returns the next fault.
    fn stand_in<T: DeserializeOwned>(&mut self, path: &str) -> Option<ConfigError> {
        self.stand_ins.push(path.to_owned());
        let number = || Value::Integer(NUMBER);
        for value in [
            number(),
            Value::String(WORD.to_owned()),
            Value::Boolean(true),
            Value::Table(Table::new()),
            Value::Array(Vec::new()),
            Value::Array(vec![number(), number()]),
        ] {
            self.put(path, value)?;
            match self.next::<T>() {
                Some(ConfigError::Value { key, message, .. })
                    if key == path
                        || message.contains(WORD)
                        || message.contains(&NUMBER.to_string()) => {}
                accepted => return accepted,
            }
        }
        None
    }

    fn next<T: DeserializeOwned>(&self) -> Option<ConfigError> {
        typed::read::<T>(&self.table, self.origins).err()
    }

    fn holder(&mut self, path: &str) -> Option<(&mut Table, String)> {
        let above = parent(path)?;
        let key = path[above.len()..].trim_start_matches('.').to_owned();
        let table = if above.is_empty() {
            &mut self.table
        } else {
            set::slot(&mut self.table, above)?.as_table_mut()?
        };
        Some((table, key))
    }

    fn remove(&mut self, path: &str) -> Option<Value> {
        let (table, key) = self.holder(path)?;
        table.remove(&key)
    }

    fn put(&mut self, path: &str, value: Value) -> Option<()> {
        let (table, key) = self.holder(path)?;
        table.insert(key, value);
        Some(())
    }
}

/// Key path that a fault is about; empty when it is about none.
fn subject(fault: &ConfigError) -> String {
    match fault {
        ConfigError::Missing { keys, table, .. } => {
            join(table, keys.first().map_or("", String::as_str))
        }
        ConfigError::Unknown(unknown) if unknown.what == "key" => {
            join(&unknown.table, &unknown.name)
        }
        ConfigError::Unknown(unknown) => unknown.table.clone(),
        ConfigError::KindAlone(alone) => join(&alone.table, &alone.fault),
        ConfigError::Value { key, .. } => key.clone(),
        _ => String::new(),
    }
}
