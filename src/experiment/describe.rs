//! What a run file, or a segment of one, says about itself, without running anything.
//!
//! Everything is read from the file: attributes, the stored configuration, and the series of orbit,
//! carbon dioxide and heat ledger. The configuration is compared with the reference configuration
//! that this program was built with. Every number of the file is read once, so that damage shows.

mod configuration;

use super::resume;
use crate::config::Identity;
use crate::config::difference::{Difference, differences};
use crate::config::provenance::{COMMIT, VERSION};
use crate::output::reader::{RunFile, StoredVariable};
use crate::output::schema::{AGE, AGE_BOUNDS};
use crate::output::{OutputError, Result as OutputResult};
use configuration::StoredConfiguration;
use std::path::{Path, PathBuf};

/// The reference configuration of this program.
const REFERENCE: &str = include_str!("../../configs/reference.toml");

/// What a file says.
#[derive(Clone, Debug, PartialEq)]
pub struct Description {
    /// The file.
    pub path: PathBuf,
    /// What the run is, in a line.
    pub title: String,
    /// Its records.
    pub span: Span,
    /// M, years of orbit and ocean column in one seasonal year.
    pub slow_years: String,
    /// Latitude bands and steps in a year, as the configuration has them.
    pub grid: [Option<String>; 2],
    /// Names of the parts of the climate.
    pub components: Vec<String>,
    /// Who made it.
    pub origin: Origin,
    /// Keys that differ from the reference configuration, `title` left out: `first` is the value
    /// of the reference, `second` that of the file.
    pub differences: Vec<Difference>,
    /// Orbit and carbon dioxide.
    pub forcing: Vec<Forcing>,
    /// The heat ledger.
    pub heat: Option<Heat>,
    /// Parts of the state to go on from, with their number of values.
    pub restart: Vec<(String, usize)>,
    /// Size of the file, bytes.
    pub file_bytes: u64,
    /// All variables, in the order of the file.
    pub variables: Vec<StoredVariable>,
}

/// The records of a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Span {
    /// Older end of the first and younger end of the last, kyr before 1950.
    pub ages_kyr: [f64; 2],
    /// How many there are.
    pub records: u64,
    /// Length of the first, years.
    pub record_yr: f64,
    /// Whether these are all.
    pub part: Part,
}

/// How much of its run a file holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// All records.
    Complete,
    /// Records from `first` on (counted from 1), of `of`.
    Segment {
        /// Number of its first record.
        first: u64,
        /// Records of the run.
        of: u64,
    },
    /// The configuration has times that this program does not understand.
    Unknown,
}

/// Who made a file, from what.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Origin {
    /// Version of the program.
    pub version: String,
    /// Commit it was built from.
    pub commit: String,
    /// The commands that made it, first to last.
    pub commands: Vec<String>,
    /// SHA-256 of configuration and data, computed from the file.
    pub sha256: String,
    /// The same as the file gives it.
    pub stored_sha256: String,
    /// Files read, each with SHA-256 and path.
    pub inputs: Vec<(String, String)>,
}

impl Origin {
    /// Whether this program made it.
    pub fn is_this_program(&self) -> bool {
        self.version == VERSION && self.commit == COMMIT
    }
}

/// One of the things that drive the climate.
#[derive(Clone, Debug, PartialEq)]
pub struct Forcing {
    /// What it is.
    pub name: &'static str,
    /// Its unit.
    pub unit: &'static str,
    /// Digits after the point that tell it.
    pub digits: usize,
    /// Where it comes from, when the configuration gives it.
    pub source: Option<String>,
    /// Smallest and largest value in the file.
    pub range: [f64; 2],
}

/// The heat ledger.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Heat {
    /// Largest residual over all sunlight absorbed so far.
    pub largest_relative: f64,
    /// Residual at the end of the file, J.
    pub last_j: f64,
    /// Change of the heat on the planet from the first year to the end of the file, J.
    pub change_j: f64,
}

