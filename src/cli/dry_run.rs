//! What a run would do: plan, cost and resolved configuration, as TOML with comments in front, so
//! that what is printed is itself a configuration.

use super::CliError;
use crate::config::run::Experiment;
use crate::experiment::single::{self, Destination, SingleError};
use crate::output::claim::{Found, survey};
use std::io::Write;

pub(super) fn print(
    experiment: &Experiment,
    destination: &Destination,
    words: &[String],
) -> Result<(), CliError> {
    let (plan, estimate) = single::estimate(experiment, destination, words)?;
    let identity = experiment.identity().map_err(SingleError::from)?;
    let spin_up = experiment.run.time.spin_up;
    let estimate = match estimate {
        Ok(estimate) => estimate.to_string(),
        Err(error) => format!("no estimate: {error}"),
    };
    let mut out = std::io::stdout().lock();
    writeln!(out, "# {plan}")?;
    writeln!(
        out,
        "# before it a spin-up: {} seasonal years with the column {} times faster, then {} with nothing faster",
        spin_up.seasonal_yr, spin_up.slow_years_per_seasonal_year, spin_up.settling_yr
    )?;
    writeln!(out, "# {estimate}")?;
    let path = destination.path.display();
    match survey(&destination.path) {
        Found::Nothing => writeln!(out, "# output {path}")?,
        Found::Output => writeln!(out, "# output {path}, which exists already")?,
        Found::Segments(count) => writeln!(
            out,
            "# output {path}, with {count} segments of an unfinished run beside it (--resume goes on)"
        )?,
    }
    writeln!(out, "# threads {}", destination.threads)?;
    writeln!(
        out,
        "# SHA-256 of configuration and data {}",
        identity.sha256()
    )?;
    writeln!(
        out,
        "# Paths are relative to the folder of the file that was read."
    )?;
    write!(out, "\n{}", identity.configuration)?;
    Ok(())
}
