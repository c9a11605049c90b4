//! Which orbit a table is made for, as arguments.

use crate::experiment::orbit_source::{OrbitChoice, Solution};
use clap::ValueEnum;
use std::path::Path;

/// Names of the solutions.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum SolutionName {
    /// Own integration of the planets' motion, 5500 kyr before to 100 kyr after 1950
    Integrated,
    /// Series of Berger (1978), within 1000 kyr of 1950
    #[value(name = "berger1978")]
    Berger1978,
}

/// The choice that a name, or a configuration with edits, stands for; without either the
/// integrated solution.
pub(super) fn choice(
    solution: Option<SolutionName>,
    config: Option<&Path>,
    edits: &[String],
) -> OrbitChoice {
    match (config, solution) {
        (Some(file), _) => OrbitChoice::Configuration {
            file: file.to_owned(),
            edits: edits.to_vec(),
        },
        (None, Some(SolutionName::Berger1978)) => OrbitChoice::Solution(Solution::Berger1978),
        (None, Some(SolutionName::Integrated) | None) => {
            OrbitChoice::Solution(Solution::Integrated)
        }
    }
}
