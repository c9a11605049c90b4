//! One transient run from a configuration into a file.

use super::background::{Delivery, Sink};
use crate::config::run::{BuildError, Built, Experiment};
use crate::config::{ConfigError, Provenance};
use crate::grid::calendar::Calendar;
use crate::grid::column::ColumnLevels;
use crate::model::clock::Plan;
use crate::model::observer::{Observer, Restart};
use crate::model::records::model_variables;
use crate::model::{Model, RunError};
use crate::output::OutputError;
use crate::output::schema::{AxisValues, FixedField, Schema};
use crate::output::writer::{Overwrite, RunWriter};
use crate::physics::Setting;
use crate::series::Record;
use std::path::{Path, PathBuf};

/// A run that failed.
#[derive(Debug, thiserror::Error)]
pub enum SingleError {
    /// The configuration cannot be read.
    #[error(transparent)]
    Config(#[from] ConfigError),
    /// The configuration makes no model.
    #[error(transparent)]
    Build(#[from] BuildError),
    /// The file could not be written.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// The model could not go on.
    #[error("{0}")]
    Run(String),
}

/// Who follows a run.
pub trait Progress {
    /// The run begins: what it covers and how many years.
    fn begin(&mut self, plan: &Plan);
    /// So many years have passed.
    fn passed(&mut self, years: f64);
    /// All years are done; the file is being completed.
    fn completing(&mut self);
}

/// Where and how a run is written.
#[derive(Clone, Debug)]
pub struct Destination {
    /// The file.
    pub path: PathBuf,
    /// What to do when it exists.
    pub overwrite: Overwrite,
    /// Threads that may be used; results do not depend on it.
    pub threads: usize,
}

/// Runs an experiment and returns the path of the finished file.
///
/// # Errors
/// When the configuration, the model or the file fail; segments written so far stay on disk.
pub fn run(
    experiment: &Experiment,
    destination: &Destination,
    arguments: &[String],
    progress: &mut dyn Progress,
) -> Result<PathBuf, SingleError> {
    let Built {
        mut model,
        plan,
        setting,
    } = experiment.build()?;
    let schema = schema(experiment, &model, &setting, arguments)?;
    let writer = RunWriter::create(&destination.path, schema, destination.overwrite)?;
    let told = |e: RunError<Stopped>| SingleError::Run(e.to_string());
    progress.begin(&plan);
    model
        .spin_up(plan.start_kyr(), experiment.run.time.spin_up)
        .map_err(told)?;
    let mut watch = Watch {
        sink: Sink::new(writer, destination.threads),
        progress,
    };
    let outcome = model.run(&plan, &mut watch);
    let Watch { sink, progress } = watch;
    match outcome {
        Ok(()) => {
            progress.completing();
            let path = sink.finish()?;
            path.ok_or_else(|| SingleError::Run("the writer stopped before the end".to_owned()))
        }
        Err(error) => {
            // The writer's own error, if it has one, is the cause and not the consequence.
            sink.give_up()?;
            Err(match error {
                RunError::Observer(Stopped::Writer(error)) => error.into(),
                other => told(other),
            })
        }
    }
}

/// Why the observer stopped a run.
#[derive(Debug, thiserror::Error)]
enum Stopped {
    #[error(transparent)]
    Writer(OutputError),
    #[error("the writer stopped")]
    WriterGone,
}

/// Passes records to the file and years to whoever follows.
struct Watch<'a> {
    sink: Sink,
    progress: &'a mut dyn Progress,
}

impl Observer for Watch<'_> {
    type Error = Stopped;

    fn record(&mut self, record: &Record, restart: &dyn Fn() -> Restart) -> Result<(), Stopped> {
        match self.sink.push(record, restart()).map_err(Stopped::Writer)? {
            Delivery::Taken => Ok(()),
            Delivery::WriterGone => Err(Stopped::WriterGone),
        }
    }

    fn passed(&mut self, years: f64) -> Result<(), Stopped> {
        self.progress.passed(years);
        Ok(())
    }
}

/// The table of everything in the file.
fn schema(
    experiment: &Experiment,
    model: &Model,
    setting: &Setting,
    arguments: &[String],
) -> Result<Schema, SingleError> {
    let run = &experiment.run;
    let levels =
        run.physics.ocean_column.as_ref().and_then(|p| {
            ColumnLevels::new(p.levels.count, p.levels.depth_m, p.levels.first_m).ok()
        });
    let coast = run
        .physics
        .equatorial_pacific
        .as_ref()
        .map(|p| &p.coast.coastal_latitudes_deg);
    let axes = AxisValues {
        by_latitude: fixed(setting),
        latitude_edges_deg: setting.surface.bands.edge_deg().to_vec(),
        depth_edges_m: levels.map(|l| l.edge_m().to_vec()).unwrap_or_default(),
        month_edges_year: Calendar.month_bounds_fraction().to_vec(),
        month_lengths_day: Calendar.month_lengths_days().to_vec(),
        coastal_latitudes_deg: coast.cloned().unwrap_or_default(),
    };
    let mut variables = model_variables();
    variables.extend(model.components().iter().flat_map(|c| c.variables()));
    Ok(Schema {
        axes,
        variables,
        global: global(experiment, arguments)?,
    })
}

/// What weights and masks need: area, land fraction and elevation of the bands.
fn fixed(setting: &Setting) -> Vec<FixedField> {
    let surface = &setting.surface;
    let field = |name, units, long_name, standard_name, values: &[f64]| FixedField {
        name,
        units,
        long_name,
        standard_name,
        values: values.to_vec(),
    };
    let (area, land) = (surface.bands.area_m2(), &surface.land_fraction);
    let height = &surface.land_elevation_m;
    vec![
        field("band_area", "m2", "area of the band", "cell_area", area),
        field(
            "land_fraction",
            "1",
            "land fraction",
            "land_area_fraction",
            land,
        ),
        field(
            "land_elevation",
            "m",
            "mean elevation of the land",
            "surface_altitude",
            height,
        ),
    ]
}

fn global(
    experiment: &Experiment,
    arguments: &[String],
) -> Result<Vec<(String, String)>, SingleError> {
    let provenance = Provenance::new(arguments, &experiment.inputs()?);
    let slow = experiment.run.time.slow_years_per_seasonal_year;
    let steps = experiment.run.grid.steps_per_year;
    let texts = [
        ("title", experiment.run.title.clone()),
        ("institution", "not given".to_owned()),
        ("history", provenance.command_line.clone()),
        ("references", "equations and sources: the module documentation of Orbicline; numbers and sources: the attribute configuration".to_owned()),
        ("comment", format!(
            "A zonal energy-balance climate with a tropical ocean column, for hypotheses about orbital forcing; not for forecasts, design or safety decisions. Ages are kyr before 1950 CE, records are means over age_bnds. One seasonal year stands for {slow} year(s) of orbit and ocean column (M = {slow}); {steps} steps a year."
        )),
        ("slow_years_per_seasonal_year", slow.to_string()),
        ("configuration", experiment.tree.resolved_toml()?),
    ];
    let texts = texts.map(|(name, text)| (name.to_owned(), text));
    Ok(texts.into_iter().chain(provenance.attributes()).collect())
}

/// The name a run gets when none is given: the configuration's own, in the folder `out`.
pub fn default_output(configuration: &Path) -> PathBuf {
    let stem = configuration.file_stem().unwrap_or_default();
    Path::new("out").join(stem).with_extension("nc")
}
