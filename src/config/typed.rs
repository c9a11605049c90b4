//! Turns a TOML tree into types, and the reader's complaints into messages with a place.
//!
//! The tree is merged from several files, so the reader knows key paths but no lines; those come
//! from the origins. The wording of serde is read here ("unknown field `x`, expected ..."); tests
//! hold it fast.

use super::error::{ConfigError, KindAlone, Place, Unknown, nearest};
use super::origin::{Origins, join, one_line, parent};
use super::read::KIND;
use super::set;
use serde::de::DeserializeOwned;
use toml::{Table, Value};

/// Reads the whole tree as `T`.
pub(super) fn read<T: DeserializeOwned>(
    table: &Table,
    origins: &Origins,
) -> Result<T, ConfigError> {
    parse(table).map_err(|(path, message)| {
        let complaint = |table: &Table| parse::<T>(table).err().map(|(_, message)| message);
        explain(table, origins, &path, &message, &complaint)
    })
}

/// Reads, or gives the reader's words and the key path that it names; empty for the top.
fn parse<T: DeserializeOwned>(table: &Table) -> Result<T, (String, String)> {
    serde_path_to_error::deserialize(Value::Table(table.clone())).map_err(|e| {
        let path = match e.path().to_string() {
            top if top == "." => String::new(),
            path => path,
        };
        (path, one_line(e.inner().message()))
    })
}

/// What the reader meant.
fn explain(
    table: &Table,
    origins: &Origins,
    path: &str,
    message: &str,
    complaint: &dyn Fn(&Table) -> Option<String>,
) -> ConfigError {
    if let Some(key) = quoted_after(message, "missing field ") {
        let keys = vec![key.to_owned()];
        let path = &home(table, path, key, complaint);
        return kind_alone(table, origins, path, key, &keys).unwrap_or_else(|| {
            ConfigError::Missing {
                place: place(origins, path),
                keys,
                table: path.to_owned(),
            }
        });
    }
    if let Some(name) = quoted_after(message, "unknown field ") {
        let above = match parent(path) {
            Some(above) if path == join(above, name) && !has_key(table, path, name) => above,
            _ => path,
        };
        let named = |found: &str, _: &Value| found.rsplit('.').next() == Some(name);
        let key = match join(above, name) {
            key if at(table, &key).is_some() => key,
            key => only_below(table, above, &named).unwrap_or(key),
        };
        let above = parent(&key).unwrap_or(above);
        let known: Vec<_> = names_in(allowed_in(message)).map(str::to_owned).collect();
        return kind_alone(table, origins, above, name, &known)
            .unwrap_or_else(|| unknown(origins, "key", name, above, &key, message));
    }
    if let Some(name) = quoted_after(message, "unknown variant ") {
        let at = if has_kind(table, path, name) {
            join(path, KIND)
        } else {
            let named = |_: &str, value: &Value| value.as_str() == Some(name);
            only_below(table, path, &named).unwrap_or_else(|| path.to_owned())
        };
        return unknown(origins, "choice", name, &at, &at, message);
    }
    let path = culprit(table, path, message).unwrap_or_else(|| path.to_owned());
    ConfigError::Value {
        place: place(origins, &path),
        key: path,
        message: plain(message),
    }
}

/// The table that lacks `key`. Within a table with a `kind` the reader names that table for all
/// below it; the one meant is where adding the key changes what the reader says.
fn home(
    table: &Table,
    path: &str,
    key: &str,
    complaint: &dyn Fn(&Table) -> Option<String>,
) -> String {
    let about_key = |message: &String| {
        let start = ["missing field ", "unknown field "];
        start
            .iter()
            .any(|start| quoted_after(message, start) == Some(key))
    };
    let meant = |path: &String| {
        let mut copy = table.clone();
        let Some(Value::Table(within)) = set::slot(&mut copy, path) else {
            return false;
        };
        within.insert(key.to_owned(), Value::Boolean(true));
        !complaint(&copy).as_ref().is_some_and(about_key)
    };
    let lacks = |_: &str, value: &Value| value.as_table().is_some_and(|t| !t.contains_key(key));
    let tables = all_below(table, path, &lacks);
    tables
        .into_iter()
        .find(meant)
        .unwrap_or_else(|| path.to_owned())
}

/// The reader's message in words of the user instead of the program's types.
fn plain(message: &str) -> String {
    let Some((found, expected)) = message.split_once(", expected ") else {
        return message.to_owned();
    };
    let expected = match expected {
        "f64" => "a number",
        "u32" | "u64" | "usize" => "a whole number, not negative",
        tagged if tagged.starts_with("internally tagged enum") => {
            "a table with a `kind`, such as {kind=\"...\"} (in quotes on the command line)"
        }
        tagged if tagged.starts_with("struct ") => "a table",
        "variant identifier" | "string or map" => "a text that names a choice",
        other => other,
    };
    format!("{found}, expected {expected}")
}

