//! The command line: the only part that prints.

mod attendant;
mod bar;
mod describe;
mod dry_run;
mod figures;
mod insolation;
mod lists;
mod orbit;
mod orbit_choice;
mod run;
mod signals;
mod steady;
mod table;

use clap::{Parser, Subcommand};
use std::io::Write;
use std::process::ExitCode;

/// How the command line is understood; see `orbicline --help`.
#[derive(Debug, Parser)]
#[command(
    name = "orbicline",
    version,
    about,
    max_term_width = 100,
    arg_required_else_help = true,
    after_help = "\
Examples:
  The last million years, about a minute:
    orbicline run configs/last_million_years.toml
  What a run of your own would cost and use:
    orbicline run my.toml --dry-run
  Insolation at 65N and the June solstice over the last million years:
    orbicline insolation daily --latitude 65 --sun-longitude 90 --from-kyr 1000 --to-kyr 0 --step-kyr 1

Configurations begin with `extends = \"reference.toml\"` and give only what differs; ages are kyr
before 1950. The model is for testing hypotheses; it makes no forecasts."
)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Run a transient climate into a NetCDF-4 file
    Run(run::RunArguments),
    /// Tabulate or draw insolation: daily, monthly, of seasons, of caloric half-years, annual
    Insolation(insolation::InsolationArguments),
    /// Find the repeating seasonal cycle under held forcing
    Steady(steady::SteadyArguments),
    /// Tell what a run file is: what made it, how it differs from the reference, its sizes
    Describe(describe::DescribeArguments),
    /// Tabulate the orbit against age, or compute it anew from the motion of the planets
    Orbit(orbit::OrbitArguments),
}

/// Parses the arguments, does what they ask, prints an error if there is one.
pub fn main() -> ExitCode {
    let words: Vec<String> = std::env::args_os()
        .map(|w| w.to_string_lossy().into_owned())
        .collect();
    let command = Arguments::parse().command;
    let outcome = match signals::tell_size_limits() {
        Ok(()) => carry_out(command, &words),
        Err(error) => Err(error.into()),
    };
    match outcome {
        Ok(()) => ExitCode::SUCCESS,
        // Whoever read the output has seen enough; the file is complete.
        Err(CliError::Print(e)) if e.kind() == std::io::ErrorKind::BrokenPipe => ExitCode::SUCCESS,
        Err(CliError::Stopped {
            signal,
            kept,
            command,
        }) => {
            // As below.
            let _ = writeln!(
                std::io::stderr(),
                "stopped: {kept}; go on with\n  {command}"
            );
            ExitCode::from(128 + signal)
        }
        Err(error) => {
            // Nothing can be done when even standard error is closed.
            let _ = writeln!(std::io::stderr(), "error: {error}");
            ExitCode::FAILURE
        }
    }
}

fn carry_out(command: Command, words: &[String]) -> Result<(), CliError> {
    match command {
        Command::Run(arguments) => run::run(&arguments, words),
        Command::Steady(arguments) => steady::run(&arguments, words),
        Command::Describe(arguments) => describe::run(&arguments),
        Command::Insolation(arguments) => insolation::run(&arguments, words),
        Command::Orbit(arguments) => orbit::run(&arguments, words),
    }
}

/// What a command can end with.
#[derive(Debug, thiserror::Error)]
enum CliError {
    #[error(transparent)]
    Single(#[from] crate::experiment::single::SingleError),
    #[error(transparent)]
    Steady(#[from] crate::experiment::steady::SteadyError),
    #[error(transparent)]
    Describe(#[from] crate::experiment::describe::DescribeError),
    #[error(transparent)]
    Orbit(#[from] crate::experiment::orbit::OrbitCommandError),
    #[error(transparent)]
    OrbitTable(#[from] crate::experiment::orbit_table::OrbitTableError),
    #[error(transparent)]
    Insolation(#[from] crate::experiment::insolation::InsolationError),
    #[error(transparent)]
    Destination(#[from] crate::experiment::destination::DestinationError),
    #[error(transparent)]
    Output(#[from] crate::output::OutputError),
    #[error("stopped: {kept}")]
    Stopped {
        /// Number of the signal.
        signal: u8,
        /// What is kept.
        kept: crate::experiment::single::Kept,
        /// The command that goes on.
        command: String,
    },
    #[error("cannot print: {0}")]
    Print(#[from] std::io::Error),
}
