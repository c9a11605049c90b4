//! The command line: the only part that prints.

mod attendant;
mod bar;
mod describe;
mod dry_run;
mod figures;
mod orbit;
mod run;
mod signals;
mod steady;

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
    /// Find the repeating seasonal cycle under held forcing
    Steady(steady::SteadyArguments),
    /// Tell what a run file is: what made it, how it differs from the reference, its sizes
    Describe(describe::DescribeArguments),
    /// Compute the orbit from the motion of the planets into a table
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
        Command::Orbit(arguments) => orbit::run(&arguments),
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
