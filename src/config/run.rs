//! One run as a configuration describes it, and the model built from it.
//!
//! The tables are those of the parts themselves; this module only composes them, finds where each
//! offending key was written, and reads the table of carbon dioxide when one is named.

use super::{ConfigError, InputFile, Place, Tree, read_text};
use crate::forcing::carbon_dioxide::{CarbonDioxide, CarbonDioxideError, CarbonDioxideSpec};
use crate::forcing::drive::{Drive, DriveNumbers};
use crate::grid::calendar::MonthWeights;
use crate::grid::latitude::{BandsError, LatitudeBands, Spacing};
use crate::model::Model;
use crate::model::clock::{Plan, PlanError, TimeSpec};
use crate::orbit::integration::ConstantsError;
use crate::orbit::solution::{Orbit, OrbitError, OrbitSpec};
use crate::physics::exchange::Exchange;
use crate::physics::surface::SurfaceSpec;
use crate::physics::{PhysicsSpec, RangeError, Ranges, Setting};
use crate::tables::{self, TableError};
use serde::{Deserialize, Serialize};
use std::path::{Path, PathBuf};

/// Fewest and most seasonal steps in a year. Below 24 the scheme was never measured; above 5000
/// nothing is gained.
const STEPS_LIMIT: (usize, usize) = (24, 5000);

/// Most latitude bands of a run: with 360, 72 steps a year break down in the narrow polar bands
/// (measured; 288 are fine).
const MOST_BANDS: usize = 288;

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
    /// Sunlight.
    pub insolation: InsolationSpec,
    /// Carbon dioxide against age.
    pub co2: CarbonDioxideSpec,
    /// Its radiative forcing.
    pub co2_forcing: CarbonDioxideForcing,
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

/// One thing wrong with a run.
#[derive(Debug, thiserror::Error)]
pub enum Fault {
    /// A parameter out of range.
    #[error(transparent)]
    Range(RangeError),
    /// The number of bands.
    #[error("grid.bands: {0}")]
    Bands(BandsError),
    /// Times that do not fit.
    #[error(transparent)]
    Plan(PlanError),
    /// The orbit.
    #[error(transparent)]
    Orbit(OrbitError),
    /// A constant of the integration of the orbit.
    #[error(transparent)]
    Constants(ConstantsError),
    /// Carbon dioxide.
    #[error(transparent)]
    CarbonDioxide(CarbonDioxideError),
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
    /// When a file, a key or a value is not what it should be.
    pub fn load(file: &Path, edits: &[String]) -> Result<Self, ConfigError> {
        let mut tree = Tree::load(file)?;
        for edit in edits {
            tree.set(edit)?;
        }
        let run = tree.typed()?;
        let folder = file.parent().map(Path::to_owned).unwrap_or_default();
        Ok(Self { tree, run, folder })
    }

    /// Checks all ranges and builds the model.
    ///
    /// # Errors
    /// All faults, each with the place of its key.
    pub fn build(&self) -> Result<Built, BuildError> {
        self.run.build(&self.folder).map_err(|faults| BuildError {
            faults: faults.into_iter().map(|fault| self.placed(fault)).collect(),
        })
    }

    /// All files that define the run, with their hashes.
    ///
    /// # Errors
    /// When the table of carbon dioxide cannot be read.
    pub fn inputs(&self) -> Result<Vec<InputFile>, ConfigError> {
        let mut files = self.tree.input_files().to_vec();
        if let CarbonDioxideSpec::Table { path } = &self.run.co2 {
            let path = self.folder.join(path);
            let text = read_text(&path)?;
            files.push(InputFile::new(&path, text.as_bytes()));
        }
        Ok(files)
    }

