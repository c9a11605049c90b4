//! Bad input, from the user's side: what the program says, and that it costs nothing.
//!
//! Every file in `tests/bad_input` says at its top what the message of `orbicline run` must contain
//! (`#^ fragment`), of how many lines it consists (`#= n`, one if not said), and with which edits
//! it is run (`#! --set key=value`). What lies around a run (files, folders, disks, other runs) is
//! in the modules.
#![cfg(feature = "netcdf")]

#[path = "bad_input/disk.rs"]
mod disk;
#[path = "bad_input/files.rs"]
mod files;
#[path = "bad_input/numbers.rs"]
mod numbers;
#[path = "cli/program.rs"]
mod program;

use program::Folder;
use std::path::Path;

/// What stands behind a mark at the beginning of lines.
fn marked<'a>(text: &'a str, mark: &str) -> Vec<&'a str> {
    let lines = text.lines().filter_map(|line| line.strip_prefix(mark));
    lines.collect()
}

/// What is wrong with the answer to a bad file.
fn complaints(folder: &Folder, file: &Path) -> Vec<String> {
    let text = std::fs::read_to_string(file).expect("a file");
    let name = file.display().to_string();
    let mut words = vec!["run", &name, "--out", "never.nc"];
    for edit in marked(&text, "#! --set ") {
        words.extend(["--set", edit]);
    }
    let outcome = folder.orbicline(&words);
    let fragments = marked(&text, "#^ ");
    let mut wrong = Vec::new();
    if fragments.is_empty() {
        wrong.push("the file says nothing of its message".to_owned());
    }
    for fragment in fragments.iter().filter(|f| !outcome.err.contains(**f)) {
        wrong.push(format!("lacks `{fragment}`"));
    }
    let lines = marked(&text, "#= ")
        .first()
        .map_or(1, |n| n.parse().expect("a number"));
    if outcome.err.trim_end().lines().count() != lines {
        wrong.push(format!("should have {lines} lines"));
    }
    if outcome.code != Some(1) || !outcome.out.is_empty() || !outcome.err.starts_with("error: ") {
        wrong.push(format!(
            "ended with {:?}, printed `{}`",
            outcome.code, outcome.out
        ));
    }
    if folder.files() != ["short.toml"] {
        wrong.push(format!("left {:?}", folder.files()));
    }
    let told = |problem| format!("{name}: {problem} in\n{}", outcome.err);
    wrong.into_iter().map(told).collect()
}

#[test]
fn every_bad_file_is_answered_with_place_key_and_way_out() {
    let cases = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/bad_input");
    let entries = std::fs::read_dir(cases).expect("a folder");
    let files = entries.map(|entry| entry.expect("an entry").path());
    let cases: Vec<_> = files
        .filter(|file| file.extension().is_some_and(|e| e == "toml"))
        .collect();
    let folder = Folder::new();
    let wrong: Vec<_> = cases
        .iter()
        .flat_map(|file| complaints(&folder, file))
        .collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(cases.len() >= 45, "only {} files were found", cases.len());
}
