//! The files of the project, and what must be true of them as text.

use super::names;
use std::collections::BTreeSet;
use std::path::Path;

/// Folders that hold what is made, not what is written.
const MADE: [&str; 3] = ["target", "out", ".git"];

/// All files below `folder` as (path below the project's folder, bytes), in order of their names.
pub(crate) fn files(folder: &str) -> Vec<(String, Vec<u8>)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut found = Vec::new();
    walk(root, &root.join(folder), &mut found);
    found.sort();
    found
}

fn walk(root: &Path, folder: &Path, found: &mut Vec<(String, Vec<u8>)>) {
    let Ok(entries) = std::fs::read_dir(folder) else {
        return;
    };
    for entry in entries {
        let path = entry.expect("a readable folder").path();
        let name = path
            .file_name()
            .unwrap_or_default()
            .to_string_lossy()
            .into_owned();
        // The tag marks build folders, whatever they are called.
        if MADE.contains(&name.as_str()) || path.join("CACHEDIR.TAG").exists() {
            continue;
        }
        if path.is_dir() {
            walk(root, &path, found);
        } else if let Ok(bytes) = std::fs::read(&path) {
            let below = path.strip_prefix(root).expect("a path below the root");
            found.push((below.to_string_lossy().into_owned(), bytes));
        }
    }
}

/// Rust sources below `folder` as (path, text).
pub(crate) fn sources(folder: &str) -> Vec<(String, String)> {
    files(folder)
        .into_iter()
        .filter(|(path, _)| Path::new(path).extension().is_some_and(|end| end == "rs"))
        .map(|(path, bytes)| (path, String::from_utf8(bytes).expect("UTF-8 source")))
        .collect()
}

/// Crates that the manifest asks for and no source names.
pub(crate) fn unused(manifest: &str, sources: &[(String, String)]) -> Vec<String> {
    let manifest: toml::Table = manifest.parse().expect("a manifest in TOML");
    let used: BTreeSet<String> = sources
        .iter()
        .flat_map(|(_, text)| names::words(text))
        .map(|word| word.text)
        .collect();
    ["dependencies", "dev-dependencies", "build-dependencies"]
        .iter()
        .filter_map(|section| manifest.get(*section)?.as_table())
        .flat_map(|section| section.keys())
        .filter(|name| !used.contains(&name.replace('-', "_")))
        .cloned()
        .collect()
}

/// Lines of `text` with a path of somebody's machine.
pub(crate) fn machine_paths(file: &str, text: &str) -> Vec<String> {
    let folders = ["work", "root", "home"].map(|name| format!("/{name}/"));
    let mut found = Vec::new();
    for (number, line) in text.lines().enumerate() {
        for folder in &folders {
            let begins = |at: usize| {
                let before = line[..at].chars().next_back();
                // `a/home/b` and `$HOME/x/` are not paths from the root.
                before.is_none_or(|c| !c.is_alphanumeric() && !"._-}".contains(c))
            };
            if line
                .match_indices(folder.as_str())
                .any(|(at, _)| begins(at))
            {
                found.push(format!("{file}:{}: holds {folder}", number + 1));
            }
        }
    }
    found
}