    fn placed(&self, fault: Fault) -> PlacedFault {
        let key = match &fault {
            Fault::Range(e) => e.key.as_str(),
            Fault::Constants(e) => e.key.as_str(),
            Fault::Bands(_) => "grid.bands",
            Fault::Grid(_) => "grid",
            Fault::Plan(PlanError::Backwards { .. }) => "time.start_kyr",
            Fault::Plan(PlanError::Zero { key } | PlanError::Pace { key, .. })
            | Fault::Needs { key, .. } => key,
            Fault::Plan(PlanError::Multiple { .. }) => "time.record_every_yr",
            Fault::Orbit(OrbitError::AgeOutOfRange { age_kyr, .. })
            | Fault::CarbonDioxide(CarbonDioxideError::OutOfRange { age_kyr, .. }) => {
                let started = age_kyr.to_bits() == self.run.time.start_kyr.to_bits();
                if started {
                    "time.start_kyr"
                } else {
                    "time.end_kyr"
                }
            }
            Fault::Orbit(_) => "orbit",
            Fault::CarbonDioxide(CarbonDioxideError::NotPositive { age_kyr: None, .. }) => {
                "co2.co2_ppm"
            }
            Fault::CarbonDioxide(_) => "co2",
            Fault::Table(_) => "co2.path",
        };
        let key = key.split([' ', '[']).next().unwrap_or(key);
        PlacedFault {
            place: self.tree.nearest_origin(key),
            fault,
        }
    }
}

/// Keeps what worked and collects what did not.
struct Faults(Vec<Fault>);

impl Faults {
    fn take<T, E>(&mut self, result: Result<T, E>, fault: impl Fn(E) -> Fault) -> Option<T> {
        result.map_err(|e| self.0.push(fault(e))).ok()
    }

    fn take_all<T, E>(
        &mut self,
        result: Result<T, Vec<E>>,
        fault: impl Fn(E) -> Fault,
    ) -> Option<T> {
        result
            .map_err(|all| self.0.extend(all.into_iter().map(fault)))
            .ok()
    }
}

impl RunSpec {
    /// Builds the model; `folder` is where relative paths start.
    fn build(&self, folder: &Path) -> Result<Built, Vec<Fault>> {
        let mut faults = Faults(Vec::new());
        let plan = faults.take_all(Plan::new(&self.time), Fault::Plan);
        faults.take_all(self.check_numbers(), Fault::Range);
        faults.0.extend(self.check_needs());
        let orbit = faults.take_all(Orbit::build(&self.orbit), Fault::Orbit);
        let co2 = self.carbon_dioxide(folder, &mut faults);
        self.check_ages(orbit.as_ref(), co2.as_ref(), &mut faults);
        let setting = self.setting(&mut faults);
        let mut exchange = Exchange::new(setting.as_ref().map_or(0, |s| s.surface.bands.len()));
        if setting.is_none() {
            faults.take_all(self.physics.check(), Fault::Range);
        }
        let components = setting
            .as_ref()
            .and_then(|s| faults.take_all(self.physics.build(s, &mut exchange), Fault::Range));
        let (Some(plan), Some(orbit), Some(co2), Some(setting), Some(components)) =
            (plan, orbit, co2, setting, components)
        else {
            return Err(faults.0);
        };
        let numbers = DriveNumbers {
            solar_constant_w_m2: self.insolation.solar_constant_w_m2,
            refresh_yr: self.insolation.refresh_every_yr,
            co2_reference_ppm: self.co2_forcing.co2_reference_ppm,
            co2_forcing_w_m2: self.co2_forcing.co2_forcing_w_m2,
            end_kyr: self.time.end_kyr,
        };
        let edges = setting.surface.bands.edge_sine();
        let drive = Drive::new(orbit, co2, numbers, edges, setting.steps_per_year());
        match faults.take(drive, |e| Fault::Grid(e.to_string())) {
            Some(drive) if faults.0.is_empty() => Ok(Built {
                model: Model::new(components, exchange, drive),
                plan,
                setting,
            }),
            _ => Err(faults.0),
        }
    }

