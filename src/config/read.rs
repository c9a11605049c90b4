//! Reads TOML files into one tree: `extends`, overlay, and what is written into the output.
//!
//! Rules of the overlay: tables merge key by key; a table whose `kind` differs from the `kind` of
//! the table below replaces it whole, since the two have different keys; arrays and plain values
//! replace. Own design; nothing here is taken from elsewhere.

use super::error::{ConfigError, Place};
use super::origin::Origins;
use super::provenance::InputFile;
use super::repair::Faulty;
use super::{origin, repair, set};
use serde::de::DeserializeOwned;
use std::path::{Path, PathBuf};
use toml::{Table, Value};

/// Key that names the file below.
const EXTENDS: &str = "extends";
/// Key that says which of several forms a table has.
pub(super) const KIND: &str = "kind";

/// An experiment as text keys and values, with the place where each was written.
#[derive(Clone, Debug)]
pub struct Tree {
    table: Table,
    origins: Origins,
    files: Vec<InputFile>,
}

/// One file before it is laid over what it extends.
struct Layer {
    table: Table,
    origins: Origins,
}

impl Tree {
    /// Reads `file` and all that it extends.
    ///
    /// # Errors
    /// When a file cannot be read or is not TOML, or when files extend one another in a ring.
    pub fn load(file: &Path) -> Result<Self, ConfigError> {
        Self::empty().with(file)
    }

    /// Reads `file`, if one is named, over a text that the program brings along as `name`.
    ///
    /// # Errors
    /// As [`Tree::load`].
    pub fn load_over(name: &str, text: &str, file: Option<&Path>) -> Result<Self, ConfigError> {
        let mut tree = Self::empty();
        tree.lay(parse(Path::new(name), text)?);
        match file {
            Some(file) => tree.with(file),
            None => Ok(tree),
        }
    }

    fn empty() -> Self {
        Self {
            table: Table::new(),
            origins: Origins::default(),
            files: Vec::new(),
        }
    }

    /// Lays a file and all that it extends on what is there.
    fn with(mut self, file: &Path) -> Result<Self, ConfigError> {
        let (layers, files) = read_chain(file)?;
        self.files.extend(files);
        layers.into_iter().rev().for_each(|layer| self.lay(layer));
        Ok(self)
    }

    fn lay(&mut self, layer: Layer) {
        self.origins.adopt("", &layer.origins);
        overlay(
            &mut self.table,
            layer.table,
            "",
            &mut self.origins,
            &layer.origins,
        );
    }

    /// Changes one key, as `--set a.b=value` asks. The value is read as TOML; a bare word that is
    /// not TOML is taken as text. A table or an array is replaced whole.
    ///
    /// # Errors
    /// When the edit has no `=`, or when the key is not there.
    pub fn set(&mut self, assignment: &str) -> Result<(), ConfigError> {
        let (key, value) = set::parse(assignment)?;
        let place = Place::CommandLine {
            assignment: assignment.to_owned(),
        };
        self.put(&key, value, place)
    }

    /// Makes several changes; see [`Self::set`].
    ///
    /// # Errors
    /// All changes that cannot be made.
    pub fn set_all(&mut self, assignments: &[String]) -> Result<(), ConfigError> {
        let mut faults = assignments.iter().filter_map(|a| self.set(a).err());
        match faults.next() {
            Some(first) => Err(ConfigError::several(first, faults.collect())),
            None => Ok(()),
        }
    }

    /// Changes one key to a value made by the program, such as one point of a sweep.
    ///
    /// # Errors
    /// When the key is not there.
    pub fn set_value(&mut self, key: &str, value: Value) -> Result<(), ConfigError> {
        let place = Place::CommandLine {
            assignment: format!("{key}={value}"),
        };
        self.put(key, value, place)
    }

    fn put(&mut self, key: &str, value: Value, place: Place) -> Result<(), ConfigError> {
        match set::slot(&mut self.table, key) {
            Some(slot) => *slot = value,
            None => return Err(set::unknown(&self.table, key, &place)),
        }
        self.origins.put(key, place);
        Ok(())
    }

    /// The whole tree as `T`.
    ///
    /// # Errors
    /// All keys that are unknown or missing and all values of the wrong type, each with its place.
    pub fn typed<T: DeserializeOwned>(&self) -> Result<T, ConfigError> {
        self.read().map_err(|faulty| faulty.fault)
    }

    /// As [`Self::typed`]; a tree with faults comes with the faults put right, to look for more.
    pub(super) fn read<T: DeserializeOwned>(&self) -> Result<T, Faulty<T>> {
        repair::read(&self.table, &self.origins)
    }

    /// Where exactly the key was written.
    pub fn origin(&self, key_path: &str) -> Option<Place> {
        self.origins.get(key_path).cloned()
    }

