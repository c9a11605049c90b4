//! A progress bar on standard error, only where a person looks at it.

use crate::experiment::single::Progress;
use crate::model::clock::Plan;
use indicatif::{HumanDuration, ProgressBar, ProgressDrawTarget, ProgressState, ProgressStyle};
use std::fmt::Write;
use std::io::IsTerminal;

/// Years between two looks at the clock.
const BETWEEN_YR: f64 = 200.0;

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
        let visible = show == Show::OnTerminal && std::io::stderr().is_terminal();
        let target = if visible {
            ProgressDrawTarget::stderr()
        } else {
            ProgressDrawTarget::hidden()
        };
        Self {
            bar: ProgressBar::with_draw_target(None, target),
            next_yr: 0.0,
        }
    }
}

fn style() -> ProgressStyle {
    let rate = |state: &ProgressState, w: &mut dyn Write| {
        // Formatting into a buffer in memory cannot fail.
        let _ = write!(w, "{:.0} years/s", state.per_sec());
    };
    let left = |state: &ProgressState, w: &mut dyn Write| {
        let _ = write!(w, "{} left", HumanDuration(state.eta()));
    };
    ProgressStyle::with_template("{msg} [{wide_bar}] {percent:>3} %  {rate}  {left}")
        .unwrap_or_else(|_| ProgressStyle::default_bar())
        .with_key("rate", rate)
        .with_key("left", left)
        .progress_chars("=> ")
}

impl Progress for Bar {
    fn begin(&mut self, plan: &Plan) {
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "a positive number of years"
        )]
        self.bar.set_length(plan.total_yr() as u64);
        self.bar.set_style(style());
        self.bar.set_message("spinning up");
        self.bar.tick();
    }

    fn passed(&mut self, years: f64) {
        if years >= self.next_yr {
            if self.next_yr == 0.0 {
                self.bar.set_message("running");
                self.bar.reset_eta();
            }
            self.next_yr = years + BETWEEN_YR;
            #[expect(
                clippy::cast_possible_truncation,
                clippy::cast_sign_loss,
                reason = "a positive number of years"
            )]
            self.bar.set_position(years as u64);
        }
    }

    fn completing(&mut self) {
        self.bar.set_message("writing");
        self.bar.tick();
    }
}

impl Drop for Bar {
    fn drop(&mut self) {
        self.bar.finish_and_clear();
    }
}
