//! Remembers for every key of a TOML tree the file and line it was written at.
//!
//! Keys are named by their path as in messages: `physics.albedo.kind`, `members[1].name`.

use super::error::{ConfigError, Place};
use std::collections::BTreeMap;
use std::path::Path;
use toml::de::{DeTable, DeValue};

/// Key path to place.
#[derive(Clone, Debug, Default)]
pub(super) struct Origins {
    places: BTreeMap<String, Place>,
}

/// `key` below `table`, where the empty path is the top.
pub(super) fn join(table: &str, key: &str) -> String {
    if table.is_empty() {
        key.to_owned()
    } else {
        format!("{table}.{key}")
    }
}

/// The path of the table or array that holds `path`; `None` at the top.
pub(super) fn parent(path: &str) -> Option<&str> {
    if path.is_empty() {
        return None;
    }
    Some(path.rfind(['.', '[']).map_or("", |end| &path[..end]))
}

/// Whether `path` is `above` or lies below it.
pub(super) fn is_within(path: &str, above: &str) -> bool {
    path.strip_prefix(above)
        .is_some_and(|rest| above.is_empty() || rest.is_empty() || rest.starts_with(['.', '[']))
}

/// The line, counted from one, of a byte of `text`.
pub(super) fn line_of(text: &str, byte: usize) -> usize {
    let before = text.get(..byte).unwrap_or(text);
    1 + before.matches('\n').count()
}

impl Origins {
    /// Places of all keys of one file.
    pub(super) fn of_file(file: &Path, text: &str) -> Result<Self, ConfigError> {
        let mut origins = Self::default();
        let place = |line| Place::File {
            file: file.to_owned(),
            line,
        };
        origins.places.insert(String::new(), place(1));
        let document = DeTable::parse(text).map_err(|e| ConfigError::Syntax {
            place: place(line_of(text, e.span().map_or(0, |span| span.start))),
            message: one_line(e.message()),
        })?;
        origins.note_table("", document.get_ref(), &|byte| place(line_of(text, byte)));
        Ok(origins)
    }

    fn note_table(&mut self, path: &str, table: &DeTable<'_>, place: &dyn Fn(usize) -> Place) {
        for (key, value) in table {
            let path = join(path, key.get_ref());
            self.places.insert(path.clone(), place(key.span().start));
            self.note_value(&path, value.get_ref(), place);
        }
    }

    fn note_value(&mut self, path: &str, value: &DeValue<'_>, place: &dyn Fn(usize) -> Place) {
        match value {
            DeValue::Table(table) => self.note_table(path, table, place),
            DeValue::Array(items) => {
                for (i, item) in items.iter().enumerate() {
                    let path = format!("{path}[{i}]");
                    self.places.insert(path.clone(), place(item.span().start));
                    self.note_value(&path, item.get_ref(), place);
                }
            }
            _ => {}
        }
    }

    /// Forgets `path` and all below it, and takes over what `other` knows of them.
    pub(super) fn replace(&mut self, path: &str, other: &Self) {
        self.places.retain(|key, _| !is_within(key, path));
        for (key, place) in &other.places {
            if is_within(key, path) {
                self.places.insert(key.clone(), place.clone());
            }
        }
    }

    /// Takes over the place of `path` alone, for a table that is merged key by key.
    pub(super) fn adopt(&mut self, path: &str, other: &Self) {
        if let Some(place) = other.places.get(path) {
            self.places.insert(path.to_owned(), place.clone());
        }
    }

    /// Forgets `path` and all below it, and puts it at `place`.
    pub(super) fn put(&mut self, path: &str, place: Place) {
        self.places.retain(|key, _| !is_within(key, path));
        self.places.insert(path.to_owned(), place);
    }

    /// Where exactly this key was written.
    pub(super) fn get(&self, path: &str) -> Option<&Place> {
        self.places.get(path)
    }

    /// Where this key, or else the nearest table above it, was written. For a table, an edit of the
    /// command line below it is the likeliest cause and wins.
    pub(super) fn nearest(&self, path: &str) -> Option<&Place> {
        let below = format!("{path}.");
        let edited = |(key, place): &(&String, &Place)| {
            key.starts_with(&below) && matches!(place, Place::CommandLine { .. })
        };
        if let Some((_, place)) = self.places.iter().find(edited) {
            return Some(place);
        }
        let mut path = path;
        loop {
            if let Some(place) = self.places.get(path) {
                return Some(place);
            }
            path = parent(path)?;
        }
    }
}

/// A message of the parser on one line.
pub(super) fn one_line(message: &str) -> String {
    message.trim().replace('\n', ", ")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_of_dotted_inline_and_repeated_tables() {
        let text = "a.b = 1\n[t]\nx = { y = 2 }\n[[m]]\nn = 1\n[[m]]\nn = [\n 1,\n 2]\n";
        let origins = Origins::of_file(Path::new("f.toml"), text).unwrap();
        for (path, line) in [
            ("", 1),
            ("a.b", 1),
            ("t", 2),
            ("t.x.y", 3),
            ("m[0].n", 5),
            ("m[1].n", 7),
            ("m[1].n[1]", 9),
        ] {
            let expected = Place::File {
                file: "f.toml".into(),
                line,
            };
            assert_eq!(origins.get(path), Some(&expected), "{path}");
        }
        assert_eq!(origins.nearest("t.nothing.here"), origins.get("t"));
        assert_eq!(origins.nearest("nothing"), origins.get(""));
    }

    #[test]
    fn a_path_is_not_within_its_longer_namesake() {
        assert!(is_within("a.b", "a") && is_within("a[0]", "a") && is_within("a", "a"));
        assert!(!is_within("ab", "a") && is_within("ab", ""));
    }
}
