//! What the file of a run holds: its table of variables, axes and attributes.
//!
//! Source: CF Conventions 1.11 for the attributes; where the numbers come from is told by the
//! configuration, which is stored whole.

use super::resume::DATA;
use crate::config::run::Experiment;
use crate::config::{ConfigError, Provenance};
use crate::forcing::drive::Sources;
use crate::grid::calendar::Calendar;
use crate::grid::column::ColumnLevels;
use crate::model::Model;
use crate::model::records::model_variables;
use crate::output::schema::{AxisValues, FixedField, MonthCells, Schema};
use crate::physics::Setting;

/// The commands that made a file.
#[derive(Clone, Debug)]
pub(super) struct History<'a> {
    /// Those before, one to a line; empty for a run in one go.
    pub(super) earlier: String,
    /// The words of this one, the program's name first.
    pub(super) command: &'a [String],
}

/// The table of everything in the file.
///
/// # Errors
/// When a file of the configuration cannot be read again.
pub(super) fn schema(
    experiment: &Experiment,
    model: &Model,
    setting: &Setting,
    history: &History<'_>,
) -> Result<Schema, ConfigError> {
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
    let sources = model.drive().sources();
    let axes = AxisValues {
        by_latitude: fixed(setting, sources),
        latitude_edges_deg: setting.surface.bands.edge_deg().to_vec(),
        depth_edges_m: levels.map(|l| l.edge_m().to_vec()).unwrap_or_default(),
        months: if sources.months.move_with_the_orbit() {
            MonthCells::OfRecord
        } else {
            MonthCells::Fixed {
                edges_year: Calendar.month_bounds_fraction().to_vec(),
                lengths_day: Calendar.month_lengths_days().to_vec(),
            }
        },
        coastal_latitudes_deg: coast.cloned().unwrap_or_default(),
    };
    let mut variables = model_variables(sources);
    variables.extend(model.components().iter().flat_map(|c| c.variables()));
    Ok(Schema {
        axes,
        variables,
        global: global(experiment, history)?,
    })
}

/// What weights and masks need: area, land fraction and elevation of the bands.
fn fixed(setting: &Setting, sources: &Sources) -> Vec<FixedField> {
    let surface = &setting.surface;
    let field = |name, units, long_name, standard_name, values: &[f64]| FixedField {
        name,
        units,
        long_name,
        standard_name,
        values: values.to_vec(),
    };
    let (area, land) = (surface.bands.area_m2(), &surface.land_fraction);
    let (height, share) = (&surface.land_elevation_m, Some("land_area_fraction"));
    let altitude = Some("surface_altitude");
    let mut fields = vec![
        field(
            "band_area",
            "m2",
            "area of the band",
            Some("cell_area"),
            area,
        ),
        field("land_fraction", "1", "land fraction", share, land),
        field(
            "land_elevation",
            "m",
            "mean elevation of the land",
            altitude,
            height,
        ),
    ];
    if let Some(mask) = &sources.mask {
        let words = "weight of the mask of another orbit by latitude, before the season's";
        let weight = mask.latitude_weight();
        fields.push(field("mask_latitude_weight", "1", words, None, weight));
    }
    fields
}

fn global(
    experiment: &Experiment,
    history: &History<'_>,
) -> Result<Vec<(String, String)>, ConfigError> {
    let provenance = Provenance::new(history.command, &experiment.inputs()?);
    let identity = experiment.identity()?;
    let mut lines: Vec<&str> = history.earlier.lines().collect();
    // A run that was killed and went on many times by the same command says so once.
    if lines.last() != Some(&provenance.command_line.as_str()) {
        lines.push(&provenance.command_line);
    }
    let slow = experiment.run.time.slow_years_per_seasonal_year;
    let steps = experiment.run.grid.steps_per_year;
    let texts = [
        ("title", experiment.run.title.clone()),
        ("institution", "not given".to_owned()),
        ("history", lines.join("\n")),
        ("references", "equations and sources: the module documentation of Orbicline; numbers and sources: the attribute configuration".to_owned()),
        ("comment", format!(
            "A zonal energy-balance climate with a tropical ocean column, for hypotheses about orbital forcing; not for forecasts, design or safety decisions. Ages are kyr before 1950 CE, records are means over age_bnds. One seasonal year stands for {slow} year(s) of orbit and ocean column (M = {slow}); {steps} steps a year."
        )),
        ("slow_years_per_seasonal_year", slow.to_string()),
        ("configuration_sha256", identity.sha256()),
        ("configuration", identity.configuration),
    ];
    let data = (!identity.data.is_empty()).then_some((DATA, identity.data));
    let texts = texts.into_iter().chain(data);
    let texts = texts.map(|(name, text)| (name.to_owned(), text));
    Ok(texts.chain(provenance.attributes()).collect())
}
