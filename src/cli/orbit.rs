//! `orbicline orbit`: the orbit against age, as a table.

use super::CliError;
use super::bar::{Show, YearsBar};
use super::orbit_choice::{SolutionName, choice};
use super::table::Destination;
use crate::experiment::ages::AgeRange;
use crate::experiment::orbit::{self, Integration, IntegrationSummary};
use crate::experiment::orbit_table;
use clap::{ArgGroup, Args};
use std::io::Write;
use std::path::{Path, PathBuf};

/// Arguments of `orbicline orbit`.
#[derive(Debug, Args)]
#[command(
    after_help = "\
Examples:
  The last million years, every thousand years, on the terminal:
    orbicline orbit --from-kyr 1000 --to-kyr 0 --step-kyr 1
  The same after Berger (1978), as NetCDF:
    orbicline orbit --solution berger1978 --from-kyr 1000 --to-kyr 0 --step-kyr 1 --out orbit.nc
  The orbit of an experiment, each element from its own source:
    orbicline orbit --config configs/obliquity_only.toml --from-kyr 500 --to-kyr 0 --step-kyr 1
  The table inside this program, computed anew (about two minutes):
    orbicline orbit --integrate --from-kyr 5500 --to-kyr -100 --out integrated.table

With --integrate, FILE ends in .csv or .table (the exact form) and holds every kyr.",
    group = ArgGroup::new("origin"),
    group = ArgGroup::new("edited").multiple(true)
)]
pub(super) struct OrbitArguments {
    /// Orbital solution [default: integrated]
    #[arg(long, value_name = "NAME", group = "origin")]
    solution: Option<SolutionName>,
    /// The orbit that a configuration describes
    #[arg(long, value_name = "FILE", groups = ["origin", "edited"])]
    config: Option<PathBuf>,
    /// Compute the orbit anew from the motion of the planets
    #[arg(long, groups = ["origin", "edited"], requires = "out", conflicts_with = "step_kyr")]
    integrate: bool,
    /// Older end, kyr before 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true)]
    from_kyr: f64,
    /// Younger end, kyr before 1950; negative after 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true)]
    to_kyr: f64,
    /// Distance between two ages, kyr
    #[arg(
        long,
        value_name = "KYR",
        allow_negative_numbers = true,
        required_unless_present = "integrate"
    )]
    step_kyr: Option<f64>,
    /// Constants of the integration that differ from configs/orbit_constants.toml (TOML)
    #[arg(long, value_name = "FILE", requires = "integrate")]
    constants: Option<PathBuf>,
    /// Change one key of the configuration or one constant of the integration, such as
    /// tide.scale=0.9 for a tide 10 % weaker
    #[arg(long, value_name = "KEY=VALUE", requires = "edited")]
    set: Vec<String>,
    #[command(flatten)]
    destination: Destination,
}

pub(super) fn run(arguments: &OrbitArguments, words: &[String]) -> Result<(), CliError> {
    match (&arguments.destination.out, arguments.step_kyr) {
        (Some(out), None) => integrate(arguments, out),
        (_, step_kyr) => tabulate(arguments, step_kyr, words),
    }
}

fn tabulate(
    arguments: &OrbitArguments,
    step_kyr: Option<f64>,
    words: &[String],
) -> Result<(), CliError> {
    let ages = AgeRange {
        from_kyr: arguments.from_kyr,
        to_kyr: arguments.to_kyr,
        step_kyr: step_kyr.unwrap_or(1.0),
    };
    let (solution, config) = (arguments.solution, arguments.config.as_deref());
    let choice = choice(solution, config, &arguments.set);
    let table = || Ok(orbit_table::tabulate(&choice, ages, words)?);
    arguments.destination.fill(table, orbit_table::draw)
}

fn integrate(arguments: &OrbitArguments, out: &Path) -> Result<(), CliError> {
    let wanted = Integration {
        constants: arguments.constants.clone(),
        edits: arguments.set.clone(),
        from_kyr: arguments.from_kyr,
        to_kyr: arguments.to_kyr,
    };
    let show = if arguments.destination.quiet {
        Show::Never
    } else {
        Show::OnTerminal
    };
    let mut bar = YearsBar::new(show, "planets");
    let summary = orbit::integrate(&wanted, out, arguments.destination.overwrite(), &mut bar)?;
    drop(bar);
    if !arguments.destination.quiet {
        print(&summary)?;
    }
    Ok(())
}

fn print(summary: &IntegrationSummary) -> Result<(), std::io::Error> {
    let mut out = std::io::stdout().lock();
    let [old, young] = summary.range_kyr;
    writeln!(out, "{}", summary.path.display())?;
    writeln!(
        out,
        "{old} to {young} kyr before 1950, every kyr; largest relative change of the planets' \
         energy {:.1e}",
        summary.energy_error
    )?;
    writeln!(out, "{}", summary.not_known)
}