    /// Where the key was written or, if it was not, the nearest table above it.
    pub fn nearest_origin(&self, key_path: &str) -> Option<Place> {
        self.origins.nearest(key_path).cloned()
    }

    /// The place of that key of `keys` which was written last: on the command line, or in the file
    /// nearest to the one named by the user. Of two that contradict one another it is the likelier
    /// mistake.
    pub fn latest_origin(&self, keys: &[&str]) -> Option<Place> {
        let rank = |place: &Place| match place {
            Place::CommandLine { .. } => 0,
            Place::File { file, .. } => {
                1 + self.files.iter().take_while(|f| f.path != *file).count()
            }
        };
        let places = keys.iter().filter_map(|key| self.nearest_origin(key));
        places.min_by_key(rank)
    }

    /// The merged experiment as TOML with keys in alphabetical order, to be stored in the output.
    ///
    /// # Errors
    /// When a value has no TOML form.
    pub fn resolved_toml(&self) -> Result<String, ConfigError> {
        toml::to_string(&self.table).map_err(|e| ConfigError::Write {
            message: e.to_string(),
        })
    }

    /// All files read, the one named by the user first.
    pub fn input_files(&self) -> &[InputFile] {
        &self.files
    }
}

/// The text of a file.
///
/// # Errors
/// When the file cannot be read or is not UTF-8.
pub fn read_text(path: &Path) -> Result<String, ConfigError> {
    read_wanted(path, None)
}

fn read_wanted(path: &Path, wanted_by: Option<Place>) -> Result<String, ConfigError> {
    let bytes = std::fs::read(path).map_err(|source| ConfigError::Read {
        file: path.to_owned(),
        wanted_by,
        source,
    })?;
    String::from_utf8(bytes).map_err(|e| ConfigError::NotText {
        file: path.to_owned(),
        byte: e.utf8_error().valid_up_to(),
    })
}

/// The file and what it extends, top first.
fn read_chain(file: &Path) -> Result<(Vec<Layer>, Vec<InputFile>), ConfigError> {
    let mut layers = Vec::new();
    let mut files: Vec<InputFile> = Vec::new();
    let mut seen: Vec<PathBuf> = Vec::new();
    let mut next = Some((file.to_owned(), None));
    while let Some((file, wanted_by)) = next {
        let text = read_wanted(&file, wanted_by)?;
        let identity = std::fs::canonicalize(&file).unwrap_or_else(|_| file.clone());
        if seen.contains(&identity) {
            let mut chain: Vec<PathBuf> = files.into_iter().map(|f| f.path).collect();
            chain.push(file);
            return Err(ConfigError::CircularExtends { chain });
        }
        seen.push(identity);
        files.push(InputFile::new(&file, text.as_bytes()));
        let mut layer = parse(&file, &text)?;
        next = below(&mut layer, &file)?;
        layers.push(layer);
    }
    Ok((layers, files))
}

fn parse(file: &Path, text: &str) -> Result<Layer, ConfigError> {
    let origins = Origins::of_file(file, text)?;
    let table = text.parse::<Table>().map_err(|e| ConfigError::Syntax {
        place: Place::File {
            file: file.to_owned(),
            line: origin::line_of(text, e.span().map_or(0, |span| span.start)),
        },
        message: origin::one_line(e.message()),
    })?;
    Ok(Layer { table, origins })
}

/// Takes `extends` out of a layer: the file it names, and where it is said.
fn below(layer: &mut Layer, file: &Path) -> Result<Option<(PathBuf, Option<Place>)>, ConfigError> {
    let Some(value) = layer.table.remove(EXTENDS) else {
        return Ok(None);
    };
    let place = layer.origins.get(EXTENDS).cloned();
    if let Value::String(name) = &value {
        let folder = file.parent().unwrap_or(Path::new(""));
        return Ok(Some((folder.join(name), place)));
    }
    let place = place.unwrap_or_else(|| Place::File {
        file: file.to_owned(),
        line: 1,
    });
    Err(ConfigError::ExtendsKind {
        place,
        found: value.type_str(),
    })
}

/// Lays `over` on `base`.
fn overlay(
    base: &mut Table,
    over: Table,
    path: &str,
    base_origins: &mut Origins,
    over_origins: &Origins,
) {
    for (key, value) in over {
        let path = origin::join(path, &key);
        match (base.get_mut(&key), value) {
            (Some(Value::Table(below)), Value::Table(above)) if same_kind(below, &above) => {
                base_origins.adopt(&path, over_origins);
                overlay(below, above, &path, base_origins, over_origins);
            }
            (_, value) => {
                base.insert(key, value);
                base_origins.replace(&path, over_origins);
            }
        }
    }
}

/// Whether the upper table may be merged into the lower: it says no other `kind`.
fn same_kind(below: &Table, above: &Table) -> bool {
    above
        .get(KIND)
        .is_none_or(|kind| below.get(KIND) == Some(kind))
}
