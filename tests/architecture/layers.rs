//! Which module may import which, who may print, use `unsafe` and touch files.

use super::names::{self, Found, Names};
use std::collections::BTreeSet;
use std::fmt;

/// Every module at the top of the crate and what it may import. To add a module, add a line.
const LAYERS: [(&str, &[&str]); 17] = [
    ("units", &[]),
    ("numerics", &[]),
    ("tables", &[]),
    ("series", &["units"]),
    ("grid", &["numerics", "units"]),
    ("orbit", &["numerics", "tables", "units"]),
    ("forcing", &["grid", "numerics", "orbit", "tables", "units"]),
    (
        "physics",
        &["forcing", "grid", "numerics", "orbit", "series", "units"],
    ),
    (
        "model",
        &[
            "forcing", "grid", "numerics", "orbit", "physics", "series", "units",
        ],
    ),
    ("output", &["grid", "model", "numerics", "series", "units"]),
    (
        "config",
        &[
            "forcing", "grid", "model", "orbit", "output", "physics", "series", "tables", "units",
        ],
    ),
    ("analysis", &["numerics", "series", "units"]),
    (
        "boundary",
        &["grid", "numerics", "output", "series", "tables", "units"],
    ),
    (
        "report",
        &["analysis", "numerics", "series", "tables", "units"],
    ),
    (
        "experiment",
        &[
            "analysis", "config", "forcing", "grid", "model", "numerics", "orbit", "output",
            "physics", "report", "series", "tables", "units",
        ],
    ),
    (
        "validate",
        &[
            "analysis",
            "boundary",
            "config",
            "experiment",
            "forcing",
            "grid",
            "model",
            "numerics",
            "orbit",
            "output",
            "physics",
            "report",
            "series",
            "tables",
            "units",
        ],
    ),
    (
        "cli",
        &[
            "analysis",
            "boundary",
            "config",
            "experiment",
            "forcing",
            "grid",
            "model",
            "numerics",
            "orbit",
            "output",
            "physics",
            "report",
            "series",
            "tables",
            "units",
            "validate",
        ],
    ),
];

/// Crates that only some modules may know, outside unit tests.
const CRATES: [(&str, &[&str]); 7] = [
    ("base64", &["report"]),
    ("colorous", &["report"]),
    ("hdf5", &["output"]),
    ("hdf5_sys", &["output"]),
    ("indicatif", &["cli"]),
    ("resvg", &["report"]),
    ("toml", &["config", "experiment"]),
];
/// Macros and functions that print.
const PRINTING: [&str; 5] = ["print", "println", "eprint", "eprintln", "dbg"];
/// Modules that may print.
const PRINTERS: [&str; 2] = ["cli", "main"];
/// Modules that may use the file system; besides these, every module named `tables`.
const FILE_USERS: [&str; 2] = ["config", "output"];
/// The only files with `unsafe`.
const UNSAFE_FILES: [&str; 2] = ["src/numerics/dispatch.rs", "src/output/netcdf4.rs"];

/// A breach of the rules.
#[derive(Debug)]
pub(crate) struct Breach {
    /// File below the project's folder.
    pub(crate) file: String,
    /// Line, counted from one.
    pub(crate) line: usize,
    /// What is wrong, naming both sides.
    pub(crate) message: String,
}

impl fmt::Display for Breach {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}:{}: {}", self.file, self.line, self.message)
    }
}

struct Source {
    file: String,
    module: Vec<String>,
    names: Names,
}

/// All breaches in (path, text) pairs of source files; paths begin with `src/`.
pub(crate) fn check(files: &[(String, String)]) -> Vec<Breach> {
    let mut breaches = Vec::new();
    let mut sources = Vec::new();
    for (file, text) in files {
        let module = module_of(file);
        check_words(file, &module, text, &mut breaches);
        match names::names(&module, text) {
            Ok(names) => sources.push(Source {
                file: file.clone(),
                module,
                names,
            }),
            Err(error) => breaches.push(Breach {
                file: file.clone(),
                line: error.span().start().line,
                message: format!("cannot be parsed: {error}"),
            }),
        }
    }
    let components = components(&sources);
    for source in &sources {
        for found in &source.names.paths {
            if let Some(message) = wrong(&source.module, found, &components) {
                breaches.push(Breach {
                    file: source.file.clone(),
                    line: found.line,
                    message,
                });
            }
        }
    }
    breaches.dedup_by(|a, b| a.to_string() == b.to_string());
    breaches
}

