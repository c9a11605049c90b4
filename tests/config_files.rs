//! Experiment files, good and bad, read through the public interface.
//!
//! Every file in `tests/config/bad` says at its top what its message must contain (`#^ fragment`)
//! and which edits it is read with (`#! --set key=value`).

use orbicline::config::{ConfigError, Place, Provenance, Tree, read_text};
use serde::Deserialize;
use std::path::{Path, PathBuf};

#[derive(Debug, Deserialize, PartialEq)]
#[serde(deny_unknown_fields)]
struct Experiment {
    title: String,
    time: Time,
    physics: Physics,
}

#[derive(Debug, Deserialize, PartialEq)]
#[serde(deny_unknown_fields)]
struct Time {
    start_kyr: f64,
    step_kyr: f64,
}

#[derive(Debug, Deserialize, PartialEq)]
#[serde(deny_unknown_fields)]
struct Physics {
    albedo: Albedo,
    column: Option<Column>,
}

#[derive(Debug, Deserialize, PartialEq)]
#[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
enum Albedo {
    Step { open: f64, ice: f64 },
    Smooth { contrast: f64 },
    Snowy { snow: Snow },
}

#[derive(Debug, Deserialize, PartialEq)]
#[serde(deny_unknown_fields)]
struct Snow {
    steepness: f64,
}

#[derive(Debug, Deserialize, PartialEq)]
#[serde(deny_unknown_fields)]
struct Column {
    levels: Vec<f64>,
    mixing_m2_s: f64,
}

fn folder(kind: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("tests/config")
        .join(kind)
}

fn good(name: &str) -> Tree {
    Tree::load(&folder("good").join(name)).expect("a good file")
}

fn read(file: &Path, edits: &[&str]) -> Result<Experiment, ConfigError> {
    let mut tree = Tree::load(file)?;
    for edit in edits {
        tree.set(edit)?;
    }
    tree.typed()
}

#[test]
fn every_bad_file_says_what_is_wrong_and_where() {
    let mut count = 0;
    let mut failures = Vec::new();
    for entry in std::fs::read_dir(folder("bad")).unwrap() {
        let file = entry.unwrap().path();
        let text = read_text(&file).unwrap();
        let marked = |mark: &str| -> Vec<String> {
            let lines = text.lines().filter_map(|line| line.strip_prefix(mark));
            lines.map(str::to_owned).collect()
        };
        let (expected, edits) = (marked("#^ "), marked("#! --set "));
        assert!(!expected.is_empty(), "{}: expects nothing", file.display());
        let edits: Vec<_> = edits.iter().map(String::as_str).collect();
        let message = match read(&file, &edits) {
            Ok(read) => format!("read without complaint: {read:?}"),
            Err(error) => error.to_string(),
        };
        for fragment in expected
            .iter()
            .filter(|part| !message.contains(part.as_str()))
        {
            failures.push(format!(
                "{}\n  lacks {fragment}\n  says  {message}",
                file.display()
            ));
        }
        count += 1;
    }
    assert!(failures.is_empty(), "{}", failures.join("\n"));
    assert!(count >= 15, "only {count} files were found");
}

#[test]
fn a_missing_experiment_is_named() {
    let message = Tree::load(Path::new("nowhere.toml"))
        .unwrap_err()
        .to_string();
    assert!(
        message.contains("nowhere.toml: cannot be read"),
        "{message}"
    );
    assert!(message.contains("check the name"), "{message}");
}

#[test]
fn bytes_that_are_no_text_are_counted() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("latin.toml");
    std::fs::write(&file, b"# caf\xe9\n").unwrap();
    let message = Tree::load(&file).unwrap_err().to_string();
    assert!(message.contains("byte 5 is not UTF-8"), "{message}");
}