    fn check_numbers(&self) -> Result<(), Vec<RangeError>> {
        let mut r = Ranges::default();
        let sun = self.insolation.solar_constant_w_m2;
        let limit = "must lie between 500 and 3000 W m-2";
        r.require(
            "insolation.solar_constant_w_m2",
            sun,
            (500.0..=3000.0).contains(&sun),
            limit,
        );
        let refresh = self.insolation.refresh_every_yr;
        let limit = "must lie between 1 and 1000 years";
        r.require(
            "insolation.refresh_every_yr",
            refresh,
            (1.0..=1000.0).contains(&refresh),
            limit,
        );
        r.positive(
            "co2_forcing.co2_reference_ppm",
            self.co2_forcing.co2_reference_ppm,
        );
        r.not_negative(
            "co2_forcing.co2_forcing_w_m2",
            self.co2_forcing.co2_forcing_w_m2,
        );
        let bands = self.grid.bands;
        let limit = "more than 288 bands need steps shorter than a day near the poles";
        r.require("grid.bands", bands as f64, bands <= MOST_BANDS, limit);
        let steps = self.grid.steps_per_year;
        let usable = (STEPS_LIMIT.0..=STEPS_LIMIT.1).contains(&steps);
        r.require(
            "grid.steps_per_year",
            steps as f64,
            usable,
            "must lie between 24 and 5000",
        );
        r.finish()
    }

    fn check_needs(&self) -> Vec<Fault> {
        let p = &self.physics;
        let wanted = [
            (
                "physics",
                "physics.energy_balance",
                p.energy_balance.is_some(),
            ),
            (
                "physics.equatorial_pacific",
                "physics.ocean_column",
                p.equatorial_pacific.is_none() || p.ocean_column.is_some(),
            ),
        ];
        let missing = wanted.into_iter().filter(|(.., there)| !there);
        missing
            .map(|(key, needs, _)| Fault::Needs { key, needs })
            .collect()
    }

    fn carbon_dioxide(&self, folder: &Path, faults: &mut Faults) -> Option<CarbonDioxide> {
        let built = match &self.co2 {
            CarbonDioxideSpec::Constant { co2_ppm } => CarbonDioxide::constant(*co2_ppm),
            CarbonDioxideSpec::Linear {
                from_kyr,
                from_ppm,
                to_kyr,
                to_ppm,
            } => CarbonDioxide::table(vec![*to_kyr, *from_kyr], vec![*to_ppm, *from_ppm]),
            CarbonDioxideSpec::Table { path } => {
                let read = tables::read_columns(&folder.join(path), &["age_kyr", "co2_ppm"]);
                let mut columns = faults.take(read, Fault::Table)?.into_iter();
                let (age, ppm) = (
                    columns.next().unwrap_or_default(),
                    columns.next().unwrap_or_default(),
                );
                CarbonDioxide::table(age, ppm)
            }
        };
        faults.take(built, Fault::CarbonDioxide)
    }

    fn check_ages(&self, orbit: Option<&Orbit>, co2: Option<&CarbonDioxide>, faults: &mut Faults) {
        let (start, end) = (self.time.start_kyr, self.time.end_kyr);
        if let Some(orbit) = orbit {
            faults.take(orbit.check_range(start, end), Fault::Orbit);
        }
        if let Some(co2) = co2 {
            for age in [start, end] {
                faults.take(co2.at(age), Fault::CarbonDioxide);
            }
        }
    }

    fn setting(&self, faults: &mut Faults) -> Option<Setting> {
        let bands = LatitudeBands::new(self.grid.bands, self.grid.spacing);
        let bands = faults.take(bands, Fault::Bands)?;
        let surface = faults.take_all(self.surface.build(&bands), Fault::Range);
        let months = MonthWeights::new(self.grid.steps_per_year);
        let months = faults.take(months, |e| Fault::Grid(e.to_string()));
        Some(Setting {
            surface: surface?,
            months: months?,
        })
    }
}
