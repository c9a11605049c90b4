//! What can be wrong with a run although all its keys can be read, and where each was written.

use super::Place;
use crate::forcing::carbon_dioxide::CarbonDioxideError;
use crate::forcing::land_ice::LandIceError;
use crate::forcing::mask::MaskError;
use crate::forcing::months::CalendarError;
use crate::model::clock::PlanError;
use crate::orbit::integration::ConstantsError;
use crate::orbit::solution::OrbitError;
use crate::orbit::solution::orbit_table::TableFault;
use crate::physics::RangeError;
use crate::tables::TableError;
use std::path::{Path, PathBuf};

/// One thing wrong with a run.
#[derive(Debug, thiserror::Error)]
pub enum Fault {
    /// A parameter out of range.
    #[error(transparent)]
    Range(RangeError),
    /// Times that do not fit.
    #[error(transparent)]
    Plan(PlanError),
    /// The orbit.
    #[error(transparent)]
    Orbit(OrbitError),
    /// A constant of the integration of the orbit.
    #[error(transparent)]
    Constants(ConstantsError),
    /// The mask of another orbit.
    #[error(transparent)]
    Mask(MaskError),
    /// The calendar.
    #[error(transparent)]
    Calendar(CalendarError),
    /// Carbon dioxide.
    #[error(transparent)]
    CarbonDioxide(CarbonDioxideError),
    /// An age that the orbit does not reach.
    #[error("{error}")]
    OrbitAge {
        /// The key of the age.
        key: &'static str,
        /// What the orbit says.
        error: OrbitError,
    },
    /// An age that carbon dioxide does not reach.
    #[error("{error}")]
    CarbonDioxideAge {
        /// The key of the age.
        key: &'static str,
        /// What is given.
        error: CarbonDioxideError,
    },
    /// Land ice.
    #[error(transparent)]
    LandIce(LandIceError),
    /// An age that the table of land ice does not reach.
    #[error("{error}")]
    LandIceAge {
        /// The key of the age.
        key: &'static str,
        /// What is given.
        error: LandIceError,
    },
    /// A row of the table of carbon dioxide.
    #[error("co2.path: {}:{line}: {error}", path.display())]
    Row {
        /// The table.
        path: PathBuf,
        /// Line in it, from 1.
        line: u64,
        /// What is wrong there.
        error: CarbonDioxideError,
    },
    /// A table that cannot be read.
    #[error("{table}.path: {error}")]
    Table {
        /// The table of the configuration that declares it, such as `orbit.obliquity`.
        table: String,
        /// What is wrong.
        error: TableError,
    },
    /// A table of an integrated orbit.
    #[error("{table}.path: {}: {error}", path.display())]
    OrbitTable {
        /// The table of the configuration that names it.
        table: String,
        /// The file.
        path: PathBuf,
        /// What is wrong.
        error: TableFault,
    },
    /// A part that needs another.
    #[error("{key} needs {needs}: add its table, or `extends` a file that has it")]
    Needs {
        /// The part.
        key: &'static str,
        /// What it needs.
        needs: &'static str,
    },
    /// Insolation bands or months.
    #[error("grid: {0}")]
    Grid(String),
}

impl Fault {
    /// What is wrong with a table, with the line of its row.
    pub(super) fn in_table(error: CarbonDioxideError, path: &Path, lines: &[u64]) -> Self {
        match error {
            CarbonDioxideError::Concentration { row, .. }
            | CarbonDioxideError::Order { row, .. } => Self::Row {
                path: path.to_owned(),
                line: lines.get(row).copied().unwrap_or_default(),
                error,
            },
            _ => Self::CarbonDioxide(error),
        }
    }

    /// Keys of tables of data without which this would not be wrong.
    pub(super) fn data_keys(&self) -> Vec<String> {
        match self {
            Self::OrbitAge {
                error: OrbitError::AgeOutOfRange { element, .. },
                ..
            } => ["orbit", "orbit_mask.orbit"]
                .map(|orbit| format!("{orbit}.{element}.path"))
                .to_vec(),
            Self::CarbonDioxideAge { .. } => vec!["co2.path".to_owned()],
            Self::LandIceAge { .. } => vec!["land_ice.path".to_owned()],
            _ => Vec::new(),
        }
    }

