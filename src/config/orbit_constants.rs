//! The constants of the integrated orbit: those of the program, and what the user changes.
//!
//! A user's file gives only what differs, like every configuration; single keys can be changed on
//! the command line. Nothing is computed here.

use std::path::Path;

use super::fault::{BuildError, Fault, PlacedFault};
use super::{ConfigError, InputFile, Tree};
use crate::orbit::integration::{Constants, ConstantsError};

/// Name of the file that the program brings along.
const NAME: &str = "configs/orbit_constants.toml";
/// Its text.
const TEXT: &str = include_str!("../../configs/orbit_constants.toml");

/// Constants that cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum OrbitConstantsError {
    /// A file, a key or a value is not what it should be.
    #[error(transparent)]
    Config(#[from] ConfigError),
    /// Numbers out of range.
    #[error(transparent)]
    Range(#[from] BuildError),
}

/// Checked constants with their origin.
#[derive(Clone, Debug)]
pub struct OrbitConstants {
    /// The constants.
    pub constants: Constants,
    /// Their values as TOML without comments, keys in alphabetical order.
    pub resolved_toml: String,
    /// Files that the user named, with their hashes.
    pub files: Vec<InputFile>,
}

/// The program's constants with a user's file and edits laid over them.
///
/// # Errors
/// When a file cannot be read, a key is unknown, or a number is out of range.
pub fn load(file: Option<&Path>, edits: &[String]) -> Result<OrbitConstants, OrbitConstantsError> {
    let mut tree = Tree::load_over(NAME, TEXT, file)?;
    for edit in edits {
        tree.set(edit)?;
    }
    let constants: Constants = tree.typed()?;
    constants.check().map_err(|errors| {
        let placed = |error: ConstantsError| PlacedFault {
            place: tree.nearest_origin(&error.key),
            fault: Fault::Constants(error),
        };
        BuildError {
            faults: errors.into_iter().map(placed).collect(),
        }
    })?;
    Ok(OrbitConstants {
        constants,
        resolved_toml: tree.resolved_toml()?,
        files: tree.input_files().to_vec(),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    #[test]
    fn a_file_gives_only_what_differs() {
        let mut file = tempfile::NamedTempFile::new().unwrap();
        file.write_all(b"[tide]\nscale = 0.9\n").unwrap();
        let changed = load(Some(file.path()), &[]).unwrap();
        let own = load(None, &[]).unwrap();
        assert!((changed.constants.tide.scale - 0.9).abs() < f64::EPSILON);
        assert_eq!(changed.constants.planet, own.constants.planet);
        assert_ne!(changed.resolved_toml, own.resolved_toml);
        assert_eq!((changed.files.len(), own.files.len()), (1, 0));
    }

    #[test]
    fn regress_wrong_numbers_are_named_with_their_place() {
        let message = |edits: &[&str]| {
            let edits: Vec<String> = edits.iter().map(|e| (*e).to_owned()).collect();
            load(None, &edits).unwrap_err().to_string()
        };
        let all = message(&["tide.scale=-1", "map.steps_per_century=100"]);
        for part in [
            "--set tide.scale=-1: tide.scale = -1: must be",
            "map.steps_per_century = 100: must lie between 1075 and 73050",
            "map.steps_per_sample = 6: must be even and divide",
        ] {
            assert!(all.contains(part), "no `{part}` in\n{all}");
        }
        assert!(message(&["tide.scal=1"]).contains("did you mean `tide.scale`"));
    }
}
