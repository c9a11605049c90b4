//! A progress bar on standard error, only where a person looks at it.

use crate::model::clock::Plan;
use crate::orbit::integration;
use indicatif::{HumanDuration, ProgressBar, ProgressDrawTarget, ProgressState, ProgressStyle};
use std::fmt::Write;
use std::io::IsTerminal;

/// Years between two looks at the clock.
const BETWEEN_YR: f64 = 200.0;
/// Seasonal years of the spin-up between two looks at it.
const BETWEEN_SPIN_UP: u32 = 50;

/// Progress of one run.
pub(super) struct Bar {
    bar: ProgressBar,
    next_yr: f64,
}

/// Whether a bar may be shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Show {
    /// When standard error is a terminal.
    OnTerminal,
    /// Never.
    Never,
}

impl Bar {
    pub(super) fn new(show: Show) -> Self {
        Self {
            bar: hidden_unless_seen(show),
            next_yr: 0.0,
        }
    }

    /// The run begins.
    pub(super) fn begin(&mut self, plan: &Plan) {
        // The style first: a length alone draws the bar of the library.
        self.bar.set_style(style());
        self.bar.set_length(whole(plan.total_yr()));
        self.bar.set_message("spinning up");
        self.bar.tick();
    }

    /// So many seasonal years of the spin-up are done.
    pub(super) fn spun_up(&mut self, years: u32, of: u32) {
        if years.is_multiple_of(BETWEEN_SPIN_UP) {
            self.bar
                .set_message(format!("spinning up, {years} of {of}"));
            self.bar.tick();
        }
    }

    /// So many years have passed.
    pub(super) fn passed(&mut self, years: f64) {
        if years >= self.next_yr {
            if self.next_yr == 0.0 {
                self.bar.set_message("running");
                // A run that goes on did not compute what lies before.
                self.bar.set_position(whole(years));
                self.bar.reset_eta();
            }
            self.next_yr = years + BETWEEN_YR;
            self.bar.set_position(whole(years));
        }
    }

    /// All years are done; the file is being completed.
    pub(super) fn completing(&mut self) {
        self.bar.set_message("writing");
        self.bar.tick();
    }

    /// Does something that writes to the terminal, without the bar in its way.
    pub(super) fn aside<T>(&self, what: impl FnOnce() -> T) -> T {
        self.bar.suspend(what)
    }
}

/// A bar without length.
fn hidden_unless_seen(show: Show) -> ProgressBar {
    let visible = show == Show::OnTerminal && std::io::stderr().is_terminal();
    let target = if visible {
        ProgressDrawTarget::stderr()
    } else {
        ProgressDrawTarget::hidden()
    };
    ProgressBar::with_draw_target(None, target)
}

/// Progress of an integration of the orbit.
pub(super) struct YearsBar {
    bar: ProgressBar,
    next_yr: f64,
}

impl YearsBar {
    /// Years between two looks at the clock.
    const BETWEEN_YR: f64 = 5000.0;

    /// A bar with a word in front of it.
    pub(super) fn new(show: Show, message: &'static str) -> Self {
        let bar = hidden_unless_seen(show);
        bar.set_style(style());
        bar.set_message(message);
        Self { bar, next_yr: 0.0 }
    }
}

impl integration::Progress for YearsBar {
    fn passed(&mut self, years: f64, of_years: f64) {
        if years >= self.next_yr {
            self.next_yr = years + Self::BETWEEN_YR;
            self.bar.set_length(whole(of_years));
            self.bar.set_position(whole(years));
        }
    }
}

impl Drop for YearsBar {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}

/// Whole years of a positive number of them.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a positive number of years"
)]
fn whole(years: f64) -> u64 {
    years as u64
}

fn style() -> ProgressStyle {
    let rate = |state: &ProgressState, w: &mut dyn Write| {
        // Formatting into a buffer in memory cannot fail.
        // Nothing is known before the first years have passed.
        let _ = match state.per_sec() {
            rate if rate >= 1.0 => write!(w, "{rate:.0} years/s"),
            _ => Ok(()),
        };
    };
    let left = |state: &ProgressState, w: &mut dyn Write| {
        let _ = match state.per_sec() {
            rate if rate >= 1.0 => write!(w, "{} left", HumanDuration(state.eta())),
            _ => Ok(()),
        };
    };
    ProgressStyle::with_template("{msg} [{wide_bar}] {percent:>3} %  {rate}  {left}")
        .unwrap_or_else(|_| ProgressStyle::default_bar())
        .with_key("rate", rate)
        .with_key("left", left)
        .progress_chars("=> ")
}

impl Drop for Bar {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}