/// The value that a message about a whole table means. For a table with a `kind` the reader names
/// only the table; the offending value is known when just one below it looks like the one quoted.
fn culprit(table: &Table, path: &str, message: &str) -> Option<String> {
    at(table, path)?.as_table()?;
    let found = message.strip_prefix("invalid type: ")?;
    only_below(table, path, &|_, value| {
        found
            .strip_prefix(seen_as(value).as_str())
            .is_some_and(|rest| rest.starts_with(", expected"))
    })
}

/// How serde quotes a value of the wrong type.
fn seen_as(value: &Value) -> String {
    match value {
        Value::String(text) => format!("string {text:?}"),
        Value::Integer(number) => format!("integer `{number}`"),
        Value::Float(number) => format!("floating point `{number}`"),
        Value::Boolean(flag) => format!("boolean `{flag}`"),
        Value::Datetime(_) | Value::Table(_) => "map".to_owned(),
        Value::Array(_) => "sequence".to_owned(),
    }
}

/// The path of the only key below `path` that `is_it`; `None` if there is none or more.
fn only_below(table: &Table, path: &str, is_it: &dyn Fn(&str, &Value) -> bool) -> Option<String> {
    let mut found = all_below(table, path, is_it);
    let first = found.pop()?;
    found.is_empty().then_some(first)
}

/// The paths of all keys below `path` that `is_it`.
fn all_below(table: &Table, path: &str, is_it: &dyn Fn(&str, &Value) -> bool) -> Vec<String> {
    let mut found = Vec::new();
    let top = match path {
        "" => table,
        _ => match at(table, path).and_then(Value::as_table) {
            Some(inner) => inner,
            None => return found,
        },
    };
    let mut open = vec![(path.to_owned(), top)];
    while let Some((path, inner)) = open.pop() {
        for (key, value) in inner {
            let path = join(&path, key);
            if is_it(&path, value) {
                found.push(path.clone());
            }
            if let Value::Table(inner) = value {
                open.push((path, inner));
            }
        }
    }
    found
}

/// The error when `name` is unknown or missing in the table `above` since an edit changed the
/// `kind` of that table alone.
fn kind_alone(
    table: &Table,
    origins: &Origins,
    above: &str,
    name: &str,
    keys: &[String],
) -> Option<ConfigError> {
    let kind = join(above, KIND);
    let place = origins.get(&kind)?;
    let written = origins.get(&join(above, name));
    if !matches!(place, Place::CommandLine { .. })
        || matches!(written, Some(Place::CommandLine { .. }))
    {
        return None;
    }
    Some(ConfigError::KindAlone(Box::new(KindAlone {
        place: place.clone(),
        table: above.to_owned(),
        kind: at(table, &kind)?.as_str()?.to_owned(),
        keys: keys.to_vec(),
        fault: name.to_owned(),
    })))
}

/// What the reader's message says was expected.
fn allowed_in(message: &str) -> &str {
    message
        .split_once(", ")
        .map_or("none is known here", |(_, rest)| rest)
}

/// The names in backquotes.
pub(super) fn names_in(text: &str) -> impl Iterator<Item = &str> {
    text.split('`').skip(1).step_by(2)
}

/// The error for a key or choice that is not known.
fn unknown(
    origins: &Origins,
    what: &'static str,
    name: &str,
    table: &str,
    at: &str,
    message: &str,
) -> ConfigError {
    let allowed = allowed_in(message);
    ConfigError::Unknown(Box::new(Unknown {
        place: place(origins, at),
        what,
        name: name.to_owned(),
        table: table.to_owned(),
        nearest: nearest(name, names_in(allowed)),
        allowed: allowed.to_owned(),
    }))
}

fn place(origins: &Origins, path: &str) -> Place {
    origins.nearest(path).cloned().unwrap_or(Place::File {
        file: "experiment".into(),
        line: 1,
    })
}

/// The word in backquotes that follows `start` at the beginning of the message.
fn quoted_after<'a>(message: &'a str, start: &str) -> Option<&'a str> {
    message
        .strip_prefix(start)?
        .strip_prefix('`')?
        .split('`')
        .next()
}

/// The value at a key path.
pub(super) fn at<'a>(table: &'a Table, path: &str) -> Option<&'a Value> {
    let mut steps = path.split(['.', '[']).map(|s| s.trim_end_matches(']'));
    let mut value = table.get(steps.next()?)?;
    for step in steps {
        value = match value {
            Value::Table(inner) => inner.get(step)?,
            Value::Array(items) => items.get(step.parse::<usize>().ok()?)?,
            _ => return None,
        };
    }
    Some(value)
}

/// Whether the table at `path` has itself a key `name`: then that is the one meant, not its
/// namesake one step higher.
fn has_key(table: &Table, path: &str, name: &str) -> bool {
    at(table, path)
        .and_then(Value::as_table)
        .is_some_and(|inner| inner.contains_key(name))
}

fn has_kind(table: &Table, path: &str, name: &str) -> bool {
    at(table, path)
        .and_then(|value| value.get(KIND))
        .and_then(Value::as_str)
        == Some(name)
}
