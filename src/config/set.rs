//! Edits of a TOML tree given as `key.path=value`.
//!
//! Rule: an edit changes what is there. A key that is not there is an error, never a new key, so
//! that a misspelt path cannot run unnoticed.

use super::error::{ConfigError, Place, nearest};
use super::origin::join;
use toml::{Table, Value};

/// Splits `key.path=value` and reads the value.
pub(super) fn parse(assignment: &str) -> Result<(String, Value), ConfigError> {
    let form = || ConfigError::SetForm {
        assignment: assignment.to_owned(),
    };
    let (key, value) = assignment.split_once('=').ok_or_else(form)?;
    let (key, value) = (key.trim(), value.trim());
    if key.is_empty() || value.is_empty() {
        return Err(form());
    }
    Ok((key.to_owned(), value_of(value)))
}

/// `text` as a TOML value; what is not one is taken as it stands.
fn value_of(text: &str) -> Value {
    let as_text = || Value::String(text.to_owned());
    let Ok(mut table) = format!("value = {text}\n").parse::<Table>() else {
        return as_text();
    };
    match table.remove("value") {
        Some(value) if table.is_empty() => value,
        _ => as_text(),
    }
}

/// The value at a key path.
pub(super) fn slot<'a>(table: &'a mut Table, path: &str) -> Option<&'a mut Value> {
    match path.split_once('.') {
        None => table.get_mut(path),
        Some((head, rest)) => slot(table.get_mut(head)?.as_table_mut()?, rest),
    }
}

/// The error for a key that is not there.
pub(super) fn unknown(table: &Table, key: &str, place: &Place) -> ConfigError {
    let mut paths = Vec::new();
    collect("", table, &mut paths);
    let assignment = match place {
        Place::CommandLine { assignment } => assignment.clone(),
        Place::File { .. } => key.to_owned(),
    };
    ConfigError::SetUnknown {
        assignment,
        key: key.to_owned(),
        nearest: nearest_path(key, &paths),
    }
}

/// The most similar path; one that ends in the same key wins, since keys are forgotten less often
/// than the tables around them.
fn nearest_path(key: &str, paths: &[String]) -> Option<String> {
    let last = |path: &str| path.rsplit('.').next().unwrap_or_default().to_owned();
    let namesakes = paths.iter().filter(|path| last(path) == last(key));
    nearest(key, namesakes.map(String::as_str))
        .or_else(|| nearest(key, paths.iter().map(String::as_str)))
}

fn collect(path: &str, table: &Table, paths: &mut Vec<String>) {
    for (key, value) in table {
        let path = join(path, key);
        if let Value::Table(inner) = value {
            collect(&path, inner, paths);
        }
        paths.push(path);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_are_toml_and_bare_words_are_text() {
        for (text, expected) in [
            ("1", Value::Integer(1)),
            ("1.5e3", Value::Float(1500.0)),
            ("true", Value::Boolean(true)),
            ("\"1\"", Value::String("1".into())),
            ("insolation only", Value::String("insolation only".into())),
            ("a.nc", Value::String("a.nc".into())),
            ("[1, 2]", Value::Array(vec![1.into(), 2.into()])),
            ("1\nb = 2", Value::String("1\nb = 2".into())),
        ] {
            assert_eq!(value_of(text), expected, "{text}");
        }
        let (key, value) = parse("a.b = { kind = \"x=y\" }").unwrap();
        assert_eq!(key, "a.b");
        assert_eq!(value["kind"].as_str(), Some("x=y"));
    }

    #[test]
    fn a_forgotten_table_is_offered_before_a_similar_word() {
        let paths = ["ocean.levels.count", "ocean.sinking.closure.preset"].map(str::to_owned);
        let offered = nearest_path("ocean.closure.preset", &paths);
        assert_eq!(offered.as_deref(), Some("ocean.sinking.closure.preset"));
    }

    #[test]
    fn an_edit_needs_key_and_value() {
        for wrong in ["a", "=1", "a=", ""] {
            assert!(parse(wrong).is_err(), "{wrong:?}");
        }
    }
}
