//! `orbicline orbit`: orbital solutions as files.

use super::CliError;
use super::bar::{Show, YearsBar};
use crate::experiment::orbit::{self, Integration, IntegrationSummary};
use crate::output::Overwrite;
use clap::{ArgGroup, Args};
use std::io::Write;
use std::path::PathBuf;

/// Arguments of `orbicline orbit`.
#[derive(Debug, Args)]
#[command(
    after_help = "Example, the table inside this program (about two minutes):\n  \
                  orbicline orbit --integrate --from-kyr 5500 --to-kyr -100 --out integrated.table",
    group = ArgGroup::new("origin").required(true)
)]
pub(super) struct OrbitArguments {
    /// Compute the orbit from the motion of the planets
    #[arg(long, group = "origin")]
    integrate: bool,
    /// Older end, kyr before 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true)]
    from_kyr: f64,
    /// Younger end, kyr before 1950; negative after 1950
    #[arg(long, value_name = "AGE", allow_negative_numbers = true)]
    to_kyr: f64,
    /// File to write; .csv for elements as text, .table for the exact form, both every kyr
    #[arg(long, value_name = "FILE")]
    out: PathBuf,
    /// Constants of the integration that differ from configs/orbit_constants.toml (TOML)
    #[arg(long, value_name = "FILE", requires = "integrate")]
    constants: Option<PathBuf>,
    /// Change one constant, such as tide.scale=0.9 for a tide 10 % weaker
    #[arg(long, value_name = "KEY=VALUE", requires = "integrate")]
    set: Vec<String>,
    /// Replace the file if it exists
    #[arg(long)]
    overwrite: bool,
    /// Print nothing but errors
    #[arg(long)]
    quiet: bool,
}

pub(super) fn run(arguments: &OrbitArguments) -> Result<(), CliError> {
    let wanted = Integration {
        constants: arguments.constants.clone(),
        edits: arguments.set.clone(),
        from_kyr: arguments.from_kyr,
        to_kyr: arguments.to_kyr,
    };
    let overwrite = if arguments.overwrite {
        Overwrite::Replace
    } else {
        Overwrite::Refuse
    };
    let show = if arguments.quiet {
        Show::Never
    } else {
        Show::OnTerminal
    };
    let mut bar = YearsBar::new(show, "planets");
    let summary = orbit::integrate(&wanted, &arguments.out, overwrite, &mut bar)?;
    drop(bar);
    if !arguments.quiet {
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
