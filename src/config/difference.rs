//! Compares two resolved configurations key by key.
//!
//! Rule: a key is named by its path, as in messages; numbers are equal when they are the same
//! number, however they were written; a table of another `kind` differs in `kind` and in all
//! keys that only one of the two has.

use super::origin::join;
use toml::{Table, Value};

/// A key whose value is not the same in both; `None` where it is not there.
#[derive(Clone, Debug, PartialEq)]
pub struct Difference {
    /// Path of the key.
    pub key: String,
    /// Its value in the first.
    pub first: Option<String>,
    /// Its value in the second.
    pub second: Option<String>,
}

/// All keys that differ, in alphabetical order.
///
/// # Errors
/// When a text is not TOML: what the parser said.
pub fn differences(first: &str, second: &str) -> Result<Vec<Difference>, toml::de::Error> {
    let (first, second) = (first.parse()?, second.parse()?);
    let mut found = Vec::new();
    compare("", &first, &second, &mut found);
    found.sort_by(|a, b| a.key.cmp(&b.key));
    Ok(found)
}

fn compare(path: &str, first: &Table, second: &Table, found: &mut Vec<Difference>) {
    for (key, value) in first {
        let path = join(path, key);
        match (value, second.get(key)) {
            (Value::Table(a), Some(Value::Table(b))) => compare(&path, a, b, found),
            (a, Some(b)) if same(a, b) => {}
            (a, b) => note(&path, Some(a), b, found),
        }
    }
    for (key, value) in second.iter().filter(|(key, _)| !first.contains_key(*key)) {
        note(&join(path, key), None, Some(value), found);
    }
}

/// Whether two values are the same number, or are equal.
fn same(a: &Value, b: &Value) -> bool {
    let number = |v: &Value| match v {
        Value::Integer(n) => Some(*n as f64),
        Value::Float(x) => Some(*x),
        _ => None,
    };
    match (a, b) {
        (Value::Array(a), Value::Array(b)) => {
            a.len() == b.len() && a.iter().zip(b).all(|(a, b)| same(a, b))
        }
        _ => match (number(a), number(b)) {
            (Some(a), Some(b)) => a.to_bits() == b.to_bits(),
            _ => a == b,
        },
    }
}

fn note(path: &str, first: Option<&Value>, second: Option<&Value>, found: &mut Vec<Difference>) {
    // A table that only one of them has is told key by key.
    match (first, second) {
        (Some(Value::Table(table)), None) => {
            return compare(path, table, &Table::new(), found);
        }
        (None, Some(Value::Table(table))) => {
            return compare(path, &Table::new(), table, found);
        }
        _ => {}
    }
    found.push(Difference {
        key: path.to_owned(),
        first: first.map(Value::to_string),
        second: second.map(Value::to_string),
    });
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keys_that_differ_are_named_with_both_values() {
        let first = "a = 1\n[b]\nc = 2.0\nd = [1, 2]\n[b.e]\nkind = \"x\"\nf = 1.5\n";
        let second = "a = 1.0\n[b]\nc = 2.5\nd = [1, 2.0]\n[b.e]\nkind = \"y\"\ng = true\n";
        let found = differences(first, second).unwrap();
        let line = |d: &Difference| {
            let text = |v: &Option<String>| v.clone().unwrap_or_else(|| "-".to_owned());
            format!("{} {} {}", d.key, text(&d.first), text(&d.second))
        };
        let lines: Vec<_> = found.iter().map(line).collect();
        assert_eq!(
            lines,
            [
                "b.c 2.0 2.5",
                "b.e.f 1.5 -",
                "b.e.g - true",
                "b.e.kind \"x\" \"y\""
            ]
        );
        let more = differences(first, &format!("{first}[h.i]\nj = 3\n")).unwrap();
        let keys: Vec<_> = more.iter().map(|d| d.key.as_str()).collect();
        assert_eq!(keys, ["h.i.j"]);
        assert!(differences(first, first).unwrap().is_empty());
        assert!(differences("a = ", first).is_err());
    }
}
