//! `orbicline run`: one transient run, and what came of it.

use super::CliError;
use super::progress::{Bar, Show};
use crate::config::run::Experiment;
use crate::experiment::single::{self, Destination, SingleError};
use crate::experiment::summary::{KeyFigure, Summary, summarise};
use crate::output::writer::Overwrite;
use clap::Args;
use std::io::Write;
use std::num::NonZeroUsize;
use std::path::{Path, PathBuf};

/// Arguments of `orbicline run`.
#[derive(Debug, Args)]
#[command(
    after_help = "Example:\n  orbicline run configs/last_million_years.toml --out out/lmy.nc --set co2.co2_ppm=300"
)]
pub(super) struct RunArguments {
    /// Configuration (TOML); see configs/ for examples
    config: PathBuf,
    /// File to write [default: out/<name of the configuration>.nc]
    #[arg(long, value_name = "FILE")]
    out: Option<PathBuf>,
    /// Change one key of the configuration, such as time.end_kyr=0
    #[arg(long, value_name = "KEY=VALUE")]
    set: Vec<String>,
    /// Replace the file if it exists, and segments of an unfinished run beside it
    #[arg(long)]
    overwrite: bool,
    /// Threads to use; the results do not depend on it [default: 2, the model and the writer]
    #[arg(long, value_name = "N", default_value = "2", hide_default_value = true)]
    threads: NonZeroUsize,
    /// Print nothing but errors
    #[arg(long)]
    quiet: bool,
}

pub(super) fn run(arguments: &RunArguments, words: &[String]) -> Result<(), CliError> {
    let experiment =
        Experiment::load(&arguments.config, &arguments.set).map_err(SingleError::from)?;
    let path = arguments
        .out
        .clone()
        .unwrap_or_else(|| single::default_output(&arguments.config));
    let destination = Destination {
        path,
        overwrite: if arguments.overwrite {
            Overwrite::Replace
        } else {
            Overwrite::Refuse
        },
        threads: arguments.threads.get(),
    };
    let show = if arguments.quiet {
        Show::Never
    } else {
        Show::OnTerminal
    };
    let mut bar = Bar::new(show);
    let file = single::run(&experiment, &destination, words, &mut bar)?;
    drop(bar);
    if !arguments.quiet {
        print(&file, &summarise(&file)?)?;
    }
    Ok(())
}

/// The path, the key figures, and how to open the file.
fn print(file: &Path, summary: &Summary) -> Result<(), std::io::Error> {
    let mut out = std::io::stdout().lock();
    let [old, young] = summary.ages_kyr;
    let [least, most] = summary.co2_ppm;
    let records = if summary.records == 1 {
        "record"
    } else {
        "records"
    };
    writeln!(out, "{}", file.display())?;
    writeln!(
        out,
        "{} {records}, {old:.3} to {young:.3} kyr before 1950; carbon dioxide {least:.0} to {most:.0} ppm",
        summary.records
    )?;
    writeln!(
        out,
        "M = {} (years of orbit and ocean column per seasonal year)",
        summary.slow_years
    )?;
    writeln!(
        out,
        "heat: largest residual {:.1e} of the sunlight absorbed",
        summary.heat_residual
    )?;
    writeln!(out)?;
    row(
        &mut out,
        ["", "mean", "range", "per degree", "Dec to June", ""],
    )?;
    row(&mut out, ["", "", "", "of tilt*", "perihelion*", ""])?;
    for figure in &summary.figures {
        line(&mut out, figure)?;
    }
    writeln!(
        out,
        "* slopes of a least-squares fit on tilt, precession (at eccentricity 0.05) and eccentricity;"
    )?;
    writeln!(
        out,
        "  told for runs of two tilt cycles or more with constant carbon dioxide"
    )?;
    writeln!(out)?;
    writeln!(out, "Open it in Python:")?;
    writeln!(out, "  import xarray")?;
    writeln!(
        out,
        "  run = xarray.open_dataset({:?})",
        file.display().to_string()
    )
}

fn line(out: &mut impl Write, figure: &KeyFigure) -> Result<(), std::io::Error> {
    let signed = |value: Option<f64>| value.map_or_else(|| "-".to_owned(), |v| format!("{v:+.3}"));
    let [low, high] = figure.range;
    let (mean, range) = if figure.mean.is_finite() {
        (
            format!("{:.3}", figure.mean),
            format!("{low:.3} to {high:.3}"),
        )
    } else {
        ("none".to_owned(), "-".to_owned())
    };
    let (tilt, perihelion) = (
        signed(figure.per_degree_tilt),
        signed(figure.december_to_june),
    );
    row(
        out,
        [figure.name, &mean, &range, &tilt, &perihelion, figure.unit],
    )
}

fn row(out: &mut impl Write, cells: [&str; 6]) -> Result<(), std::io::Error> {
    let [name, mean, range, tilt, perihelion, unit] = cells;
    let text = format!("{name:<33} {mean:>9} {range:>21} {tilt:>11} {perihelion:>12}  {unit}");
    writeln!(out, "{}", text.trim_end())
}
