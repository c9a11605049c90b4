//! Ctrl-C, SIGTERM and a closed terminal (SIGHUP): the first asks a run to stop in a way that it can go on; a second ends the
//! program at once, as without a handler.
//!
//! Exit status after a stop: 128 plus the number of the signal, as shells count (POSIX, 2.8.2).

use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM, SIGXFSZ};
use signal_hook::flag;
use std::io::IsTerminal;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

/// Listens from its making on.
pub(super) struct Signals {
    /// Number of the last signal; 0 before any.
    number: Arc<AtomicUsize>,
}

impl Signals {
    /// Starts to listen.
    ///
    /// # Errors
    /// If the system refuses.
    pub(super) fn listen() -> Result<Self, std::io::Error> {
        let number = Arc::new(AtomicUsize::new(0));
        let second = Arc::new(AtomicBool::new(false));
        let mut signals = vec![(SIGINT, 2), (SIGTERM, 15)];
        // Without a terminal (nohup, batch jobs) nobody hangs up, or it is meant to be ignored.
        if std::io::stdin().is_terminal() || std::io::stderr().is_terminal() {
            signals.push((SIGHUP, 1));
        }
        for (signal, value) in signals {
            // In this order: the first signal arms what the second one triggers.
            flag::register_conditional_default(signal, Arc::clone(&second))?;
            flag::register(signal, Arc::clone(&second))?;
            flag::register_usize(signal, Arc::clone(&number), value)?;
        }
        Ok(Self { number })
    }

    /// The number of the signal that came, if any did.
    pub(super) fn received(&self) -> Option<u8> {
        match self.number.load(Ordering::Relaxed) {
            0 => None,
            number => u8::try_from(number).ok(),
        }
    }
}

/// Where files may not grow beyond a limit, writing then fails with an error that is told, instead
/// of a signal that ends the program.
///
/// # Errors
/// If the system refuses.
pub(super) fn tell_size_limits() -> Result<(), std::io::Error> {
    flag::register(SIGXFSZ, Arc::new(AtomicBool::new(false))).map(|_| ())
}
