//! The configuration that a file holds, read key by key.
//!
//! It is not read into the types of this program: a file of another version may have other keys,
//! and can be described all the same.

use crate::model::clock::{Plan, TimeSpec};
use toml::{Table, Value};

pub(super) struct StoredConfiguration(Table);

impl StoredConfiguration {
    pub(super) fn parse(text: &str) -> Result<Self, toml::de::Error> {
        text.parse().map(Self)
    }

    /// What a key says, in words: of a table its kind, then its other keys.
    pub(super) fn source(&self, path: &str) -> Option<String> {
        let value = self.value(path)?;
        let Value::Table(table) = value else {
            return Some(bare(value));
        };
        let kind = table.get("kind").map(bare);
        let others = table.iter().filter(|(key, _)| *key != "kind");
        let others = others.map(|(key, value)| format!("{key} = {}", bare(value)));
        Some(
            kind.into_iter()
                .chain(others)
                .collect::<Vec<_>>()
                .join(", "),
        )
    }

    /// Names of the keys of a table.
    pub(super) fn keys(&self, path: &str) -> Vec<String> {
        let table = self.value(path).and_then(Value::as_table);
        table.map_or_else(Vec::new, |table| table.keys().cloned().collect())
    }

    /// The calendar of the run, when this program understands it.
    pub(super) fn plan(&self) -> Option<Plan> {
        let spec: TimeSpec = self.value("time")?.clone().try_into().ok()?;
        Plan::new(&spec).ok()
    }

    fn value(&self, path: &str) -> Option<&Value> {
        let (table, key) = match path.rsplit_once('.') {
            None => (&self.0, path),
            Some((above, key)) => (self.value(above)?.as_table()?, key),
        };
        table.get(key)
    }
}

/// A value as TOML, text without its quotes.
fn bare(value: &Value) -> String {
    match value {
        Value::String(text) => text.clone(),
        other => other.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sources_are_told_in_words() {
        let text = "[orbit.obliquity]\nkind = \"constant\"\nobliquity_deg = 23.25\n[co2]\nx = 1\n";
        let stored = StoredConfiguration::parse(text).unwrap();
        let told = |path: &str| stored.source(path);
        assert_eq!(
            told("orbit.obliquity").as_deref(),
            Some("constant, obliquity_deg = 23.25")
        );
        assert_eq!(told("co2.x").as_deref(), Some("1"));
        assert_eq!(told("orbit.eccentricity"), None);
        assert_eq!(told("co2.x.y"), None);
        assert_eq!(stored.keys("orbit"), ["obliquity"]);
        assert!(stored.plan().is_none() && stored.keys("co2.x").is_empty());
    }
}
