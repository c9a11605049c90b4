//! One run as a configuration describes it, and the model built from it.
//!
//! The tables are those of the parts themselves; this module only composes them, finds where each
//! offending key was written. The data files that it names are read in `data.rs`.

pub use super::fault::BuildError;
use super::fault::{Fault, PlacedFault};
use super::repair::is_doubtful;
use super::{ConfigError, Identity, InputFile, Tree};
use crate::forcing::carbon_dioxide::CarbonDioxideSpec;
use crate::forcing::land_ice::LandIceSpec;
use crate::forcing::mask::MaskSpec;
use crate::forcing::months::CalendarSpec;
use crate::grid::latitude::Spacing;
use crate::model::Model;
use crate::model::clock::{Plan, TimeSpec};
use crate::orbit::solution::OrbitSpec;
use crate::physics::surface::SurfaceSpec;
use crate::physics::{PhysicsSpec, Setting};
use serde::{Deserialize, Serialize};
use std::path::{Path, PathBuf};

/// Everything that defines a run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct RunSpec {
    /// What the run is, in a line.
    pub title: String,
    /// Times.
    pub time: TimeSpec,
    /// Resolution.
    pub grid: GridSpec,
    /// Orbital elements, each with its own source.
    pub orbit: OrbitSpec,
    /// Part of Earth and year that another orbit lights; none when not given.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub orbit_mask: Option<MaskSpec>,
    /// Sunlight.
    pub insolation: InsolationSpec,
    /// Months and the date of the March equinox.
    pub calendar: CalendarSpec,
    /// Carbon dioxide against age.
    pub co2: CarbonDioxideSpec,
    /// Its radiative forcing.
    pub co2_forcing: CarbonDioxideForcing,
    /// Northern land ice against age; none when not given.
    #[serde(default)]
    pub land_ice: LandIceSpec,
    /// Land and sea.
    pub surface: SurfaceSpec,
    /// The components.
    pub physics: PhysicsSpec,
}

/// Resolution in latitude and season.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct GridSpec {
    /// N, latitude bands from pole to pole, a multiple of 4.
    pub bands: usize,
    /// The coordinate in which they are equal.
    pub spacing: Spacing,
    /// Seasonal steps in a year.
    pub steps_per_year: usize,
}

/// Sunlight at the top of the atmosphere.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct InsolationSpec {
    /// S0, W m-2, at one semi-major axis from the sun.
    pub solar_constant_w_m2: f64,
    /// Years for which one table of insolation is used, with the orbit of their middle.
    pub refresh_every_yr: f64,
}

/// k ln(C/C_ref).
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CarbonDioxideForcing {
    /// `C_ref`, the concentration at which the longwave offset A holds, ppm.
    pub co2_reference_ppm: f64,
    /// k, W m-2.
    pub co2_forcing_w_m2: f64,
}

/// A run ready to go.
pub struct Built {
    /// The model, at its smooth start state.
    pub model: Model,
    /// The years to run.
    pub plan: Plan,
    /// The grid and the surface.
    pub setting: Setting,
}

/// A configuration: the tree of keys and the run it describes.
#[derive(Clone, Debug)]
pub struct Experiment {
    /// The merged keys, with their places.
    pub tree: Tree,
    /// The run.
    pub run: RunSpec,
    /// Folder of the file named by the user; paths in it are relative to this.
    folder: PathBuf,
}

impl Experiment {
    /// Reads a file with all it extends and the edits of the command line.
    ///
    /// # Errors
    /// When a file cannot be read; else all keys and values that are not what they should be, and
    /// with them all values out of range.
    pub fn load(file: &Path, edits: &[String]) -> Result<Self, ConfigError> {
        let mut tree = Tree::load(file)?;
        let edited = tree.set_all(edits);
        let read = tree.read();
        let folder = file.parent().map(Path::to_owned).unwrap_or_default();
        let experiment = |run| Self { tree, run, folder };
        match (edited.err(), read) {
            (None, Ok(run)) => Ok(experiment(run)),
            (Some(fault), Ok(run)) => Err(experiment(run).and_ranges(fault, &[])),
            (edit, Err(faulty)) => {
                let fault = match edit {
                    Some(edit) => ConfigError::several(edit, vec![faulty.fault]),
                    None => faulty.fault,
                };
                Err(match faulty.repaired {
                    Some(run) => experiment(run).and_ranges(fault, &faulty.stand_ins),
                    None => fault,
                })
            }
        }
    }

    /// A fault of reading together with all values out of range that do not come from stand-ins.
    fn and_ranges(&self, fault: ConfigError, stand_ins: &[String]) -> ConfigError {
        let doubtful = |f: &Fault| {
            let mut keys = f.keys().into_iter().chain(f.data_keys());
            keys.any(|key| is_doubtful(&key, stand_ins))
        };
        let mut found = self.run.build(&self.folder).err().unwrap_or_default();
        found.retain(|fault| !doubtful(fault));
        if found.is_empty() {
            return fault;
        }
        ConfigError::AndRanges {
            fault: Box::new(fault),
            ranges: self.all_placed(found),
        }
    }

    /// Checks all ranges and builds the model.
    ///
    /// # Errors
    /// All faults, each with the place of its key.
    pub fn build(&self) -> Result<Built, BuildError> {
        self.run
            .build(&self.folder)
            .map_err(|faults| self.all_placed(faults))
    }

    /// All files that define the run, with their hashes.
    ///
    /// # Errors
    /// When a data file cannot be read.
    pub fn inputs(&self) -> Result<Vec<InputFile>, ConfigError> {
        let mut files = self.tree.input_files().to_vec();
        files.extend(self.run.data(&self.folder)?);
        Ok(files)
    }

    /// What a run must have in common with this one to give the same numbers.
    ///
    /// # Errors
    /// When a data file cannot be read.
    pub fn identity(&self) -> Result<Identity, ConfigError> {
        Ok(Identity::new(
            self.tree.resolved_toml()?,
            &self.run.data(&self.folder)?,
        ))
    }

    fn all_placed(&self, faults: Vec<Fault>) -> BuildError {
        BuildError {
            faults: faults.into_iter().map(|fault| self.placed(fault)).collect(),
        }
    }

    fn placed(&self, fault: Fault) -> PlacedFault {
        let keys = fault.keys();
        let keys: Vec<_> = keys.iter().map(String::as_str).collect();
        PlacedFault {
            place: self.tree.latest_origin(&keys),
            fault,
        }
    }
}