/// Why a file cannot be described.
#[derive(Debug, thiserror::Error)]
pub enum DescribeError {
    /// It cannot be read, or is none of this program.
    #[error(transparent)]
    Output(#[from] OutputError),
    /// Its configuration is damaged.
    #[error("{}: the attribute `configuration` is not TOML: {message}", path.display())]
    Configuration {
        /// The file.
        path: PathBuf,
        /// What the parser said.
        message: String,
    },
}

/// Variable, words, unit, digits, and the keys of the configuration that may give it.
const FORCING: [(&str, &str, &str, usize, Option<&str>); 8] = [
    (
        "eccentricity",
        "eccentricity",
        "",
        5,
        Some("orbit.eccentricity"),
    ),
    ("obliquity", "obliquity", "deg", 3, Some("orbit.obliquity")),
    (
        "perihelion_longitude",
        "perihelion",
        "deg",
        2,
        Some("orbit.perihelion"),
    ),
    ("climatic_precession", "climatic precession", "", 5, None),
    ("co2", "carbon dioxide", "ppm", 1, Some("co2")),
    (
        "mask_eccentricity",
        "eccentricity in the mask",
        "",
        5,
        Some("orbit_mask.orbit.eccentricity"),
    ),
    (
        "mask_obliquity",
        "obliquity in the mask",
        "deg",
        3,
        Some("orbit_mask.orbit.obliquity"),
    ),
    (
        "mask_perihelion_longitude",
        "perihelion in the mask",
        "deg",
        2,
        Some("orbit_mask.orbit.perihelion"),
    ),
];

/// Reads a file.
///
/// # Errors
/// When it is no run file, or is damaged.
pub fn describe(path: &Path) -> Result<Description, DescribeError> {
    let file = RunFile::open_unknown(path)?;
    // First, since it refuses variables that cannot be true before they are read.
    let variables = file.storage()?;
    file.read_all(&variables)?;
    let identity = resume::stored(&file)?;
    let not_toml = |message: &str| DescribeError::Configuration {
        path: path.to_owned(),
        message: message.trim().replace('\n', ", "),
    };
    let configuration =
        StoredConfiguration::parse(&identity.configuration).map_err(|e| not_toml(e.message()))?;
    let mut differences =
        differences(REFERENCE, &identity.configuration).map_err(|e| not_toml(e.message()))?;
    differences.retain(|d| d.key != "title");
    Ok(Description {
        path: path.to_owned(),
        title: file.global("title")?,
        span: span(&file, &configuration)?,
        slow_years: file.global("slow_years_per_seasonal_year")?,
        grid: ["grid.bands", "grid.steps_per_year"].map(|key| configuration.source(key)),
        components: configuration.keys("physics"),
        origin: origin(&file, identity)?,
        differences,
        forcing: forcing(&file, &configuration)?,
        heat: heat(&file)?,
        restart: file
            .restart()?
            .into_iter()
            .map(|(name, state)| (name, state.len()))
            .collect(),
        file_bytes: file.size_bytes(),
        variables,
    })
}

fn origin(file: &RunFile, identity: Identity) -> OutputResult<Origin> {
    let inputs = lines(&file.global("input_sha256")?);
    let inputs = inputs.iter().filter_map(|line| line.split_once("  "));
    Ok(Origin {
        commands: lines(&file.global("history")?),
        sha256: identity.sha256(),
        stored_sha256: file.global("configuration_sha256")?,
        inputs: inputs
            .map(|(hash, path)| (hash.to_owned(), path.to_owned()))
            .collect(),
        version: identity.version,
        commit: identity.commit,
    })
}

fn lines(text: &str) -> Vec<String> {
    text.lines().map(str::to_owned).collect()
}

fn span(file: &RunFile, configuration: &StoredConfiguration) -> OutputResult<Span> {
    let bounds = file.array(AGE_BOUNDS)?;
    let records = file.array(AGE)?.len();
    let shape = bounds.shape().to_vec();
    let bounds = bounds.into_raw_vec_and_offset().0;
    let (Some(&start), Some(&first_end), Some(&end), true) = (
        bounds.first(),
        bounds.get(1),
        bounds.last(),
        shape == [records, 2],
    ) else {
        return Err(OutputError::Shape {
            path: file.path().to_owned(),
            variable: AGE_BOUNDS.to_owned(),
            shape,
            needed: "two ages for each record",
        });
    };
    let (records, record_yr) = (records as u64, (start - first_end) * 1000.0);
    let part = configuration.plan().map_or(Part::Unknown, |plan| {
        let before = (plan.start_kyr() - start) * 1000.0 / record_yr;
        if records == plan.records() {
            Part::Complete
        } else {
            Part::Segment {
                first: 1 + whole(before),
                of: plan.records(),
            }
        }
    });
    Ok(Span {
        ages_kyr: [start, end],
        records,
        record_yr,
        part,
    })
}

/// The nearest whole number, 0 for what is negative or no number.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a cast from floating point saturates, which is what is meant"
)]
fn whole(number: f64) -> u64 {
    number.round() as u64
}

/// The values of a series, or none if the file does not have it.
fn series(file: &RunFile, variable: &str) -> OutputResult<Option<Vec<f64>>> {
    if file.variables().contains(&variable) {
        file.series(variable).map(|series| Some(series.values))
    } else {
        Ok(None)
    }
}

fn forcing(file: &RunFile, configuration: &StoredConfiguration) -> OutputResult<Vec<Forcing>> {
    let mut list = Vec::with_capacity(FORCING.len());
    for (variable, name, unit, digits, key) in FORCING {
        if let Some(values) = series(file, variable)? {
            let wider = |[low, high]: [f64; 2], v: &f64| [low.min(*v), high.max(*v)];
            let none = [f64::INFINITY, f64::NEG_INFINITY];
            list.push(Forcing {
                name,
                unit,
                digits,
                source: key.and_then(|key| configuration.source(key)),
                range: values.iter().fold(none, wider),
            });
        }
    }
    Ok(list)
}

fn heat(file: &RunFile) -> OutputResult<Option<Heat>> {
    let relative = series(file, "heat_residual_over_throughput")?;
    let (residual, change) = (series(file, "heat_residual")?, series(file, "heat_change")?);
    let (Some(relative), Some(residual), Some(change)) = (relative, residual, change) else {
        return Ok(None);
    };
    let last = |values: &[f64]| values.last().copied().unwrap_or(f64::NAN);
    Ok(Some(Heat {
        largest_relative: relative.iter().fold(0.0, |a: f64, b| a.max(b.abs())),
        last_j: last(&residual),
        change_j: last(&change),
    }))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_reference_does_not_differ_from_itself() {
        assert!(differences(REFERENCE, REFERENCE).unwrap().is_empty());
        let reference = StoredConfiguration::parse(REFERENCE).unwrap();
        assert!(reference.plan().is_some());
        for (.., key) in FORCING {
            let known = |k: &str| k.starts_with("orbit_mask") || reference.source(k).is_some();
            assert!(key.is_none_or(known), "{key:?}");
        }
    }

    #[test]
    fn numbers_of_records_are_whole() {
        assert_eq!([whole(63.9999), whole(-1.0), whole(f64::NAN)], [64, 0, 0]);
    }
}
