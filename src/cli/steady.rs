//! `orbicline steady`: the repeating seasonal cycle under held forcing.

use super::CliError;
use super::bar::{Bar, Show};
use super::signals::Signals;
use crate::config::run::Experiment;
use crate::experiment::follow::{Event, Follower};
use crate::experiment::steady::{self, Cycle, Start, SteadyError, Target};
use crate::model::steady::Search;
use crate::output::Overwrite;
use clap::{Args, ValueEnum};
use std::io::Write;
use std::ops::ControlFlow;
use std::path::PathBuf;

/// Arguments of `orbicline steady`.
#[derive(Debug, Args)]
#[command(after_help = "\
Examples:
  The present day in balance:
    orbicline steady configs/present_day.toml
  Does a frozen planet thaw, at 127 kyr before 1950 and 280 ppm?
    orbicline steady configs/reference.toml --from cold --set time.start_kyr=127 --set time.end_kyr=126

The forcing is held at time.start_kyr. A state that was not found is never written: the command
fails instead. Exit status: 0 found, 1 error, 2 wrong arguments.")]
pub(super) struct SteadyArguments {
    /// Configuration (TOML); see configs/ for examples
    config: PathBuf,
    /// File to write, of one record; only the figures are printed without it
    #[arg(long, value_name = "FILE")]
    out: Option<PathBuf>,
    /// Change one key of the configuration; may be repeated
    #[arg(long, value_name = "KEY=VALUE")]
    set: Vec<String>,
    /// Where the search begins, which decides where there are several balances
    #[arg(long, value_enum, default_value_t = From::Config)]
    from: From,
    /// Largest error of any temperature, K
    #[arg(long, value_name = "K", default_value_t = 1e-3)]
    tolerance_k: f64,
    /// Seasonal years after which to give up
    #[arg(long, value_name = "N", default_value_t = 5000)]
    most_years: u32,
    /// Replace the file if it exists
    #[arg(long)]
    overwrite: bool,
    /// Print nothing but errors
    #[arg(long)]
    quiet: bool,
}

/// Where the search begins.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum From {
    /// Where the configuration says
    Config,
    /// From a frozen planet
    Cold,
    /// From a planet without ice
    Warm,
}

pub(super) fn run(arguments: &SteadyArguments, words: &[String]) -> Result<(), CliError> {
    let load = |edits: &[String]| Experiment::load(&arguments.config, edits);
    let start = match arguments.from {
        From::Config => Start::Configured,
        From::Cold => Start::Cold,
        From::Warm => Start::Warm,
    };
    let mut edits = arguments.set.clone();
    edits.extend(start.edits());
    let experiment = load(&edits).map_err(SteadyError::from)?;
    let search = Search::new(arguments.tolerance_k, arguments.most_years)
        .map_err(|e| SteadyError::Run(e.to_string()))?;
    let target = arguments.out.as_deref().map(|path| Target {
        path,
        overwrite: if arguments.overwrite {
            Overwrite::Replace
        } else {
            Overwrite::Refuse
        },
    });
    let mut attendant = Attendant::new(arguments.quiet)?;
    let cycle = steady::steady(&experiment, search, target, words, &mut attendant)?;
    drop(attendant);
    if arguments.quiet {
        return Ok(());
    }
    Ok(print(&cycle)?)
}

fn print(cycle: &Cycle) -> Result<(), std::io::Error> {
    let mut out = std::io::stdout().lock();
    if let Some(file) = &cycle.file {
        writeln!(out, "{}", file.display())?;
    }
    writeln!(
        out,
        "found in {} seasonal years; estimated error {:.1e} K (the last year changed {:.1e} K)",
        cycle.steady.years, cycle.steady.error_k, cycle.steady.change_k
    )?;
    writeln!(out)?;
    for (name, value, units) in &cycle.figures {
        let value = match value.abs() {
            _ if !value.is_finite() => "none".to_owned(),
            size if size >= 1e5 || (size > 0.0 && size < 1e-3) => format!("{value:.4e}"),
            _ => format!("{value:.4}"),
        };
        writeln!(out, "{name:<36} {value:>12}  {units}")?;
    }
    Ok(())
}

/// Shows a bar, and passes on the wish to stop.
struct Attendant {
    bar: Bar,
    signals: Signals,
}

impl Attendant {
    fn new(quiet: bool) -> Result<Self, std::io::Error> {
        let show = if quiet { Show::Never } else { Show::OnTerminal };
        Ok(Self {
            bar: Bar::new(show),
            signals: Signals::listen()?,
        })
    }
}

impl Follower for Attendant {
    fn told(&mut self, _: &Event) {}

    fn spun_up(&mut self, years: u32, of: u32) -> ControlFlow<()> {
        self.bar.spun_up(years, of);
        self.passed(f64::from(years))
    }

    fn passed(&mut self, _: f64) -> ControlFlow<()> {
        match self.signals.received() {
            Some(_) => ControlFlow::Break(()),
            None => ControlFlow::Continue(()),
        }
    }
}
