//! Where the orbit of a table comes from: a solution by name, or a configuration.
//!
//! What: the orbit itself, and what a reader of the table must know about it.
//! Units: kyr before 1950 CE.

use crate::config::run::{BuildError, Experiment};
use crate::config::{ConfigError, InputFile, Provenance};
use crate::orbit::integration::NOT_KNOWN;
use crate::orbit::solution::{
    EccentricitySource, ObliquitySource, Orbit, OrbitSpec, PerihelionSource,
};
use std::path::{Path, PathBuf};

/// A solution that gives all three elements.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Solution {
    /// The program's own integration of the planets' motion.
    Integrated,
    /// Series of Berger (1978).
    Berger1978,
}

/// What the user chose.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum OrbitChoice {
    /// All elements from one solution.
    Solution(Solution),
    /// Each element as a configuration says.
    Configuration {
        /// The file.
        file: PathBuf,
        /// Edits, `key.path=value`.
        edits: Vec<String>,
    },
}

/// An orbit that cannot be had.
#[derive(Debug, thiserror::Error)]
pub enum OrbitSourceError {
    /// The configuration cannot be read.
    #[error(transparent)]
    Config(#[from] ConfigError),
    /// The configuration has values out of range.
    #[error(transparent)]
    Build(#[from] BuildError),
    /// The solution cannot be used.
    #[error("{0}")]
    Solution(String),
}

/// An orbit with what there is to say about it.
#[derive(Debug)]
pub struct OrbitSource {
    /// The orbit.
    pub orbit: Orbit,
    /// The configuration, if it comes from one.
    pub experiment: Option<Experiment>,
    solution: String,
    not_known: Option<&'static str>,
    inputs: Vec<InputFile>,
}

impl OrbitChoice {
    /// Finds the orbit.
    ///
    /// # Errors
    /// When the configuration has faults, or the program's table is damaged.
    pub fn find(&self) -> Result<OrbitSource, OrbitSourceError> {
        match self {
            Self::Solution(solution) => solution.find(),
            Self::Configuration { file, edits } => configured(file, edits),
        }
    }
}

impl Solution {
    fn find(self) -> Result<OrbitSource, OrbitSourceError> {
        let (spec, solution, not_known) = match self {
            Self::Integrated => (
                OrbitSpec::integrated(),
                "integrated: the planets' motion from 5500 kyr before to 100 kyr after 1950, by \
                 Orbicline",
                Some(NOT_KNOWN),
            ),
            Self::Berger1978 => (
                OrbitSpec::berger1978(),
                "berger1978: series of Berger 1978, J. Atmos. Sci. 35:2362, within 1000 kyr of 1950",
                None,
            ),
        };
        let orbit = Orbit::build(&spec).map_err(|errors| {
            let lines: Vec<_> = errors.iter().map(ToString::to_string).collect();
            OrbitSourceError::Solution(lines.join("\n"))
        })?;
        Ok(OrbitSource {
            orbit,
            experiment: None,
            solution: solution.to_owned(),
            not_known,
            inputs: Vec::new(),
        })
    }
}

fn configured(file: &Path, edits: &[String]) -> Result<OrbitSource, OrbitSourceError> {
    let experiment = Experiment::load(file, edits)?;
    let orbit = experiment.build()?.model.drive().sources().orbit.clone();
    let spec = &experiment.run.orbit;
    let integrated = matches!(
        spec.eccentricity,
        EccentricitySource::Integrated {} | EccentricitySource::IntegratedTable { .. }
    ) || matches!(
        spec.obliquity,
        ObliquitySource::Integrated {} | ObliquitySource::IntegratedTable { .. }
    ) || matches!(
        spec.perihelion,
        PerihelionSource::Integrated {} | PerihelionSource::IntegratedTable { .. }
    );
    let elements = toml::to_string(spec).unwrap_or_default();
    Ok(OrbitSource {
        orbit,
        solution: format!("configuration {}\n{}", file.display(), elements.trim_end()),
        not_known: integrated.then_some(NOT_KNOWN),
        inputs: experiment.inputs()?,
        experiment: Some(experiment),
    })
}

impl OrbitSource {
    /// What a table from this orbit says about itself: names and texts. `command` is the command
    /// line, program first; `conventions` what its numbers mean.
    pub fn about(
        &self,
        title: &str,
        conventions: &str,
        command: &[String],
    ) -> Vec<(String, String)> {
        let provenance = Provenance::new(command, &self.inputs);
        let references = "Equations and their sources: module documentation of Orbicline";
        let own = [
            ("title", title),
            ("institution", "not given"),
            ("history", &provenance.command_line),
            ("references", references),
            ("comment", conventions),
            ("orbital_solution", &self.solution),
        ];
        let mut about: Vec<_> = own
            .into_iter()
            .chain(self.not_known.map(|text| ("not_known", text)))
            .map(|(name, text)| (name.to_owned(), text.to_owned()))
            .collect();
        let mut origin = provenance.attributes();
        // The command is in the history; without files there are no hashes.
        origin.retain(|(name, text)| name != "command_line" && !text.is_empty());
        about.extend(origin);
        about
    }
}