#[test]
fn overlay_merges_tables_and_replaces_arrays_and_values() {
    let experiment: Experiment = good("overlay.toml").typed().unwrap();
    assert_eq!(experiment.title, "overlay");
    // Integers are accepted where the type is a float.
    assert_eq!(
        (experiment.time.start_kyr, experiment.time.step_kyr),
        (1000.0, 1.0)
    );
    let column = experiment.physics.column.unwrap();
    assert_eq!((column.levels, column.mixing_m2_s), (vec![5.0], 1e-5));
    let albedo = Albedo::Step {
        open: 0.3,
        ice: 0.6,
    };
    assert_eq!(experiment.physics.albedo, albedo);
}

#[test]
fn another_kind_replaces_the_whole_table() {
    let tree = good("kind.toml");
    let experiment: Experiment = tree.typed().unwrap();
    assert_eq!(experiment.physics.albedo, Albedo::Smooth { contrast: 0.3 });
    assert_eq!(tree.origin("physics.albedo.open"), None);
}

#[test]
fn every_key_knows_where_it_came_from() {
    let mut tree = good("kind.toml");
    tree.set("time.start_kyr=800").unwrap();
    let at = |name: &str, line| {
        Some(Place::File {
            file: folder("good").join(name),
            line,
        })
    };
    assert_eq!(tree.origin("physics.albedo.contrast"), at("kind.toml", 5));
    assert_eq!(tree.origin("time.step_kyr"), at("overlay.toml", 5));
    assert_eq!(
        tree.origin("physics.column.mixing_m2_s"),
        at("reference.toml", 15)
    );
    assert_eq!(tree.origin("extends"), None);
    assert_eq!(tree.nearest_origin("time.nothing"), tree.origin("time"));
    let assignment = "time.start_kyr=800".to_owned();
    assert_eq!(
        tree.origin("time.start_kyr"),
        Some(Place::CommandLine { assignment })
    );
}

#[test]
fn edits_reach_numbers_words_and_tables() {
    let mut tree = good("reference.toml");
    for edit in [
        "time.step_kyr=2",
        "title=two words",
        "physics.albedo={ kind = \"smooth\", contrast = 0.1 }",
        "physics.column.levels=[1, 2]",
    ] {
        tree.set(edit).unwrap();
    }
    tree.set_value("time.start_kyr", toml::Value::Float(0.25))
        .unwrap();
    let experiment: Experiment = tree.typed().unwrap();
    assert_eq!(experiment.title, "two words");
    assert_eq!(
        (experiment.time.start_kyr, experiment.time.step_kyr),
        (0.25, 2.0)
    );
    assert_eq!(experiment.physics.albedo, Albedo::Smooth { contrast: 0.1 });
    assert_eq!(experiment.physics.column.unwrap().levels, [1.0, 2.0]);
}

#[test]
fn resolved_text_reads_back_as_the_same_experiment() {
    let tree = good("kind.toml");
    let text = tree.resolved_toml().unwrap();
    assert_eq!(text, good("kind.toml").resolved_toml().unwrap());
    assert!(!text.contains("extends"), "{text}");
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("resolved.toml");
    std::fs::write(&file, &text).unwrap();
    let again = Tree::load(&file).unwrap();
    let (first, second): (Experiment, Experiment) = (tree.typed().unwrap(), again.typed().unwrap());
    assert_eq!(first, second);
    assert_eq!(again.resolved_toml().unwrap(), text);
}

#[test]
fn all_files_read_are_listed_with_their_hash() {
    let tree = good("kind.toml");
    let names: Vec<_> = tree
        .input_files()
        .iter()
        .map(|file| file.path.file_name().unwrap().to_str().unwrap())
        .collect();
    assert_eq!(names, ["kind.toml", "overlay.toml", "reference.toml"]);
    assert!(
        tree.input_files()
            .iter()
            .all(|file| file.sha256.len() == 64)
    );
    let command = ["orbicline", "run"].map(str::to_owned);
    let attributes = Provenance::new(&command, tree.input_files()).attributes();
    let (_, hashes) = attributes
        .iter()
        .find(|(name, _)| name == "input_sha256")
        .unwrap();
    assert_eq!(hashes.lines().count(), 3);
}
