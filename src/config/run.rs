//! One run as a configuration describes it, and the model built from it.
//!
//! The tables are those of the parts themselves; this module only composes them, finds where each
//! offending key was written, and reads the table of carbon dioxide when one is named.

pub use super::fault::BuildError;
use super::fault::{Fault, PlacedFault};
use super::repair::is_doubtful;
use super::{ConfigError, Identity, InputFile, Tree, read_text};
use crate::forcing::carbon_dioxide::{CarbonDioxide, CarbonDioxideSpec};
use crate::forcing::drive::{Drive, DriveNumbers};
use crate::grid::calendar::MonthWeights;
use crate::grid::latitude::{LatitudeBands, Spacing};
use crate::model::Model;
use crate::model::clock::{Plan, TimeSpec, is_age};
use crate::orbit::solution::{Orbit, OrbitSpec};
use crate::physics::exchange::Exchange;
use crate::physics::surface::SurfaceSpec;
use crate::physics::{PhysicsSpec, RangeError, Ranges, Setting};
use crate::tables::{self, Columns};
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
        let doubtful = |f: &Fault| f.keys().iter().any(|key| is_doubtful(key, stand_ins));
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
    /// When the table of carbon dioxide cannot be read.
    pub fn inputs(&self) -> Result<Vec<InputFile>, ConfigError> {
        let mut files = self.tree.input_files().to_vec();
        files.extend(self.data()?);
        Ok(files)
    }

    /// What a run must have in common with this one to give the same numbers.
    ///
    /// # Errors
    /// When the table of carbon dioxide cannot be read.
    pub fn identity(&self) -> Result<Identity, ConfigError> {
        Ok(Identity::new(self.tree.resolved_toml()?, &self.data()?))
    }

    /// The data files besides the configuration.
    fn data(&self) -> Result<Vec<InputFile>, ConfigError> {
        let CarbonDioxideSpec::Table { path } = &self.run.co2 else {
            return Ok(Vec::new());
        };
        let path = self.folder.join(path);
        let text = read_text(&path)?;
        Ok(vec![InputFile::new(&path, text.as_bytes())])
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
        r.require(
            "grid.bands",
            bands as f64,
            bands <= MOST_BANDS && LatitudeBands::usable(bands),
            "must be a multiple of 4 from 12 to 288 (36 is 5 degrees; more than 288 need steps \
             shorter than a day near the poles)",
        );
        let steps = self.grid.steps_per_year;
        r.require(
            "grid.steps_per_year",
            steps as f64,
            self.steps_usable(),
            "must lie between 24 and 5000",
        );
        r.finish()
    }

    fn steps_usable(&self) -> bool {
        (STEPS_LIMIT.0..=STEPS_LIMIT.1).contains(&self.grid.steps_per_year)
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
        match &self.co2 {
            CarbonDioxideSpec::Constant { co2_ppm } => {
                let built = CarbonDioxide::constant(*co2_ppm);
                faults.take(built, Fault::CarbonDioxide)
            }
            CarbonDioxideSpec::Linear {
                from_kyr,
                from_ppm,
                to_kyr,
                to_ppm,
            } => {
                let built = CarbonDioxide::linear([*from_kyr, *from_ppm], [*to_kyr, *to_ppm]);
                faults.take_all(built, Fault::CarbonDioxide)
            }
            CarbonDioxideSpec::Table { path } => {
                let path = folder.join(path);
                let read = tables::read_columns(&path, &["age_kyr", "co2_ppm"]);
                let Columns { values, lines } = faults.take(read, Fault::Table)?;
                let mut values = values.into_iter();
                let (age, ppm) = (values.next()?, values.next()?);
                faults.take_all(CarbonDioxide::table(age, ppm), |error| {
                    Fault::in_table(error, &path, &lines)
                })
            }
        }
    }

    fn check_ages(&self, orbit: Option<&Orbit>, co2: Option<&CarbonDioxide>, faults: &mut Faults) {
        for (key, age) in [
            ("time.start_kyr", self.time.start_kyr),
            ("time.end_kyr", self.time.end_kyr),
        ] {
            // What is no age at all was told already.
            if !is_age(age) {
                continue;
            }
            if let Some(orbit) = orbit {
                let reached = orbit.check_range(age, age);
                faults.take(reached, |error| Fault::OrbitAge { key, error });
            }
            if let Some(co2) = co2 {
                faults.take(co2.at(age), |error| Fault::CarbonDioxideAge { key, error });
            }
        }
    }

    fn setting(&self, faults: &mut Faults) -> Option<Setting> {
        // Unusable numbers were told already; a huge one must not take all memory either.
        if !self.steps_usable() {
            return None;
        }
        let bands = LatitudeBands::new(self.grid.bands, self.grid.spacing).ok()?;
        let surface = faults.take_all(self.surface.build(&bands), Fault::Range);
        let months = MonthWeights::new(self.grid.steps_per_year).ok();
        Some(Setting {
            surface: surface?,
            months: months?,
        })
    }
}
