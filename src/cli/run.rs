//! `orbicline run`: one transient run, and what came of it.

use super::CliError;
use super::attendant::{Attendant, Voice};
use super::{dry_run, figures};
use crate::config::Provenance;
use crate::config::run::Experiment;
use crate::experiment::single::{self, Begin, Destination, Outcome, SingleError};
use crate::experiment::summary::summarise;
use crate::output::Overwrite;
use clap::Args;
use std::num::NonZeroUsize;
use std::path::{Path, PathBuf};

/// Arguments of `orbicline run`.
#[derive(Debug, Args)]
#[command(after_help = "\
Examples:
  What it will cost, and every number it will use, without running:
    orbicline run configs/last_million_years.toml --dry-run
  A run of your own, one number changed:
    orbicline run configs/last_million_years.toml --out out/warm.nc --set co2.co2_ppm=300
  After Ctrl-C, SIGTERM, a crash or a full disk, the same words and --resume:
    orbicline run configs/last_million_years.toml --out out/warm.nc --set co2.co2_ppm=300 --resume

Beside FILE lie, while it runs, FILE.segNNNN.nc (complete records, readable) and FILE.log.
Exit status: 0 complete, 1 error, 2 wrong arguments, 128 + N stopped by signal N.")]
pub(super) struct RunArguments {
    /// Configuration (TOML); see configs/ for examples
    config: PathBuf,
    /// File to write [default: out/<name of the configuration>.nc]
    #[arg(long, value_name = "FILE")]
    out: Option<PathBuf>,
    /// Change one key of the configuration, such as time.end_kyr=0; may be repeated
    #[arg(long, value_name = "KEY=VALUE")]
    set: Vec<String>,
    /// Replace the file if it exists, and segments of an unfinished run beside it; with --resume the
    /// segments stay, and the complete file replaces an older one
    #[arg(long)]
    overwrite: bool,
    /// Go on with an unfinished run; begin it if there is none, do nothing if it is complete
    #[arg(long)]
    resume: bool,
    /// Print plan, cost and every number of the configuration (as TOML), and do not run
    #[arg(long)]
    dry_run: bool,
    /// Threads to use; the results do not depend on it [default: 2, the model and the writer]
    #[arg(long, value_name = "N", default_value = "2", hide_default_value = true)]
    threads: NonZeroUsize,
    #[command(flatten)]
    speech: Speech,
}

/// How much is said.
#[derive(Debug, Args)]
struct Speech {
    /// Print nothing but errors
    #[arg(long, conflicts_with = "verbose")]
    quiet: bool,
    /// Tell on standard error what happens; the log has it in any case
    #[arg(short, long)]
    verbose: bool,
}

impl Speech {
    fn voice(&self) -> Voice {
        match (self.quiet, self.verbose) {
            (true, _) => Voice::Quiet,
            (_, true) => Voice::Verbose,
            _ => Voice::Normal,
        }
    }
}

impl RunArguments {
    fn destination(&self) -> Destination {
        let named = self.out.clone();
        Destination {
            path: named.unwrap_or_else(|| single::default_output(&self.config)),
            overwrite: if self.overwrite {
                Overwrite::Replace
            } else {
                Overwrite::Refuse
            },
            begin: if self.resume {
                Begin::GoOn
            } else {
                Begin::Anew
            },
            threads: self.threads.get(),
        }
    }
}

pub(super) fn run(arguments: &RunArguments, words: &[String]) -> Result<(), CliError> {
    let experiment =
        Experiment::load(&arguments.config, &arguments.set).map_err(SingleError::from)?;
    let destination = arguments.destination();
    if arguments.dry_run {
        return dry_run::print(&experiment, &destination, words);
    }
    let voice = arguments.speech.voice();
    let command = Provenance::new(words, &[]).command_line;
    let mut attendant = Attendant::new(voice, &destination, &command)?;
    let outcome = single::run(&experiment, &destination, words, &mut attendant);
    let outcome = outcome.inspect_err(|error| attendant.log(&format!("error: {error}")))?;
    let stopped_by = attendant.received();
    if let Outcome::Stopped(kept) = &outcome {
        attendant.log(&format!("stopped: {kept}"));
    }
    drop(attendant);
    match outcome {
        Outcome::Complete(_) | Outcome::Already(_) if voice == Voice::Quiet => Ok(()),
        Outcome::Complete(file) => summary(&file),
        Outcome::Already(file) => {
            figures::already(&file)?;
            summary(&file)
        }
        Outcome::Stopped(kept) => Err(CliError::Stopped {
            signal: stopped_by.unwrap_or_default(),
            kept,
            command: going_on(words, destination.path.exists()),
        }),
    }
}

fn summary(file: &Path) -> Result<(), CliError> {
    Ok(figures::print(file, &summarise(file)?)?)
}

/// The command that goes on: the same words and --resume. With --overwrite the complete file may
/// replace an older one; where there is none, the word only frightens.
fn going_on(words: &[String], replaces: bool) -> String {
    let needed = |w: &&String| *w != "--resume" && (replaces || *w != "--overwrite");
    let mut words: Vec<String> = words.iter().filter(needed).cloned().collect();
    // What follows a bare `--` is no option.
    let end = words.iter().position(|w| w == "--").unwrap_or(words.len());
    words.insert(end, "--resume".to_owned());
    Provenance::new(&words, &[]).command_line
}
