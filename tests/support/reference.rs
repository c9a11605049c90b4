//! The reference configuration and edits to it.

use orbicline::config::run::Experiment;
use std::path::{Path, PathBuf};

/// The file.
pub(crate) fn file() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/reference.toml")
}

/// The reference experiment with these edits, each `key.path=value`.
pub(crate) fn experiment(edits: &[&str]) -> Experiment {
    let edits: Vec<String> = edits.iter().map(|e| (*e).to_owned()).collect();
    Experiment::load(&file(), &edits).expect("the reference configuration with edits")
}
