//! What can be wrong with a run although all its keys can be read, and where each was written.

use super::Place;
use crate::forcing::carbon_dioxide::CarbonDioxideError;
use crate::forcing::mask::MaskError;
use crate::forcing::months::CalendarError;
use crate::model::clock::PlanError;
use crate::orbit::integration::ConstantsError;
use crate::orbit::solution::OrbitError;
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
    /// The table of carbon dioxide.
    #[error("co2.path: {0}")]
    Table(TableError),
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

    /// The key that is wrong, or those that do not fit together.
    pub(super) fn keys(&self) -> Vec<String> {
        let keys = match self {
            // Behind the key may stand which of its properties is meant.
            Self::Range(e) => vec![e.key.split(' ').next().unwrap_or(&e.key)],
            Self::Plan(error) => error.keys(),
            Self::OrbitAge { key, .. }
            | Self::CarbonDioxideAge { key, .. }
            | Self::Needs { key, .. } => vec![*key],
            Self::Orbit(OrbitError::Value { key, .. }) => {
                let key = key.split(' ').next().unwrap_or(key);
                return vec![format!("orbit.{key}")];
            }
            Self::Orbit(_) => vec!["orbit"],
            Self::Constants(e) => vec![e.key.as_str()],
            Self::Mask(MaskError::Value { key, .. }) => return vec![format!("orbit_mask.{key}")],
            Self::Mask(MaskError::Orbit(OrbitError::Value { key, .. })) => {
                let key = key.split(' ').next().unwrap_or(key);
                return vec![format!("orbit_mask.orbit.{key}")];
            }
            Self::Mask(_) => vec!["orbit_mask"],
            Self::Calendar(_) => vec!["calendar.equinox_day"],
            Self::CarbonDioxide(error) => match error {
                CarbonDioxideError::Concentration { key, .. } => vec![*key],
                CarbonDioxideError::Backwards { .. } => vec!["co2.from_kyr", "co2.to_kyr"],
                _ => vec!["co2"],
            },
            Self::Row { .. } | Self::Table(_) => vec!["co2.path"],
            Self::Grid(_) => vec!["grid"],
        };
        keys.into_iter().map(str::to_owned).collect()
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
