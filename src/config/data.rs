//! Reads the data files that a run names: tables of the orbit, of carbon dioxide, of land ice.
//!
//! Here alone they are read; what they mean is known to the parts they belong to. Paths start at
//! the folder of the configuration.

use super::fault::{Fault, Faults};
use super::run::RunSpec;
use super::{ConfigError, InputFile};
use crate::forcing::carbon_dioxide::CarbonDioxideSpec;
use crate::forcing::land_ice::LandIceSpec;
use crate::orbit::solution::orbit_table::OrbitTable;
use crate::orbit::solution::{ElementData, ElementSource, OrbitData, OrbitSpec, WIDEST_GAP};
use crate::physics::RangeError;
use crate::tables::TableError;
use crate::tables::declared::{Declaration, Series, WidestGap};
use std::path::Path;
use std::sync::Arc;

/// Reads a declared table; `key` is that of its table in the configuration.
pub(super) fn series(
    declaration: &Declaration<'_>,
    widest: WidestGap,
    key: &str,
    folder: &Path,
    faults: &mut Faults,
) -> Option<Series> {
    let violations = declaration.violations(widest);
    let sound = violations.is_empty();
    let range = |(name, value, limit)| {
        Fault::Range(RangeError {
            key: format!("{key}.{name}"),
            value,
            limit,
        })
    };
    faults.add(violations.into_iter().map(range));
    // Without a largest gap or a zero of the ages nothing can be said of the rows.
    if !sound {
        return None;
    }
    faults.take_all(declaration.read(folder), |error| Fault::Table {
        table: key.to_owned(),
        error,
    })
}

/// Reads the files of an orbit; `key` is that of its table in the configuration. What cannot be read
/// is told and left out.
pub(super) fn orbit(spec: &OrbitSpec, key: &str, folder: &Path, faults: &mut Faults) -> OrbitData {
    let mut of = |(element, source): (&str, Option<ElementSource<'_>>)| {
        let key = format!("{key}.{element}");
        match source? {
            ElementSource::Text(declaration) => {
                let read = series(&declaration, WIDEST_GAP, &key, folder, faults);
                read.map(ElementData::Text)
            }
            ElementSource::Integrated(path) => {
                let read = integrated(&folder.join(path), &key, faults);
                read.map(ElementData::Integrated)
            }
        }
    };
    let [eccentricity, obliquity, perihelion] = spec.files().map(&mut of);
    OrbitData {
        eccentricity,
        obliquity,
        perihelion,
    }
}

/// Reads a table made by `orbicline orbit --integrate`.
fn integrated(path: &Path, table: &str, faults: &mut Faults) -> Option<Arc<OrbitTable>> {
    let read = std::fs::read(path).map_err(|source| TableError::Read {
        path: path.to_owned(),
        source,
    });
    let bytes = faults.take(read, |error| Fault::Table {
        table: table.to_owned(),
        error,
    })?;
    let rows = faults.take(OrbitTable::from_bytes(&bytes), |error| Fault::OrbitTable {
        table: table.to_owned(),
        path: path.to_owned(),
        error,
    })?;
    Some(Arc::new(rows))
}

impl RunSpec {
    /// Paths of the data files, as they are written, each once.
    fn data_paths(&self) -> Vec<&str> {
        let mut paths = Vec::new();
        match &self.co2 {
            CarbonDioxideSpec::Table { path } => paths.push(path.as_str()),
            CarbonDioxideSpec::DeclaredTable(table) => paths.push(&table.path),
            CarbonDioxideSpec::Constant { .. } | CarbonDioxideSpec::Linear { .. } => {}
        }
        if let LandIceSpec::Table(table) = &self.land_ice {
            paths.push(&table.path);
        }
        let inside = self.orbit_mask.as_ref().map(|mask| &mask.orbit);
        for orbit in [Some(&self.orbit), inside].into_iter().flatten() {
            let files = orbit.files().into_iter();
            paths.extend(files.filter_map(|(_, file)| Some(file?.path())));
        }
        let mut once: Vec<&str> = Vec::new();
        for path in paths {
            if !once.contains(&path) {
                once.push(path);
            }
        }
        once
    }

    /// The data files with their hashes, in the order of their roles: the same files in other
    /// roles have other paths in the configuration or another content here.
    pub(super) fn data(&self, folder: &Path) -> Result<Vec<InputFile>, ConfigError> {
        let read = |path: &str| {
            let path = folder.join(path);
            let unread = |source| ConfigError::Read {
                file: path.clone(),
                wanted_by: None,
                source,
            };
            // A pipe gives its content once, and the hash would be that of nothing.
            if std::fs::metadata(&path).is_ok_and(|m| !m.is_file() && !m.is_dir()) {
                let words = "it is a pipe or a device, and is read more than once";
                return Err(unread(std::io::Error::other(words)));
            }
            let bytes = std::fs::read(&path).map_err(unread)?;
            Ok(InputFile::new(&path, &bytes))
        };
        self.data_paths().into_iter().map(read).collect()
    }
}