    /// The key that is wrong, or those that do not fit together.
    pub(super) fn keys(&self) -> Vec<String> {
        let keys = match self {
            // Behind the key may stand which of its properties is meant.
            Self::Range(e) => vec![e.key.split(' ').next().unwrap_or(&e.key)],
            Self::Plan(error) => error.keys(),
            Self::OrbitAge { key, .. }
            | Self::CarbonDioxideAge { key, .. }
            | Self::LandIceAge { key, .. }
            | Self::Needs { key, .. } => vec![*key],
            Self::Orbit(error) => return orbit_keys("orbit", error),
            Self::Constants(e) => vec![e.key.as_str()],
            Self::Mask(MaskError::Value { key, .. }) => return vec![format!("orbit_mask.{key}")],
            Self::Mask(MaskError::Orbit(error)) => {
                return orbit_keys("orbit_mask.orbit", error);
            }
            Self::Mask(MaskError::Everywhere) => vec!["orbit_mask"],
            Self::Calendar(_) => vec!["calendar.equinox_day"],
            Self::CarbonDioxide(error) => match error {
                CarbonDioxideError::Concentration { key, .. } => vec![*key],
                CarbonDioxideError::Backwards { .. } => vec!["co2.from_kyr", "co2.to_kyr"],
                _ => vec!["co2"],
            },
            Self::Row { .. } => vec!["co2.path"],
            Self::LandIce(LandIceError::Row { .. }) => {
                vec!["land_ice.path", "land_ice.column", "land_ice.angle_unit"]
            }
            Self::LandIce(_) => vec!["land_ice.edge_deg"],
            Self::Table { table, error } => return below(table, declared_keys(error)),
            Self::OrbitTable { table, .. } => return below(table, &["path"]),
            Self::Grid(_) => vec!["grid"],
        };
        keys.into_iter().map(str::to_owned).collect()
    }
}

/// Keys of a table of the configuration.
fn below(table: &str, keys: &[&str]) -> Vec<String> {
    keys.iter().map(|key| format!("{table}.{key}")).collect()
}

/// The keys below `table` that are wrong about an orbit, or do not fit together.
fn orbit_keys(table: &str, error: &OrbitError) -> Vec<String> {
    match error {
        OrbitError::Value { key, .. } => below(table, &[key.split(' ').next().unwrap_or(key)]),
        OrbitError::Row { element, .. } => {
            let keys: &[_] = match *element {
                "eccentricity" => &["path", "column"],
                _ => &["path", "column", "angle_unit"],
            };
            below(&format!("{table}.{element}"), keys)
        }
        _ => vec![table.to_owned()],
    }
}

/// The keys of a declared table with which its content does not fit together.
fn declared_keys(error: &TableError) -> &'static [&'static str] {
    match error {
        TableError::Column { .. } => &["path", "layout"],
        TableError::Order { .. } => &["path", "age_order", "age_direction"],
        TableError::Gap { .. } => &["path", "age_unit", "largest_gap_kyr"],
        _ => &["path"],
    }
}

/// Keeps what worked and collects what did not.
#[derive(Debug, Default)]
pub(super) struct Faults(Vec<Fault>);

impl Faults {
    /// The value, or the fault noted.
    pub(super) fn take<T, E>(
        &mut self,
        result: Result<T, E>,
        fault: impl Fn(E) -> Fault,
    ) -> Option<T> {
        result.map_err(|error| self.add([fault(error)])).ok()
    }

    /// The value, or all faults noted.
    pub(super) fn take_all<T, E>(
        &mut self,
        result: Result<T, Vec<E>>,
        fault: impl Fn(E) -> Fault,
    ) -> Option<T> {
        let noted = |errors: Vec<E>| self.add(errors.into_iter().map(fault));
        result.map_err(noted).ok()
    }

    /// Notes faults; not those that only repeat that a file could not be read.
    pub(super) fn add(&mut self, faults: impl IntoIterator<Item = Fault>) {
        let told = |fault: &Fault| {
            let (Fault::Orbit(error) | Fault::Mask(MaskError::Orbit(error))) = fault else {
                return false;
            };
            matches!(error, OrbitError::NotRead { .. })
        };
        self.0
            .extend(faults.into_iter().filter(|fault| !told(fault)));
    }

    /// Whether none was noted.
    pub(super) fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// All faults.
    pub(super) fn into_all(self) -> Vec<Fault> {
        self.0
    }
}

/// A fault with the place where its key was written.
#[derive(Debug)]
pub struct PlacedFault {
    /// The place, when the key has one.
    pub place: Option<Place>,
    /// What is wrong.
    pub fault: Fault,
}

/// A run that cannot be built; all faults at once.
#[derive(Debug, thiserror::Error)]
#[error("{}", lines(faults))]
pub struct BuildError {
    /// The faults, in the order of the configuration.
    pub faults: Vec<PlacedFault>,
}

fn lines(faults: &[PlacedFault]) -> String {
    let line = |f: &PlacedFault| match &f.place {
        Some(place) => format!("{place}: {}", f.fault),
        None => f.fault.to_string(),
    };
    faults.iter().map(line).collect::<Vec<_>>().join("\n")
}
