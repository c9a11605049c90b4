//! Follows a run for the person at the terminal: bar, messages, log, and the wish to stop.

use super::bar::{Bar, Show};
use super::signals::Signals;
use crate::config::provenance::{COMMIT, VERSION};
use crate::experiment::follow::{Event, Follower};
use crate::experiment::single::Destination;
use crate::output::OutputError;
use crate::output::journal::Journal;
use std::io::{IsTerminal, Write};
use std::ops::ControlFlow;

/// How much is said on standard error.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Voice {
    /// Errors only.
    Quiet,
    /// Warnings; on a terminal also the cost and a bar.
    Normal,
    /// Everything that happens.
    Verbose,
}

/// The follower of `orbicline run`.
pub(super) struct Attendant {
    voice: Voice,
    bar: Bar,
    journal: Journal,
    command: String,
    signals: Signals,
}

impl Attendant {
    /// Starts to listen to signals.
    ///
    /// # Errors
    /// If the system refuses.
    pub(super) fn new(
        voice: Voice,
        destination: &Destination,
        command: &str,
    ) -> Result<Self, std::io::Error> {
        let show = match voice {
            Voice::Quiet => Show::Never,
            Voice::Normal | Voice::Verbose => Show::OnTerminal,
        };
        Ok(Self {
            voice,
            bar: Bar::new(show),
            journal: Journal::beside(&destination.path),
            command: command.to_owned(),
            signals: Signals::listen()?,
        })
    }

    /// The number of the signal that asked the run to stop, if one did.
    pub(super) fn received(&self) -> Option<u8> {
        self.signals.received()
    }

    /// Writes to the log.
    pub(super) fn log(&mut self, text: &str) {
        let written = self.journal.note(text);
        self.told_trouble(written);
    }

    fn open_log(&mut self) {
        let opened = self.journal.open();
        self.told_trouble(opened);
        let command = self.command.clone();
        self.log(&format!("{command}\nOrbicline {VERSION} ({COMMIT})"));
    }

    /// A log that cannot be written is told once and does not stop a run.
    fn told_trouble(&self, outcome: Result<(), OutputError>) {
        if let Err(trouble) = outcome {
            self.warn(&format!("{trouble}; the run goes on without it"));
        }
    }

    fn warn(&self, text: &str) {
        if self.voice != Voice::Quiet {
            self.say(&format!("warning: {text}"));
        }
    }

    fn say(&self, text: &str) {
        // Nothing can be done when even standard error is closed.
        let write = || writeln!(std::io::stderr(), "{text}");
        let _ = self.bar.aside(write);
    }

    /// Whether an event is for standard error.
    fn is_said(&self, event: &Event) -> bool {
        match self.voice {
            Voice::Quiet => false,
            Voice::Verbose => true,
            Voice::Normal => match event {
                Event::Estimated(estimate) => {
                    estimate.exceeds_disk() || std::io::stderr().is_terminal()
                }
                Event::GoesOn { .. } | Event::NothingToGoOnWith => std::io::stderr().is_terminal(),
                _ => false,
            },
        }
    }
}

impl Follower for Attendant {
    fn told(&mut self, event: &Event) {
        match event {
            Event::Begins { plan, .. } => {
                self.open_log();
                self.bar.begin(plan);
            }
            Event::Completing => self.bar.completing(),
            _ => {}
        }
        self.log(&event.to_string());
        if self.is_said(event) {
            match event {
                Event::Estimated(e) if e.exceeds_disk() => self.warn(&e.to_string()),
                _ => self.say(&event.to_string()),
            }
        }
    }

    fn spun_up(&mut self, years: u32, of: u32) -> ControlFlow<()> {
        self.bar.spun_up(years, of);
        self.wish()
    }

    fn passed(&mut self, years: f64) -> ControlFlow<()> {
        self.bar.passed(years);
        self.wish()
    }
}

impl Attendant {
    fn wish(&self) -> ControlFlow<()> {
        match self.signals.received() {
            Some(_) => ControlFlow::Break(()),
            None => ControlFlow::Continue(()),
        }
    }
}