/// `src/physics/carbon/mod.rs` is `["physics", "carbon"]`; the crate root is empty.
fn module_of(file: &str) -> Vec<String> {
    let path = file.strip_prefix("src/").unwrap_or(file);
    let path = path.strip_suffix(".rs").unwrap_or(path);
    let mut module: Vec<_> = path.split('/').map(str::to_owned).collect();
    if module.last().is_some_and(|last| last == "mod") || module == ["lib"] {
        module.pop();
    }
    module
}

fn check_words(file: &str, module: &[String], text: &str, breaches: &mut Vec<Breach>) {
    let top = module.first().map_or("", String::as_str);
    for word in names::words(text) {
        let prints = word.called_as_macro && PRINTING.contains(&word.text.as_str());
        let message = if prints && !PRINTERS.contains(&top) {
            format!("`{top}` prints with `{}!`; only `cli` may print", word.text)
        } else if word.text == "unsafe" && !UNSAFE_FILES.contains(&file) {
            format!("`unsafe` is allowed only in {}", UNSAFE_FILES.join(" and "))
        } else {
            continue;
        };
        breaches.push(Breach {
            file: file.to_owned(),
            line: word.line,
            message,
        });
    }
}

/// Parts of `physics` that must not know one another: folders, and files that implement
/// `Component`. Other single files there are shared.
fn components(sources: &[Source]) -> BTreeSet<String> {
    let below = sources
        .iter()
        .filter(|s| s.module.len() > 1 && s.module[0] == "physics");
    below
        .filter(|source| {
            source.file.matches('/').count() > 2
                || source
                    .names
                    .implemented
                    .iter()
                    .any(|name| name == "Component")
        })
        .map(|source| source.module[1].clone())
        .collect()
}

/// What is wrong about this path in this module, if anything.
fn wrong(module: &[String], found: &Found, components: &BTreeSet<String>) -> Option<String> {
    let from = module.first().map_or("", String::as_str);
    let path: Vec<&str> = found.path.iter().map(String::as_str).collect();
    match path.as_slice() {
        ["std", "fs", ..] => wrong_files(module, found),
        ["std", "io", name @ ("stdout" | "stderr"), ..] if !PRINTERS.contains(&from) => Some(
            format!("`{from}` uses `std::io::{name}`; only `cli` may print"),
        ),
        ["crate", rest @ ..] => {
            if from.is_empty() || from == "main" {
                None
            } else {
                wrong_import(module, rest, components)
            }
        }
        [outside, ..] => {
            let (_, users) = CRATES.iter().find(|(name, _)| name == outside)?;
            (!users.contains(&from) && !test_only(module, found)).then(|| {
                format!(
                    "`{from}` uses the crate `{outside}`; only {} may",
                    users.join(", ")
                )
            })
        }
        [] => None,
    }
}

/// Whether this is compiled for tests only: inside a `#[cfg(test)]` module, or in a file that holds
/// nothing else by its name.
fn test_only(module: &[String], found: &Found) -> bool {
    let in_test_file = |part: &String| part == "fixtures" || part.ends_with("tests");
    found.test_only || module.iter().any(in_test_file)
}

fn wrong_files(module: &[String], found: &Found) -> Option<String> {
    let from = module.first().map_or("", String::as_str);
    let allowed = FILE_USERS.contains(&from) || module.iter().any(|part| part == "tables");
    (!allowed && !test_only(module, found)).then(|| {
        let users = FILE_USERS.join(", ");
        format!("`{from}` uses `std::fs`; only {users} and modules named `tables` may")
    })
}

fn wrong_import(module: &[String], to: &[&str], components: &BTreeSet<String>) -> Option<String> {
    let from = module[0].as_str();
    let Some((_, allowed)) = LAYERS.iter().find(|(name, _)| *name == from) else {
        return Some(format!(
            "module `{from}` is not in the table of layers; add it there"
        ));
    };
    let target = match to {
        [] | ["*", ..] => return Some(format!("`{from}` imports the crate root; name the module")),
        [target, ..] => *target,
    };
    if target == from {
        return wrong_sibling(module, to, components);
    }
    (!allowed.contains(&target)).then(|| {
        let allowed = if allowed.is_empty() {
            "none".to_owned()
        } else {
            allowed.join(", ")
        };
        format!("`{from}` imports `{target}`; it may import: {allowed}")
    })
}

fn wrong_sibling(module: &[String], to: &[&str], components: &BTreeSet<String>) -> Option<String> {
    let own = module.get(1)?;
    match to {
        ["physics", "*"] => Some(format!(
            "`{own}` imports all of `physics`; name what is needed"
        )),
        ["physics", other, ..] if other != own && components.contains(*other) => Some(format!(
            "`{own}` imports `{other}`; parts of `physics` meet only in `physics::exchange`"
        )),
        _ => None,
    }
}
